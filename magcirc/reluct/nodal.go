package reluct

import (
	"context"
	"math"

	"ampturn/magcirc/phys"
)

// SolveNodal gives the same state as [Network.Solve] from a second formulation, as a check: the node potentials u and
// the currents i of the windings of prescribed linkage lambda at which the co-energy
//
//	E(u, i) = sum over elements of (integral of phi dU) - lambda i,    U = F + u(From) - u(To)
//
// is smallest. Every element stands on its own, with nodes of its own between the elements of a branch, and the laws
// are asked for B at given H, where Solve asks for H at given B.
//
// Valid: as Solve, but potentials that nearly cancel over a leg of high permeability leave its flux fewer digits:
// Solution.Floor says how many; a row met to its rounding floor counts as met.
// Errors: as Solve.
func (n *Network) SolveNodal(ctx context.Context, d Drive, s *Settings) (*Solution, error) {
	k, err := n.task(d, s)
	if err != nil {
		return nil, err
	}
	f := newNodalForm(k)
	defer f.release()
	ok, err := f.run(ctx, k.tol, k.limit)
	if err != nil {
		return nil, err
	}
	sol := f.solution()
	if !ok || !sol.finite() {
		return nil, k.stalled(&f.descent, sol, f.worstRow())
	}
	return sol, nil
}

// nodalForm is the descent over potentials: a term for each element, an unknown for each node but the roots, for each
// node between elements, and for each winding of prescribed linkage.
type nodalForm struct {
	descent
	*task
	legs    []leg // by term; law nil: linear
	perm    []float64
	first   []int // by branch: its first term
	unknown []int // by node: its unknown, -1 for a root
	coil    []int // by prescription: its unknown, -1 for one that depends on the others
}

func newNodalForm(k *task) *nodalForm {
	f := &nodalForm{task: k}
	terms, unknowns := f.number()
	f.alloc(unknowns, terms)
	f.legs, f.perm = make([]leg, terms), make([]float64, terms)
	f.start = make([]int, 1, terms+1)
	for i := range k.net.branches {
		f.addBranch(i)
	}
	f.c = make([]float64, unknowns)
	for w, j := range f.coil {
		if j >= 0 {
			f.c[j] = k.fixed.lambda[w]
		}
	}
	f.eval = f.sweepTerms
	return f
}

// number gives each unknown its index: nodes, coils; nodes between elements follow as the branches are added.
func (f *nodalForm) number() (terms, unknowns int) {
	f.unknown = make([]int, len(f.net.nodes))
	for i := range f.unknown {
		f.unknown[i] = -1
		if f.topo.part[i] != i {
			f.unknown[i] = unknowns
			unknowns++
		}
	}
	f.coil = make([]int, len(f.fixed.winding))
	for w := range f.coil {
		f.coil[w] = -1
		if f.fixed.pivot[w] >= 0 {
			f.coil[w] = unknowns
			unknowns++
		}
	}
	f.first = make([]int, len(f.net.branches))
	between := 0
	for i := range f.net.branches {
		f.first[i] = terms
		if f.topo.carry[i] {
			terms += len(f.net.branches[i].Elements)
			between += len(f.net.branches[i].Elements) - 1
		}
	}
	return terms, unknowns + between
}

// addBranch adds the terms of a branch; its windings act on the first element.
func (f *nodalForm) addBranch(i int) {
	b := &f.net.branches[i]
	if !f.topo.carry[i] {
		return
	}
	from, last := f.unknown[b.From], len(b.Elements)-1
	for e := range b.Elements {
		term := f.first[i] + e
		to := f.unknown[b.To]
		if e < last {
			to = f.n - f.between(i) + e
		}
		if e == 0 {
			f.x0[term] = f.winding[i]
			f.addCoils(b)
		}
		if from != to {
			f.touch(from, 1)
			f.touch(to, -1)
		}
		f.closeTerm()
		f.element(term, &b.Elements[e])
		from = to
	}
}

