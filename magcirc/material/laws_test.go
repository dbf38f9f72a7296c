package material_test

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// must takes the law of a constructor call that cannot fail.
func must(law material.Law, err error) material.Law {
	if err != nil {
		panic(err)
	}
	return law
}

// drawn is a law with the field strengths at which its slope may jump.
type drawn struct {
	material.Law
	kinks []float64
}

// drawLaw draws a law of any kind, with parameters from air to the best sheets.
func drawLaw(t *rapid.T) drawn {
	mui := math.Pow(10, rapid.Float64Range(0.01, 5.5).Draw(t, "lg mu_i"))
	bs := rapid.Float64Range(0.2, 2.2).Draw(t, "Bs")
	switch rapid.SampledFrom([]string{"linear", "Froehlich", "arctan", "Langevin", "curve", "straight", "function", "warm", "hot"}).Draw(t, "kind") {
	case "linear":
		return drawn{must(material.NewLinear(mui)), nil}
	case "Froehlich":
		return drawn{must(material.NewFroehlich(mui, bs)), nil}
	case "arctan":
		return drawn{must(material.NewArctan(mui, bs)), nil}
	case "Langevin":
		return drawn{drawLangevin(t, bs), nil}
	case "curve":
		p := drawPoints(t, material.Monotone)
		return drawn{must(p.Law()), p.H}
	case "straight":
		p := drawPoints(t, material.Straight)
		return drawn{must(p.Law()), p.H}
	case "function":
		inner := must(material.NewArctan(mui, bs))
		law := must(material.Tabulate(func(h float64) float64 { b, _ := inner.At(h); return b }, 1e5))
		return drawn{law, []float64{1e5}}
	case "warm":
		p := drawPoints(t, material.Monotone)
		return drawn{between(t, must(material.NewArctan(mui, bs)), must(p.Law()), rapid.Float64Range(25, 100).Draw(t, "T")), p.H}
	default:
		cold, hot := must(material.NewFroehlich(mui, bs)), must(material.NewFroehlich(1+0.9*mui, 0.9*bs))
		return drawn{between(t, cold, hot, rapid.Float64Range(10, 115).Draw(t, "T")), nil}
	}
}

func drawLangevin(t *rapid.T, bs float64) material.Law {
	ms := bs / phys.Mu0
	a := math.Pow(10, rapid.Float64Range(1, 5).Draw(t, "lg a"))
	r := rapid.SampledFrom([]float64{0, 0.3, 0.9, 0.99}).Draw(t, "alpha Ms/3a")
	return must(material.NewLangevin(ms, a, r*3*a/ms))
}

func between(t *rapid.T, cold, hot material.Law, temperature float64) material.Law {
	m, err := material.New("lot", cold).Also(100, hot)
	if err != nil {
		t.Fatal(err)
	}
	law, _, err := m.Law(temperature)
	if err != nil {
		t.Skip(err.Error())
	}
	return law
}

// drawPoints draws a measured curve: concave in the large, with steps of very different size.
func drawPoints(t *rapid.T, between material.Interpolation) material.Points {
	n := rapid.IntRange(2, 30).Draw(t, "points")
	p := material.Points{Source: "lot.csv", Between: between}
	h, j := 0.0, 0.0
	for range n {
		dh := math.Pow(10, rapid.Float64Range(-1, 3).Draw(t, "lg dH"))
		h += dh
		j += rapid.Float64Range(0, 0.05).Draw(t, "dJ") * dh / (dh + 1)
		p.H, p.B = append(p.H, h), append(p.B, j+phys.Mu0*h)
	}
	return p
}

func TestLawsAreLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law := drawLaw(t)
		h := math.Pow(10, rapid.Float64Range(-3, 6.5).Draw(t, "lg H"))
		b, slope := law.At(h)
		if slope < phys.Mu0*(1-1e-12) {
			t.Fatalf("%s: dB/dH %v at %v is less than mu0", law.Describe(), slope, h)
		}
		if m, _ := law.At(-h); m != -b {
			t.Fatalf("%s: not odd at %v: %v, %v", law.Describe(), h, b, m)
		}
		if b2, _ := law.At(h * 1.001); b2 <= b {
			t.Fatalf("%s: falls behind %v", law.Describe(), h)
		}
		if w, m := law.Coenergy(h), law.Coenergy(-h); w != m || w <= 0 || w > h*b {
			t.Fatalf("%s: coenergy %v and %v at %v A/m, %v T", law.Describe(), w, m, h, b)
		}
		if zero, _ := law.At(0); zero != 0 || law.Coenergy(0) != 0 {
			t.Fatalf("%s: B %v at zero", law.Describe(), zero)
		}
	})
}

func TestInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law := drawLaw(t)
		b := math.Pow(10, rapid.Float64Range(-7, 1).Draw(t, "lg B"))
		h, inv := law.Inverse(b)
		back, slope := law.At(h)
		if math.Abs(back-b) > 1e-12*b {
			t.Fatalf("%s: At(Inverse(%v)) = %v, off by %.1e", law.Describe(), b, back, back/b-1)
		}
		if m, _ := law.Inverse(-b); m != -h {
			t.Fatalf("%s: inverse not odd", law.Describe())
		}
		if math.Abs(inv*slope-1) > 1e-6 && !nearKink(law, h, 1e-9) {
			t.Fatalf("%s: dH/dB %v times dB/dH %v at %v", law.Describe(), inv, slope, b)
		}
	})
}

// nearKink tells that a kink lies within the share rel of h.
func nearKink(law drawn, h, rel float64) bool {
	for _, k := range law.kinks {
		if math.Abs(h-k) <= rel*h {
			return true
		}
	}
	return false
}

func TestSlopeIsTheDifferenceQuotient(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law := drawLaw(t)
		h := math.Pow(10, rapid.Float64Range(-2, 6).Draw(t, "lg H"))
		d := 1e-4 * h
		if nearKink(law, h, 2e-4) {
			t.Skip("the slope jumps within the difference")
		}
		b0, s0 := law.At(h - d)
		_, s := law.At(h)
		b1, s1 := law.At(h + d)
		// Central difference: its error is of the order of the change of slope over the step.
		quotient := (b1 - b0) / (2 * d)
		if math.Abs(quotient-s) > 0.6*(math.Abs(s1-s)+math.Abs(s0-s))+1e-10*b1/d {
			t.Fatalf("%s at %v: slope %v, quotient %v", law.Describe(), h, s, quotient)
		}
	})
}

func TestCoenergyIsTheIntegral(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law := drawLaw(t)
		h := math.Pow(10, rapid.Float64Range(-1, 6).Draw(t, "lg H"))
		// The closed form against numerical integration between the kinks.
		if got, want := law.Coenergy(h), integral(law, h); math.Abs(got-want) > 1e-10*want {
			t.Fatalf("%s: coenergy %v, integral %v (%.1e)", law.Describe(), got, want, got/want-1)
		}
	})
}

// integral integrates B dH to h between the kinks by Gauss's rule of three points on panels that widen with H.
func integral(law drawn, h float64) float64 {
	const panels = 1000
	sum, from := 0.0, 0.0
	for _, to := range append(law.kinks, h) {
		if to > h {
			to = h
		}
		edge := func(k int) float64 { u := float64(k) / panels; return from + (to-from)*u*u*u }
		for k := range panels {
			middle, half := (edge(k)+edge(k+1))/2, (edge(k+1)-edge(k))/2
			b1, _ := law.At(middle - math.Sqrt(0.6)*half)
			b2, _ := law.At(middle)
			b3, _ := law.At(middle + math.Sqrt(0.6)*half)
			sum += half / 9 * (5*b1 + 8*b2 + 5*b3)
		}
		from = to
	}
	return sum
}

// The coenergy keeps its digits at small fields, where the closed forms would cancel.
func TestCoenergyAtSmallField(t *testing.T) {
	for _, law := range []material.Law{must(material.NewFroehlich(2200, 0.49)), must(material.NewArctan(2200, 0.49)),
		must(material.NewLangevin(1.6e6, 1100, 0)), must(material.NewLangevin(1.6e6, 1100, 1.6e-3))} {
		for _, h := range []float64{1e-8, 1e-5, 1e-3} {
			_, mu := law.At(0)
			if got, want := law.Coenergy(h), mu*h*h/2; math.Abs(got-want) > 1e-5*want*(h/1e-3)+1e-12*want {
				t.Errorf("%s: coenergy at %v: %v, want %v", law.Describe(), h, got, want)
			}
		}
	}
}

