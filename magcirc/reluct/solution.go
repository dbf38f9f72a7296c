package reluct

import (
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Drive says how the windings of a network are driven, by winding index. A winding that is not named carries no
// current.
type Drive struct {
	Current map[int]float64 // instantaneous current in A
	Linkage map[int]float64 // flux linkage in Wb turn; the current follows
}

// Settings of the solvers; the zero value of a field, or nil for all of them, means its default.
type Settings struct {
	Tolerance  float64 // largest residual of a loop (or node) relative to the sum of its terms; default 1e-9
	Iterations int     // largest number of Newton iterations; default 200
}

// ElementState is the state of one element.
type ElementState struct {
	H   float64 // field strength in A/m (gap, stray path: drop over the element's length, where it has one)
	B   float64 // flux density in T; of a leg, in its metal; of a gap of known length, mu0 H between its faces, without the flux beside them; of a stray path, flux over area, where it has one
	MMF float64 // drop U of magnetic potential From -> To in A; of a magnet usually against its flux
}

// Solution is the state of a network under one drive.
type Solution struct {
	Flux      []float64        // Wb, by branch, positive From -> To
	Potential []float64        // magnetic potential in A by node; zero at the first node of each separate part
	Current   []float64        // A, by winding
	Linkage   []float64        // Wb turn, by winding: sum of N phi over its branches
	State     [][]ElementState // by branch and element

	Residual    float64 // largest loop (or node) residual relative to the sum of the magnitudes of its terms
	NodeBalance float64 // largest sum of fluxes at a node, relative to the largest flux
	MMFBalance  float64 // largest |sum U - sum N i - u(From) + u(To)| of a branch, relative to the largest mmf
	Floor       float64 // what rounding leaves unknown of the fluxes, relative to the largest flux
	Iterations  int     // Newton iterations (in Solve after six linear steps of approach)
	Sweeps      int     // evaluations of all the laws
	Notes       []magcirc.Note

	net *Network
}

func (n *Network) newSolution() *Solution {
	nb, nn, nw, count := len(n.branches), len(n.nodes), len(n.windings), 0
	for i := range n.branches {
		count += len(n.branches[i].Elements)
	}
	all, states := make([]float64, nb+nn+2*nw), make([]ElementState, count)
	s := &Solution{net: n, State: make([][]ElementState, nb)}
	s.Flux, all = all[:nb:nb], all[nb:]
	s.Potential, all = all[:nn:nn], all[nn:]
	s.Current, s.Linkage = all[:nw:nw], all[nw:]
	for i := range s.State {
		k := len(n.branches[i].Elements)
		s.State[i], states = states[:k:k], states[k:]
	}
	return s
}

// at gives the state of an element at flux phi.
func (e *Element) at(phi float64) ElementState {
	switch e.Kind {
	case Leg:
		l := leg{e.Law, e.Length, e.Area, e.Air}
		if e.Air == 0 {
			h, _ := e.Law.Inverse(phi / e.Area)
			return ElementState{H: h, B: phi / e.Area, MMF: h * e.Length}
		}
		h, _ := l.metal(phi)
		return ElementState{H: h, B: (phi - phys.Mu0*e.Air*h) / e.Area, MMF: h * e.Length}
	case Magnet:
		b := phi / e.Area
		h := (b - e.Br) / (phys.Mu0 * e.Mur)
		return ElementState{H: h, B: b, MMF: h * e.Length}
	}
	if e.blocks() {
		return ElementState{}
	}
	return e.under(phi/e.Permeance, phi)
}

// under gives the state of an element at mmf drop u and flux phi.
func (e *Element) under(u, phi float64) ElementState {
	s := ElementState{MMF: u}
	if e.Length > 0 {
		s.H = u / e.Length
	}
	switch {
	case e.Kind == Leg:
		s.B, _ = e.Law.At(s.H)
	case e.Kind == Gap && e.Length > 0:
		s.B = phys.Mu0 * s.H
	case e.Area > 0:
		s.B = phi / e.Area
	}
	return s
}

// conclude sets linkages, balances and notes of a solution whose fluxes, potentials, currents and states are known.
// blur is what rounding leaves unknown of a flux in Wb.
func (k *task) conclude(s *Solution, d *descent, blur float64) {
	s.Residual, s.Iterations, s.Sweeps = d.residual, d.iterations, d.sweeps
	sum := make([]float64, len(s.Potential))
	flux, most, gap := 0.0, 0.0, 0.0
	for i := range k.net.branches {
		b := &k.net.branches[i]
		flux = max(flux, math.Abs(s.Flux[i]))
		sum[b.From] -= s.Flux[i]
		sum[b.To] += s.Flux[i]
		mmf, drop := 0.0, 0.0
		for _, t := range b.Turns {
			s.Linkage[t.Winding] += t.Turns * s.Flux[i]
			mmf += t.Turns * s.Current[t.Winding]
		}
		left := mmf + s.Potential[b.From] - s.Potential[b.To]
		k.blocked(s, i, left)
		for _, e := range s.State[i] {
			drop += e.MMF
			most = max(most, math.Abs(e.MMF))
		}
		most = max(most, math.Abs(mmf))
		gap = max(gap, math.Abs(drop-left))
	}
	node := 0.0
	for _, x := range sum {
		node = max(node, math.Abs(x))
	}
	if flux > 0 {
		s.NodeBalance, s.Floor = node/flux, blur/flux
	}
	if most > 0 {
		s.MMFBalance = gap / most
	}
	k.note(s)
}

// blocked puts the mmf over a branch that carries no flux on the element that blocks it.
func (k *task) blocked(s *Solution, i int, u float64) {
	if k.topo.carry[i] {
		return
	}
	block := -1
	for e := range s.State[i] {
		if block < 0 && k.net.branches[i].Elements[e].blocks() {
			block = e
			continue
		}
		u -= s.State[i][e].MMF
	}
	s.State[i][block] = k.net.branches[i].Elements[block].under(u, 0)
}

// finite says whether every number of the solution is one.
func (s *Solution) finite() bool {
	sum := s.Residual + s.NodeBalance + s.MMFBalance + s.Floor
	for _, list := range [...][]float64{s.Flux, s.Potential, s.Current, s.Linkage} {
		for _, x := range list {
			sum += x * 0
		}
	}
	for _, states := range s.State {
		for _, e := range states {
			sum += (e.H + e.B + e.MMF) * 0
		}
	}
	return finite(sum)
}

// Excitation gives the work term of all the sources in J,
//
//	sum of i lambda over the windings + sum of Br l/(mu0 mur) phi over the magnets
//
// a magnet counted as a winding of one turn that carries its equivalent mmf. It equals energy plus co-energy.
func (s *Solution) Excitation() float64 {
	sum := 0.0
	for w, i := range s.Current {
		sum += i * s.Linkage[w]
	}
	for b := range s.Flux {
		for e := range s.State[b] {
			sum += s.net.branches[b].Elements[e].mmf() * s.Flux[b]
		}
	}
	return sum
}

// Energy gives the magnetic energy W in J: the integral of H dB over all volume, with a magnet counted as its recoil
// reluctance (the equivalent mmf is a source outside it),
//
//	leg: l A (H B - w'(H)) + mu0 H^2/2 l Air    gap, stray path: phi^2/(2 P)    magnet: (l/(mu0 mur A)) phi^2/2
//
// with w'(H) the co-energy density of the law.
func (s *Solution) Energy() float64 {
	return s.total(func(e *Element, x ElementState, phi float64) float64 {
		if e.Kind == Leg {
			return e.Length * (e.Area*(x.H*x.B-e.Law.Coenergy(x.H)) + 0.5*phys.Mu0*x.H*x.H*e.Air)
		}
		return e.linearEnergy(phi)
	})
}

// Coenergy gives the magnetic co-energy W' in J: the integral of B dH over all volume. Energy plus co-energy is
// [Solution.Excitation].
func (s *Solution) Coenergy() float64 {
	return s.total(func(e *Element, x ElementState, phi float64) float64 {
		if e.Kind == Leg {
			return e.Length * (e.Area*e.Law.Coenergy(x.H) + 0.5*phys.Mu0*x.H*x.H*e.Air)
		}
		return e.linearEnergy(phi)
	})
}

func (e *Element) linearEnergy(phi float64) float64 {
	if phi == 0 {
		return 0
	}
	return 0.5 * e.reluctance() * phi * phi
}

func (s *Solution) total(density func(e *Element, x ElementState, phi float64) float64) float64 {
	sum := 0.0
	for b := range s.Flux {
		for e := range s.State[b] {
			sum += density(&s.net.branches[b].Elements[e], s.State[b][e], s.Flux[b])
		}
	}
	return sum
}