// between gives the number of nodes between elements in branch i and those after it.
func (f *nodalForm) between(i int) int {
	count := 0
	for ; i < len(f.net.branches); i++ {
		if f.topo.carry[i] {
			count += len(f.net.branches[i].Elements) - 1
		}
	}
	return count
}

func (f *nodalForm) addCoils(b *Branch) {
	for w, j := range f.coil {
		turns := 0.0
		for _, t := range b.Turns {
			if t.Winding == f.fixed.winding[w] {
				turns += t.Turns
			}
		}
		if j >= 0 && turns != 0 {
			f.touch(j, turns)
		}
	}
}

func (f *nodalForm) touch(j int, z float64) {
	if j >= 0 {
		f.index, f.coef = append(f.index, j), append(f.coef, z)
	}
}

// closeTerm ends the row of a term with its indices in rising order.
func (f *nodalForm) closeTerm() {
	lo := f.start[len(f.start)-1]
	for p := lo + 1; p < len(f.index); p++ {
		for q := p; q > lo && f.index[q] < f.index[q-1]; q-- {
			f.index[q], f.index[q-1] = f.index[q-1], f.index[q]
			f.coef[q], f.coef[q-1] = f.coef[q-1], f.coef[q]
		}
	}
	f.start = append(f.start, len(f.index))
}

func (f *nodalForm) element(term int, e *Element) {
	switch e.Kind {
	case Leg:
		f.legs[term] = leg{e.Law, e.Length, e.Area, e.Air}
	case Magnet:
		f.perm[term] = phys.Mu0 * e.Mur * e.Area / e.Length
		f.shift[term] = -e.Br * e.Area
		f.base[term] = math.Abs(e.Br * e.Area)
	default:
		f.perm[term] = e.Permeance
	}
}

func (f *nodalForm) sweepTerms(x, g, slope []float64) {
	for k := range x {
		if f.legs[k].law != nil {
			g[k], slope[k] = f.legs[k].carry(x[k])
		} else {
			g[k], slope[k] = f.perm[k]*x[k]-f.shift[k], f.perm[k]
		}
	}
}

// solution gives the solution at the point that the descent has reached.
func (f *nodalForm) solution() *Solution {
	s := f.net.newSolution()
	for i, j := range f.unknown {
		if j >= 0 {
			s.Potential[i] = f.y[j]
		}
	}
	for w, j := range f.coil {
		if j >= 0 {
			f.current[f.fixed.winding[w]] = f.y[j]
		}
	}
	copy(s.Current, f.current)
	blur := 0.0
	for i := range f.net.branches {
		if !f.topo.carry[i] {
			for e := range s.State[i] {
				s.State[i][e] = f.net.branches[i].Elements[e].at(0)
			}
			continue
		}
		// The flux of the branch is that of the element whose flux is least blurred by rounding.
		least := math.Inf(1)
		for e := range s.State[i] {
			k := f.first[i] + e
			if b := 4 * 0x1p-52 * (f.slope[k]*f.reach[k] + math.Abs(f.g[k])); e == 0 || b < least {
				least, s.Flux[i] = b, f.g[k]
			}
			s.State[i][e] = f.net.branches[i].Elements[e].under(f.x[k], f.g[k])
		}
		blur = max(blur, least)
	}
	f.conclude(s, &f.descent, blur)
	return s
}

// worstRow names the node or winding with the largest residual.
func (f *nodalForm) worstRow() string {
	for i, j := range f.unknown {
		if j == f.worst {
			return "node " + f.net.nodes[i]
		}
	}
	for w, j := range f.coil {
		if j == f.worst {
			return "winding " + f.net.windings[f.fixed.winding[w]]
		}
	}
	for i := range f.net.branches {
		lo := f.n - f.between(i)
		if e := f.worst - lo; f.topo.carry[i] && e >= 0 && e < len(f.net.branches[i].Elements)-1 {
			return f.net.part(i, e)
		}
	}
	return f.net.circuit()
}
