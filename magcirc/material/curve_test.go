package material_test

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// refused checks code and line of an error.
func refused(t *testing.T, err error, code magcirc.Code, line string) {
	t.Helper()
	if err == nil {
		err = errNone
	}
	var e *magcirc.Error
	if !errors.As(err, &e) || e.Code != code || e.Error() != line {
		t.Errorf("\n got %v\nwant %v %s", err, code, line)
	}
}

func TestCurveGoesThroughItsPoints(t *testing.T) {
	for _, between := range []material.Interpolation{material.Monotone, material.Straight} {
		p := chapman
		p.Between = between
		law := must(p.Law())
		for i, h := range p.H {
			if b, _ := law.At(h); math.Abs(b-p.B[i]) > 1e-14 {
				t.Errorf("point %d: %v, want %v", i, b, p.B[i])
			}
		}
		h, b := law.Range()
		if h != 1800 || b != 1.3 {
			t.Errorf("range %v A/m, %v T", h, b)
		}
		beyond, slope := law.At(2800)
		if math.Abs(beyond-1.3-phys.Mu0*1000) > 1e-14 || slope != phys.Mu0 {
			t.Errorf("beyond the data %v T, slope %v", beyond, slope)
		}
		if w := law.Coenergy(2800) - law.Coenergy(1800); math.Abs(w-(1300+phys.Mu0*1e6/2)) > 1e-9 {
			t.Errorf("coenergy beyond the data %v", w)
		}
	}
}

func TestCurveRefusals(t *testing.T) {
	bh := func(h, b []float64) material.Points {
		return material.Points{Source: "bh.csv", FirstRow: 2, H: h, B: b}
	}
	rows := []struct {
		p    material.Points
		code magcirc.Code
		line string
	}{
		{bh([]float64{0, 10, 20, 30, 60, 90, 120}, []float64{0, 0.1, 0.2, 0.3, 0.38, 0.412, 0.398}), magcirc.NotMonotone,
			"curve bh.csv, row 8: B falls from 0.412 T to 0.398 T while H rises; a magnetisation curve cannot fall"},
		{material.Points{H: []float64{0, 1, 2}, B: []float64{0, 0.4, 0.3}}, magcirc.NotMonotone,
			"curve, point 3: B falls from 0.4 T to 0.3 T while H rises; a magnetisation curve cannot fall"},
		{bh([]float64{10, 20, 15}, []float64{0.1, 0.2, 0.3}), magcirc.BadValue,
			"curve bh.csv, row 4: H goes back from 20 A/m to 15 A/m; give the points from small to large H"},
		{bh([]float64{10, 20, 20}, []float64{0.1, 0.2, 0.3}), magcirc.BadValue,
			"curve bh.csv, row 4: H 20 A/m stands twice, with B 0.2 T and 0.3 T"},
		{bh([]float64{-10, 20}, []float64{0.1, 0.2}), magcirc.BadValue,
			"curve bh.csv, row 2: H -10 A/m is negative; give one branch from H = 0 upwards; the law is taken as odd"},
		{bh([]float64{0, 20}, []float64{0.1, 0.2}), magcirc.BadValue,
			"curve bh.csv, row 2: B is 0.1 T at H = 0; a law without memory passes zero: give the mean of the two branches"},
		{bh([]float64{10, math.NaN()}, []float64{0.1, 0.2}), magcirc.BadValue,
			"curve bh.csv, row 3: H NaN A/m, B 0.2 T is no point"},
		{bh([]float64{100, 200}, []float64{100, 200}), magcirc.Implausible,
			"curve bh.csv, row 2: B 100 T is above that of any material (2.5 T). Are these mT, or are H and B exchanged?"},
		{bh([]float64{1e-3, 2e-3}, []float64{0.1, 0.2}), magcirc.Implausible,
			"curve bh.csv, row 2: B 0.1 T at 1 mA/m means a relative permeability of 79.58e6, above that of any material (10e6). Is H in kA/m or Oe?"},
		{bh([]float64{0, 20}, []float64{0, 0.2}), magcirc.BadValue,
			"curve bh.csv: 1 points beside the origin make no curve; give two or more, or a linear law"},
		{bh([]float64{1, 20}, []float64{0.2}), magcirc.BadValue,
			"curve bh.csv: 2 values of H and 1 of B; each point wants both"},
		{bh([]float64{100, 40e3}, []float64{0.4, 0.41}), magcirc.NotMonotone,
			"curve bh.csv, row 3: B 0.41 T at 40 kA/m rises more slowly than in air, which gives at least 0.4501 T here; is this J = B - mu0 H? Then add mu0 H"},
	}
	for _, r := range rows {
		_, err := r.p.Law()
		refused(t, err, r.code, r.line)
	}
}

