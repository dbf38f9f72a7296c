package hyst_test

import (
	"math"
	"testing"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// A material whose laws remember keeps the memory at the temperatures between, and in a lot of other permeability.
func TestMemoryOverTemperature(t *testing.T) {
	cold := law(t, hyst.Parameters{Ms: 3.9e5, A: 20, K: 14, Alpha: 2e-5, C: 0.3})
	hot := law(t, hyst.Parameters{Ms: 3.1e5, A: 15, K: 9, Alpha: 2e-5, C: 0.4})
	m, err := material.New("lot 12", hyst.Initial(cold)).Also(100, hyst.Initial(hot))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ at, ms, a, k, c float64 }{
		{25, 3.9e5, 20, 14, 0.3}, {100, 3.1e5, 15, 9, 0.4},
		{62.5, math.Sqrt(3.9e5 * 3.1e5), math.Sqrt(300), math.Sqrt(126), 0.35}, // half way: geometric means
		{115, 3.1e5 * math.Pow(3.1/3.9, 0.2), 15 * math.Pow(0.75, 0.2), 9 * math.Pow(9.0/14, 0.2), 0.42},
	} {
		l, _, err := m.Law(c.at)
		if err != nil {
			t.Fatal(err)
		}
		p := l.(*hyst.Curve).Memory().(*hyst.JilesAtherton).Parameters()
		near(t, "Ms", p.Ms, c.ms, 1e-12)
		near(t, "a", p.A, c.a, 1e-12)
		near(t, "k", p.K, c.k, 1e-12)
		near(t, "c", p.C, c.c, 1e-12)
	}
	for _, l := range []hyst.Law{cold, law(t, steel86), play10(t)} {
		wide, err := material.NewScaled(hyst.Initial(l), 1.25)
		if err != nil {
			t.Fatal(err)
		}
		other := wide.(*hyst.Curve).Memory()
		s, r := l.Start(), other.Start()
		for _, f := range []float64{1, -0.4, 0.7, -0.9, 0.1} {
			h := f * l.Knee() / 3
			p, q := l.ByField(&s, h), other.ByField(&r, h/1.25)
			l.Commit(&s, p)
			other.Commit(&r, q)
			if d := (p.B - phys.Mu0*p.H) - (q.B - phys.Mu0*q.H); math.Abs(d) > 1e-7 {
				t.Errorf("%s: J(kH) differs by %v T", l.Describe(), d)
			}
		}
	}
}

func play10(t testing.TB) *hyst.Play {
	t.Helper()
	var cells []hyst.PlayCell
	for k := range 10 {
		cells = append(cells, hyst.PlayCell{Ms: 3.8e4, A: 12 + 3*float64(k%4), Kappa: 3 * float64(k)})
	}
	l, err := hyst.NewPlay(cells...)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func TestTemperatureRefusals(t *testing.T) {
	a, b := hyst.Initial(law(t, steel92)), hyst.Initial(law(t, steel86))
	for _, c := range []struct {
		other material.Law
		want  string
	}{
		{b, "Jiles-Atherton law: has Form1992 at one temperature and Form1986 at another; parameters of the two forms are not interchangeable: fit both in one form"},
		{hyst.Initial(play10(t)), a.Describe() + ": is of one kind at one temperature and of another at another; give laws of one kind for all temperatures"},
		{must(material.NewLinear(2000)), a.Describe() + ": has a memory at one temperature and none at another; give laws of one kind for all temperatures"},
	} {
		m, err := material.New("lot 12", a).Also(100, c.other)
		if err != nil {
			t.Fatal(err)
		}
		if _, _, err := m.Law(60); err == nil || err.Error() != c.want {
			t.Errorf("%v, want %q", err, c.want)
		}
	}
}

func must(l material.Law, err error) material.Law {
	if err != nil {
		panic(err)
	}
	return l
}
