package material_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

func TestLangevinThrough(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		mui := math.Pow(10, rapid.Float64Range(1.5, 5).Draw(t, "lg mu_i"))
		h := math.Pow(10, rapid.Float64Range(1, 4).Draw(t, "lg H"))
		share := rapid.Float64Range(0.01, 0.79).Draw(t, "share of the linear B")
		b := phys.Mu0*h + share*phys.Mu0*(mui-1)*h
		if b > 1.2 {
			t.Skip("no material")
		}
		law := must(material.LangevinThrough(mui, h, b))
		if got, _ := law.At(h); math.Abs(got-b) > 1e-11*b {
			t.Fatalf("B(%v) = %v, want %v", h, got, b)
		}
		if _, mu := law.At(0); math.Abs(mu/phys.Mu0-mui) > 1e-9*mui {
			t.Fatalf("mu_i %v, want %v", mu/phys.Mu0, mui)
		}
	})
	_, err := material.LangevinThrough(100, 1200, 0.49)
	refused(t, err, magcirc.NoSolution, "Langevin law: B 0.49 T at 1.2 kA/m is no point in saturation: initial permeability 100 alone gives 0.1508 T there")
}

func TestBias(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		mui := rapid.Float64Range(10, 300).Draw(t, "mu_i")
		half := math.Pow(10, rapid.Float64Range(3, 5).Draw(t, "lg half"))
		c := rapid.Float64Range(1.2, 2.6).Draw(t, "exponent")
		if phys.Mu0*mui*half > 2 {
			t.Skip("no material")
		}
		law := must(material.NewBias(mui, half, c))
		h := half * rapid.Float64Range(0.01, 1.5).Draw(t, "H/half")
		// The slope is the published form, but for the table's 1e-7 of B over its panels.
		if hmax, _ := law.Range(); h > hmax {
			t.Skip("beyond")
		}
		_, slope := law.At(h)
		if want := phys.Mu0 * mui / (1 + math.Pow(h/half, c)); math.Abs(slope-want) > 1e-4*want {
			t.Fatalf("slope at %v: %v, want %v", h, slope, want)
		}
	})
	// With exponent 1, B = mu0 mu_i half ln(1 + H/half); with 2, mu0 mu_i half atan(H/half).
	for _, r := range []struct {
		c    float64
		want float64
	}{{1, math.Log(2)}, {2, math.Pi / 4}} {
		law := must(material.NewBias(60, 7000, r.c))
		if b, _ := law.At(7000); math.Abs(b-phys.Mu0*60*7000*r.want) > 1e-7*b {
			t.Errorf("exponent %v: %v, want %v", r.c, b, phys.Mu0*60*7000*r.want)
		}
	}
	_, err := material.NewBias(60, 7000, 0.5)
	refused(t, err, magcirc.BadValue, "bias law: exponent 0.5 is not between 1 and 5")
	_, err = material.NewBias(60, -7000, 2)
	refused(t, err, magcirc.BadValue, "bias law: field strength at half permeability -7 kA/m is not a positive value")
}
