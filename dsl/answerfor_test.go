package dsl_test

import (
	"math"
	"regexp"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
)

// TestFoundAnswersKeepTheirNotes: what a current, a gap or a number of turns was found with stands in the document's list, as
// with a solved circuit.
func TestFoundAnswersKeepTheirNotes(t *testing.T) {
	measured := NewMaterial("lot 3", Curve([]AmperePerMetre{50, 100, 200, 400}, []Tesla{0.1, 0.2, 0.3, 0.35}))
	build := func() *MagneticCircuit {
		c := Magnetic("R")
		c.Ring("core", Leg(measured, 100*mm, Rect(10*mm, 10*mm)), Gap(0.5*mm).As("g"), Winding("N", 10*turn))
		return c
	}
	for name, c := range map[string]struct {
		ask  func(c *MagneticCircuit)
		says string
	}{
		"current": {func(c *MagneticCircuit) { c.CurrentFor("N", 0.6*tesla) }, "is beyond the data of"},
		"gap":     {func(c *MagneticCircuit) { c.GapFor("g", "N", 6*uH) }, "of the shorter side of its face"},
		"turns":   {func(c *MagneticCircuit) { c.TurnsFor("N", 100*uH) }, "height of the poles' sides not given"},
	} {
		session.Reset()
		session.BeginCell("a", 1)
		c.ask(build())
		session.EndCell(false)
		all := ""
		for _, a := range review.Assumptions() {
			all += a.Text + "\n"
		}
		contains(t, all, c.says)
		contains(t, all, "R is computed at 25 degC")
		if t.Failed() {
			t.Fatalf("%s: %s", name, all)
		}
	}
}

// TestTurnsForOfUnevenCoils: 10 and 20 turns in series are not 24 and 24.
func TestTurnsForOfUnevenCoils(t *testing.T) {
	build := func(second Turns) *MagneticCircuit {
		c := Magnetic("W")
		c.Path("a", "b -> t", Leg(fer(), 60*mm, Rect(10*mm, 10*mm)), Winding("N", 10*turn))
		c.Path("c", "t -> b", Leg(fer(), 60*mm, Rect(10*mm, 10*mm)), Winding("N", second))
		return c
	}
	contains(t, refused(t, func() { build(20).TurnsFor("N", 5e-3) }).Error(), "has 10 turns on one path and 20 on another")
	if n := build(10).TurnsFor("N", 5e-3); n < 10 {
		t.Errorf("%g turns", n)
	}
}

// TestRatioMeterOnTwoLimbs: half of the flux of the centre limb goes through each outer one, so that 20 turns in the centre
// show four times the voltage of 10 on an outer limb, and with the dots opposed along the arrows minus that.
func TestRatioMeterOnTwoLimbs(t *testing.T) {
	iron := NewMaterial("iron", Linear(1000))
	c := Magnetic("T")
	c.Path("centre", "b -> t", Leg(iron, 40*mm, Rect(10*mm, 10*mm)), Winding("P", 20*turn), Winding("B", 5*turn))
	c.Path("left", "t -> b", Leg(iron, 80*mm, Rect(5*mm, 10*mm)), Winding("S", 10*turn))
	c.Path("right", "t -> b", Leg(iron, 80*mm, Rect(5*mm, 10*mm)), Winding("A", 10*turn).Reversed())
	sheet := text(t, c.TestSpec())
	for _, row := range []string{
		`ratio of turns P : B, polarity +voltage at P; leave all others open; dots in phase +ratio meter +4 `,
		`ratio of voltages P : S, polarity +voltage at P; leave all others open; dots in phase +ratio meter +4 +3.9 +4.1 `,
		`ratio of voltages P : A, polarity +voltage at P; leave all others open; dots opposed +ratio meter +4 `,
		`inductance of P .* no tolerance stated`,
	} {
		if !regexp.MustCompile(row).MatchString(sheet) {
			t.Errorf("%q is missing in\n%s", row, sheet)
		}
	}
}

// TestEnergyOfMagnetsSaysHow: the gap holds a part of it only.
func TestEnergyOfMagnetsSaysHow(t *testing.T) {
	c := Magnetic("M")
	c.Ring("core", Magnet(1.2*tesla, 1.05, 8*mm, Rect(10*mm, 10*mm)), Gap(2*mm).Faces(Rect(10*mm, 10*mm)).Fringe(NoFringe), Winding("N", 1*turn))
	op := c.Solve()
	for _, view := range []string{text(t, op), text(t, Basis(op))} {
		contains(t, view, "a magnet counts as its recoil reluctance")
	}
	// Without current the load line runs through the origin, whether the current is left out or zero.
	contains(t, text(t, c.Solve(Currents{"N": 0 * amp}).LoadLine("magnet")), "permeance coefficient 4,")
}

// TestShareOfTemperature: neither a range nor an uncertainty is a share of a temperature.
func TestShareOfTemperature(t *testing.T) {
	degrees := []string{"degC"}
	contains(t, refused(t, func() { ToleranceWithUnits(degrees, 25, 0.1) }).Error(), "no range of temperature")
	v := LimitWithUnits([]string{"", "degC"}, "core", 90, AtMostWithUnits(degrees, 100))
	contains(t, refused(t, func() { v.Uncertain(5 * percent) }).Error(), "judges a temperature")
}

// TestHistoryKeepsNotesOfItsPeak: the leg is saturated at the peak current; the last state, without current, is not.
func TestHistoryKeepsNotesOfItsPeak(t *testing.T) {
	c := Magnetic("R")
	c.Ring("core", Leg(NewMaterial("core 7", JilesAtherton(steel)), 100*mm, Area(100*mm2)), Winding("N", 100*turn))
	h := c.History(Currents{"N": 60 * amp}, Currents{"N": 0})
	contains(t, text(t, h), "saturated: ")
	last := h.Last()
	if s, b := last.Worst().Saturation(), last.FluxDensity("core"); b < 0.5 || math.Abs(s-b/(4e-7*math.Pi*1.6e6)) > 0.01 {
		t.Errorf("remanence %g T is %g of saturation, want J/Js with Js = mu0 Ms", b, s)
	}
	if got := last.FieldStrength("core"); got != 0 {
		t.Errorf("field strength of a closed ring without current: %g A/m", got)
	}
	contains(t, refused(t, func() { last.Secant("N") }).Error(), "does not drive its 0.6239 T; ask for the incremental inductance")
}
