package design_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

var ctx = context.Background()

// gapped is the inductance of N turns on a core of reluctance rc with a gap of area a without fringing: a closed form.
func gapped(n, rc, a float64) design.Function {
	return func(length float64) (float64, error) { return n * n / (rc + length/(phys.Mu0*a)), nil }
}

func TestGapAgainstClosedForm(t *testing.T) {
	const n, rc, a = 34.0, 2e5, 183e-6
	for _, want := range []float64{100e-6, 630e-6, 2e-3, 5e-3} {
		got, err := design.Gap(ctx, "gap", gapped(n, rc, a), want, 0.6e-3, 1e-7, 36e-3)
		if err != nil {
			t.Fatal(err)
		}
		exact := (n*n/want - rc) * phys.Mu0 * a
		if math.Abs(got-exact) > 1e-9*exact {
			t.Errorf("%g H: gap %g m, closed form %g m", want, got, exact)
		}
	}
}

func TestGapOutOfReach(t *testing.T) {
	f := gapped(34, 2e5, 183e-6)
	for _, c := range []struct {
		want float64
		says string
	}{{10e-3, "gives only"}, {1e-6, "still gives"}} {
		_, err := design.Gap(ctx, "gap T1.centre.gap", f, c.want, 0.6e-3, 1e-7, 36e-3)
		var e *magcirc.Error
		if !errors.As(err, &e) || e.Code != magcirc.NoSolution || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%g H: %v", c.want, err)
		}
	}
}

// TestGapStopsAtValidity: a method that refuses long gaps bounds the search, and its refusal is the cause.
func TestGapStopsAtValidity(t *testing.T) {
	plain := gapped(34, 2e5, 183e-6)
	limited := func(length float64) (float64, error) {
		if length > 2e-3 {
			return 0, &magcirc.Error{Code: magcirc.OutsideValidity, Msg: "gap too long"}
		}
		return plain(length)
	}
	at := 1.7e-3
	want, _ := plain(at)
	got, err := design.Gap(ctx, "gap", limited, want, 0.6e-3, 1e-7, 36e-3)
	if err != nil || math.Abs(got-at) > 1e-9*at {
		t.Errorf("inside the validity: %g, %v", got, err)
	}
	want, _ = plain(2.5e-3)
	_, err = design.Gap(ctx, "gap", limited, want, 0.6e-3, 1e-7, 36e-3)
	var e *magcirc.Error
	if !errors.As(err, &e) || e.Code != magcirc.NoSolution || e.Err == nil {
		t.Errorf("beyond the validity: %v", err)
	}
}

func TestCurrent(t *testing.T) {
	density := func(i float64) (float64, error) { return -0.5 * math.Tanh(i/20), nil } // any sign: the magnitude counts
	got, err := design.Current(ctx, "winding", density, 0.32, 1e6)
	exact := 20 * math.Atanh(0.64)
	if err != nil || math.Abs(got-exact) > 1e-9*exact {
		t.Errorf("got %g, %v, closed form %g", got, err, exact)
	}
	if _, err := design.Current(ctx, "winding T1.main", density, 0.6, 1e6); err == nil || !strings.Contains(err.Error(), "of either sign, gives only 0.5 T") {
		t.Errorf("above saturation: %v", err)
	}
}

func TestTurns(t *testing.T) {
	l := func(n float64) (float64, error) { return n * n * 250e-9, nil }
	for _, c := range []struct{ want, turns float64 }{{630e-6, 51}, {250e-9, 1}, {250e-9 * 49, 7}, {250e-9*49 + 1e-12, 8}} {
		if got, err := design.Turns(ctx, "winding", l, c.want, 1<<20); err != nil || got != c.turns {
			t.Errorf("%g H: %g turns, %v; want %g", c.want, got, err, c.turns)
		}
	}
}

