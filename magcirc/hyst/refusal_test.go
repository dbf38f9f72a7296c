package hyst_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
)

// Every refusal by its message and code.
func TestRefusals(t *testing.T) {
	with := func(change func(p *hyst.Parameters)) func() error {
		return func() error {
			p := steel92
			p.Name = "core 7"
			change(&p)
			_, err := hyst.NewJilesAtherton(p)
			return err
		}
	}
	good, _ := hyst.NewJilesAtherton(steel92)
	saw := func(n int) (h, b []float64) {
		for i := range n {
			w := 2 * math.Pi * float64(i) / float64(n)
			h, b = append(h, 100*math.Cos(w)), append(b, 0.3*math.Cos(w-0.3))
		}
		return h, b
	}
	for _, c := range []struct {
		call func() error
		code magcirc.Code
		want string
	}{
		{with(func(p *hyst.Parameters) { p.K = -400 }), magcirc.BadValue, `Jiles-Atherton "core 7": k <= 0 (it is -400 A/m): pinning is above zero; a curve without loop is Langevin(Ms, a, alpha)`},
		{with(func(p *hyst.Parameters) { p.K = 0 }), magcirc.BadValue, `Jiles-Atherton "core 7": k <= 0 (it is 0 A/m): pinning is above zero; a curve without loop is Langevin(Ms, a, alpha)`},
		{with(func(p *hyst.Parameters) { p.K = math.NaN() }), magcirc.BadValue, `Jiles-Atherton "core 7": k <= 0 (it is NaN A/m): pinning is above zero; a curve without loop is Langevin(Ms, a, alpha)`},
		{with(func(p *hyst.Parameters) { p.C = 1.2 }), magcirc.BadValue, `Jiles-Atherton "core 7": c outside 0 to 1 (it is 1.2, Form1992); is this a set for Form1986? There c weighs c/(1+c), here 0.5455`},
		{with(func(p *hyst.Parameters) { p.C = -0.2 }), magcirc.BadValue, `Jiles-Atherton "core 7": c outside 0 to 1 (it is -0.2, Form1992)`},
		{with(func(p *hyst.Parameters) { p.C, p.Form = -0.2, hyst.Form1986 }), magcirc.BadValue, `Jiles-Atherton "core 7": c < 0 (it is -0.2, Form1986)`},
		{with(func(p *hyst.Parameters) { p.Ms = 0 }), magcirc.BadValue, `Jiles-Atherton "core 7": Ms <= 0 (it is 0 A/m): a saturation magnetisation is above zero`},
		{with(func(p *hyst.Parameters) { p.Ms = 4e6 }), magcirc.Implausible, `Jiles-Atherton "core 7": Ms 4 MA/m is above that of any material (2.4 MA/m); give it in A/m: Bs/mu0`},
		{with(func(p *hyst.Parameters) { p.Ms = 2.03 }), magcirc.Implausible, `Jiles-Atherton "core 7": Ms 2.03 A/m is that of no core; was 2.03 T meant? Give it in A/m: Bs/mu0`},
		{with(func(p *hyst.Parameters) { p.A = -1 }), magcirc.BadValue, `Jiles-Atherton "core 7": a <= 0 (it is -1 A/m): the shape parameter is above zero`},
		{with(func(p *hyst.Parameters) { p.Alpha = -1e-3 }), magcirc.BadValue, `Jiles-Atherton "core 7": alpha < 0 (it is -0.001): the coupling is not below zero`},
		{with(func(p *hyst.Parameters) { p.Alpha = 2 }), magcirc.Implausible, `Jiles-Atherton "core 7": alpha 2 is above that of any soft material (1)`},
		{with(func(p *hyst.Parameters) { p.Form = 7 }), magcirc.BadValue, `Jiles-Atherton "core 7": there is no form 7; write Form1992 or Form1986`},
		{with(func(p *hyst.Parameters) { p.K = 1e12 }), magcirc.Implausible, `Jiles-Atherton "core 7": k 1 TA/m and a 1.1 kA/m belong to no material`},
		{func() error { _, err := hyst.Steady(good, -1, nil); return err }, magcirc.BadValue, "loop: peak field strength -1 A/m is not a positive value"},
		{func() error { _, err := hyst.SteadyTo(good, 0, nil); return err }, magcirc.BadValue, "loop: peak flux density 0 T is not a positive value"},
		{func() error { _, err := hyst.SteadyTo(good, 9, nil); return err }, magcirc.OutsideValidity, "loop: peak flux density 9 T is out of reach: at 1 MA/m the law has 3.265 T"},
		{func() error { _, err := hyst.SteadyBetween(good, good.Start(), 5, 5, nil); return err }, magcirc.BadValue, "loop: it has no swing from 5 A/m to 5 A/m"},
		{func() error { _, err := hyst.Minor(good, good.Start(), 100, 0, 5, nil); return err }, magcirc.BadValue, "minor loop: amplitude 0 A/m about 100 A/m is no swing"},
		{func() error { _, err := hyst.Minor(good, good.Start(), 100, 10, 0, nil); return err }, magcirc.BadValue, "minor loop: 0 cycles; give 1 to 1000000"},
		{func() error { _, err := hyst.NewPlay(); return err }, magcirc.BadValue, "play law: there is no cell; give one or more: PlayCell{Ms: 3.8e5, A: 20, Kappa: 12}"},
		{func() error { _, err := hyst.NewPlay(hyst.PlayCell{Ms: 1e5, A: 0, Kappa: 1}); return err }, magcirc.BadValue, "play law: cell 1: a <= 0 (it is 0 A/m)"},
		{func() error { _, err := hyst.NewPlay(hyst.PlayCell{Ms: -1, A: 1}); return err }, magcirc.BadValue, "play law: cell 1: Ms <= 0 (it is -1 A/m)"},
		{func() error {
			_, err := hyst.NewPlay(hyst.PlayCell{Ms: 2e6, A: 10}, hyst.PlayCell{Ms: 2e6, A: 10})
			return err
		}, magcirc.Implausible, "play law: the cells together have Ms 4 MA/m, above that of any material (2.4 MA/m); give each cell its share"},
		{func() error { _, err := hyst.NewLoop("loop.csv", make([]float64, 5), make([]float64, 5)); return err }, magcirc.BadValue, "loop.csv: 5 points make no loop; give 8 or more over one cycle"},
		{func() error { _, err := hyst.NewLoop("", make([]float64, 9), make([]float64, 8)); return err }, magcirc.BadValue, "loop: 9 values of H and 8 of B; each point wants both"},
		{func() error { _, err := hyst.NewLoop("loop.csv", make([]float64, 9), make([]float64, 9)); return err }, magcirc.BadValue, "loop.csv: H is 0 A/m all the way: there are no turning points"},
		{func() error { h, b := saw(40); _, err := hyst.NewLoop("loop.csv", b, h); return err }, magcirc.Implausible, "loop.csv: point 1: B 100 T is above that of any material (3 T); are these mT, or are H and B exchanged?"},
		{func() error {
			h, b := saw(40)
			b[0], b[20] = 0.3, -0.3
			for i := range b {
				b[i] = 0.3 * math.Cos(2*math.Pi*float64(i)/40+0.3)
			}
			_, err := hyst.NewLoop("loop.csv", h, b)
			return err
		}, magcirc.BadValue, "loop.csv: it runs clockwise (area -27.74 J/m3): no core gives energy; are H and B exchanged, or is one of them inverted?"},
		{func() error {
			h, b := saw(40)
			_, err := hyst.NewLoop("loop.csv", append(h, h[0]), append(b, b[0]+0.1))
			return err
		}, magcirc.BadValue, "loop.csv: not closed: B is 0.2866 T at the first point and 0.3866 T at the last, 15 % of its height apart; give one steady cycle"},
		{func() error { _, err := hyst.FitJilesAtherton(nil, nil); return err }, magcirc.BadValue, `fit: there is no loop; give one or more: ReadLoop("loop.csv")`},
		{func() error {
			_, err := hyst.FitJilesAtherton([]hyst.Record{{H: []float64{1, 2, 3, 4}, B: []float64{1, 2, 3, 4}}}, nil)
			return err
		}, magcirc.OutsideData, "fit: 4 points for five parameters; give 10 or more"},
		{func() error {
			_, err := hyst.FitPlay([]hyst.Record{{Name: "loop.csv", H: make([]float64, 20), B: make([]float64, 20)}}, "")
			return err
		}, magcirc.BadValue, "loop.csv: B is zero all the way"},
		{func() error {
			_, err := hyst.Separate([]hyst.LossPoint{{60, 1, 1}, {60, 1.5, 2}}, 0, false)
			return err
		}, magcirc.OutsideData, "loss separation: loss data given at 60 Hz, used at another frequency without scaling; give points at two frequencies or more"},
		{func() error { return hyst.OneFrequency(60, 50) }, magcirc.OutsideData, "loss separation: loss data given at 60 Hz, used at 50 Hz without scaling; give points at two frequencies or more"},
		{func() error {
			_, err := hyst.Separate([]hyst.LossPoint{{50, 1, 1}, {60, 1, 2}}, 0, true)
			return err
		}, magcirc.OutsideData, "loss separation: 2 frequencies for 3 parts of the loss; give points at 3 frequencies"},
		{func() error { _, err := hyst.Separate([]hyst.LossPoint{{50, 1, -1}}, 0, false); return err }, magcirc.BadValue, "loss separation: point 1: -1 at 50 Hz, 1 T is no loss"},
		{hyst.Sheet{Thickness: 0.35, Resistivity: 48e-8}.Check, magcirc.Implausible, "lamination: thickness 350 mm is that of no lamination (to 20 mm); was mm meant?"},
		{hyst.Sheet{Thickness: 0.35e-3}.Check, magcirc.BadValue, "lamination: resistivity 0 ohm m is not a positive value"},
		{hyst.Sheet{Thickness: 0.35e-3, Resistivity: 48e-8, Excess: -1}.Check, magcirc.BadValue, "lamination: excess coefficient -1 is negative"},
		{func() error {
			_, _, err := hyst.Dynamic(good, hyst.Sheet{Thickness: 1e-3, Resistivity: 1e-7}, 1, 0, nil)
			return err
		}, magcirc.BadValue, "loop: frequency 0 Hz is not a positive value"},
	} {
		err := c.call()
		var e *magcirc.Error
		if !errors.As(err, &e) {
			t.Errorf("not refused: %s", c.want)
			continue
		}
		if err.Error() != c.want || e.Code != c.code {
			t.Errorf("%v: %q\nwant %v: %q", e.Code, err, c.code, c.want)
		}
	}
}

