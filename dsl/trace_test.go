package dsl_test

import (
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/geom"
)

// verdicts is the table of all verdicts as text.
func verdicts() string { return review.Table().Text() }

// TestFlipIsConfirmed: the table says which input turns a verdict, and a circuit with that input is at the bound.
func TestFlipIsConfirmed(t *testing.T) {
	session.Reset()
	L1 := Magnetic("L1")
	L1.Ring("core", Leg(NewMaterial("m", Linear(2200)), 46*mm, Disc(8.9*mm)), Gap(0.45*mm).PlusMinus(0.1*mm).Fringe(NoFringe), Winding("N", 7*turn))
	l := L1.Solve().Inductance("N")
	cell("a", 1, func() { Limit("L", l, AtLeast(0.999*l), L1) })
	s := verdicts()
	// A linear core without fringing: L is proportional to 1/(lg + lc/mu), so 0.1 % less needs lg longer by 0.1/99.9 % of
	// the sum: 0.471 um, a two-hundredth of the tolerance, and nothing else is as near.
	move := (0.45*mm + 46*mm/2200) * 0.001 / 0.999
	contains(t, s, "Flips at: length of gap L1.core.gap +471 nm, to 450.5 um")
	near(t, "by the formula", move, 471.4e-9, 1e-3)
	near(t, "confirmed", L1.With(Length("gap", 0.45*mm+move)).Solve().Inductance("N"), 0.999*l, 1e-9)
}

// TestMethodsBringUncertainty: the uncertainty of the gap's method reaches the value by the share that the gap has in it, and
// a margin below it is said.
func TestMethodsBringUncertainty(t *testing.T) {
	session.Reset()
	L1 := Magnetic("L1")
	L1.Ring("core", Leg(NewMaterial("m", Linear(2200)), 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding("N", 7*turn))
	op := L1.Solve()
	l := op.Inductance("N")
	cell("a", 1, func() { Limit("L", l, AtLeast(0.999*l), op) })
	s := verdicts()
	contains(t, s, "PASS - margin below uncertainty")
	// L = N^2/(Rc + Rg): a share u of the permeance of the gap is a share u Rg/(Rc + Rg) of L, to first order in u.
	rg := L1.Reluctance("gap")
	share := rg / (rg + L1.Reluctance("core.leg"))
	method, err := gap.Permeance(gap.Spec{Elem: "gap", Length: 0.45 * mm, Face: geom.Disc(8.9 * mm), Method: gap.ConformalMap})
	if err != nil {
		t.Fatal(err)
	}
	v := Limit("L", l, AtLeast(0.999*l), op)
	near(t, "uncertainty of L", v.Uncertainty(), share*method.Uncertainty, 2*method.Uncertainty) // second order left out
	if v.Uncertainty() <= 0.01 {
		t.Errorf("uncertainty %g", v.Uncertainty())
	}
	contains(t, text(t, v), "is within")
	contains(t, text(t, v.Uncertain(0.01*percent)), ": PASS [")
	if strings.Contains(text(t, Limit("byHand", 9.9e-6, AtLeast(9.5e-6))), "uncertainty") {
		t.Error("a number of one's own has an uncertainty")
	}
}

// TestOneRowAName: the worst condition stands in the row, the others unfold.
func TestOneRowAName(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm))
	cell("a", 1, func() {
		for _, i := range []float64{5, 13, 9} {
			Limit("flux density", L1.Solve(Currents{"N": i}).FluxDensity("core"), AtMost(0.25*tesla))
		}
		OpenPoint("copper loss", "magnetics")
	})
	table := review.Table()
	if len(table.Rows) != 3 || len(table.Folds) != 1 || len(table.Folds[0].Table.Rows) != 2 { // flux density, copper loss, insulation
		t.Fatalf("%d rows, %d folds\n%s", len(table.Rows), len(table.Folds), table.Text())
	}
	if got := table.Rows[0][5].Words; got != "FAIL" {
		t.Errorf("the row says %s", got)
	}
	contains(t, table.Text(), "flux density: 2 more conditions, all with more margin")
	contains(t, table.HTML(), `<tr class="fold"><td colspan="6"><details><summary>flux density: 2 more conditions`)
	contains(t, table.Text(), "verdicts so far: 1 FAIL, 2 OPEN")
	if first := table.Folds[0].Table.Rows[0][0].Value; math.Abs(first) < math.Abs(table.Folds[0].Table.Rows[1][0].Value) {
		t.Error("the worse of the folded conditions is not the first")
	}
}

