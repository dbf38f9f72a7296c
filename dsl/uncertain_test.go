package dsl_test

import (
	"fmt"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/geom"
)

// bare is a choke without fringing whose gap holds nearly all of the reluctance.
func bare(length float64) *MagneticCircuit {
	c := Magnetic("L1")
	c.Ring("core", Leg(NewMaterial("m", Linear(1e6)), 46*mm, Area(62*mm2)), Gap(length).Fringe(NoFringe), Winding("N", 7*turn))
	return c
}

// TestFringingLeftOutCountsInFull: where fringing raises the permeance by a share, a PASS with less margin than that share is
// thin. The share by the conformal map of the same gap.
func TestFringingLeftOutCountsInFull(t *testing.T) {
	session.Reset()
	side := 7.874 * mm // of a square of 62 mm2
	mapped, err := gap.Permeance(gap.Spec{Elem: "gap", Length: 1 * mm, Face: geom.Rect(side, side), Method: gap.ConformalMap})
	if err != nil {
		t.Fatal(err)
	}
	op := bare(1 * mm).Solve()
	l := op.Inductance("N")
	v := Limit("L", l, AtMost(l*(1+0.9*(mapped.Factor-1))), op)
	near(t, "uncertainty", v.Uncertainty(), mapped.Factor-1, 0.05)
	if mapped.Factor < 1.2 {
		t.Fatalf("factor %g: too little to tell", mapped.Factor)
	}
	contains(t, text(t, v), "PASS - margin below uncertainty")
}

// TestUncertaintyNotKnown: where the part left out is as large as the part counted, the verdict and the document say so.
func TestUncertaintyNotKnown(t *testing.T) {
	session.Reset()
	var v *Verdict
	cell("a", 1, func() {
		op := bare(6 * mm).Solve()
		l := op.Inductance("N")
		v = Limit("L", l, AtMost(1.5*l), op)
	})
	contains(t, text(t, v), "PASS - uncertainty not known")
	contains(t, text(t, v), "permeance of gap L1.core.gap by NoFringe is uncertain by ")
	contains(t, verdicts(), "PASS - uncertainty not known")
	contains(t, fmt.Sprint(review.Assumptions()), `limit "L": uncertainty not known`)
	stated := text(t, v.Uncertain(20*percent))
	if strings.Contains(stated, "not known") {
		t.Errorf("stated, and still %s", stated)
	}
}
