// Package hidden gives out a type that has no name outside.
package hidden

type secret struct{}

// Open gives one.
func Open() *secret { return nil }
