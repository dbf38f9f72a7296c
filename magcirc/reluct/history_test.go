package reluct_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// withMemory replaces the laws of a sample's legs by laws with memory.
func withMemory(t *testing.T, s *sample, rng *rand.Rand, kind string) {
	t.Helper()
	for i := range s.Branches {
		for k := range s.Branches[i].Elements {
			e := &s.Branches[i].Elements[k]
			if e.Kind != reluct.Leg {
				continue
			}
			a := 10 * math.Pow(30, rng.Float64())
			ms := 2.5e5 * math.Pow(5, rng.Float64())
			if kind == "play" {
				cells := make([]hyst.PlayCell, 10)
				for j := range cells {
					cells[j] = hyst.PlayCell{Ms: ms / 10, A: a * (0.3 + rng.Float64()), Kappa: a * 2 * rng.Float64()}
				}
				law, err := hyst.NewPlay(cells...)
				if err != nil {
					t.Fatal(err)
				}
				e.Law = hyst.Initial(law)
				continue
			}
			p := hyst.Parameters{Ms: ms, A: a, K: a * math.Pow(9, rng.Float64()-0.5), C: 0.6 * rng.Float64()}
			p.Alpha = 0.9 * rng.Float64() * 3 * a / ms
			if kind == "Form1986" {
				p.Form = hyst.Form1986
			}
			law, err := hyst.NewJilesAtherton(p)
			if err != nil {
				t.Fatal(err)
			}
			e.Law = hyst.Initial(law)
		}
	}
}

// Random networks of legs with memory, sixty by each method, forty steps of random currents each (fewer of the slow Form1986):
// every step is solved, and the nodal form finds the same fluxes.
func TestHistoriesOfRandomNetworks(t *testing.T) {
	for _, c := range []struct {
		kind     string
		networks uint64
	}{{"Form1992", 60}, {"Form1986", 6}, {"play", 60}} {
		failed, solves, most, total := 0, 0, 0, 0
		var spent time.Duration
		for seed := range c.networks {
			g := newGenerator(seed + 1000)
			s := g.sample()
			rng := rand.New(rand.NewPCG(seed, 6))
			withMemory(t, &s, rng, c.kind)
			h, err := s.build().History(nil)
			if err != nil {
				t.Fatal(err)
			}
			scale := s.Drive
			for step := range 40 {
				d := reluct.Drive{Current: map[int]float64{}, Linkage: map[int]float64{}}
				for w := range s.Windings {
					f := 2*rng.Float64() - 1
					if i, ok := scale.Current[w]; ok {
						d.Current[w] = f * i
					}
					if l, ok := scale.Linkage[w]; ok {
						d.Linkage[w] = f * l
					}
				}
				var nodal *reluct.Solution
				if step%10 == 9 {
					nodal, err = h.TrialNodal(context.Background(), d)
					if err != nil {
						t.Errorf("network %d, step %d, nodal: %v", seed, step, err)
					}
				}
				begin := time.Now()
				sol, err := h.Step(context.Background(), d)
				spent += time.Since(begin)
				solves++
				if err != nil {
					failed++
					t.Logf("network %d, step %d: %v", seed, step, err)
					continue
				}
				most, total = max(most, sol.Iterations), total+sol.Iterations
				if sol.Residual > 1e-9 || sol.NodeBalance > 1e-9 || sol.MMFBalance > 1e-7 {
					t.Errorf("network %d, step %d: residual %v, balances %v, %v", seed, step, sol.Residual, sol.NodeBalance, sol.MMFBalance)
				}
				compare(t, seed, step, sol, nodal)
			}
		}
		if failed > 0 {
			t.Errorf("%s: %d of %d solves failed", c.kind, failed, solves)
		}
		t.Logf("%s: %d solves, %d failed, %.1f iterations at the mean, %d at most, %v each", c.kind, solves, failed, float64(total)/float64(solves), most, spent/time.Duration(solves))
	}
}

