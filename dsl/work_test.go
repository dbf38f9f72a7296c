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

// TestWorkIsNotCalledEnergy: where a leg remembers, the integral of H dB holds the heat of the way there.
func TestWorkIsNotCalledEnergy(t *testing.T) {
	session.Reset()
	core := NewMaterial("core", JilesAtherton(JA{Ms: 4e5, A: 30, K: 40, C: 0.1, Alpha: 1e-5}))
	c := Magnetic("L1")
	c.Ring("core", Leg(core, 100*mm, Area(100*mm2)), Gap(0.1*mm).Fringe(NoFringe), Winding("N", 50*turn))
	last := c.History(Currents{"N": 4}, Currents{"N": 0}).Last()
	s := text(t, last)
	contains(t, s, "work since the demagnetised state ")
	contains(t, s, "heat in the core included")
	if strings.Contains(s, "energy") {
		t.Errorf("work is called energy in\n%s", s)
	}
	contains(t, refused(t, func() { last.Coenergy() }).Error(), "no co-energy where legs remember")
	contains(t, text(t, Limit("W", last.Energy(), AtMost(1), last)), "W") // it stays a number to judge
	single := text(t, c.Solve(Currents{"N": 4}))
	contains(t, single, "work since the demagnetised state ")
	contains(t, single, "co-energy along the initial curve")
	// A law without memory keeps its energies.
	contains(t, text(t, choke(Gap(0.45*mm)).Solve(Currents{"N": 4})), "; energy ")
}

// TestBandsDoubtsGoAlong: 10 - x^2 over -1..1 has its largest value at none of the limits; a verdict on the band says so, and so
// does the document. One that rises throughout has nothing to say.
func TestBandsDoubtsGoAlong(t *testing.T) {
	session.Reset()
	of := func(f func(x float64) float64) (string, string) {
		var line string
		cell("a", 1, func() {
			b := WorstCase(func(s *Sample) float64 { return f(s.Between("x", -1, 1)) })
			contains(t, text(t, b), "result")
			line = text(t, Limit("y", b.Max(), AtMost(20), b)) + fmt.Sprint(b.Notes())
		})
		return line, fmt.Sprint(review.Assumptions())
	}
	line, listed := of(func(x float64) float64 { return 10 - x*x })
	if strings.Count(line, "can be larger than shown") != 2 || !strings.Contains(listed, "can be larger than shown") {
		t.Errorf("%s\n%s", line, listed)
	}
	line, listed = of(math.Exp)
	if strings.Contains(line+listed, "larger than shown") {
		t.Errorf("rises throughout: %s\n%s", line, listed)
	}
}
