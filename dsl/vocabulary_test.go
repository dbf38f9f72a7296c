package dsl_test

import (
	"fmt"
	"math"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/session"
)

// saturating is a law of one's own.
type saturating struct{ bs, h0 float64 }

func (s saturating) FluxDensity(field AmperePerMetre) Tesla {
	return s.bs*math.Tanh(field/s.h0) + 4e-7*math.Pi*field
}

// TestMaterialsBlock writes out the part of the manual on materials.
func TestMaterialsBlock(t *testing.T) {
	for name, law := range map[string]Law{
		"linear":    Linear(2200),
		"froehlich": Froehlich(2200, 0.49*tesla),
		"langevin":  Langevin(3.9e5, 40, 1e-5),
		"arctan":    Arctan(2200, 0.49*tesla),
		"curve":     Curve([]AmperePerMetre{0, 50, 100, 200, 800}, []Tesla{0, 0.15, 0.26, 0.36, 0.45}),
		"lawof":     LawOf(func(h AmperePerMetre) Tesla { return 0.45*math.Tanh(h/120) + 4e-7*math.Pi*h }),
		"own":       saturating{0.45, 120},
	} {
		m := NewMaterial(name, law)
		b := m.FluxDensity(100, 25*degC)
		near(t, name+" at 100 A/m", b, law.FluxDensity(100), 1e-5)
		contains(t, text(t, m), "material "+name)
		contains(t, text(t, m.Plot()), "flux density over field strength")
	}
	fer := NewMaterial("lot 12", Froehlich(2200, 0.49*tesla)).Also(100*degC, Froehlich(2200, 0.39*tesla)).Tolerance(25 * percent)
	cold, hot, between := fer.FluxDensity(200, 25), fer.FluxDensity(200, 100), fer.FluxDensity(200, 62.5)
	near(t, "half way between the temperatures", between, (cold+hot)/2, 1e-6)
	far := refused(t, func() { fer.FluxDensity(200, 160*degC) })
	contains(t, far.Error(), "lot 12")
	if b := fer.Extrapolate().FluxDensity(200, 160*degC); b >= hot {
		t.Errorf("extrapolated to 160 degC: %g T, not below %g T at 100 degC", b, hot)
	}
}

