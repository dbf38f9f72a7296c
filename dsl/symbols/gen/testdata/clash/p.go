// Package clash has unexported methods of one name and two signatures.
package clash

// Part is sealed.
type Part interface{ part() int }

// Beam is a Part.
type Beam struct{}

func (Beam) part() int { return 0 }

// Rope is none.
type Rope struct{}

func (Rope) part(x float64) {}
