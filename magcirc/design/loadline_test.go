package design_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// inGap is a magnet that feeds a gap through iron without reluctance.
func inGap(mur, lm, am, lg, ag float64) design.Magnetised {
	return func(br float64) (float64, float64, error) {
		n := reluct.New("M1")
		a := n.Node("a")
		n.Branch(reluct.Branch{Name: "core", From: a, To: a, Elements: []reluct.Element{
			{Name: "magnet", Kind: reluct.Magnet, Length: lm, Area: am, Mur: mur, Br: br},
			{Name: "gap", Kind: reluct.Gap, Permeance: phys.Mu0 * ag / lg, Length: lg, Area: ag}}})
		s, err := n.Solve(ctx, reluct.Drive{}, nil)
		if err != nil {
			return 0, 0, err
		}
		return s.State[0][0].H, s.State[0][0].B, nil
	}
}

// TestLoadLine: the magnets that two books size for a gap work where the books put them, on a load line of slope
// Bm/Hm = mu0 (Ag/Am) (lm/lg) through the origin.
func TestLoadLine(t *testing.T) {
	for _, c := range []struct {
		source                 string
		bm, hm, lm, am, lg, ag float64
		volume                 float64 // m3, as sized
	}{
		{"Sen, Principles of Electric Machines, ex. 1.8 p. 31: lm 6.06 cm, Am 2.105 cm2 (recomputed 6.06305 and 2.105263)", 0.95, 42e3, 6.06305e-2, 2.105263e-4, 0.4e-2, 2.5e-4, 6.06305e-2 * 2.105263e-4},
		{"Fitzgerald, Kingsley, Umans, 6th ed., ex. 1.10 p. 34: 5.09 cm3 (recomputed 5.092958)", 1, 40e3, 0.8 * 0.2e-2 / (phys.Mu0 * 40e3), 1.6e-4, 0.2e-2, 2e-4, 5.092958e-6},
	} {
		const mur = 1.05
		l, err := design.Load(ctx, "magnet", inGap(mur, c.lm, c.am, c.lg, c.ag), c.bm+phys.Mu0*mur*c.hm, mur, 9)
		if err != nil {
			t.Fatal(err)
		}
		h, b := l.Point()
		slope := c.ag / c.am * c.lm / c.lg
		for k := range l.H {
			if got := -l.B[k] / (phys.Mu0 * l.H[k]); math.Abs(got-slope) > 1e-9*slope {
				t.Errorf("%s: slope %v at point %d, want %v", c.source, got, k, slope)
			}
		}
		gapEnergy := 0.8 * 0.8 / phys.Mu0 * c.ag * c.lg // B H of the gap, times its volume
		if math.Abs(h+c.hm) > 1e-6*c.hm || math.Abs(b-c.bm) > 1e-6 || math.Abs(l.PermeanceCoefficient()-slope) > 1e-9*slope ||
			math.Abs(l.EnergyProduct()*c.volume-gapEnergy) > 2e-6*gapEnergy {
			t.Errorf("%s: works at %v A/m, %v T, %v J/m3", c.source, h, b, l.EnergyProduct())
		}
		if math.Abs(l.Remanence+phys.Mu0*mur*l.Coercivity) > 1e-12 {
			t.Errorf("the recoil line does not run through %v A/m and %v T", l.Coercivity, l.Remanence)
		}
	}
}

func TestLoadLineRefuses(t *testing.T) {
	at := inGap(1.05, 1e-2, 1e-4, 1e-3, 1e-4)
	for _, br := range []float64{0, -1, math.NaN()} {
		var e *magcirc.Error
		if _, err := design.Load(ctx, "magnet M", at, br, 1.05, 5); !errors.As(err, &e) || e.Code != magcirc.BadValue {
			t.Errorf("remanence %v: %v", br, err)
		}
	}
	stopped, stop := context.WithCancel(ctx)
	stop()
	if _, err := design.Load(stopped, "magnet", at, 1, 1.05, 5); !errors.Is(err, context.Canceled) {
		t.Errorf("after a cancellation: %v", err)
	}
	failing := errors.New("no solution")
	if _, err := design.Load(ctx, "magnet", func(float64) (float64, float64, error) { return 0, 0, failing }, 1, 1.05, 5); !errors.Is(err, failing) {
		t.Errorf("the circuit's own error: %v", err)
	}
}
