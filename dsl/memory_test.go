package dsl_test

import (
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	. "ampturn/dsl"
)

var steel = JA{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.6e-3, C: 0.2, Form: Form1992}

// TestLoopsBlock writes out the part of the manual on loops; the figures are those of the Runge-Kutta runs that
// magcirc/hyst is tested against.
func TestLoopsBlock(t *testing.T) {
	core := NewMaterial("core 7", JilesAtherton(steel))
	l := core.Loop(6000)
	near(t, "peak", l.Peak(), 1.736765, 1e-5)
	near(t, "remanence", l.Remanence(), 0.623882, 1e-5)
	near(t, "coercivity", l.Coercivity(), 314.030, 1e-5)
	near(t, "area", l.Area(), 2204.600, 1e-5)
	near(t, "field", l.PeakField(), 6000, 1e-12)
	same := core.LoopTo(1.736765 * tesla)
	near(t, "the same to a flux density", same.PeakField(), 6000, 1e-5)
	contains(t, text(t, l), "coercivity")
	contains(t, text(t, l.Plot()), "flux density over field strength")
	contains(t, text(t, core), "Jiles-Atherton")
	if n := len(l.FieldStrengths()); n != len(l.FluxDensities()) || n < 100 {
		t.Errorf("%d points", n)
	}
	small := core.MinorLoop(500, 100, 3)
	contains(t, fmt.Sprint(small.Notes()), "minor loops creep")
	play := NewMaterial("lot 3", Play(PlayCell{Ms: 1.6e6, A: 100, Kappa: 50}))
	near(t, "loss of one cell", play.Loop(200).Area(), 176.1804, 1e-6)
	contains(t, fmt.Sprint(play.MinorLoop(100, 50, 3).Notes()), "close at once")
	hot := core.Also(100*degC, JilesAtherton(JA{Ms: 1.4e6, A: 1000, K: 300, Alpha: 1.6e-3, C: 0.2}))
	if a, b, c := hot.Loop(3000).Area(), hot.Loop(3000, 60*degC).Area(), hot.Loop(3000, 100*degC).Area(); !(a > b && b > c) {
		t.Errorf("areas %v, %v, %v do not fall with temperature", a, b, c)
	}
}

func gapped(law Law) *MagneticCircuit {
	R1 := Magnetic("R1")
	R1.Ring("core", Leg(NewMaterial("core 7", law), 200*mm, Area(100*mm2)), Gap(0.1*mm).Fringe(NoFringe), Winding("N", 100*turn))
	return R1
}

// TestHistory magnetises a gapped core, leaves it and demagnetises it.
func TestHistory(t *testing.T) {
	R1 := gapped(JilesAtherton(steel))
	h := R1.History(Currents{"N": 20 * amp}, Currents{"N": 0})
	left := h.Last()
	b := left.FluxDensity("core")
	if !(b > 0.1 && b < 0.624) {
		t.Errorf("remanence with a gap is %v T; without one it is 0.624 T", b)
	}
	near(t, "load line of the gap", left.FieldStrength("core")*200*mm, -b*0.1*mm/(4e-7*math.Pi), 1e-8)
	if h.Count() != 2 || h.At(2) != left {
		t.Error("states are counted from 1")
	}
	contains(t, text(t, h), "history of R1")
	contains(t, text(t, left), "state 2 of a history")
	contains(t, text(t, h.Plot("core")), "flux density")
	contains(t, text(t, Basis(left)), "memory")
	single := R1.Solve(Currents{"N": 20 * amp})
	near(t, "the first state is on the initial curve", single.FluxDensity("core"), h.FluxDensity("core")[0], 1e-9)
	contains(t, fmt.Sprint(single.Notes()), "initial curve")
	if strings.Contains(fmt.Sprint(left.Notes()), "initial curve") {
		t.Error("a history says that it follows the initial curve")
	}
	soft := R1.History(append([]Drive{Currents{"N": 20 * amp}}, Demagnetise("N", 20*amp)...)...)
	if b := soft.Last().FluxDensity("core"); math.Abs(b) > 0.01*left.FluxDensity("core") {
		t.Errorf("after demagnetising %v T is left", b)
	}
	v := Limit("remanent flux density", b, AtMost(0.6*tesla), left)
	contains(t, text(t, v), "PASS")
}

