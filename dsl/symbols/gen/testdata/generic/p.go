// Package generic has a generic function and a generic type.
package generic

// Map is generic.
func Map[T any](x T) T { return x }

// Pair is generic.
type Pair[T any] struct{ A, B T }

// Ints is an instance.
func Ints() Pair[int] { return Pair[int]{} }