// TestCircuitBlocks writes out the part of the manual on circuits.
func TestCircuitBlocks(t *testing.T) {
	T1 := threeLegs()
	R1 := Magnetic("R1")
	R1.Ring("core", Leg(fer(), 47*mm, Rect(5*mm, 8*mm)), Winding("N", 20*turn))

	op := T1.Solve(Currents{"main": 3.2 * amp})
	near(t, "flux at the top node", op.Flux("left")+op.Flux("right"), op.Flux("centre")+op.Flux("window"), 1e-9)
	near(t, "short and long name", op.Flux("T1.centre"), op.Flux("centre"), 0)
	near(t, "flux density in the leg", op.FluxDensity("centre"), op.Flux("centre")/(12.2*mm*15*mm), 1e-12)
	near(t, "mmf around the centre", op.MMF("centre")+op.MMF("left"), 34*3.2, 1e-9)
	near(t, "mmf of parts", op.MMF("centre.gap")+op.MMF("centre.leg"), op.MMF("centre"), 1e-12)
	near(t, "linkage", op.Linkage("main"), 34*op.Flux("centre"), 1e-12)
	near(t, "energies", op.Energy()+op.Coenergy(), 3.2*op.Linkage("main"), 1e-9)
	near(t, "current", op.Current("main"), 3.2, 0)
	if op.FieldStrength("left") <= 0 {
		t.Error("the field in the left yoke is not along its arrow")
	}
	step := 1e-3
	more, less := T1.Solve(Currents{"main": 3.2 + step}), T1.Solve(Currents{"main": 3.2 - step})
	near(t, "incremental inductance against a difference", op.Inductance("main"), (more.Linkage("main")-less.Linkage("main"))/(2*step), 1e-5)
	near(t, "secant inductance", op.Secant("main"), op.Linkage("main")/3.2, 1e-9)
	back := T1.Solve(Linkages{"main": op.Linkage("main")})
	near(t, "driven by its linkage", back.Current("main"), 3.2, 1e-6)

	contains(t, text(t, op), "T1 at 25 degC (the default), main 3.2 A")
	contains(t, text(t, op.Balance()), "worst node")
	contains(t, text(t, op.Draw()), "magnetic network")
	contains(t, text(t, T1), "winding main, 34 turns")
	contains(t, text(t, R1.Draw()), "ring")
	contains(t, text(t, op.Worst()), "leg T1.left.leg")
	near(t, "worst leg", op.Worst().FluxDensity(), op.FluxDensity("left"), 0)

	curve := T1.BiasCurve("main", 0, 12*amp)
	near(t, "curve at 3.2 A", curve.At(3.2*amp), op.Inductance("main"), 1e-9)
	near(t, "secant at 3.2 A", curve.SecantAt(3.2*amp), op.Secant("main"), 1e-9)
	isat := curve.SaturationCurrent(20 * percent)
	near(t, "saturation current", curve.At(isat), 0.8*T1.Solve().Inductance("main"), 1e-9)

	gap := T1.GapFor("centre.gap", "main", 630*uH)
	near(t, "gap for 630 uH", T1.With(Length("centre.gap", gap)).Solve().Inductance("main"), 630*uH, 1e-9)
	i := T1.CurrentFor("main", 0.32*tesla)
	at := T1.Solve(Currents{"main": i})
	near(t, "current for 0.32 T", math.Max(at.FluxDensity("centre"), at.FluxDensity("left")), 0.32, 1e-9)
	n := T1.TurnsFor("main", 630*uH)
	perTurn := T1.Solve().Inductance("main") / (34 * 34)
	if n*n*perTurn < 630*uH || (n-1)*(n-1)*perTurn >= 630*uH {
		t.Errorf("%g turns for 630 uH at %g H per turn squared", n, perTurn)
	}

	hot := T1.At(100 * degC)
	if hot.Solve(Currents{"main": i}).FluxDensity("centre") >= at.FluxDensity("centre") {
		t.Error("hot is not below cold in saturation")
	}
	contains(t, text(t, hot.Solve()), "T1 at 100 degC, no current")
	variant := T1.With(Length("gap", 0.55*mm), Length("left.leg", 60*mm))
	contains(t, text(t, variant), "centre.gap 550 um, left.leg 60 mm")
	near(t, "the circuit itself is unchanged", T1.Solve(Currents{"main": 3.2}).Flux("centre"), op.Flux("centre"), 0)

	near(t, "reluctance of a gap", T1.Reluctance("centre.gap"), T1.Fringing("gap").Reluctance(ConformalMap), 1e-12)
	near(t, "reluctance of a stray path", T1.Reluctance("window.stray"), 1/(12*nH), 1e-12)
	contains(t, text(t, T1.Fringing("centre.gap")), "ConformalMap (in use)")
	contains(t, text(t, T1.Fringing("centre.gap").Plot()), "fringing factor")
	contains(t, text(t, T1.Fringing("centre.gap").Field()), "field of gap T1.centre.gap")
	contains(t, text(t, Gap(0.6*mm).Faces(Rect(12*mm, 15*mm))), "FieldSolve")
	contains(t, text(t, Basis(op)), "gap T1.centre.gap")
}

// TestFringingChoices gives each method by name.
func TestFringingChoices(t *testing.T) {
	var last float64
	for _, rule := range []Fringing{NoFringe, AddTheGap, LogRule.Window(25 * mm), ConformalMap.Window(25 * mm), FieldSolve.Window(25 * mm), FieldSolve.Window(25 * mm).Breadth(9 * mm)} {
		c := Magnetic("C")
		c.Ring("core", Leg(fer(), 60*mm, Rect(12*mm, 15*mm)), Gap(0.6*mm).Fringe(rule).As("pole"), Winding("N", 20*turn))
		l := c.Solve().Inductance("N")
		if l <= 0 || l < last*0.9 {
			t.Errorf("%v: %g H after %g H", rule, l, last)
		}
		last = l
	}
}