// TestHistoryOfSeveralLegs has legs that turn at different times.
func TestHistoryOfSeveralLegs(t *testing.T) {
	fer := NewMaterial("core 7", JilesAtherton(JA{Ms: 3.9e5, A: 20, K: 14, Alpha: 2e-5, C: 0.3}))
	T1 := Magnetic("T1")
	T1.Path("centre", "bottom -> top", Leg(fer, 36*mm, Rect(12.2*mm, 15*mm)), Gap(0.1*mm), Winding("main", 34*turn))
	T1.Path("left", "top -> bottom", Yoke(fer, 61*mm, Rect(6*mm, 15*mm)))
	T1.Path("right", "top -> bottom", Yoke(fer, 61*mm, Rect(6*mm, 15*mm)))
	h := T1.History(Currents{"main": 10 * amp}, Currents{"main": 0}, Currents{"main": -10 * amp}, Currents{"main": 0})
	f := h.Flux("centre")
	if !(f[1] > 0 && f[3] < 0 && math.Abs(f[1]) < 0.3*f[0]) {
		t.Errorf("fluxes %v", f)
	}
	near(t, "flux at the top node", h.Last().Flux("left")+h.Last().Flux("right"), f[3], 1e-9)
}

// TestMemoryRefusals asks for what cannot be.
func TestMemoryRefusals(t *testing.T) {
	with := func(change func(p *JA)) func() {
		return func() {
			p := steel
			change(&p)
			JilesAtherton(p)
		}
	}
	core := NewMaterial("core 7", JilesAtherton(steel))
	for want, call := range map[string]func(){
		"Jiles-Atherton law: k <= 0 (it is -5 A/m): pinning is above zero; a curve without loop is Langevin(Ms, a, alpha)":            with(func(p *JA) { p.K = -5 }),
		"Jiles-Atherton law: c outside 0 to 1 (it is 1.5, Form1992); is this a set for Form1986? There c weighs c/(1+c), here 0.6":    with(func(p *JA) { p.C = 1.5 }),
		"Jiles-Atherton law: c outside 0 to 1 (it is -0.1, Form1992)":                                                                 with(func(p *JA) { p.C = -0.1 }),
		"Jiles-Atherton law: c < 0 (it is -0.1, Form1986)":                                                                            with(func(p *JA) { p.C, p.Form = -0.1, Form1986 }),
		"Jiles-Atherton \"core 7\": Ms 4 A/m is that of no core; was 4 T meant? Give it in A/m: Bs/mu0":                               with(func(p *JA) { p.Ms, p.Name = 4, "core 7" }),
		"material iron: has no loop: its law has no memory; give it a JilesAtherton or Play law":                                      func() { NewMaterial("iron", Linear(4000)).Loop(200) },
		"loop: peak field strength -3 A/m is not a positive value":                                                                    func() { core.Loop(-3) },
		"loop: peak flux density 20 T is out of reach: at 1 MA/m the law has 3.265 T":                                                 func() { core.LoopTo(20) },
		"history of R1: no leg remembers: its materials have laws without memory; give one a JilesAtherton or Play law, or use Solve": func() { gapped(Linear(2000)).History(Currents{"N": 1}) },
		"history of R1: has no state; write R1.History(Currents{\"main\": 8*amp}, Currents{\"main\": 0})":                             func() { gapped(JilesAtherton(steel)).History() },
		"play law: there is no cell; give one or more: PlayCell{Ms: 3.8e5, A: 20, Kappa: 12}":                                         func() { Play() },
		"play law: cell 2: kappa < 0 (it is -1 A/m)":                                                                                  func() { Play(PlayCell{1e5, 10, 5}, PlayCell{1e5, 10, -1}) },
		"fit: there is no loop; give one or more: ReadLoop(\"loop.csv\")":                                                             func() { FitJilesAtherton() },
		"../bh.csv: is outside the notebook's folder; put the file beside the notebook":                                               func() { ReadCurve("../bh.csv") },
		"/etc/passwd: is outside the notebook's folder; put the file beside the notebook":                                             func() { ReadLoop("/etc/passwd") },
		"nowhere.csv: is not there; put the file beside the notebook":                                                                 func() { ReadLoop("nowhere.csv") },
	} {
		if err := refused(t, call); err.Error() != want {
			t.Errorf("%q, want %q", err, want)
		}
	}
}

