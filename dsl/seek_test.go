package dsl_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/session"
)

// TestGapUnderBias: the circuit with the gap that was found has the inductance that was asked for, at its current, and a
// shorter gap of the same inductance is the saturated one.
func TestGapUnderBias(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm))
	bias := Currents{"N": 13 * amp}
	g := L1.GapFor("core.gap", "N", 7*uH, bias)
	near(t, "inductance with the gap", L1.With(Length("gap", g)).Solve(bias).Inductance("N"), 7*uH, 1e-9)
	if longer, zero := L1.With(Length("gap", 1.01*g)).Solve(bias).Inductance("N"), L1.GapFor("core.gap", "N", 7*uH); longer >= 7*uH || g >= zero {
		t.Errorf("gap %g m: 1 %% longer has %g H; without current %g m", g, longer, zero)
	}
	contains(t, refused(t, func() { L1.GapFor("core.gap", "N", 7*uH, Currents{"N": 60 * amp}) }).Error(), "at this current even the best gap")
}

// TestTurnsUnderBias: at the current one turn less does not give the inductance.
func TestTurnsUnderBias(t *testing.T) {
	session.Reset()
	of := func(turns float64) *MagneticCircuit {
		c := Magnetic("L1")
		c.Ring("core", Leg(fer(), 46*mm, Disc(8.9*mm)), Gap(1*mm), Winding("N", turns))
		return c
	}
	bias := Currents{"N": 10 * amp}
	n := of(3).TurnsFor("N", 12*uH, bias)
	if with, less := of(n).Solve(bias).Inductance("N"), of(n-1).Solve(bias).Inductance("N"); with < 12*uH || less >= 12*uH || n < of(3).TurnsFor("N", 12*uH) {
		t.Errorf("%g turns: %g H, with one less %g H", n, with, less)
	}
	contains(t, refused(t, func() { of(3).TurnsFor("N", 100*uH, bias) }).Error(), "at this current even the best number of turns")
}

// TestCurrentForWithMagnet: a magnet's flux density is taken down by the current of the other sign, and up by the one along it.
func TestCurrentForWithMagnet(t *testing.T) {
	session.Reset()
	c := Magnetic("M1")
	c.Ring("core", Leg(NewMaterial("iron", Linear(5000)), 60*mm, Area(100*mm2)), Magnet(0.38, 1.05, 5*mm, Area(100*mm2)), Gap(1*mm).Fringe(NoFringe), Winding("N", 100*turn))
	rest := c.Solve().FluxDensity("core")
	for _, want := range []float64{0.1, 0.45} {
		i := c.CurrentFor("N", want)
		near(t, "flux density", c.Solve(Currents{"N": i}).FluxDensity("core"), want, 1e-9)
		if (i > 0) != (want > rest) {
			t.Errorf("%g T from %g T at rest: %g A", want, rest, i)
		}
		// The circuit is linear: the current is N i = (B - B0) l/mu in all parts.
		mu0 := 4e-7 * math.Pi
		near(t, "closed form", i, (want-rest)/mu0*(60*mm/5000+5*mm/1.05+1*mm)/100, 1e-6)
	}
}

// TestFoundBeyondData: a current that was found beyond the data says so beside it, once in a cell.
func TestFoundBeyondData(t *testing.T) {
	session.Reset()
	core := NewMaterial("core", Curve([]float64{0, 50, 100, 200}, []float64{0, 0.15, 0.25, 0.32}))
	c := Magnetic("L1")
	c.Ring("core", Leg(core, 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding("N", 7*turn))
	shown := func(f func()) string {
		return fmt.Sprint(collect(func() { cell("a", 1, f) }))
	}
	s := shown(func() { c.CurrentFor("N", 3*tesla); c.CurrentFor("N", 2*tesla) })
	contains(t, s, "note: leg L1.core: 3 T is beyond the data of curve of 4 points")
	if strings.Count(s, "is beyond the data") != strings.Count(shown(func() { c.CurrentFor("N", 3*tesla) }), "is beyond the data") {
		t.Errorf("said more than once: %s", s)
	}
	if s := shown(func() { c.CurrentFor("N", 0.2*tesla) }); strings.Contains(s, "beyond") {
		t.Errorf("within the data: %s", s)
	}
}

// TestChangedTwice: two changes of one part are refused, by whichever names they call it.
func TestChangedTwice(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm))
	contains(t, refused(t, func() { L1.With(Length("gap", 1*mm), Length("core.gap", 2*mm)) }).Error(), "gap L1.core.gap: is changed twice")
	L1.With(Length("gap", 1*mm)).With(Length("gap", 2*mm)) // one after the other says what is meant
}
