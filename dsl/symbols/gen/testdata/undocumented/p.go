// Package undocumented lacks comments.
package undocumented

type Rod struct{}

func (Rod) Length() float64 { return 0 }

// Good has one.
func Good() {}