// TestReadingAndFitting reads what it wrote and fits it.
func TestReadingAndFitting(t *testing.T) {
	t.Chdir(t.TempDir())
	truth := NewMaterial("truth", JilesAtherton(JA{Ms: 3.9e5, A: 20, K: 14, Alpha: 2e-5, C: 0.3}))
	var loops []*Loop
	for i, peak := range []float64{15, 40, 160} {
		l := truth.Loop(peak)
		var text strings.Builder
		text.WriteString("H (oersted); B (mT)\n")
		h, b := l.FieldStrengths(), l.FluxDensities()
		for k := 0; k < len(h); k += 4 {
			fmt.Fprintf(&text, "%.9f; %.9f\n", h[k]*4e-3*math.Pi, b[k]*1e3)
		}
		name := fmt.Sprintf("loop%d.csv", i+1)
		if err := os.WriteFile(name, []byte(text.String()), 0o644); err != nil {
			t.Fatal(err)
		}
		loops = append(loops, ReadLoop(name))
	}
	fit := FitJilesAtherton(loops...)
	if fit.Deviation() > 1e-3 {
		t.Errorf("deviation %v", fit.Deviation())
	}
	near(t, "Ms", fit.Parameters().Ms, 3.9e5, 2e-3)
	near(t, "k", fit.Parameters().K, 14, 2e-2)
	contains(t, text(t, fit), "from (95 %)")
	contains(t, text(t, fit.Plot()), "measured")
	contains(t, text(t, fit.Residuals()), "law less measurement")
	contains(t, fmt.Sprint(FitJilesAtherton(loops[2]).Notes()), "one loop alone does not determine the parameters")
	core := NewMaterial("fitted", fit)
	near(t, "area", core.Loop(160).Area(), truth.Loop(160).Area(), 5e-3)
	play := FitPlay(loops...)
	if play.Deviation() > 0.02 || len(play.Cells()) == 0 {
		t.Errorf("play: deviation %v with %d cells", play.Deviation(), len(play.Cells()))
	}
	contains(t, text(t, play), "friction")
	near(t, "area by play cells", NewMaterial("play", play).Loop(160).Area(), truth.Loop(160).Area(), 0.03)
	if form := fit.In(Form1986).Parameters().Form; form != Form1986 {
		t.Errorf("form %v", form)
	}
	var rise strings.Builder
	rise.WriteString("H (A/m), B (mT)\n")
	for h := 2.0; h < 160; h *= 1.3 {
		fmt.Fprintf(&rise, "%.6f, %.6f\n", h, truth.FluxDensity(h, 25*degC)*1e3)
	}
	os.WriteFile("rise.csv", []byte(rise.String()), 0o644)
	both := FitJilesAtherton(loops[2].Weight(2)).WithInitial(ReadCurve("rise.csv"))
	near(t, "k by one loop and the initial curve", both.Parameters().K, 14, 1e-2)
	contains(t, text(t, both), "rise.csv")
	if strings.Contains(fmt.Sprint(both.Notes()), "one loop alone") {
		t.Error("with the initial curve it is not one loop alone")
	}
	os.WriteFile("bh.csv", []byte("H (A/m),B (T)\n50,0.15\n100,0.26\n200,0.412\n400,0.398\n"), 0o644)
	if err := refused(t, func() { ReadCurve("bh.csv") }); err.Error() != "curve bh.csv, row 5: B falls from 0.412 T to 0.398 T while H rises; a magnetisation curve cannot fall" {
		t.Error(err)
	}
	os.WriteFile("ok.csv", []byte("H (A/m),B (T)\n50,0.15\n100,0.26\n200,0.36\n"), 0o644)
	near(t, "read curve", ReadCurve("ok.csv").FluxDensity(100), 0.26, 1e-9)
	near(t, "material of it", NewMaterial("lot 12", ReadCurve("ok.csv")).FluxDensity(200, 25), 0.36, 1e-9)
	os.WriteFile("loop.csv", []byte("H (A/m),B\n1,2\n"), 0o644)
	if err := refused(t, func() { ReadLoop("loop.csv") }); err.Error() != `loop.csv, column 2: no unit in the header "B"; write "B (T)" or "B (mT)"` {
		t.Error(err)
	}
}