func TestFollowAndDrop(t *testing.T) {
	// L(i) = L0 / (1 + (i/i0)^2): falls by 20 % at i = i0/2 exactly.
	at := func(i float64) (inc, sec float64, err error) { return 10e-6 / (1 + i*i/100), 0, nil }
	for _, ends := range [][2]float64{{0, 16}, {-16, 16}, {-16, 0}} {
		c, err := design.Follow(ctx, at, ends[0], ends[1], 61)
		if err != nil {
			t.Fatal(err)
		}
		got, err := c.Drop(ctx, "curve", 0.2)
		want := 5.0
		if ends[1] == 0 {
			want = -5
		}
		if err != nil || math.Abs(got-want) > 1e-9 {
			t.Errorf("%v: drop at %g, %v", ends, got, err)
		}
	}
	c, _ := design.Follow(ctx, at, 0, 3, 61)
	if _, err := c.Drop(ctx, "curve", 0.2); err == nil || !strings.Contains(err.Error(), "not fallen") {
		t.Errorf("too short a curve: %v", err)
	}
	if _, err := c.Drop(ctx, "curve", 20); err == nil || !strings.Contains(err.Error(), "20*percent") {
		t.Errorf("percent forgotten: %v", err)
	}
	if _, err := design.Follow(ctx, at, 3, 3, 61); err == nil {
		t.Error("equal ends are accepted")
	}
}

func TestInterruptStopsSearch(t *testing.T) {
	gone, cancel := context.WithCancel(ctx)
	cancel()
	if _, err := design.Gap(gone, "gap", gapped(34, 2e5, 183e-6), 100e-6, 0.6e-3, 1e-7, 36e-3); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
}

func TestReluctance(t *testing.T) {
	law, err := material.NewLinear(70000)
	if err != nil {
		t.Fatal(err)
	}
	// Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., example 1.1, p. 9: lc = 0.30 m, Ac = 9 cm2, mu_r = 70000: 3.79e3 A/Wb.
	got := design.Reluctance(reluct.Element{Kind: reluct.Leg, Law: law, Length: 0.3, Area: 9e-4})
	if math.Abs(got-3.79e3) > 0.005e3 {
		t.Errorf("core of example 1.1: %g", got)
	}
	if got := design.Reluctance(reluct.Element{Kind: reluct.Gap, Permeance: 4e-7}); got != 2.5e6 {
		t.Errorf("gap: %g", got)
	}
}

func TestNearness(t *testing.T) {
	law, _ := material.NewFroehlich(2200, 0.49)
	// J = Bs/2 where (mu_i - 1) mu0 H = Bs.
	half := 0.49 / (2199 * phys.Mu0)
	b, _ := law.At(half)
	if got := design.Nearness(law, half, b); math.Abs(got-0.5) > 1e-4 {
		t.Errorf("half way: %g", got)
	}
	if got := design.Nearness(law, 0, -0.1); math.Abs(got-0.1/0.49) > 1e-4 { // remanence: what the leg carries counts
		t.Errorf("remanence: %g", got)
	}
	linear, _ := material.NewLinear(1000)
	if got := design.Nearness(linear, 1000, 1000*1000*phys.Mu0); got > 1e-3 {
		t.Errorf("a linear law is near saturation: %g", got)
	}
}

