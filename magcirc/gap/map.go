package gap

import (
	"math"

	"ampturn/magcirc/field"
	"ampturn/magcirc/geom"
)

// Field returns the solved field of the gap s, for drawing: about the axis for round and annular poles and for a face
// of unknown shape (the disc of equal area), across the width for a rectangle, whatever method s names.
//
// Inputs: as [Permeance]. Errors: [magcirc.BadValue] and [magcirc.Implausible] as there; those of the field solution.
func Field(s Spec) (*field.Solution, error) {
	if err := s.check(); err != nil {
		return nil, err
	}
	h, _ := s.side()
	boundary := field.Open
	if s.Span > 0 {
		boundary = field.Mirror
	}
	if s.Face.Shape == geom.Rectangle {
		return field.PlaneGap(field.Plane{Width: s.Face.W, Length: s.Length, Wall: h, Span: s.Span, Boundary: boundary})
	}
	outer, inner := s.Face.Do, s.Face.Di
	if s.Face.Shape == geom.PlainArea {
		outer, inner = 2*math.Sqrt(s.Face.Gross()/math.Pi), 0
	}
	return field.RoundGap(field.Round{Outer: outer, Inner: inner, Length: s.Length, Wall: h, Span: s.Span, Boundary: boundary})
}
