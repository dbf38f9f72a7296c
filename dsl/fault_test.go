package dsl_test

import (
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/session"
)

func TestFaultsByMessage(t *testing.T) {
	T1 := threeLegs()
	op := T1.Solve(Currents{"main": 3.2 * amp})
	leg := Leg(fer(), 36*mm, Rect(12*mm, 15*mm))
	build := func(parts ...Part) func() { return func() { Magnetic("T2").Ring("core", parts...) } }
	for _, c := range []struct {
		name, code string
		f          func()
		says       string
	}{
		{"gap longer than its leg", "Implausible", func() {
			Magnetic("T1").Path("centre", "bottom -> top", leg, Gap(600*mm))
		}, "gap T1.centre.gap: length 600 mm is longer than its leg (36 mm). Was 0.6*mm meant?"},
		{"unknown path", "UnknownName", func() { op.Flux("center") }, `T1 has no path "center"; it has centre, left, right, window`},
		{"unknown winding", "UnknownName", func() { op.Inductance("mian") }, `T1 has no winding "mian"; it has main`},
		{"unknown part", "UnknownName", func() { op.MMF("centre.air") }, `T1 has no part "centre.air"; it has centre.leg, centre.gap, left.leg, right.leg, window.stray`},
		{"short name that fits several", "Ambiguous", func() { op.MMF("leg") }, `T1 has several parts named "leg"; say which: centre.leg, left.leg, right.leg`},
		{"drive of an unknown winding", "UnknownName", func() { T1.Solve(Currents{"P": 1}) }, `T1 has no winding "P"; it has main`},
		{"drive twice", "Inconsistent", func() { T1.Solve(Currents{"main": 1}, Linkages{"main": 1e-3}) }, "winding T1.main: is driven twice"},
		{"nil drive", "BadValue", func() { T1.Solve(nil) }, "is given no drive (nil)"},
		{"current that is no number", "BadValue", func() { T1.Solve(Currents{"main": math.NaN()}) }, "winding T1.main: current NaN A is not a number"},
		{"negative gap", "BadValue", func() { Gap(-1 * mm) }, "Gap: length -1 mm is not above zero"},
		{"gap of atoms", "Implausible", func() { Gap(1e-9) }, "Gap: length 1 nm is less than ground faces leave"},
		{"negative turns", "BadValue", func() { Winding("P", -5) }, "winding P: turns -5 are negative; give the number of turns and add .Reversed()"},
		{"half a turn", "BadValue", func() { Winding("P", 4.5) }, "not a whole number above zero"},
		{"stray path that is an inductance", "Implausible", func() { Permeance(630 * uH) }, "an inductance is divided by the square of its turns"},
		{"magnet in mT", "Implausible", func() { Magnet(380, 1.05, 5*mm, Rect(5*mm, 5*mm)) }, "was mT meant?"},
		{"saturation in mT", "Implausible", func() { Froehlich(2200, 490) }, "was mT meant?"},
		{"permeability below air", "BadValue", func() { Froehlich(0.5, 0.4) }, "is below that of air"},
		{"curve that falls", "NotMonotone", func() { Curve([]AmperePerMetre{0, 100, 200}, []Tesla{0, 0.412, 0.398}) }, "0.398 T"},
		{"no law", "BadValue", func() { NewMaterial("x", nil) }, "material x: there is no law"},
		{"no material", "BadValue", func() { Leg(nil, 36*mm, Area(1e-4)) }, "Leg: there is no material"},
		{"empty section", "BadValue", func() { Leg(fer(), 36*mm, Section{}) }, "section has no area"},
		{"annulus inside out", "BadValue", func() { Annulus(5*mm, 8*mm) }, "the outer diameter comes first"},
		{"stacking above one", "BadValue", func() { Rect(1, 1).Stacking(95) }, "share of metal 95 is outside 0.001..1"},
		{"part missing", "BadValue", build(leg, nil), "path T2.core: part 2 is missing (nil)"},
		{"gap without a leg", "BadValue", build(Gap(1*mm), Permeance(1*nH)), "gap T2.core.gap: has no leg beside it that gives its section; add .Faces(Rect(w, d))"},
		{"gap between two sections", "Ambiguous", build(leg, Gap(1*mm), Leg(fer(), 20*mm, Rect(6*mm, 15*mm))), "lies between legs of different sections"},
		{"names twice in a path", "DuplicateName", build(leg.As("a"), Gap(1*mm).As("a")), "gap T2.core.a: its path has another part of this name"},
		{"path without reluctance", "BadValue", build(Winding("P", 3)), "path T2.core: has no leg, gap, stray path or magnet"},
		{"turn smaller than its leg", "Implausible", build(leg, Winding("P", 3).Encloses(50*mm2)), "is less than the section of its leg (180 mm2)"},
		{"route without arrow", "BadValue", func() { Magnetic("T2").Path("a", "bottom top", leg) }, `write "bottom -> top"`},
		{"path that closes on itself", "BadValue", func() { Magnetic("T2").Path("a", "top -> top", leg) }, `make it a Ring: T2.Ring("a", ...)`},
		{"name with a point", "BadValue", func() { Magnetic("T.2") }, "holds a point or an arrow"},
		{"flux cannot return", "OpenCircuit", func() {
			c := Magnetic("T2")
			c.Path("a", "bottom -> top", leg, Winding("P", 3))
			c.Solve(Currents{"P": 1})
		}, "flux cannot return at node"},
		{"empty circuit", "WrongUse", func() { Magnetic("T2").Solve() }, "circuit T2: has no path"},
		{"no circuit", "BadValue", func() { (*MagneticCircuit)(nil).Solve() }, `make it with Magnetic("T1")`},
		{"kelvin for a temperature", "Implausible", func() { T1.At(1373) }, "was kelvin meant?"},
		{"temperature beyond the data", "OutsideData", func() { T1.At(150 * degC).Solve() }, "FER-A"},
		{"variant is complete", "Sealed", func() { T1.At(100*degC).Path("x", "bottom -> top", leg) }, "is a variant: nothing can be added to it"},
		{"change of a stray path", "UnknownName", func() { T1.With(Length("window.stray", 1*mm)) }, `T1 has no gap, leg or magnet "window.stray"`},
		{"flux density of a stray path", "WrongUse", func() { op.FluxDensity("window") }, "path T1.window: has no leg"},
		{"fringing rule without its window", "WrongUse", func() {
			c := Magnetic("T2")
			c.Ring("core", leg, Gap(1*mm).Fringe(LogRule))
			c.Solve()
		}, "window"},
		{"bound of a magnitude below zero", "BadValue", func() { AtMost(-0.1) }, "write Within(low, high) for a signed bound"},
		{"limit on no number", "BadValue", func() { Limit("B", math.Inf(1), AtMost(1)) }, `limit "B": the value is not a number`},
		{"limit without bound", "BadValue", func() { Limit("B", 1, Bound{}) }, "give AtMost, AtLeast, Within or Tolerance"},
		{"limit against another unit", "Inconsistent", func() {
			LimitWithUnits([]string{"", "T"}, "B", 0.3, AtMostWithUnits([]string{"A"}, 3))
		}, "the value is in T and its bound in A"},
		{"waiver by nobody", "BadValue", func() { Waive("B", "because", " ") }, "who answers for it"},
		{"basis of a number", "WrongUse", func() { Basis(3.2) }, "ask what it came from: Basis(op)"},
		{"table of numbers", "BadValue", func() { TableOf([]float64{1}) }, "wants a slice of structs"},
		{"series of unlike lengths", "BadValue", func() { Series("a", []Value{1, 2}, []Value{1}) }, "1 values over 2 positions"},
		{"curves in unlike units", "Inconsistent", func() {
			Plot(SeriesWithUnits([]string{"", "A", "H"}, "a", []Value{1, 2}, []Value{1, 2}), SeriesWithUnits([]string{"", "A", "T"}, "b", []Value{1, 2}, []Value{1, 2}))
		}, "the curves are in H and in T"},
		{"span of a part of a point", "BadValue", func() { Span(0, 1, 2.5) }, "count 2.5 is not a whole number"},
		{"gap that cannot be", "NoSolution", func() { T1.GapFor("centre.gap", "main", 1) }, "gap T1.centre.gap: inductance of 1 H is out of reach"},
		{"no function to try", "BadValue", func() { _ = Try(nil) }, "write Try(func() { ... })"},
	} {
		t.Run(c.name, func(t *testing.T) {
			fault := refused(t, c.f)
			if fault.CodeName() != c.code {
				t.Errorf("code %s, want %s: %v", fault.CodeName(), c.code, fault)
			}
			contains(t, fault.Error(), c.says)
			if strings.Contains(fault.Error(), "\n") {
				t.Errorf("more than one line: %q", fault.Error())
			}
		})
	}
}

func TestCircuitIsCompleteAtTheEndOfItsCell(t *testing.T) {
	session.Reset()
	var T1 *MagneticCircuit
	cell("a", 3, func() {
		T1 = Magnetic("T1")
		T1.Ring("core", Leg(fer(), 46*mm, Disc(8.9*mm)), Winding("N", 7*turn))
	})
	cell("b", 4, func() {
		fault := refused(t, func() { T1.Ring("more", Leg(fer(), 46*mm, Disc(8.9*mm)), Winding("N", 7*turn)) })
		want := "circuit T1: is complete since the end of cell 3; put this line into cell 3, or use T1.With(...)"
		if fault.Error() != want {
			t.Errorf("got %q, want %q", fault.Error(), want)
		}
	})
	near(t, "turns after the refusal", T1.Solve(Currents{"N": 1e-6}).Linkage("N")/T1.Solve(Currents{"N": 1e-6}).Flux("core"), 7, 1e-12)
}

func TestTryLetsOtherPanicsPass(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("an index out of range was caught by Try")
		}
	}()
	var empty []float64
	_ = Try(func() { empty[0] = 1 })
}
