package dsl_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
)

// TestLaminations sets the loss of a sheet beside the formula for an even flux, pi^2 d^2 f B^2/(6 rho) a cycle.
func TestLaminations(t *testing.T) {
	core := NewMaterial("grade 7", JilesAtherton(steel))
	lam := core.Sheet(0.35*mm, 4.8e-7)
	l := lam.Tolerance(10*percent).DynamicLoop(1.2*tesla, 50)
	near(t, "classical", l.Classical(), math.Pi*math.Pi*0.35e-3*0.35e-3*50*1.2*1.2/(6*4.8e-7), 1e-12)
	near(t, "hysteresis", l.Hysteresis(), core.LoopTo(1.2*tesla).Area(), 1e-12)
	near(t, "area", l.Area(), l.Hysteresis()+l.Classical(), 1e-12)
	near(t, "loss density", l.LossDensity(), 50*l.Area(), 1e-12)
	if l.Excess() != 0 {
		t.Errorf("excess %v of no separation", l.Excess())
	}
	if l.Coercivity() <= core.LoopTo(1.2*tesla).Coercivity() {
		t.Error("eddy currents do not widen the loop")
	}
	contains(t, text(t, l), "classical eddy currents")
	contains(t, text(t, lam), "laminations of 350 um, 480 nohm m")
	contains(t, fmt.Sprint(lam.DynamicLoop(1.2*tesla, 5000).Notes()), "flux crowds to the surface")
	for want, call := range map[string]func(){
		"material grade 7: has no laminations; say what they are: lam.Sheet(0.35*mm, 4.8e-7)":                                          func() { core.DynamicLoop(1, 50) },
		"material iron: has no loop: its law has no memory; give it a JilesAtherton or Play law":                                       func() { NewMaterial("iron", Linear(4000)).Sheet(0.35*mm, 4.8e-7).DynamicLoop(1, 50) },
		"loop grade 7 to 100 A/m: has no frequency; take lam.DynamicLoop(1.2*tesla, 50*Hz), or multiply .Area() by the frequency":      func() { core.Loop(100).LossDensity() },
		"loss separation: there is no point; give one or more: LossPoint{Frequency: 50*Hz, Peak: 1.5*tesla, Loss: 19.2e3}":             func() { Separate() },
		"loss separation: there is none; make it with Separate(points...)":                                                             func() { lam.Excess(nil) },
		"loss separation: loss data given at 50 Hz, used at another frequency without scaling; give points at two frequencies or more": func() { Separate(LossPoint{50, 1, 400}, LossPoint{50, 1.2, 500}) },
		"initial curve: field strength -1 A/m is below zero; an initial curve rises from zero; loops go to FitJilesAtherton":           func() { FitInitial([]float64{-1, 0, 1, 2}, []float64{-1, 0, 1, 2}) },
	} {
		if err := refused(t, call); err.Error() != want {
			t.Errorf("%q, want %q", err, want)
		}
	}
	contains(t, refused(t, func() { core.Sheet(350, 4.8e-7) }).Error(), "was mm meant?")
	contains(t, refused(t, func() { core.Sheet(0.35*mm, -1) }).Error(), "is not a positive value")
}

