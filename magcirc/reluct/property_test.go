package reluct_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"ampturn/magcirc/reluct"
)

// draw gives a random network and its solution. Networks are drawn by seed: their parts hang together too much for
// values drawn one by one.
func draw(t *rapid.T) (sample, *reluct.Network, *reluct.Solution) {
	seed := rapid.Uint64().Draw(t, "seed")
	g := &generator{rng: rand.New(rand.NewPCG(seed, 4)), Plain: rapid.Bool().Draw(t, "plain")}
	s := g.sample()
	n := s.build()
	sol, err := n.Solve(context.Background(), s.Drive, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s, n, sol
}

func near(t *rapid.T, what string, got, want, tol, scale float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*scale) {
		t.Fatalf("%s: %.12g, want %.12g (tolerance %.2g of %.3g)", what, got, want, tol, scale)
	}
}

// Fluxes sum to zero at every node, and so they do over any set of nodes.
func TestFluxesSumToZero(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, _, sol := draw(t)
		near(t, "node balance", nodeBalance(&s, sol), 0, 1e-12, 1)
		near(t, "reported balance", sol.NodeBalance, nodeBalance(&s, sol), 1e-15, 1)
		side := make([]bool, s.Nodes)
		for i := range side {
			side[i] = rapid.Bool().Draw(t, "side")
		}
		sum, size := 0.0, 0.0
		for i, b := range s.Branches {
			if side[b.From] != side[b.To] {
				sum += map[bool]float64{true: 1, false: -1}[side[b.From]] * sol.Flux[i]
				size += math.Abs(sol.Flux[i])
			}
		}
		near(t, "flux through a cut", sum, 0, 1e-12, size+1e-30)
	})
}

// Energy plus co-energy is the sum of i lambda, magnets counted as windings of their equivalent mmf.
func TestEnergyPlusCoenergy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		_, _, sol := draw(t)
		w, c := sol.Energy(), sol.Coenergy()
		near(t, "energy + co-energy", w+c, sol.Excitation(), 1e-9, math.Abs(w)+math.Abs(c))
		if w < 0 || c < 0 {
			t.Fatalf("energy %g or co-energy %g below zero", w, c)
		}
	})
}

// The work of the sources on the way from one state to another is the difference of energy: dW = i dlambda, checked
// by Simpson's rule over a small step of all currents without magnets.
func TestEnergyIsWork(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, d := legsOnly(t)
		at := func(f float64) *reluct.Solution {
			scaled := reluct.Drive{Current: map[int]float64{}}
			for w, i := range d.Current {
				scaled.Current[w] = i * f
			}
			s, err := n.Solve(context.Background(), scaled, nil)
			if err != nil {
				t.Fatal(err)
			}
			return s
		}
		// co-energy: dW' = lambda di
		const h = 3e-3
		lo, mid, hi := at(1-h), at(1), at(1+h)
		rate := func(s *reluct.Solution) float64 {
			sum := 0.0
			for w, i := range d.Current {
				sum += s.Linkage[w] * i
			}
			return sum
		}
		work := h / 3 * (rate(lo) + 4*rate(mid) + rate(hi))
		near(t, "co-energy against the integral of lambda di", hi.Coenergy()-lo.Coenergy(), work, 3e-5, math.Abs(work))
	})
}

// legsOnly gives a random network of legs and gaps without magnets, driven by currents.
func legsOnly(t *rapid.T) (*reluct.Network, reluct.Drive) {
	g := &generator{rng: rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 5)), Plain: true}
	s := g.sample()
	for w := range s.Drive.Linkage { // every winding by current: those of prescribed linkage get a little
		s.Drive.Current[w] = 1
		delete(s.Drive.Linkage, w)
	}
	return s.build(), s.Drive
}

