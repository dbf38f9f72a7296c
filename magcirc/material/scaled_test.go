package material_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc/material"
)

// TestScaledFroehlich: a Froehlich law scaled is the Froehlich law of the other permeability, exactly.
func TestScaledFroehlich(t *testing.T) {
	base := must(material.NewFroehlich(2200, 0.49))
	for _, k := range []float64{0.3, 0.75, 1, 1.25, 4} {
		got, want := must(material.NewScaled(base, k)), must(material.NewFroehlich(1+2199*k, 0.49))
		for _, h := range []float64{0, 3, 40, 200, 2000, 1e5, -70} {
			b, s := got.At(h)
			b0, s0 := want.At(h)
			w, w0 := got.Coenergy(h), want.Coenergy(h)
			if math.Abs(b-b0) > 1e-12 || math.Abs(s-s0) > 1e-12*s0 || math.Abs(w-w0) > 1e-9*w0 {
				t.Errorf("factor %g at %g A/m: %g T, %g H/m, %g J/m3; want %g, %g, %g", k, h, b, s, w, b0, s0, w0)
			}
			back, dh := got.Inverse(b)
			if math.Abs(back-h) > 1e-9*math.Abs(h) || math.Abs(dh*s-1) > 1e-9 {
				t.Errorf("factor %g: inverse at %g T is %g A/m, want %g", k, b, back, h)
			}
		}
	}
}

// TestScaledLaws: for any law the slope is the derivative, the inverse inverts and saturation stays.
func TestScaledLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		base := drawLaw(t)
		k := rapid.Float64Range(0.5, 2).Draw(t, "k")
		law := must(material.NewScaled(base.Law, k))
		h := math.Pow(10, rapid.Float64Range(-1, 5).Draw(t, "lg h"))
		b, _ := law.At(h)
		j0, _ := base.At(k * h)
		if polar, want := b-1.25663706127e-6*h, j0-1.25663706127e-6*k*h; math.Abs(polar-want) > 1e-9*math.Abs(b) {
			t.Fatalf("polarisation %g T at %g A/m, want %g", polar, h, want)
		}
		back, _ := law.Inverse(b)
		if again, _ := law.At(back); math.Abs(again-b) > 1e-9*b {
			t.Fatalf("inverse of %g T leads to %g T", b, again)
		}
	})
}

func TestScaledRefuses(t *testing.T) {
	base := must(material.NewLinear(100))
	for _, k := range []float64{0, -1, math.NaN(), 1000} {
		if _, err := material.NewScaled(base, k); err == nil {
			t.Errorf("factor %g passes", k)
		}
		if _, err := material.New("m", base).Scaled(k); err == nil {
			t.Errorf("a material scaled by %g passes", k)
		}
	}
	if _, err := material.NewScaled(nil, 1); err == nil {
		t.Error("no law passes")
	}
}

// TestScaledMaterial: between temperatures the lot's law is the scaled one too, and the material keeps its own.
func TestScaledMaterial(t *testing.T) {
	m, err := material.New("m", must(material.NewFroehlich(2200, 0.49))).Also(100, must(material.NewFroehlich(3000, 0.39)))
	if err != nil {
		t.Fatal(err)
	}
	lot, err := m.Scaled(0.8)
	if err != nil {
		t.Fatal(err)
	}
	for _, temperature := range []float64{25, 60, 110} {
		own, _, err := m.Law(temperature)
		if err != nil {
			t.Fatal(err)
		}
		law, _, err := lot.Law(temperature)
		if err != nil {
			t.Fatal(err)
		}
		for _, h := range []float64{5, 60, 900} {
			got, _ := law.At(h)
			want, _ := must(material.NewScaled(own, 0.8)).At(h)
			plain, _ := own.At(h)
			if math.Abs(got-want) > 1e-12 || got >= plain {
				t.Errorf("%g degC, %g A/m: %g T, want %g, below %g", temperature, h, got, want, plain)
			}
		}
	}
}