// TestCurrentOfEitherSign: a magnet's flux density that a current raises or takes down; closed forms.
func TestCurrentOfEitherSign(t *testing.T) {
	magnet := func(i float64) (float64, error) { return 0.3 + 0.5*math.Tanh(i/20), nil }
	for _, c := range []struct{ want, exact float64 }{
		{0.1, 20 * math.Atanh(-0.4)},   // down to it
		{0.01, 20 * math.Atanh(-0.58)}, // a demand that a coarse step jumps over, sign and all
		{0.15, 20 * math.Atanh(-0.3)},
		{0.5, 20 * math.Atanh(0.4)}, // up to it; -0.5 T is never reached
		{0.3, 0},
	} {
		got, err := design.Current(ctx, "winding", magnet, c.want, 1e6)
		if err != nil || math.Abs(got-c.exact) > 1e-9*math.Abs(c.exact) {
			t.Errorf("%g T: %g A, %v, closed form %g A", c.want, got, err, c.exact)
		}
	}
	against := func(i float64) (float64, error) { return 0.3 - 0.5*math.Tanh(i/20), nil }
	if got, err := design.Current(ctx, "winding", against, 0.5, 1e6); err != nil || math.Abs(got+20*math.Atanh(0.4)) > 1e-8 {
		t.Errorf("wound against the magnet: %g A, %v", got, err)
	}
	weak := func(i float64) (float64, error) { return 0.3 + 0.1*math.Tanh(i/20), nil }
	if _, err := design.Current(ctx, "winding", weak, 0.1, 1e6); err == nil || !strings.Contains(err.Error(), "takes it down from 0.3 T") {
		t.Errorf("out of reach: %v", err)
	}
}

// saturating is the inductance of n turns at current i on a core of reluctance rc, with a gap of length g and area a, that
// saturates smoothly: L = n^2/(rc + rg) / (1 + (n i/((rc + rg) f))^4), f the flux of the knee.
func saturating(n, i, g float64) float64 {
	const rc, a, knee = 2e5, 183e-6, 60e-6
	r := rc + g/(phys.Mu0*a)
	return n * n / r / (1 + math.Pow(n*i/(r*knee), 4))
}

// TestBiasedGap: the length on the falling side, against bisection there; between the two lengths of a demand the
// inductance is above it.
func TestBiasedGap(t *testing.T) {
	f := func(g float64) (float64, error) { return saturating(34, 3, g), nil }
	crest, at := 0.0, 0.0
	for g := 1e-7; g < 36e-3; g *= 1.0005 {
		if l := saturating(34, 3, g); l > crest {
			crest, at = l, g
		}
	}
	for _, want := range []float64{100e-6, 0.5 * crest, 0.9 * crest, 0.99999 * crest} {
		got, err := design.BiasedGap(ctx, "gap", f, want, 1e-7, 36e-3)
		if err != nil {
			t.Fatal(err)
		}
		low, high := at, 36e-3
		for range 80 {
			if mid := (low + high) / 2; saturating(34, 3, mid) > want {
				low = mid
			} else {
				high = mid
			}
		}
		if got < at*0.999 || math.Abs(got-low) > 1e-6*low {
			t.Errorf("%g H: gap %g m, bisection %g m, crest at %g m", want, got, low, at)
		}
	}
	if _, err := design.BiasedGap(ctx, "gap", f, 1.001*crest, 1e-7, 36e-3); err == nil || !strings.Contains(err.Error(), "even the best gap") {
		t.Errorf("above the crest: %v", err)
	}
	if _, err := design.BiasedGap(ctx, "gap", f, 1e-9, 1e-7, 36e-3); err == nil || !strings.Contains(err.Error(), "still gives") {
		t.Errorf("below the longest: %v", err)
	}
}

// TestTurnsUnderBias: the smallest number on the rising side, against trying them all.
func TestTurnsUnderBias(t *testing.T) {
	f := func(n float64) (float64, error) { return saturating(n, 3, 1e-3) + 1e-9*n*n, nil }
	crest := 0.0
	for n := 1.0; n < 200; n++ {
		if l, _ := f(n); l > crest {
			crest = l
		}
	}
	for _, want := range []float64{1e-6, 0.3 * crest, 0.9 * crest, crest} {
		got, err := design.Turns(ctx, "winding", f, want, 1<<20)
		first := 1.0
		for ; ; first++ {
			if l, _ := f(first); l >= want {
				break
			}
		}
		if err != nil || got != first {
			t.Errorf("%g H: %g turns, %v; trying all gives %g", want, got, err, first)
		}
	}
	if _, err := design.Turns(ctx, "winding", f, 1.01*crest, 1<<20); err == nil || !strings.Contains(err.Error(), "even the best number of turns") {
		t.Errorf("above the crest: %v", err)
	}
}