// The incremental inductances are symmetric (reciprocity), have no negative eigenvalue, and are the differences of
// linkage over differences of current.
func TestIncrementalInductance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, n, sol := draw(t)
		m, err := sol.Incremental()
		if err != nil {
			t.Fatal(err)
		}
		var e mat.EigenSym
		if e.Factorize(m, false) {
			v := e.Values(nil)
			if v[0] < -1e-12*v[len(v)-1] {
				t.Fatalf("eigenvalue %g below zero, largest %g", v[0], v[len(v)-1])
			}
		}
		base := reluct.Drive{Current: map[int]float64{}}
		for w := range s.Windings {
			base.Current[w] = sol.Current[w]
		}
		j := rapid.IntRange(0, s.Windings-1).Draw(t, "winding")
		difference := func(h float64) []float64 {
			both := [2]*reluct.Solution{}
			for k, sign := range [2]float64{-1, 1} {
				base.Current[j] = sol.Current[j] + sign*h
				x, err := n.Solve(context.Background(), base, &reluct.Settings{Tolerance: 1e-12})
				if err != nil {
					t.Fatal(err)
				}
				both[k] = x
			}
			d := make([]float64, s.Windings)
			for w := range d {
				d[w] = (both[1].Linkage[w] - both[0].Linkage[w]) / (2 * h)
			}
			return d
		}
		// On the way to smaller steps the differences must come as close as 1e-4 to the derivative before rounding
		// takes over: how small a step that needs depends on how sharply the laws bend.
		best := math.Inf(1)
		for h := 1e-3 * stepScale(&s, sol, j); h > 1e-7*stepScale(&s, sol, j); h /= 10 {
			off := 0.0
			for w, d := range difference(h) {
				if miss := math.Abs(d - m.At(w, j)); miss > 0 { // a winding where no flux can flow has none
					off = max(off, miss/math.Sqrt(m.At(w, w)*m.At(j, j)))
				}
			}
			best = min(best, off)
		}
		near(t, "inductance against differences of linkage", best, 0, 1e-4, 1)
	})
}

// stepScale is a current that changes the fields by about what bends the laws: 1 A/m in the shortest leg.
func stepScale(s *sample, sol *reluct.Solution, j int) float64 {
	turns := 0.0
	for _, b := range s.Branches {
		for _, turn := range b.Turns {
			if turn.Winding == j {
				turns = max(turns, math.Abs(turn.Turns))
			}
		}
	}
	return (1 + 1e-2*math.Abs(sol.Current[j])*turns) / turns
}

// The secant inductance of a single winding is linkage over current, and all secant inductances times the currents
// are the linkages where there is no magnet.
func TestSecantInductance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, d := legsOnly(t)
		sol, err := n.Solve(context.Background(), d, nil)
		if err != nil {
			t.Fatal(err)
		}
		m, err := sol.Secant()
		if err != nil {
			t.Fatal(err)
		}
		for w := range sol.Linkage {
			sum, size := 0.0, 0.0
			for v, i := range sol.Current {
				sum += m.At(w, v) * i
				size += math.Abs(m.At(w, v) * i)
			}
			near(t, "secant inductances times currents", sum, sol.Linkage[w], 1e-8, size)
		}
	})
}

// With a permeability that goes to infinity only the gap is left: L -> N^2 mu0 A/g, and the difference falls as 1/mu.
func TestInfinitePermeabilityLeavesTheGap(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		turns := rapid.Float64Range(1, 500).Draw(t, "turns")
		length := rapid.Float64Range(0.01, 1).Draw(t, "length")
		g := rapid.Float64Range(1e-5, 1e-2).Draw(t, "gap")
		area := rapid.Float64Range(1e-5, 1e-1).Draw(t, "area")
		gap := airGap("gap", g, area)
		ideal := turns * turns * gap.Permeance
		for _, mur := range []float64{1e3, 1e6, 1e9, 1e12} {
			s, err := ring(turns, iron(mur, length, area), gap).Solve(context.Background(), current(1), nil)
			if err != nil {
				t.Fatal(err)
			}
			m, err := s.Incremental()
			if err != nil {
				t.Fatal(err)
			}
			near(t, "L", m.At(0, 0), ideal/(1+length/(g*mur)), 1e-12, ideal)
			near(t, "limit", m.At(0, 0), ideal, length/(g*mur)+1e-12, ideal)
		}
	})
}