// Rounded data in saturation: the last two points rise by less than air's 1.3 mT. They are lifted, and a note says so.
func TestLiftedPoints(t *testing.T) {
	law, err := material.NewCurve([]float64{50, 200, 1000, 2000}, []float64{0.25, 0.38, 0.449, 0.449})
	if err != nil {
		t.Fatal(err)
	}
	if b, _ := law.At(2000); math.Abs(b-0.449-phys.Mu0*1000) > 1e-12 {
		t.Errorf("lifted to %v", b)
	}
	notes := material.Notes(law)
	if len(notes) != 1 || notes[0].String() != "curve: B rises more slowly than in air in places; lifted there by up to 1.3 mT" {
		t.Errorf("notes %v", notes)
	}
	if n := material.Notes(must(material.NewLinear(100))); n != nil {
		t.Errorf("notes of a linear law: %v", n)
	}
}

func TestLawRefusals(t *testing.T) {
	first := func(_ material.Law, err error) error { return err }
	refused(t, first(material.NewLinear(0.5)), magcirc.BadValue, "linear law: relative permeability 0.5 is below 1, that of air")
	refused(t, first(material.NewLinear(math.NaN())), magcirc.BadValue, "linear law: relative permeability NaN is below 1, that of air")
	refused(t, first(material.NewFroehlich(2200, 490)), magcirc.Implausible, "Froehlich law: saturation 490 T is above that of any material (2.5 T). Was 490*mT meant?")
	refused(t, first(material.NewArctan(2200, -0.4)), magcirc.BadValue, "arctangent law: saturation -0.4 T is not a positive value")
	refused(t, first(material.NewArctan(0, 0.4)), magcirc.BadValue, "arctangent law: initial permeability 0 is below 1, that of air")
	refused(t, first(material.NewLangevin(1.6e6, 651.5, 1.6e-3)), magcirc.BadValue, "Langevin law: the curve folds (alpha Ms/(3a) = 1.31, it must stay below 1); lower alpha or raise a")
}

func TestTabulateRefusals(t *testing.T) {
	first := func(_ material.Law, err error) error { return err }
	refused(t, first(material.Tabulate(nil, 1e3)), magcirc.BadValue, "law of a function: there is no function")
	refused(t, first(material.Tabulate(math.Sin, 0)), magcirc.BadValue, "law of a function: largest H 0 A/m is not a field strength")
	refused(t, first(material.Tabulate(func(h float64) float64 { return 0.1 + h*1e-4 }, 1e3)), magcirc.BadValue,
		"law of a function: B is 0.1 T at H = 0; a law without memory passes zero")
	refused(t, first(material.Tabulate(func(h float64) float64 { return 0.01 * h * h / (1 + h*h) }, 1e3)), magcirc.BadValue,
		"law of a function: B is 10 mT at 1 kA/m but 10 mT at -1 kA/m; a law without memory is odd: f(-h) = -f(h)")
	if err := first(material.Tabulate(func(h float64) float64 { return 0.4 * math.Sin(h/100) }, 1e3)); err == nil || !strings.Contains(err.Error(), "a magnetisation curve cannot fall") {
		t.Errorf("a function that falls: %v", err)
	}
	if err := first(material.Tabulate(func(h float64) float64 { return math.Log(h) }, 1e3)); err == nil || !strings.Contains(err.Error(), "-inf T at 0 A/m") {
		t.Errorf("no number: %v", err)
	}
	jump := func(h float64) float64 { return 2e-4*h + math.Copysign(0.2, h)*math.Floor(math.Abs(h)/100) }
	if err := first(material.Tabulate(jump, 300)); err == nil || err.Error() != "law of a function: no table follows it at 100 A/m: it jumps or has no slope there" {
		t.Errorf("a jump: %v", err)
	}
}

// A formula that saturates without mu0 H ends where it becomes flatter than air, with a note.
func TestTabulateEndsWhereTheFormulaIsFlat(t *testing.T) {
	law, err := material.Tabulate(func(h float64) float64 { return 0.5 * math.Tanh(h/50) }, 1e5)
	if err != nil {
		t.Fatal(err)
	}
	hmax, _ := law.Range()
	// 0.5/50 sech^2(h/50) = mu0 at h = 50 arcosh(sqrt(0.01/mu0)) = 259.2 A/m
	if want := 50 * math.Acosh(math.Sqrt(0.01/phys.Mu0)); math.Abs(hmax-want) > 0.02*want {
		t.Errorf("data to %v A/m, want %v", hmax, want)
	}
	notes := material.Notes(law)
	if len(notes) != 1 || !strings.Contains(notes[0].Text, "rises more slowly than in air") {
		t.Errorf("notes %v", notes)
	}
	if b, _ := law.At(40); math.Abs(b-0.5*math.Tanh(0.8)) > 1e-7 {
		t.Errorf("at 40 A/m: %v", b)
	}
}