// TestSeparation: B. S. Guru, H. R. Hiziroglu, Electric Machinery and Transformers, 3rd ed. 2004, example 2.13 (in W/kg, as
// the parts are in the unit of the points); and three terms that are known.
func TestSeparation(t *testing.T) {
	s := Separate(LossPoint{25, 1.1, 0.4}, LossPoint{25, 1.5, 0.8}, LossPoint{60, 1.1, 1.2})
	near(t, "exponent", s.Exponent(), 2.28371, 2e-6)
	near(t, "hysteresis", s.Hysteresis(25, 1.5), 0.667178, 3e-6)
	near(t, "eddy currents", s.Classical(25, 1.5), 0.132822, 8e-6)
	contains(t, fmt.Sprint(s.Notes()), "two frequencies do not show the excess")

	var points []LossPoint
	law := func(f, b float64) (h, c, x float64) {
		return 90 * f * math.Pow(b, 1.8), 0.42 * f * f * b * b, 8.7634 * 0.6 * math.Pow(f*b, 1.5)
	}
	for _, f := range []float64{50, 100, 200, 400} {
		for _, b := range []float64{0.5, 1, 1.5} {
			h, c, x := law(f, b)
			points = append(points, LossPoint{f, b, h + c + x})
		}
	}
	s = Separate(points...)
	h, c, x := law(60, 1.2)
	near(t, "exponent", s.Exponent(), 1.8, 1e-6)
	near(t, "hysteresis", s.Hysteresis(60, 1.2), h, 1e-5)
	near(t, "classical", s.Classical(60, 1.2), c, 1e-5)
	near(t, "excess", s.Excess(60, 1.2), x, 1e-5)
	near(t, "loss", s.Loss(60, 1.2), h+c+x, 1e-8)
	if s.Deviation() > 1e-8 || len(s.Notes()) > 0 {
		t.Error(s.Deviation(), s.Notes())
	}
	contains(t, text(t, s), "classical eddy currents (kW/m3)")

	// The loop of laminations with this excess has it: 8.763 C (f B)^1.5 a second.
	lam := NewMaterial("grade 7", JilesAtherton(steel)).Sheet(0.35*mm, 4.8e-7).Excess(s)
	near(t, "excess of the loop", lam.DynamicLoop(1.2*tesla, 60).Excess()*60, x, 1e-4)
}

// TestFitsOfCurves gives parameters back.
func TestFitsOfCurves(t *testing.T) {
	core := NewMaterial("core 7", JilesAtherton(steel))
	law := Langevin(steel.Ms, steel.A, steel.Alpha)
	var h, an, rise []float64
	for x := 50.0; x < 2e4; x *= 1.2 {
		h, an, rise = append(h, x), append(an, law.FluxDensity(x)), append(rise, core.FluxDensity(x, 25*degC))
	}
	fit := FitAnhysteretic(h, an)
	near(t, "Ms", fit.Saturation(), steel.Ms, 1e-4)
	near(t, "a", fit.Shape(), steel.A, 1e-3)
	near(t, "alpha", fit.Coupling(), steel.Alpha, 1e-3)
	near(t, "flux density of the material", NewMaterial("soft", fit).FluxDensity(1000, 25*degC), law.FluxDensity(1000), 1e-5)
	if fit.Deviation() > 1e-6 {
		t.Error(fit.Deviation())
	}
	contains(t, text(t, fit), "alpha")
	contains(t, text(t, fit.Plot()), "measured")
	if _, ok := fit.MIMEMetadata()["ampturn"]; !ok {
		t.Error("no numbers in full")
	}

	ja := FitInitial(h, rise)
	near(t, "k by the initial curve", ja.Parameters().K, steel.K, 1e-3)
	contains(t, text(t, ja), "fitted to an initial curve")
	contains(t, text(t, ja.Plot()), "measured")
	contains(t, text(t, ja.Residuals()), "initial curve")
	if strings.Contains(text(t, ja), "inf") {
		t.Error(text(t, ja))
	}
}

// TestFitOfThreeLoops is the family that a local minimum used to catch; its figures share prefixes, and a loop's range goes
// from the lowest to the highest field strength.
func TestFitOfThreeLoops(t *testing.T) {
	core := NewMaterial("core 7", JilesAtherton(steel))
	fit := FitJilesAtherton(core.Loop(600).As("small"), core.Loop(2000).As("middle"), core.Loop(6000).As("large"))
	near(t, "Ms", fit.Parameters().Ms, steel.Ms, 1e-6)
	near(t, "k", fit.Parameters().K, steel.K, 1e-6)
	contains(t, text(t, fit.Plot()), "from -6 kA/m to 6 kA/m")
	shown := text(t, fit)
	for _, s := range []string{"inf", "NaN", "core closely"} {
		if strings.Contains(shown, s) {
			t.Errorf("%q in %s", s, shown)
		}
	}
}