// TestInsulationStaysOpen: it is an open point by itself, one of the author's takes its place, and no waiver closes it.
func TestInsulationStaysOpen(t *testing.T) {
	session.Reset()
	cell("a", 1, func() {
		op := threeLegs().Solve(Currents{"main": 3})
		Limit("B", op.FluxDensity("centre"), AtMost(0.5*tesla), op)
	})
	contains(t, verdicts(), "insulation of T1 (main, core)")
	cell("b", 2, func() { OpenPoint("insulation, functional", "safety engineer") })
	if s := verdicts(); strings.Contains(s, "insulation of T1") {
		t.Errorf("both stand in\n%s", s)
	}
	cell("c", 3, func() { Waive("insulation, functional", "no mains here", "A. Smith") })
	contains(t, verdicts(), "has no effect: insulation stays OPEN")
	if c := review.Count(); c.Open != 1 || c.Waived != 0 {
		t.Errorf("counts %v", c)
	}
}

// TestCautions: they follow from what is in the circuits.
func TestCautions(t *testing.T) {
	has := func(word string) bool { return strings.Contains(strings.Join(review.Cautions(), "\n"), word) }
	session.Reset()
	cell("a", 1, func() { threeLegs().Solve() })
	if !has("engineering aids") || !has("qualified person") || has("magnets pinch") || has("60 degC") || has("stores energy") {
		t.Errorf("a cold choke without current: %q", review.Cautions())
	}
	cell("b", 2, func() { threeLegs().At(100 * degC).Solve(Currents{"main": 30}) })
	if !has("60 degC") || !has("stores energy") {
		t.Errorf("hot, with energy: %q", review.Cautions())
	}
	cell("c", 3, func() {
		c := Magnetic("M")
		c.Ring("core", Leg(fer(), 40*mm, Disc(9*mm)), Magnet(0.4*tesla, 1.05, 1*mm, Disc(9*mm)), Winding("N", 5))
		c.Solve()
	})
	if !has("magnets pinch") {
		t.Errorf("a magnet: %q", review.Cautions())
	}
	out := collect(func() { cell("d", 4, Assumptions) })
	contains(t, out[0].Data["text/plain"].(string), "cautions:\n- ")
	contains(t, out[0].Data["text/html"].(string), `<ul class="cautions">`)
}

// TestAssumptionsSayTheirLine: each default nobody chose stands with the line that would change it, and goes once it is chosen.
func TestAssumptionsSayTheirLine(t *testing.T) {
	lines := func(f func()) string {
		session.Reset()
		cell("a", 1, f)
		s := ""
		for _, a := range review.Assumptions() {
			s += a.Text + " => " + a.Change + "\n"
		}
		return s
	}
	s := lines(func() { choke(Gap(0.45 * mm)).Solve() })
	contains(t, s, "L1 is computed at 25 degC => L1.At(100*degC)")
	contains(t, s, "gap L1.core.gap: the flux around it by ConformalMap => Gap(0.45*mm).Fringe(FieldSolve.Window(height))")
	contains(t, s, "sides not given")
	contains(t, s, "=> .Fringe(ConformalMap.Window(height)) at the gap")
	s = lines(func() { choke(Gap(0.45 * mm).Fringe(ConformalMap.Window(14 * mm))).At(60 * degC).Solve() })
	if strings.TrimSpace(s) != "" {
		t.Errorf("everything was chosen, and still:\n%s", s)
	}
	contains(t, lines(func() { choke(Gap(0.45 * mm)).At(110 * degC).Solve() }), "=> .Also(temperature, law) at the material")
}

func TestWorking(t *testing.T) {
	session.Reset()
	T1 := threeLegs()
	op := T1.Solve(Currents{"main": 3.2 * amp})
	for what, v := range map[string]float64{"inductance": op.Inductance("main"), "secant": op.Secant("main"), "density": op.FluxDensity("centre"), "flux": op.Flux("left"),
		"mmf": op.MMF("centre.gap"), "linkage": op.Linkage("main")} {
		w := Working(v)
		near(t, what+" by its lines", w.Value(), v, 1e-9)
		contains(t, text(t, w), "T1 at 25 degC (the default), main 3.2 A")
		contains(t, w.MIMEBundle()["text/latex"].(string), "$$")
	}
	s := text(t, Working(op.Inductance("main")))
	for _, want := range []string{"R_centre gap = l/(F * mu0 * A) = 600 um/(", "by ConformalMap", "L = N^2/R_seen = 34^2/(", "as the solved network gives it"} {
		contains(t, s, want)
	}
	v := Limit("L", op.Inductance("main"), AtLeast(1*uH), op)
	contains(t, text(t, Working(v)), "incremental inductance of T1.main")
	contains(t, refused(t, func() { Working(2 * op.Inductance("main")) }).Error(), "did not come from an operating point as it is")
	contains(t, refused(t, func() { Working("x") }).Error(), "is not one number")
	contains(t, refused(t, func() { Working(op.Energy()) }).Error(), "has no lines for energy")
}