// Langevin's law with mean field, set Ms 1.6e6, a 1100, alpha 1.6e-3. Values recomputed with 30 digits (mpmath) from
// the formulas of Jiles, Thoelke and Devine, IEEE Trans. Magn. 28 (1992) 27-35, eq. for the initial susceptibility,
// and of Jiles and Atherton 1986 for the implicit M at 1000 A/m.
func TestLangevinWithMeanField(t *testing.T) {
	law := must(material.NewLangevin(1.6e6, 1100, 1.6e-3))
	_, mu := law.At(0)
	if chi := mu/phys.Mu0 - 1; math.Abs(chi-2162.162162) > 1e-6 {
		t.Errorf("initial susceptibility %v, want 2162.162162", chi)
	}
	b, _ := law.At(1000)
	if m := b/phys.Mu0 - 1000; math.Abs(m-926455.3352) > 1e-3 || math.Abs(b-1.16547475) > 1e-8 {
		t.Errorf("at 1000 A/m: M %v, B %v; want 926455.3352, 1.16547475", m, b)
	}
}

// Laws with known parts: Froehlich's at H = a carries half its saturation; the arctangent's at c too.
func TestHalfSaturation(t *testing.T) {
	const mui, bs = 2200.0, 0.49
	a := bs / (phys.Mu0 * (mui - 1))
	for _, r := range []struct {
		law material.Law
		h   float64
	}{{must(material.NewFroehlich(mui, bs)), a}, {must(material.NewArctan(mui, bs)), 2 / math.Pi * a}} {
		if b, _ := r.law.At(r.h); math.Abs(b-phys.Mu0*r.h-bs/2) > 1e-14 {
			t.Errorf("%s: J %v at %v", r.law.Describe(), b-phys.Mu0*r.h, r.h)
		}
		if _, mu := r.law.At(0); math.Abs(mu/phys.Mu0-mui) > 1e-9 {
			t.Errorf("%s: mu_i %v", r.law.Describe(), mu/phys.Mu0)
		}
	}
	if b, _ := must(material.NewLangevin(bs/phys.Mu0, 1e-3*bs/phys.Mu0, 0)).At(1e7); math.Abs(b-phys.Mu0*1e7-bs) > 1e-4 {
		t.Errorf("Langevin saturates at %v", b-phys.Mu0*1e7)
	}
}

func ExampleLaw() {
	law, _ := material.NewFroehlich(2200, 0.49)
	b, slope := law.At(50)
	fmt.Println(law.Describe())
	fmt.Println(phys.Format(b, "T"), phys.FormatDigits(slope/phys.Mu0, "", 3), phys.Format(law.Coenergy(50), "J/m3"))
	// Output:
	// Froehlich-Kennelly, mu_i 2200, Bs 0.49 T
	// 0.1078 T 1340 2.919 J/m3
}

func BenchmarkLaws(b *testing.B) {
	p := material.Points{}
	for i := 1; i <= 40; i++ {
		h := 1000 * math.Pow(float64(i)/40, 3)
		p.H, p.B = append(p.H, h), append(p.B, phys.Mu0*h+0.4*math.Atan(h/20))
	}
	cold, hot := must(material.NewFroehlich(2200, 0.49)), must(material.NewFroehlich(2600, 0.39))
	m, _ := material.New("", cold).Also(100, hot)
	warm, _, _ := m.Law(60)
	arctan := must(material.NewArctan(2200, 0.49))
	laws := map[string]material.Law{"linear": must(material.NewLinear(2200)), "Froehlich": cold, "arctan": arctan,
		"Langevin": must(material.NewLangevin(3.9e5, 20, 0)), "LangevinMeanField": must(material.NewLangevin(1.6e6, 1100, 1.6e-3)),
		"curve": must(p.Law()), "blend": warm, "function": must(material.Tabulate(func(h float64) float64 { b, _ := arctan.At(h); return b }, 1e5))}
	for _, name := range []string{"linear", "Froehlich", "arctan", "Langevin", "LangevinMeanField", "curve", "function", "blend"} {
		law := laws[name]
		b.Run(name+"/At", func(b *testing.B) {
			b.ReportAllocs()
			for i := range b.N {
				law.At(float64(i&1023) * 0.5)
			}
		})
		b.Run(name+"/Inverse", func(b *testing.B) {
			b.ReportAllocs()
			for i := range b.N {
				law.Inverse(float64(i&1023) * 5e-4)
			}
		})
	}
}