// Above alpha Ms/(3a) = 1 a law is traced: it is refused with the field at which it folds, or accepted with a note.
func TestFold(t *testing.T) {
	p := hyst.Parameters{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.31 * 3300 / 1.6e6, C: 0.2, Name: "core 7"}
	_, err := hyst.NewJilesAtherton(p)
	if err == nil || !strings.HasPrefix(err.Error(), `Jiles-Atherton "core 7": the loop folds at `) || !strings.HasSuffix(err.Error(), ` A/m (alpha Ms/(3a) = 1.31); lower alpha or raise a`) {
		t.Errorf("%v", err)
	}
	// N. Sadowski et al. 2002: 1.07, and its loops do not fold between 200 and 20000 A/m.
	l := law(t, sadowski)
	near(t, "alpha Ms/(3a)", sadowski.Ratio(), 1.07, 1e-3)
	if len(l.Notes()) != 1 || !strings.Contains(l.Notes()[0].Text, "alpha Ms/(3a) = 1.07 is above 1, where a loop may fold; traced from") {
		t.Errorf("notes %v", l.Notes())
	}
	for _, peak := range []float64{200, 1000, 5000, 20000} {
		loop, err := hyst.Steady(l, peak, nil)
		if err != nil {
			t.Fatal(err)
		}
		if !(loop.Area() > 0) || len(loop.Notes) == 0 {
			t.Errorf("loop to %v A/m: area %v, notes %v", peak, loop.Area(), loop.Notes)
		}
	}
}

