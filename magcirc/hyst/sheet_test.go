package hyst_test

import (
	"math"
	"strings"
	"testing"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// B. S. Guru, H. R. Hiziroglu, Electric Machinery and Transformers, 3rd ed. 2004, example 2.13, p. 113: losses in W/kg at
// three points, and their parts; printed to three digits, recomputed to six.
func TestSeparationGuru(t *testing.T) {
	points := []hyst.LossPoint{{25, 1.1, 0.4}, {25, 1.5, 0.8}, {60, 1.1, 1.2}}
	s, err := hyst.Separate(points, 0, false)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "exponent", s.N, 2.28371, 2e-6)
	near(t, "ke", s.Ke, 9.4451e-5, 1e-5)
	for i, want := range [][2]float64{{0.328571, 0.071429}, {0.667178, 0.132822}, {0.788571, 0.411429}} {
		h, e, x := s.Parts(points[i].F, points[i].B)
		near(t, "hysteresis", h, want[0], 3e-6)
		near(t, "eddy", e, want[1], 8e-6)
		if x != 0 {
			t.Errorf("excess %v", x)
		}
	}
}

// J. O. Bird, Electrical Circuit Theory and Technology, 2nd ed. 2003, ch. 38: example 1 (loop of 12.5 cm2 drawn at 500 A/m
// and 0.2 T per cm: 1250 J/m3, 62.5 kW/m3 at 50 Hz), example 2 (25 Hz, 1.1 T from 1.5 T with n = 1.6), example 5 (eddy loss
// 10 W/m3 at 50 Hz, at 30 Hz), example 10 (400 W at 50 Hz, 498 W at 60 Hz).
func TestSeparationBird(t *testing.T) {
	// A parallelogram of 5 cm by 2.5 cm.
	cm := [][2]float64{{3, 1.25}, {1, 1.25}, {-1, 1.25}, {-2, 1.25}, {-3, -1.25}, {-1, -1.25}, {1, -1.25}, {2, -1.25}}
	var h, b []float64
	for _, p := range cm {
		h, b = append(h, 500*p[0]), append(b, 0.2*p[1])
	}
	l, err := hyst.NewLoop("drawn", h, b)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "loss of a cycle", l.Area(), 1250, 1e-12)
	near(t, "at 50 Hz", l.Area()*50, 62.5e3, 1e-12)
	s := &hyst.Separation{Kh: 62.5e3 / (50 * math.Pow(1.5, 1.6)), N: 1.6}
	hysteresis, _, _ := s.Parts(25, 1.1)
	near(t, "25 Hz, 1.1 T", hysteresis, 19025.335, 1e-7)
	s = &hyst.Separation{Ke: 10.0 / 2500, N: 1.6}
	_, eddy, _ := s.Parts(30, 1)
	near(t, "eddy loss at 30 Hz", eddy, 3.6, 1e-12)

	s, err = hyst.Separate([]hyst.LossPoint{{50, 1, 400}, {60, 1, 498}}, 1.7, false)
	if err != nil {
		t.Fatal(err)
	}
	hysteresis, eddy, _ = s.Parts(50, 1)
	near(t, "hysteresis loss", hysteresis, 325, 1e-9)
	near(t, "eddy loss", eddy, 75, 1e-9)
	hysteresis, eddy, _ = s.Parts(50, 1.25)
	near(t, "hysteresis loss, B +25 %", hysteresis, 474.931, 2e-6)
	near(t, "eddy loss, B +25 %, thickness +40 % (of a core of equal sheets: cubed)", eddy*math.Pow(1.4, 3), 321.562, 2e-6)
}

// A synthetic separation into all three parts comes back.
func TestSeparationWithExcess(t *testing.T) {
	truth := &hyst.Separation{Kh: 12, N: 1.75, Ke: 6e-3, Kx: 0.4}
	var points []hyst.LossPoint
	for _, f := range []float64{10, 50, 200, 400} {
		for _, b := range []float64{0.5, 1, 1.5} {
			h, e, x := truth.Parts(f, b)
			points = append(points, hyst.LossPoint{F: f, B: b, P: h + e + x})
		}
	}
	s, err := hyst.Separate(points, 0, true)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "kh", s.Kh, 12, 1e-6)
	near(t, "n", s.N, 1.75, 1e-6)
	near(t, "ke", s.Ke, 6e-3, 1e-5)
	near(t, "kx", s.Kx, 0.4, 1e-5)
	sheet := hyst.Sheet{Excess: s.Excess()}
	near(t, "excess loss", sheet.ExcessLoss(50, 1), 0.4*math.Pow(50, 1.5), 1e-5)
}

