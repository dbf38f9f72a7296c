package dsl_test

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	. "ampturn/dsl"
)

// TestRandomCircuits builds circuits of random parts, values in and out of what is sensible: each either answers with
// finite numbers that balance, or is refused by a Fault of one line; nothing else may come out.
func TestRandomCircuits(t *testing.T) {
	rng := rand.New(rand.NewSource(7))
	size := func() float64 { return math.Pow(10, -4+2.5*rng.Float64()) * math.Copysign(1, rng.Float64()-0.002) }
	section := func() Section {
		switch rng.Intn(4) {
		case 0:
			return Rect(size(), size())
		case 1:
			return Disc(size())
		case 2:
			d := size()
			return Annulus(d, d*rng.Float64()*1.02)
		}
		return Area(size() * size()).Stacking(0.02 + rng.Float64())
	}
	part := func() Part {
		switch rng.Intn(8) {
		case 0, 1, 2:
			return Leg(fer(), size(), section())
		case 3:
			return Gap(size())
		case 4:
			return Gap(size()).Faces(section()).Fringe([]Fringing{NoFringe, AddTheGap, LogRule.Window(size()), ConformalMap, FieldSolve}[rng.Intn(5)])
		case 5:
			return Permeance(size() * 1e-5)
		case 6:
			return Magnet(rng.Float64()*2.05, 1+rng.Float64(), size(), section())
		}
		w := Winding([]string{"Q", "S"}[rng.Intn(2)], math.Floor(0.95+40*rng.Float64()))
		if rng.Intn(2) == 0 {
			return w.Reversed()
		}
		return w
	}
	solved, refusals := 0, map[string]int{}
	for n := range 3000 {
		err := Try(func() {
			c := Magnetic("T")
			nodes := []string{"a", "b", "c"}
			for k := range 1 + rng.Intn(4) {
				var parts []Part
				if k == 0 {
					parts = append(parts, Winding("P", 10))
				}
				for range 1 + rng.Intn(4) {
					parts = append(parts, part())
				}
				if rng.Intn(3) == 0 {
					c.Ring(fmt.Sprint("r", k), parts...)
				} else {
					c.Path(fmt.Sprint("p", k), nodes[rng.Intn(3)]+" -> "+nodes[rng.Intn(3)], parts...)
				}
			}
			op := c.At(20 + 100*rng.Float64()).Solve(Currents{"P": 100 * rng.NormFloat64()})
			for _, x := range []float64{op.Energy(), op.Coenergy(), op.Inductance("P"), op.Secant("P"), op.Linkage("P")} {
				if math.IsNaN(x) || math.IsInf(x, 0) {
					t.Errorf("circuit %d answers %g", n, x)
				}
			}
			if op.Inductance("P") < 0 {
				t.Errorf("circuit %d: inductance %g", n, op.Inductance("P"))
			}
			text(t, op)
			text(t, op.Draw())
			text(t, Basis(op))
			solved++
		})
		if err != nil {
			refusals[err.(*Fault).CodeName()]++
		}
	}
	t.Logf("%d solved, refused: %v", solved, refusals)
	if solved < 100 {
		t.Errorf("only %d circuits were solved", solved)
	}
}
