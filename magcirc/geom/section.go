// Package geom describes the sections of magnetic paths.
package geom

import "math"

// Shape is the outline of a section.
type Shape int

// The outlines.
const (
	PlainArea Shape = iota // only the area is known
	Rectangle
	Round
	Ring
)

// Section is the cross-section of a leg or of a gap's faces.
type Section struct {
	Shape    Shape
	W, D     float64 // rectangle: width, depth; m
	Do, Di   float64 // round: diameter Do; ring: outer and inner diameter; m
	A        float64 // plain area; m2
	Stacking float64 // share of metal in the section, 0 < Stacking <= 1; 0 stands for 1
}

// Rect is a rectangle of width w and depth d in m.
func Rect(w, d float64) Section { return Section{Shape: Rectangle, W: w, D: d} }

// Disc is a circle of diameter d in m.
func Disc(d float64) Section { return Section{Shape: Round, Do: d} }

// Annulus is the area between two circles of diameters do > di in m.
func Annulus(do, di float64) Section { return Section{Shape: Ring, Do: do, Di: di} }

// Area is a section of area a in m2 whose outline is not known.
func Area(a float64) Section { return Section{Shape: PlainArea, A: a} }

// Gross is the area of the outline in m2.
func (s Section) Gross() float64 {
	switch s.Shape {
	case Rectangle:
		return s.W * s.D
	case Round:
		return math.Pi / 4 * s.Do * s.Do
	case Ring:
		return math.Pi / 4 * (s.Do*s.Do - s.Di*s.Di)
	}
	return s.A
}

// Metal is the area that carries flux in m2: the gross area times the stacking.
func (s Section) Metal() float64 {
	if s.Stacking > 0 {
		return s.Gross() * s.Stacking
	}
	return s.Gross()
}