func compare(t *testing.T, seed uint64, step int, sol, nodal *reluct.Solution) {
	t.Helper()
	if nodal == nil {
		return
	}
	largest := 0.0
	for _, f := range sol.Flux {
		largest = max(largest, math.Abs(f))
	}
	for i := range sol.Flux {
		if d := math.Abs(sol.Flux[i] - nodal.Flux[i]); d > (1e-6+nodal.Floor)*largest {
			t.Errorf("network %d, step %d, branch %d: flux %v, nodal %v", seed, step, i, sol.Flux[i], nodal.Flux[i])
			return
		}
	}
}

// The remanence of a gapped ring lies where the falling branch meets the load line of its gap, U + phi/P = 0.
func TestRemanenceOfGappedCore(t *testing.T) {
	law, err := hyst.NewJilesAtherton(hyst.Parameters{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.6e-3, C: 0.2})
	if err != nil {
		t.Fatal(err)
	}
	const length, area, gap = 0.2, 1e-4, 0.1e-3
	for _, air := range []float64{0, 5e-4} {
		n := reluct.New("R1")
		node, w := n.Node("a"), n.Winding("N")
		n.Branch(reluct.Branch{Name: "core", From: node, To: node, Turns: []reluct.Turn{{Winding: w, Turns: 100}}, Elements: []reluct.Element{
			{Name: "leg", Law: hyst.Initial(law), Length: length, Area: area, Air: air},
			{Name: "gap", Kind: reluct.Gap, Permeance: phys.Mu0 * area / gap}}})
		h, err := n.History(nil)
		if err != nil {
			t.Fatal(err)
		}
		on, err := h.Step(context.Background(), reluct.Drive{Current: map[int]float64{w: 20}})
		if err != nil {
			t.Fatal(err)
		}
		off, err := h.Step(context.Background(), reluct.Drive{})
		if err != nil {
			t.Fatal(err)
		}
		x := off.State[0][0]
		s := law.Start()
		law.Commit(&s, law.ByField(&s, on.State[0][0].H))
		if b := law.ByField(&s, x.H).B; math.Abs(b-x.B) > 1e-9 {
			t.Errorf("air %v: at %v A/m B is %v, the falling branch has %v", air, x.H, x.B, b)
		}
		if drop := x.H*length + off.Flux[0]*gap/(phys.Mu0*area); math.Abs(drop) > 1e-9*math.Abs(x.H)*length {
			t.Errorf("air %v: mmf around the ring is %v A", air, drop)
		}
		if !(x.B > 0.1 && x.H < 0) {
			t.Errorf("air %v: B %v, H %v is no remanence", air, x.B, x.H)
		}
		// Work of the winding: what it put in is stored or has become heat; integral of i d lambda by a fine ramp.
		h, _ = n.History(nil)
		sum, last := 0.0, 0.0
		var end *reluct.Solution
		for k := 1; k <= 4000; k++ {
			i := 20 * float64(k) / 4000
			end, err = h.Step(context.Background(), reluct.Drive{Current: map[int]float64{w: i}})
			if err != nil {
				t.Fatal(err)
			}
			sum += (i - 20.0/8000) * (end.Linkage[w] - last)
			last = end.Linkage[w]
		}
		if got := end.Energy(); math.Abs(got-sum) > 1e-5*sum {
			t.Errorf("air %v: energy %v J, the winding put in %v J", air, got, sum)
		}
		// Small signals: a turn back by a little follows the incremental inductance.
		l, err := end.Incremental()
		if err != nil {
			t.Fatal(err)
		}
		back, err := h.Trial(context.Background(), reluct.Drive{Current: map[int]float64{w: 20 - 1e-3}})
		if err != nil {
			t.Fatal(err)
		}
		if got, want := (end.Linkage[w]-back.Linkage[w])/1e-3, l.At(0, 0); math.Abs(got-want) > 1e-4*want {
			t.Errorf("air %v: a small turn back has %v H, incremental inductance %v H", air, got, want)
		}
	}
}