// A loop that may not take the cycles it needs is refused with its drift.
func TestLoopNotClosed(t *testing.T) {
	l := law(t, hyst.Parameters{Ms: 3.8e5, A: 30, K: 200, Alpha: 5e-5, C: 0.05})
	_, err := hyst.SteadyBetween(l, after(l, 2000), 100, 130, &hyst.Settings{Cycles: 3})
	if err == nil || !strings.Contains(err.Error(), "loop not closed after 3 cycles: drift ") || !strings.Contains(err.Error(), "allow more cycles") {
		t.Errorf("%v", err)
	}
	loop, err := hyst.SteadyBetween(l, after(l, 2000), 100, 130, nil)
	if err != nil || loop.Drift > 1e-11 {
		t.Errorf("%v, drift %v", err, loop.Drift)
	}
}

// after gives the state at zero field after a peak.
func after(l hyst.Law, peak float64) hyst.State {
	s := l.Start()
	l.Commit(&s, l.ByField(&s, peak))
	l.Commit(&s, l.ByField(&s, 0))
	return s
}

// Measured loops that drift or lie off zero are set right, and say so.
func TestDriftAndOffset(t *testing.T) {
	l := law(t, ferrite)
	loop, err := hyst.Steady(l, 100, nil)
	if err != nil {
		t.Fatal(err)
	}
	n := len(loop.H)
	h, b := append([]float64(nil), loop.H...), append([]float64(nil), loop.B...)
	h, b = append(h, h[0]), append(b, b[0])
	for i := range h {
		h[i] += 2
		b[i] += 0.01 + 0.02*float64(i)/float64(n)
	}
	m, err := hyst.NewLoop("loop.csv", h, b)
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Notes) != 1 || m.Notes[0].String() != "loop.csv: B drifts by 20 mT over the cycle (3 % of its height): taken out evenly" {
		t.Errorf("notes %v", m.Notes)
	}
	c := m.Centred()
	near(t, "coercivity", c.Coercivity(), loop.Coercivity(), 1e-3)
	near(t, "remanence", c.Remanence(), loop.Remanence(), 1e-3)
	near(t, "area", c.Area(), loop.Area(), 1e-3)
	if len(c.Notes) != 2 || !strings.HasPrefix(c.Notes[1].Text, "moved by -2 A/m and -10 mT") {
		t.Errorf("notes %v", c.Notes)
	}
}

