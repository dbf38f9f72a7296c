package gap_test

import (
	"math"
	"testing"

	"ampturn/magcirc/gap"
	"ampturn/magcirc/geom"
)

// TestSurface compares the polynomial with the methods themselves at points of a lattice that it was not made from.
func TestSurface(t *testing.T) {
	for _, c := range []struct {
		name string
		spec gap.Spec
		tol  float64 // relative, of the permeance
	}{
		{"round, solved", gap.Spec{Elem: "gap", Length: 0.5e-3, Face: geom.Disc(8.885e-3), Method: gap.FieldSolve, Window: 14.3e-3}, 1e-6},
		{"rectangle, mapped", gap.Spec{Elem: "gap", Length: 0.6e-3, Face: geom.Rect(12e-3, 15e-3), Method: gap.ConformalMap, Window: 21e-3}, 1e-8},
	} {
		s, err := gap.NewSurface(c.spec, 0.9*c.spec.Length, 1.1*c.spec.Length, 0.95, 1.05)
		if err != nil {
			t.Fatal(err)
		}
		if s.Error > c.tol {
			t.Errorf("%s: deviation %g found when it was made", c.name, s.Error)
		}
		for _, l := range []float64{0.9, 0.933, 1, 1.081} {
			for _, a := range []float64{0.95, 0.992, 1.04} {
				direct := c.spec
				direct.Length, direct.Face = l*c.spec.Length, c.spec.Face.Scaled(a)
				want, err := gap.Permeance(direct)
				if err != nil {
					t.Fatal(err)
				}
				got, ok := s.At(direct.Length, a)
				if !ok || math.Abs(got.Permeance/want.Permeance-1) > c.tol || math.Abs(got.Reluctance*got.Permeance-1) > 1e-12 {
					t.Errorf("%s: %g H at %g of the length and %g of the area, want %g", c.name, got.Permeance, l, a, want.Permeance)
				}
			}
		}
		if _, ok := s.At(1.2*c.spec.Length, 1); ok {
			t.Errorf("%s: answers outside its range", c.name)
		}
	}
	fixed, err := gap.NewSurface(gap.Spec{Elem: "gap", Length: 0.5e-3, Face: geom.Disc(9e-3), Method: gap.ConformalMap}, 0.5e-3, 0.5e-3, 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	if r, ok := fixed.At(0.5e-3, 1); !ok || r.Factor <= 1 {
		t.Errorf("a gap that does not vary: %+v, %v", r, ok)
	}
}