// A function with a kink is followed through its kink.
func TestTabulateFollowsAKink(t *testing.T) {
	f := func(h float64) float64 {
		return math.Copysign(math.Min(math.Abs(h)*1e-3, 0.3+(math.Abs(h)-300)*2e-5), h)
	}
	law, err := material.Tabulate(f, 1e4)
	if err != nil {
		t.Fatal(err)
	}
	for _, h := range []float64{0.01, 1, 299, 299.99, 300, 300.01, 5000} {
		if b, _ := law.At(h); math.Abs(b-f(h)) > 1e-6*f(h) {
			t.Errorf("at %v: %v, want %v", h, b, f(h))
		}
	}
}

// Whatever is measured: a refusal with a line, or a law.
func TestAnyPoints(t *testing.T) {
	number := rapid.OneOf(rapid.Float64Range(-1, 2000), rapid.Float64(), rapid.SampledFrom([]float64{0, 1e-300, 1e-9, 1, math.Inf(1), math.NaN()}))
	rapid.Check(t, func(t *rapid.T) {
		p := material.Points{H: rapid.SliceOfN(number, 0, 8).Draw(t, "H"), B: rapid.SliceOfN(number, 0, 8).Draw(t, "B"),
			Between: rapid.SampledFrom([]material.Interpolation{material.Monotone, material.Straight}).Draw(t, "between")}
		if rapid.Bool().Draw(t, "sorted") {
			slices.Sort(p.H)
			slices.Sort(p.B)
			for i := range p.B {
				p.B[i] *= 1e-3
			}
		}
		law, err := p.Law()
		var e *magcirc.Error
		switch {
		case err != nil && (!errors.As(err, &e) || e.Msg == "" || e.Elem == ""):
			t.Fatalf("a refusal that says nothing: %v", err)
		case err == nil:
			hmax, bmax := law.Range()
			b, slope := law.At(hmax / 2)
			if h, _ := law.Inverse(b); !(slope >= phys.Mu0 && b > 0 && b < bmax && math.Abs(h-hmax/2) <= 1e-6*hmax) {
				t.Fatalf("%s: B %v, slope %v at %v, back %v", law.Describe(), b, slope, hmax/2, h)
			}
		}
	})
}

// A law takes whatever a solver on its way may ask.
func TestLawsAtExtremes(t *testing.T) {
	for _, law := range []material.Law{must(material.NewLinear(5)), must(material.NewFroehlich(1e6, 2)), must(material.NewArctan(2, 0.1)),
		must(material.NewLangevin(1e6, 1, 0)), must(material.NewLangevin(1.6e6, 1100, 1.6e-3)), must(chapman.Law())} {
		for _, x := range []float64{0, 5e-324, 1e-200, 1e200} {
			h, inv := law.Inverse(x)
			b, slope := law.At(x)
			if math.IsNaN(h+inv+b+slope) || h < 0 || b < 0 {
				t.Errorf("%s at %v: %v %v, inverse %v %v", law.Describe(), x, b, slope, h, inv)
			}
		}
		if b, _ := law.At(math.NaN()); !math.IsNaN(b) {
			t.Errorf("%s of no number: %v", law.Describe(), b)
		}
		if h, _ := law.Inverse(math.NaN()); !math.IsNaN(h) {
			t.Errorf("inverse of %s of no number: %v", law.Describe(), h)
		}
	}
}

// TestTabulateMagnitude follows a function written with the magnitude of h, whose second derivative jumps at zero: the
// Froehlich-Kennelly form B = Bs h/(|h| + h0), against itself between the table's points.
func TestTabulateMagnitude(t *testing.T) {
	f := func(h float64) float64 { return 0.45*h/(math.Abs(h)+120) + 4e-7*math.Pi*h }
	law, err := material.Tabulate(f, 50000)
	if err != nil {
		t.Fatal(err)
	}
	for h := 1e-6; h < 50000; h *= 1.37 {
		if b, _ := law.At(h); math.Abs(b-f(h)) > 2e-7*f(h) {
			t.Errorf("at %g A/m: %g, want %g", h, b, f(h))
		}
	}
}