// TestWindingInSeries: one name on several paths is one winding; reversed turns oppose.
func TestWindingInSeries(t *testing.T) {
	build := func(second WindingPart) *OperatingPoint {
		c := Magnetic("C")
		c.Ring("core", Leg(fer(), 60*mm, Rect(12*mm, 15*mm)), Gap(1*mm), Winding("A", 10*turn), second)
		return c.Solve(Currents{"A": 1 * amp})
	}
	aiding, opposing := build(Winding("B", 5*turn)), build(Winding("B", 5*turn).Reversed())
	near(t, "mutual changes its sign", opposing.Mutual("A", "B"), -aiding.Mutual("A", "B"), 1e-12)
	c := Magnetic("C")
	c.Path("left", "bottom -> top", Leg(fer(), 60*mm, Rect(12*mm, 15*mm)), Winding("A", 10*turn))
	c.Path("right", "top -> bottom", Leg(fer(), 60*mm, Rect(12*mm, 15*mm)), Gap(1*mm), Winding("A", 5*turn))
	op := c.Solve(Currents{"A": 1 * amp})
	near(t, "linkage of both parts", op.Linkage("A"), 15*op.Flux("left"), 1e-12)
}

// TestMagnet checks the load line of a magnet with a gap against its closed form.
//
//	Bm = Br / (1 + mur lg/(lm)) with equal sections, no fringing, iron of high permeability
//
// e.g. A. E. Fitzgerald et al., Electric Machinery, 6th ed., section 1.6 (load line).
func TestMagnet(t *testing.T) {
	iron := NewMaterial("iron", Linear(1e7))
	build := func(m MagnetPart) *OperatingPoint {
		c := Magnetic("M")
		c.Ring("core", m, Gap(2*mm).Faces(Rect(10*mm, 10*mm)).Fringe(NoFringe), Leg(iron, 50*mm, Rect(10*mm, 10*mm)), Winding("N", 1*turn))
		return c.Solve()
	}
	want := 1.2 / (1 + 1.05*2/8)
	op := build(Magnet(1.2*tesla, 1.05, 8*mm, Rect(10*mm, 10*mm)))
	near(t, "flux density of the magnet", op.FluxDensity("core.magnet"), want, 1e-6)
	near(t, "in the gap", op.FluxDensity("gap"), want, 1e-6)
	back := build(Magnet(1.2*tesla, 1.05, 8*mm, Rect(10*mm, 10*mm)).Reversed())
	near(t, "reversed", back.FluxDensity("core.magnet"), -want, 1e-6)
}

// TestAirOfWinding: deep in saturation the incremental inductance is that of the enclosed air and metal at mu0.
func TestAirOfWinding(t *testing.T) {
	c := Magnetic("C")
	c.Ring("core", Leg(fer(), 100*mm, Rect(10*mm, 10*mm).Stacking(0.9)), Winding("N", 100*turn).Encloses(300*mm2))
	got := c.Solve(Currents{"N": 1e6 * amp}).Inductance("N")
	near(t, "saturated inductance", got, 4e-7*math.Pi*100*100*300*mm2/(100*mm), 1e-3)
}

// TestVerdictsBlock writes out the part of the manual on verdicts, in cells.
func TestVerdictsBlock(t *testing.T) {
	session.Reset()
	var T1 *MagneticCircuit
	var leak *Requirement
	out := collect(func() {
		cell("0", 1, func() {
			Revision("B", "2026-01-15", "gap from 0.75 to 0.8 mm")
			Verdicts()
		})
		cell("1", 2, func() { T1 = threeLegs() })
		cell("2", 3, func() {
			leak = Require("inductance at 6 A", AtLeastWithUnits([]string{"H"}, 300*uH))
			contains(t, text(t, leak), "OPEN until it is checked")
		})
		cell("3", 4, func() {
			for _, corner := range []string{"cold", "hot"} {
				Corner(corner)
				op := T1.At(map[string]float64{"cold": 25, "hot": 100}[corner]).Solve(Currents{"main": 6 * amp})
				leak.CheckWithUnits([]string{"H"}, op.Inductance("main"), op)
				v := LimitWithUnits([]string{"", "T"}, "flux density", op.FluxDensity("centre"), AtMostWithUnits([]string{"T"}, 0.3*tesla), op)
				contains(t, text(t, v), corner+"; T1 at ")
			}
			OpenPoint("creepage", "safety engineer")
			Limit("turns", 34, Within(30, 40)).Uncertain(50 * percent)
			LimitWithUnits([]string{"", "#"}, "clearance", 5, AtLeast(4))
		})
		cell("4", 5, func() { Waive("flux density", "inrush only", "A. Smith") })
		session.Finish()
	})
	last := out[len(out)-1]
	table := last.Data["text/plain"].(string)
	if !last.Update {
		t.Error("the place of the verdicts is not filled")
	}
	for _, want := range []string{"inductance at 6 A", "WAIVED by A. Smith: inrush only", "OPEN", "value typed by hand", "PASS - margin below uncertainty", "hot; T1 at 100 degC, main 6 A"} {
		contains(t, table, want)
	}
}