// The classical loss of a sheet of 0.35 mm and 48 uohm cm at 1 T, 50 Hz is 1049.50 W/m3 (formula of Bertotti 1988); the
// factor of the excess loss is 8.7634 (published 8.76). Both agree with their integrals over a sampled sine, and with the
// work of their field.
func TestSheet(t *testing.T) {
	s := hyst.Sheet{Thickness: 0.35e-3, Resistivity: 48e-8, Excess: 1.2}
	near(t, "classical", s.Classical(50, 1), 1049.50, 3e-6)
	near(t, "factor of excess", s.ExcessLoss(1, 1)/1.2, 8.7634, 1e-5)
	const n = 4000
	b := make([]float64, n)
	work := 0.0
	for i := range b {
		b[i] = math.Cos(2 * math.Pi * float64(i) / n)
		rate := -2 * math.Pi * 50 * math.Sin(2*math.Pi*float64(i)/n)
		h, slope := s.Field(rate)
		work += h * rate / n // mean of H dB/dt
		above, _ := s.Field(rate + 1e-3)
		below, _ := s.Field(rate - 1e-3)
		if math.Abs(rate) > 0.1 {
			near(t, "slope of the field", (above-below)/2e-3, slope, 1e-4)
		}
	}
	classical, excess := s.OfWaveform(50, b)
	near(t, "classical, sampled", classical, s.Classical(50, 1), 1e-5)
	near(t, "excess, sampled", excess, s.ExcessLoss(50, 1), 1e-5)
	near(t, "power of the field", work, classical+excess, 1e-5)
	if h, slope := s.Field(0); h != 0 || math.IsInf(slope, 0) {
		t.Errorf("at rest the field is %v, its slope %v", h, slope)
	}
}

// The loop at 50 Hz is wider than the quasi-static one by the loss of the eddy currents, and its area is the sum of its
// parts by the points too.
func TestDynamicLoop(t *testing.T) {
	l := law(t, silicon)
	sheet := hyst.Sheet{Thickness: 0.5e-3, Resistivity: 48e-8, Excess: 0.8}
	loop, split, err := hyst.Dynamic(l, sheet, 1.2, 50, nil)
	if err != nil {
		t.Fatal(err)
	}
	still, err := hyst.SteadyTo(l, 1.2, nil)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "hysteresis part", split.Hysteresis, still.Area(), 1e-12)
	near(t, "classical part", split.Classical, sheet.Classical(50, 1.2)/50, 1e-12)
	near(t, "area", loop.Area(), split.Total(), 1e-12)
	drawn, err := hyst.NewLoop("points", loop.H, loop.B)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "area by the points", drawn.Area(), split.Total(), 2e-3) // straight lines between the points
	if loop.Coercivity() <= still.Coercivity() {
		t.Errorf("coercivity %v at 50 Hz, %v at rest", loop.Coercivity(), still.Coercivity())
	}
	fast, _, err := hyst.Dynamic(l, sheet, 1.2, 2000, nil)
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for _, n := range fast.Notes {
		found = found || strings.Contains(n.Text, "of the skin depth")
	}
	if !found {
		t.Error("a thick sheet at 2 kHz has no note")
	}
}

// Rayleigh's law with mu_i = 1000 mu0, nu = 20 mu0 at 10 A/m: closed forms.
func TestRayleigh(t *testing.T) {
	l := hyst.Rayleigh{Mu: 1000 * phys.Mu0, Nu: 20 * phys.Mu0}.Loop(10, nil)
	near(t, "peak", l.Peak(), 15.07964e-3, 1e-6)
	near(t, "remanence", l.Remanence(), 1.256637e-3, 1e-3) // between points
	near(t, "area", l.Area(), 0.0335103, 1e-5)
	drawn, err := hyst.NewLoop("points", l.H, l.B)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "area by the points", drawn.Area(), 0.0335103, 5e-4) // straight lines between 600 points
}