func TestBench(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm).PlusMinus(0.02 * mm))
	op := L1.Solve()
	model := op.Inductance("N")
	longer := L1.With(Length("gap", 0.46*mm)).Solve().Inductance("N")
	b := Bench("L, sample 3", longer, model, op)
	s := text(t, b)
	for _, want := range []string{"L, sample 3: measured", "lower, L1 at 25 degC", "length of gap L1.core.gap", "+10 um", "460 um", "within its tolerance (+-20 um)", "within the worst case of the stated tolerances", "what the methods for the gaps leave open"} {
		contains(t, s, want)
	}
	near(t, "off", b.Off(), longer/model-1, 1e-12)
	six := Magnetic("L1")
	six.Ring("core", Leg(fer(), 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding("N", 6*turn))
	few := text(t, Bench("L, sample 4", six.Solve().Inductance("N"), model, op))
	contains(t, few, "turns")
	contains(t, few, "model then "+strings.TrimSuffix(strings.Fields(few[strings.Index(few, "measured"):])[1], ","))
	contains(t, few, "times its tolerance")
	contains(t, text(t, Bench("by hand", 3, 4)), "no explanations")
	contains(t, refused(t, func() { Bench("", 3, 4) }).Error(), "bench reading")
}

func TestSideBySide(t *testing.T) {
	session.Reset()
	T1 := threeLegs()
	s := text(t, SideBySide(T1, T1.With(Length("centre.gap", 0.55*mm))))
	for _, want := range []string{"centre.gap", "600 um", "550 um", "inductance of main without current", "fallen by 20 %", "equal parts"} {
		contains(t, s, want)
	}
	if strings.Contains(s, "left.leg") {
		t.Errorf("an equal part stands in\n%s", s)
	}
	if n := len(review.Assumptions()); n != 0 {
		t.Errorf("the comparison leaves %d assumptions", n)
	}
}

func TestTestSpec(t *testing.T) {
	session.Reset()
	c := Magnetic("T3")
	limb := Leg(fer(), 50*mm, Rect(7*mm, 12*mm))
	gap := Gap(0.3 * mm).PlusMinus(0.03 * mm)
	c.Path("left", "bottom -> top", limb, gap, Winding("A", 4))
	c.Path("right", "bottom -> top", limb, gap, Winding("B", 4))
	c.Path("centre", "top -> bottom", Leg(fer(), 20*mm, Rect(12*mm, 12*mm)), Gap(0.5*mm), Winding("C", 8))
	sheet := c.TestSpec().Gauge(0.5*percent).Meter(10e3, 0.1).Bias("A", 5*amp)
	s := text(t, sheet)
	for _, want := range []string{"inductance of A", "meter at A; leave open B, C", "meter at A; short B; leave open C", "10 kHz, 100 mV; bias 5 A in A; 25 degC", "ratio of voltages A : C, polarity",
		"windings lie on 3 limbs", "OPEN", "guard band"} {
		contains(t, s, want)
	}
	worst := WorstCase(c.InductanceAt("A"))
	tight := text(t, c.TestSpec().Gauge(0.5*percent).Asked("inductance of A", Within(worst.Min(), worst.Max())))
	contains(t, tight, "asked: ")
	contains(t, refused(t, func() {
		text(t, c.TestSpec().Gauge(1.5*percent).Asked("inductance of A", Tolerance(worst.Nom(), 2*percent)))
	}).Error(), "limit +-2 % minus gauge +-1.5 % leaves a +-0.5 % window; widen the limit or improve the gauge")
	contains(t, refused(t, func() { c.TestSpec().Asked("colour", AtMost(1)) }).Error(), `has no item "colour"`)
}

func TestOverrideAndRevision(t *testing.T) {
	session.Reset()
	out := collect(func() {
		cell("a", 1, func() { Override("gap: 0.62 mm as measured", "bench reading", "A. Smith") })
		cell("b", 2, Assumptions)
	})
	contains(t, out[len(out)-1].Data["text/plain"].(string), "overrides by the author")
	contains(t, out[len(out)-1].Data["text/plain"].(string), "gap: 0.62 mm as measured; bench reading (A. Smith)")
	contains(t, refused(t, func() { Override("gap", "", "A. Smith") }).Error(), "a reason and who answers for it")
	contains(t, refused(t, func() { Revision("B", "", "gap") }).Error(), "a name, a date and what changed")
}

func TestSignOff(t *testing.T) {
	contains(t, text(t, SignOff()), "checked by")
	contains(t, text(t, SignOff("insulation checked by")), "insulation checked by")
	contains(t, refused(t, func() { SignOff(" ") }).Error(), "role without a name")
}
