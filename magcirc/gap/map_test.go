package gap_test

import (
	"math"
	"testing"

	"ampturn/magcirc/gap"
	"ampturn/magcirc/geom"
)

// TestFieldIsTheOneOfFieldSolve: the drawn field of a round pole has the factor of the method FieldSolve.
func TestFieldIsTheOneOfFieldSolve(t *testing.T) {
	for _, face := range []geom.Section{geom.Disc(9 * mm), geom.Annulus(20*mm, 8*mm), geom.Area(80e-6)} {
		s := gap.Spec{Length: 0.6 * mm, Face: face, Method: gap.FieldSolve, Window: 14 * mm, Span: 5 * mm}
		r, err := gap.Permeance(s)
		if err != nil {
			t.Fatal(err)
		}
		f, err := gap.Field(s)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(f.Factor/r.Factor-1) > 1e-12 {
			t.Errorf("%s: drawn %g, method %g", face.Describe(), f.Factor, r.Factor)
		}
	}
	if _, err := gap.Field(gap.Spec{Length: -1, Face: geom.Disc(9 * mm)}); err == nil {
		t.Error("a negative gap is drawn")
	}
	if f, err := gap.Field(gap.Spec{Length: 0.6 * mm, Face: geom.Rect(12*mm, 15*mm)}); err != nil || f.Factor <= 1 {
		t.Errorf("rectangle: %v, %v", f, err)
	}
}
