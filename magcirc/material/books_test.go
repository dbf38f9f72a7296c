package material_test

import (
	"errors"
	"math"
	"testing"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// A book's circuit in series: metal parts at the flux density and field strength that the book reads from its
// curve, gaps by B/mu0. The curve goes through the point read and through half of it.
type metal struct{ b, h, length float64 }

func (m metal) law() material.Law {
	return must(material.NewCurve([]float64{m.h / 2, m.h}, []float64{m.b / 2, m.b}))
}

func TestSeriesCircuitsOfBooks(t *testing.T) {
	rows := []struct {
		source string
		parts  []metal
		gapB   float64 // T
		gap    float64 // m
		turns  float64
		mmf    float64 // A, 0: not printed
		amps   float64 // A
		tol    float64 // half a unit of the last digit of the value recomputed in full precision
	}{
		{"Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed. 2003, ex. 1.7 p. 22 (0.80 A; recomputed 0.802375)",
			[]metal{{1, 11, 0.30}}, 1, 0.5e-3, 500, 0, 0.802375, 1e-6},
		{"Del Toro, Electrical Engineering Fundamentals, 2nd ed., ex. 15-1 p. 634",
			[]metal{{0.6, 10, 0.3}, {0.6, 77, 0.2}, {0.6, 270, 0.1}}, 0, 0, 100, 45.4, 0.454, 1e-9},
		{"Kothari, Nagrath, Electric Machines, 4th ed. 2010, ex. 2.2 with 1 mm gap (3.61 A; recomputed 3.610858)",
			[]metal{{0.5e-3 / (math.Pi / 4 * 4e-4), 3000, 0.3}}, 0.5e-3 / (math.Pi / 4 * 4e-4), 1e-3, 600, 0, 3.610858, 2e-7},
		{"Kothari, Nagrath, ex. 2.4: gap, centre and outer leg (2.21 A; recomputed 2.211549)",
			[]metal{{1, 1000, 0.160}, {0.8e-3 / 2 / 600e-6, 375, 0.400}}, 1, 1e-3, 500, 0, 2.211549, 4e-7},
		{"Boylestad, Introductory Circuit Analysis, 10th ed., ex. 11.3 (68 mA)",
			[]metal{{0.2, 170, 0.16}}, 0, 0, 400, 27.2, 0.068, 1e-9},
		{"Boylestad, ex. 11.4: sheet steel 12 in, cast iron 5 in (4.49 A; recomputed 4.4907)",
			[]metal{{0.5, 70, 12 * 0.0254}, {0.5, 1600, 5 * 0.0254}}, 0, 0, 50, 224.536, 4.49072, 1e-6},
		{"Boylestad, ex. 11.6: cast steel 100 mm, gap 2 mm with H 3.98e5 A/m (4.12 A)",
			[]metal{{0.5, 280, 0.1}}, 3.98e5 * phys.Mu0, 2e-3, 200, 0, 4.12, 1e-9},
		{"Kulshreshtha, Basic Electrical Engineering, 2012, ex. 6.5 p. 173: leakage factor 1.2, stacking 0.92 (4.99 A; recomputed 4.989437)",
			[]metal{{1.2 * 2.5e-3 / (0.92 * 0.04 * 0.05), 4000, 0.6}}, 2.5e-3 / 2500e-6, 2e-3, 800, 0, 4.989437, 2e-7},
		{"Kulshreshtha, ex. 6.6 p. 174: silicon steel, mild steel, cast iron at 0.6 T",
			[]metal{{0.6, 20, 0.3}, {0.6, 700, 0.2}, {0.6, 2500, 0.1}}, 0, 0, 1, 396, 396, 1e-9},
		{"Hayt, Buck, Engineering Electromagnetics, 8th ed., sec. 8.8, 2 mm gap (from memory; 3.56 A; recomputed 3.560090)",
			[]metal{{1, 200, 2 * math.Pi * 0.15}}, 1, 2e-3, 500, 0, 3.560090, 3e-7},
	}
	for _, r := range rows {
		mmf := r.gapB / phys.Mu0 * r.gap
		for _, m := range r.parts {
			h, _ := m.law().Inverse(m.b)
			mmf += h * m.length
		}
		if r.mmf > 0 && math.Abs(mmf-r.mmf) > 1e-6*r.mmf+r.tol*r.turns {
			t.Errorf("%s: mmf %v, want %v", r.source, mmf, r.mmf)
		}
		if got := mmf / r.turns; math.Abs(got-r.amps) > 1e-6*r.amps {
			t.Errorf("%s: %v A, want %v", r.source, got, r.amps)
		}
	}
}

func TestPermeabilitiesOfBooks(t *testing.T) {
	rows := []struct {
		source string
		m      metal
		mur    float64
		tol    float64 // printed digits
	}{
		{"Del Toro, ex. 15-1", metal{0.6, 10, 0}, 47746, 0.5},
		{"Del Toro, ex. 15-1", metal{0.6, 77, 0}, 6201, 0.5},
		{"Del Toro, ex. 15-1", metal{0.6, 270, 0}, 1768, 0.5},
		{"Boylestad, ex. 11.3 (936-937 with the book's mu0; recomputed)", metal{0.2, 170, 0}, 936.2, 0.05},
		{"Kulshreshtha, ex. 6.6", metal{0.6, 20, 0}, 23873, 0.5},
		{"Kulshreshtha, ex. 6.6", metal{0.6, 700, 0}, 682, 0.5},
		{"Kulshreshtha, ex. 6.6", metal{0.6, 2500, 0}, 191, 0.5},
	}
	for _, r := range rows {
		h, _ := r.m.law().Inverse(r.m.b)
		if mur := r.m.b / (phys.Mu0 * h); math.Abs(mur-r.mur) > r.tol {
			t.Errorf("%s: mu_r %v, want %v", r.source, mur, r.mur)
		}
	}
}

func TestLinearLawsOfBooks(t *testing.T) {
	// Kothari, Nagrath, ex. 2.2: diameter 2 cm, 30 cm, 600 turns, 0.5 mWb, mu_r 4000: 0.158 A (recomputed 0.158314).
	b := 0.5e-3 / (math.Pi / 4 * 4e-4)
	h, _ := must(material.NewLinear(4000)).Inverse(b)
	if i := h * 0.3 / 600; math.Abs(i-0.158314) > 5e-7 {
		t.Errorf("Kothari ex. 2.2: %v A", i)
	}
	// The same with 1 mm gap, calculated: 2.269172 A.
	if i := (h*0.3 + b/phys.Mu0*1e-3) / 600; math.Abs(i-2.269172) > 5e-7 {
		t.Errorf("Kothari ex. 2.2 with gap: %v A", i)
	}
	// Two coils opposing: Boylestad ex. 11.5, H 20 A/m, 0.16 m, 60 turns 2 A against 30 turns: 3.89 A.
	h, _ = metal{0.62, 20, 0}.law().Inverse(0.62)
	if i := (60*2 - h*0.16) / 30; math.Abs(i-3.893333) > 5e-7 {
		t.Errorf("Boylestad ex. 11.5: %v A", i)
	}
	// Boylestad ex. 11.8: 60 turns, 5 A, 0.3 m: H 1000 A/m; B 0.39 T there makes 0.78e-4 Wb in 2e-4 m2.
	if b, _ := (metal{0.39, 1000, 0}).law().At(60 * 5 / 0.3); math.Abs(b*2e-4-0.78e-4) > 1e-15 {
		t.Errorf("Boylestad ex. 11.8: %v Wb", b*2e-4)
	}
	// Ferrite with a thin gap: mu_e = mu_i/(1 + mu_i g/le), 3000, 2 um, 100 mm: 2830 (recomputed 2830.19); an
	// engineering note on IEC 60205.
	_, mu := must(material.NewLinear(3000)).At(0)
	if mue := 1 / (phys.Mu0/mu + 2e-6/100e-3); math.Abs(mue-2830.19) > 5e-3 {
		t.Errorf("mu_e %v", mue)
	}
}

// Chapman, Electric Machinery Fundamentals, 5th ed., ex. 2-10: no-load current of a transformer from the book's
// magnetisation file mag_curve_1. Here every third of its rows, as flux in mWb over mmf in A; with a path of 1 m and
// 1000 mm2 they are B in T over H in A/m.
var chapman = material.Points{Source: "mag_curve_1",
	H: []float64{0, 108, 216, 324, 432, 540, 648, 756, 864, 972, 1080, 1188, 1296, 1404, 1512, 1620, 1728, 1800},
	B: []float64{0, .27857143, .52, .69178572, .83124734, .92857143, .99481623, 1.0482517, 1.1000219, 1.1479152, 1.1885715,
		1.2195532, 1.2421139, 1.2584300, 1.2706777, 1.2810336, 1.2916738, 1.3}}

func TestMagnetisingCurrent(t *testing.T) {
	const (
		turns = 850
		peak  = 325 / (2 * math.Pi * 60 * turns) * 1000 // T: 1.0142227 mWb
		rms   = 0.485110                                // A over whole periods, straight lines through all 101 rows, recomputed
		top   = 0.807405                                // A
	)
	if math.Abs(peak-1.0142227) > 5e-8 {
		t.Fatalf("peak flux %v mWb", peak)
	}
	straight := chapman
	straight.Between = material.Straight
	chords, cubics := must(straight.Law()), must(chapman.Law())
	var sumChords, sumCubics, sumApart float64
	const n = 20000
	for k := range n {
		b := peak * math.Cos(2*math.Pi*float64(k)/n)
		h1, _ := chords.Inverse(b)
		h2, _ := cubics.Inverse(b)
		sumChords, sumCubics, sumApart = sumChords+h1*h1, sumCubics+h2*h2, sumApart+(h1-h2)*(h1-h2)
	}
	amps := func(sum float64) float64 { return math.Sqrt(sum/n) / turns }
	t.Logf("rms: chords %.6f A, cubics %.6f A, apart %.6f A", amps(sumChords), amps(sumCubics), amps(sumApart))
	// The finer chords of the book run between the coarse chords and the smooth curve.
	if got := amps(sumChords); got < rms || got-rms > amps(sumApart) {
		t.Errorf("chords: %v A, want %v and at most %v more", got, rms, amps(sumApart))
	}
	if got := amps(sumCubics); math.Abs(got-rms) > 2e-4*rms {
		t.Errorf("cubics: %v A, want %v", got, rms)
	}
	h1, _ := chords.Inverse(peak)
	h2, _ := cubics.Inverse(peak)
	if h1/turns < top || h2/turns > top || h1-h2 > 0.003*h1 {
		t.Errorf("peak %v A by chords, %v A by cubics; %v A must lie between", h1/turns, h2/turns, top)
	}
}

// J. R. Brauer, Simple equations for the magnetization and reluctivity curves of steel, IEEE Trans. Magn. 11 (1975)
// 81: H = (k1 exp(k2 B^2) + k3) B. Constants from memory, values calculated from the formula.
func TestBrauerAsAFunction(t *testing.T) {
	for _, r := range []struct {
		name       string
		k1, k2, k3 float64
		want       [3]float64 // A/m at 0.5, 1.0, 1.5 T
	}{
		{"cast steel", 49.4, 1.46, 520.6, [3]float64{295.88, 733.31, 2760.0}},
		{"cold-rolled", 3.8, 2.17, 396.2, [3]float64{201.37, 429.48, 1346.5}},
	} {
		h := func(b float64) float64 { return (r.k1*math.Exp(r.k2*b*b) + r.k3) * b }
		calls := 0
		law, err := material.Tabulate(func(x float64) float64 { // B(H) by bisection
			calls++
			lo, hi := 0.0, 5.0
			for range 60 {
				if mid := (lo + hi) / 2; h(mid) < math.Abs(x) {
					lo = mid
				} else {
					hi = mid
				}
			}
			return math.Copysign((lo+hi)/2, x)
		}, 1e4)
		if err != nil {
			t.Fatal(err)
		}
		t.Log(r.name, law.Describe(), calls, "calls")
		for k, b := range []float64{0.5, 1, 1.5} {
			got, _ := law.Inverse(b)
			if math.Abs(got-h(b)) > 1e-6*h(b) || math.Abs(got-r.want[k]) > 5e-5*r.want[k] {
				t.Errorf("%s at %v T: %v A/m, want %v", r.name, b, got, r.want[k])
			}
		}
	}
}

var errNone = errors.New("no error")

// Chapman, Electric Machinery Fundamentals, 5th ed., problem 2-2, magnetisation file p22_mag: points of flux in Wb over
// the first column as published, read as mmf in A. With a path of 1 m and 1000 mm2 they are B in T over H in A/m. The law
// must run through each of them, both ways, for both halves, and be steepest where the file is.
func TestCurveOfAProblem(t *testing.T) {
	mmf := []float64{20, 100, 200, 300, 400, 440}
	flux := []float64{8.9717e-5, 4.4546e-4, 8.07447e-4, 9.99362e-4, 1.08791e-3, 1.09935e-3}
	h, b := []float64{0}, []float64{0}
	for k := range mmf {
		h, b = append(h, mmf[k]), append(b, flux[k]/1e-3)
	}
	for _, between := range []material.Interpolation{material.Monotone, material.Straight} {
		law := must(material.Points{Source: "p22_mag", H: h, B: b, Between: between}.Law())
		for k := range h {
			for _, sign := range []float64{1, -1} {
				if got, slope := law.At(sign * h[k]); math.Abs(got-sign*b[k]) > 1e-12 || slope < phys.Mu0 {
					t.Errorf("%v: B %v, slope %v at %v A/m, want %v", between, got, slope, sign*h[k], b[k])
				}
				if back, _ := law.Inverse(sign * b[k]); math.Abs(back-sign*h[k]) > 1e-9*(h[k]+1) {
					t.Errorf("%v: H %v at %v T, want %v", between, back, sign*b[k], h[k])
				}
			}
		}
		_, low := law.At(60)
		_, high := law.At(420)
		if chord := (b[2] - b[1]) / 80; math.Abs(low-chord) > 0.1*chord || high > 0.1*low {
			t.Errorf("%v: slope %v at 60 A/m, chord %v; %v at 420 A/m", between, low, chord, high)
		}
	}
}
