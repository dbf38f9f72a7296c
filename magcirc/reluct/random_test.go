package reluct_test

import (
	"context"
	"math"
	"slices"
	"testing"
	"time"

	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// TestRandomNetworks solves 10,000 random networks (1,000 under -short and under the race detector) in both forms.
func TestRandomNetworks(t *testing.T) {
	count := 10000
	if testing.Short() || raceDetector {
		count = 1000
	}
	g := newGenerator(1)
	var sp spread
	var strict, residual, balance, mmf, apart worst
	var iterations, sweeps []int
	var spent, nodal time.Duration
	failures, belowFloor := 0, 0
	for k := range count {
		g.Plain = k%2 == 0
		s := g.sample()
		sp.add(&s)
		start := time.Now()
		n := s.build()
		sol, err := n.Solve(context.Background(), s.Drive, nil)
		spent += time.Since(start)
		if err != nil {
			failures++
			t.Errorf("network %d: %v", k, err)
			continue
		}
		iterations, sweeps = append(iterations, sol.Iterations), append(sweeps, sol.Sweeps)
		all, aboveFloor := loopResidual(&s, sol)
		strict.see(k, all)
		residual.see(k, aboveFloor)
		residual.see(k, sol.Residual)
		balance.see(k, nodeBalance(&s, sol))
		mmf.see(k, sol.MMFBalance)
		checkLaws(t, k, &s, sol)
		start = time.Now()
		cross, err := n.SolveNodal(context.Background(), s.Drive, nil)
		nodal += time.Since(start)
		if err != nil {
			failures++
			t.Errorf("network %d, nodal form: %v", k, err)
			continue
		}
		d := largestDifference(sol.Flux, cross.Flux)
		if d > 1e-6 && d <= cross.Floor {
			belowFloor++
			t.Logf("network %d: loop and nodal fluxes differ by %.2g of the largest, rounding floor %.2g", k, d, cross.Floor)
			continue
		}
		apart.see(k, d)
	}
	sp.log(t)
	slices.Sort(iterations)
	slices.Sort(sweeps)
	at := func(v []int, q float64) int { return v[int(q*float64(len(v)-1))] }
	t.Logf("%d networks, %d failures; iterations median %d, 95 %% %d, max %d; law sweeps median %d, max %d", count, failures,
		at(iterations, 0.5), at(iterations, 0.95), at(iterations, 1), at(sweeps, 0.5), at(sweeps, 1))
	t.Logf("%.1f us per network in the loop form, building included; %.1f us in the nodal form", spent.Seconds()*1e6/float64(count), nodal.Seconds()*1e6/float64(count))
	t.Logf("worst: loop residual %v (%v with loops below their rounding floor), node balance %v, mmf balance %v, loop against nodal flux %v (%d below the rounding floor)", residual, strict, balance, mmf, apart, belowFloor)
	if residual.value > 1e-9 || balance.value > 1e-9 || apart.value > 1e-6 {
		t.Error("a bound is missed: residual 1e-9, node balance 1e-9, loop against nodal 1e-6")
	}
}

// worst keeps the largest value and whose it was.
type worst struct {
	value float64
	at    int
}

func (w *worst) see(k int, x float64) {
	if !(x <= w.value) {
		w.value, w.at = x, k
	}
}

func (w worst) String() string { return reportFloat(w.value, w.at) }

// drops gives the mmf that a branch lacks at the solution, sum U - sum N i, the sum of the magnitudes, and what the
// rounding of a flux as large as the largest makes of a drop.
func drops(b *reluct.Branch, sol *reluct.Solution, i int, largest float64) (lack, size, blur float64) {
	for k, e := range b.Elements {
		u := sol.State[i][k].MMF
		lack += u
		size += math.Abs(u)
		slope := 1 / e.Permeance
		switch e.Kind {
		case reluct.Leg:
			_, dh := e.Law.Inverse(sol.State[i][k].B)
			slope = e.Length * dh / (e.Area + phys.Mu0*e.Air*dh)
		case reluct.Magnet:
			slope = e.Length / (phys.Mu0 * e.Mur * e.Area)
		}
		blur = max(blur, 0x1p-50*(slope*largest+math.Abs(u)))
	}
	for _, t := range b.Turns {
		lack -= t.Turns * sol.Current[t.Winding]
		size += math.Abs(t.Turns * sol.Current[t.Winding])
	}
	return lack, size, blur
}

// loopResidual gives the largest sum of a loop relative to the magnitudes in it, over loops of its own: those that
// the branches close which do not lead to a new node when the network is walked from node 0. The second value leaves
// out the loops whose sum is below what the rounding of the fluxes makes of the drops in the stiffest branch: sums of
// drops of 1e5 A leave no more digits to a loop of 0.1 A.
func loopResidual(s *sample, sol *reluct.Solution) (strict, aboveFloor float64) {
	up := make([]int, s.Nodes)
	for i := range up {
		up[i] = -1
	}
	depth := make([]int, s.Nodes)
	seen, inTree := map[int]bool{0: true}, make([]bool, len(s.Branches))
	for queue := []int{0}; len(queue) > 0; queue = queue[1:] {
		for i, b := range s.Branches {
			for _, way := range [2][2]int{{b.From, b.To}, {b.To, b.From}} {
				if way[0] == queue[0] && !seen[way[1]] {
					seen[way[1]], inTree[i] = true, true
					up[way[1]], depth[way[1]] = i, depth[queue[0]]+1
					queue = append(queue, way[1])
				}
			}
		}
	}
	largest, blur := 0.0, 0.0
	for _, phi := range sol.Flux {
		largest = max(largest, math.Abs(phi))
	}
	for i := range s.Branches {
		_, _, bl := drops(&s.Branches[i], sol, i, largest)
		blur = max(blur, bl)
	}
	for i, b := range s.Branches {
		if inTree[i] {
			continue
		}
		sum, size, _ := drops(&b, sol, i, largest)
		climb := func(node int, sign float64) int { // one branch towards node 0
			k := up[node]
			lack, sz, _ := drops(&s.Branches[k], sol, k, largest)
			size += sz
			if s.Branches[k].From == node {
				sum += sign * lack
				return s.Branches[k].To
			}
			sum -= sign * lack
			return s.Branches[k].From
		}
		from, to := b.From, b.To
		for from != to {
			if depth[to] >= depth[from] {
				to = climb(to, 1)
			} else {
				from = climb(from, -1)
			}
		}
		if size > 0 {
			strict = max(strict, math.Abs(sum)/size)
			if math.Abs(sum) > blur {
				aboveFloor = max(aboveFloor, math.Abs(sum)/size)
			}
		}
	}
	return strict, aboveFloor
}

// nodeBalance gives the largest sum of fluxes at a node relative to the largest flux.
func nodeBalance(s *sample, sol *reluct.Solution) float64 {
	sum, largest := make([]float64, s.Nodes), 0.0
	for i, b := range s.Branches {
		sum[b.From] -= sol.Flux[i]
		sum[b.To] += sol.Flux[i]
		largest = max(largest, math.Abs(sol.Flux[i]))
	}
	most := 0.0
	for _, x := range sum {
		most = max(most, math.Abs(x)/largest)
	}
	return most
}

// checkLaws holds every element's state against its own relation of flux and mmf, and prescribed linkages against
// the fluxes.
func checkLaws(t *testing.T, k int, s *sample, sol *reluct.Solution) {
	t.Helper()
	for i, b := range s.Branches {
		for e, el := range b.Elements {
			st := sol.State[i][e]
			var flux, size float64
			switch el.Kind {
			case reluct.Leg:
				d, _ := el.Law.At(st.H)
				flux = d*el.Area + phys.Mu0*st.H*el.Air
				size = math.Abs(flux)
				if math.Abs(st.MMF-st.H*el.Length) > 1e-14*math.Abs(st.MMF) {
					t.Errorf("network %d branch %d: drop %g is not H l = %g", k, i, st.MMF, st.H*el.Length)
				}
			case reluct.Magnet:
				flux = (el.Br + phys.Mu0*el.Mur*st.H) * el.Area
				size = math.Abs(el.Br*el.Area) + math.Abs(flux)
			default:
				flux = el.Permeance * st.MMF
				size = math.Abs(flux)
			}
			if math.Abs(flux-sol.Flux[i]) > 1e-9*size {
				t.Errorf("network %d branch %d element %d: flux %.12g at its mmf, branch carries %.12g", k, i, e, flux, sol.Flux[i])
			}
		}
	}
	linkage := make([]float64, s.Windings)
	size := make([]float64, s.Windings)
	for i, b := range s.Branches {
		for _, turn := range b.Turns {
			linkage[turn.Winding] += turn.Turns * sol.Flux[i]
			size[turn.Winding] += math.Abs(turn.Turns * sol.Flux[i])
		}
	}
	for w, want := range s.Drive.Linkage {
		if math.Abs(linkage[w]-want) > 1e-11*(math.Abs(want)+size[w]) {
			t.Errorf("network %d winding %d: linkage %.12g, prescribed %.12g", k, w, linkage[w], want)
		}
	}
}

func largestDifference(a, b []float64) float64 {
	most, largest := 0.0, 0.0
	for i := range a {
		most, largest = max(most, math.Abs(a[i]-b[i])), max(largest, math.Abs(a[i]))
	}
	if largest == 0 {
		return most
	}
	return most / largest
}
