package dsl_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
)

// TestSideBySideCarriesNotes: what stands behind the inductances of two circuits stands below them, and a note on one of them
// names it.
func TestSideBySideCarriesNotes(t *testing.T) {
	session.Reset()
	core := NewMaterial("core", Curve([]float64{0, 50, 75}, []float64{0, 0.15, 0.2}))
	c := Magnetic("L1")
	c.Ring("core", Leg(core, 46*mm, Disc(8.9*mm)), Gap(0.45*mm).Fringe(NoFringe), Winding("N", 7*turn))
	s := text(t, SideBySide(c, c.With(Length("gap", 2*mm))))
	contains(t, s, "note: leg L1.core.leg: saturated")                              // of both, where the inductance has fallen
	contains(t, s, "core.gap 2 mm: gap L1.core.gap: fringing left out would raise") // each with its own figure
	contains(t, s, "(the default): gap L1.core.gap: fringing left out would raise the permeance about 1.3 times")
	if review.Assumptions() != nil {
		t.Errorf("a comparison enters %v", review.Assumptions())
	}
}

// TestBiasCurveBeyondItsEnd: a point that is computed beyond the curve enters what it rests on.
func TestBiasCurveBeyondItsEnd(t *testing.T) {
	session.Reset()
	core := NewMaterial("core", Curve([]float64{0, 50, 100, 200}, []float64{0, 0.15, 0.25, 0.32}))
	c := Magnetic("L1")
	c.Ring("core", Leg(core, 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding("N", 7*turn))
	rests := func() string { return fmt.Sprint(review.Assumptions()) }
	cell("a", 1, func() {
		curve := c.BiasCurve("N", 0, 5*amp)
		if strings.Contains(rests(), "beyond the data") {
			t.Fatalf("within the data already: %s", rests())
		}
		named := curve.As("cold")
		named.At(40 * amp)
		contains(t, fmt.Sprint(named.Notes()), "beyond the data")
	})
	contains(t, rests(), "beyond the data")
}

// TestWindingsOfDifferentTurns: the larger of two enclosed areas counts for both windings, and the result says so.
func TestWindingsOfDifferentTurns(t *testing.T) {
	session.Reset()
	of := func(first, second float64) []Remark {
		c := Magnetic("T1")
		c.Ring("core", Leg(fer(), 100*mm, Rect(10*mm, 10*mm)), Winding("P", 20*turn).Encloses(first), Winding("S", 5*turn).Encloses(second))
		return c.Solve().Notes()
	}
	contains(t, fmt.Sprint(of(150*mm2, 240*mm2)), "the air inside winding S (240 mm2), the largest, counts for all of them")
	if s := fmt.Sprint(of(200*mm2, 200*mm2)); strings.Contains(s, "enclose different areas") {
		t.Errorf("equal areas: %s", s)
	}
}

// TestOffNominalOfNegatives: a result above a negative nominal value is off by a positive share.
func TestOffNominalOfNegatives(t *testing.T) {
	session.Reset()
	b := WorstCase(func(s *Sample) float64 { return -s.Of("x", 10, 20*percent) })
	s := text(t, b)
	for name, sign := range map[string]string{"smallest": "-20 %", "largest": "20 %"} {
		for _, line := range strings.Split(s, "\n") {
			if got := strings.Fields(line); len(got) > 2 && got[0] == name && strings.Join(got[2:], " ") != sign {
				t.Errorf("%q, want %s", line, sign)
			}
		}
		contains(t, s, name)
	}
}

// TestPerfectCouplingHasNoDoubt: a number that does not depend on the gap at all keeps nothing of the uncertainty of its method.
func TestPerfectCouplingHasNoDoubt(t *testing.T) {
	session.Reset()
	c := Magnetic("T1")
	c.Ring("core", Leg(fer(), 100*mm, Rect(10*mm, 10*mm)), Gap(0.2*mm), Winding("P", 20*turn), Winding("S", 5*turn))
	op := c.Solve()
	v := Limit("coupling", op.Coupling("P", "S"), AtMost(1), op)
	if v.Uncertainty() != 0 || math.Abs(op.Coupling("P", "S")-1) > 1e-12 || strings.Contains(text(t, v), "less than") {
		t.Errorf("%g: %s", v.Uncertainty(), text(t, v))
	}
}