// The creep of biased minor loops: play cells none, Jiles-Atherton for many cycles.
func TestAccommodation(t *testing.T) {
	l := law(t, ferrite)
	s := after(l, 400)
	a, err := hyst.Minor(l, s, 10, 1, 40, nil)
	if err != nil {
		t.Fatal(err)
	}
	for n := 1; n < 40; n++ {
		if !(a.Creep[n]*a.Creep[n-1] > 0 && math.Abs(a.Creep[n]) < math.Abs(a.Creep[n-1])) {
			t.Fatalf("creep %v does not die down", a.Creep)
		}
	}
	if !strings.HasPrefix(a.String(), "minor loops creep: tip by ") || math.Abs(a.Total()) < 1e-3 {
		t.Errorf("%s, total %v", a, a.Total())
	}
	t.Logf("%s", a)
	p := play10(t)
	none, err := hyst.Minor(p, after(p, 400), 10, 1, 3, nil)
	if err != nil {
		t.Fatal(err)
	}
	if none.String() != "minor loops close at once" || math.Abs(none.Creep[1]) > 1e-15 {
		t.Errorf("%s: %v", none, none.Creep)
	}
}

// An anhysteretic curve gives its law back.
func TestFitAnhysteretic(t *testing.T) {
	l := law(t, steel92)
	var h, b []float64
	for x := 50.0; x < 2e4; x *= 1.3 {
		h, b = append(h, x), append(b, l.Anhysteretic(x))
	}
	ms, a, alpha, rms, err := hyst.FitAnhysteretic(h, b)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "Ms", ms, steel92.Ms, 1e-4)
	near(t, "a", a, steel92.A, 1e-3)
	near(t, "alpha", alpha, steel92.Alpha, 1e-3)
	if rms > 1e-6 {
		t.Errorf("residual %v", rms)
	}
}

// An initial curve alone fits too, and the interval says what it leaves open.
func TestFitInitialCurve(t *testing.T) {
	l := law(t, steel92)
	c := hyst.Initial(l)
	var r hyst.Record
	for x := 50.0; x < 2e4; x *= 1.15 {
		b, _ := c.At(x)
		r.H, r.B = append(r.H, x), append(r.B, b)
	}
	fit, err := hyst.FitJilesAtherton([]hyst.Record{r}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if fit.RMS > 1e-4 {
		t.Errorf("residual %v", fit.RMS)
	}
}