func TestPicturesAndTables(t *testing.T) {
	i := Span(0, 6*amp, 61)
	if len(i) != 61 || i[60] != 6 || i[1] != 0.1 {
		t.Errorf("span: %v", i)
	}
	l := make([]Value, len(i))
	for k := range i {
		l[k] = 600 * uH / (1 + sq(i[k]/8))
	}
	f := Plot(SeriesWithUnits([]string{"", "A", "H"}, "25 degC", i, l), Line("asked", []Value{0, 6}, []Value{500 * uH, 500 * uH})).
		Title("L over current").Labels("current", "inductance").Limit("required", AtLeastWithUnits([]string{"H"}, 500*uH))
	contains(t, text(t, f), "at least 500 uH")
	contains(t, f.MIMEBundle()["image/svg+xml"].(string), "inductance (uH)")
	contains(t, text(t, Bars([]string{"core", "copper"}, []Value{0.04, 0.18})), "copper")

	type Case struct {
		Name        string
		Vin         Volt
		PeakCurrent Ampere
		Good        bool
		Pieces      int
	}
	table := TableOfWithUnits([]string{"{Vin=V;PeakCurrent=A}"}, []Case{{"start", 60, 13, true, 2}, {"full load", 48, 9.5, false, 10}})
	for _, want := range []string{"Vin (V)", "peak current (A)", "9.500", "yes", "full load"} {
		contains(t, text(t, table.Caption("corners")), want)
	}
	contains(t, text(t, TableOf([]*Case{{Name: "by pointer"}, nil})), "by pointer")
}

func sq(x float64) float64 { return x * x }

func TestLinesOfTheDocument(t *testing.T) {
	out := collect(func() {
		Note("a < b")
		Cite("IEC 60205")
		Warn("look twice")
		Clear()
		Show(3, Gap(1*mm))
	})
	if len(out) != 6 || out[4].Data["text/plain"] != "3" || out[5].Data["text/plain"] != "gap of 1 mm" || !out[3].Clear {
		t.Fatalf("outputs %v", out)
	}
	contains(t, out[0].Data["text/html"].(string), `<p class="note">a &lt; b</p>`)
	contains(t, out[1].Data["text/plain"].(string), "source: IEC 60205")
	contains(t, out[2].Data["text/plain"].(string), "warning: look twice")
	contains(t, text(t, SVG("<svg></svg>")), "picture")
	contains(t, text(t, HTML("<b>x</b>")), "<b>")
}

func TestAssumptionsAreListed(t *testing.T) {
	session.Reset()
	out := collect(func() {
		cell("0", 1, func() {
			T1 := threeLegs()
			T1.At(110 * degC).Solve(Currents{"main": 1})
			T1.Solve()
		})
		cell("1", 2, Assumptions)
	})
	list := out[len(out)-1].Data["text/plain"].(string)
	contains(t, list, "T1 is computed at 25 degC")
	contains(t, list, "110 degC is 10 K beyond its data")
}

func TestSameBytesTwice(t *testing.T) {
	show := func() string {
		T1 := threeLegs()
		op := T1.Solve(Currents{"main": 3.2 * amp})
		return fmt.Sprint(op.MIMEBundle(), op.MIMEMetadata(), T1.Draw().MIMEBundle(), T1.BiasCurve("main", 0, 6).MIMEBundle(), T1.Fringing("gap").MIMEBundle())
	}
	if first, second := show(), show(); first != second {
		t.Error("the same results show different bytes")
	}
}
