package reluct

import (
	"context"
	"math"

	"ampturn/magcirc"
)

const (
	defaultTolerance  = 1e-9
	defaultIterations = 200
)

// task is one network under one drive on its way to a solution.
type task struct {
	net     *Network
	parts   []series  // branches made ready
	current []float64 // by winding: known currents, later all of them
	winding []float64 // by branch: mmf in A of the known currents
	mmf     []float64 // by branch: the same and that of the magnets
	size    []float64 // by branch: sum of the magnitudes of these mmfs
	topo    *topology
	fixed   *prescription
	free    []int // loops that no winding prescribes
	tol     float64
	limit   int
}

// Solve gives the state of the network under a drive: the loop fluxes f at which the energy
//
//	E(f) = sum over branches of (integral of U dphi - F phi),    phi = sum of +-f
//
// is smallest; F is the mmf of the branch's windings. The state is unique for laws that rise.
//
// Sign: see the package. Valid: any topology, any size; a law used beyond its data gives a note.
// Errors: those of [Network.Validate]; [magcirc.UnknownName] and [magcirc.BadValue] for a drive that names no winding
// or no finite number; [magcirc.WrongUse] for a winding with current and linkage; [magcirc.Inconsistent] when linkages
// contradict each other; [magcirc.NoConvergence] with a [Stall] inside; the error of ctx when it ends.
// Source: minimum of energy of nonlinear networks: W. Millar, Some general theorems for non-linear systems possessing
// resistance, Phil. Mag. 42 (1951) 1150-1160 (from memory), read for flux and mmf.
func (n *Network) Solve(ctx context.Context, d Drive, s *Settings) (*Solution, error) {
	k, err := n.task(d, s)
	if err != nil {
		return nil, err
	}
	var desc descent
	k.loopForm(&desc)
	defer desc.release()
	k.approach(&desc)
	ok, err := desc.run(ctx, k.tol, k.limit)
	if err != nil {
		return nil, err
	}
	sol := k.loopSolution(&desc)
	if !ok || !sol.finite() {
		return nil, k.stalled(&desc, sol, k.worstOfLoop(&desc))
	}
	return sol, nil
}

// task checks network and drive, and finds tree, loops and prescribed loops.
func (n *Network) task(d Drive, s *Settings) (*task, error) {
	if err := n.Validate(); err != nil {
		return nil, err
	}
	k := &task{net: n, parts: n.compile(), tol: defaultTolerance, limit: defaultIterations}
	if s != nil && s.Tolerance > 0 {
		k.tol = s.Tolerance
	}
	if s != nil && s.Iterations > 0 {
		k.limit = s.Iterations
	}
	winding, lambda, err := k.read(d)
	if err != nil {
		return nil, err
	}
	k.topo = n.cut(k.parts, winding)
	if k.fixed, err = k.topo.prescribe(winding, lambda); err != nil {
		return nil, err
	}
	k.free = make([]int, 0, len(k.topo.chord))
	for j := range k.topo.chord {
		if !k.fixed.holds(j) {
			k.free = append(k.free, j)
		}
	}
	return k, nil
}

func (p *prescription) holds(loop int) bool {
	for _, q := range p.pivot {
		if q == loop {
			return true
		}
	}
	return false
}

// cut finds tree and loops with the branches of the named windings as far outside the tree as possible.
func (n *Network) cut(parts []series, winding []int) *topology {
	initial, prescribed := make([]float64, len(parts)), make([]bool, len(parts))
	for i := range parts {
		_, initial[i] = parts[i].drop(0)
		for _, turn := range n.branches[i].Turns {
			for _, w := range winding {
				prescribed[i] = prescribed[i] || turn.Winding == w && turn.Turns != 0
			}
		}
	}
	return newTopology(n, parts, initial, prescribed)
}

// read sets the known currents and mmfs, and gives the windings of prescribed linkage in the order of their indices.
func (k *task) read(d Drive) (winding []int, lambda []float64, err error) {
	n := k.net
	nb, buf := len(n.branches), make([]float64, len(n.windings)+3*len(n.branches))
	k.mmf, k.size, k.winding, k.current = buf[:nb], buf[nb:2*nb], buf[2*nb:3*nb], buf[3*nb:]
	if err := n.checkDrive(d.Current, "current", "A"); err != nil {
		return nil, nil, err
	}
	if err := n.checkDrive(d.Linkage, "flux linkage", "Wb"); err != nil {
		return nil, nil, err
	}
	for w := range n.windings {
		i, byCurrent := d.Current[w]
		l, byLinkage := d.Linkage[w]
		if byCurrent && byLinkage {
			return nil, nil, &magcirc.Error{Code: magcirc.WrongUse, Elem: "winding " + n.windings[w], Msg: "is driven by current and by flux linkage", Hint: "give one of them"}
		}
		k.current[w] = i
		if byLinkage {
			winding, lambda = append(winding, w), append(lambda, l)
		}
	}
	for b := range n.branches {
		k.size[b] = math.Abs(k.parts[b].magnet)
		for _, t := range n.branches[b].Turns {
			f := t.Turns * k.current[t.Winding]
			k.winding[b] += f
			k.size[b] += math.Abs(f)
		}
		k.mmf[b] = k.winding[b] + k.parts[b].magnet
	}
	return winding, lambda, nil
}

// checkDrive refuses a winding that is not there and a value that is no finite number; the lowest index first.
func (n *Network) checkDrive(drive map[int]float64, quantity, unit string) error {
	bad, found := 0, false
	for w, x := range drive {
		if (w < 0 || w >= len(n.windings) || !finite(x)) && (!found || w < bad) {
			bad, found = w, true
		}
	}
	switch {
	case !found:
		return nil
	case bad < 0 || bad >= len(n.windings):
		return &magcirc.Error{Code: magcirc.UnknownName, Elem: n.circuit(), Msg: quantity + " given for winding " + show(float64(bad), "") + ", which is not there"}
	}
	return &magcirc.Error{Code: magcirc.BadValue, Elem: "winding " + n.windings[bad], Msg: quantity + " is not a finite number", Quantity: quantity, Unit: unit, Got: drive[bad]}
}

// Stall is the state of a solution that did not meet its tolerance; it is found in the error by errors.As.
type Stall struct {
	Iterations int
	Residual   float64 // largest relative residual reached
	Tolerance  float64
	Worst      string    // the part with the largest mmf in the worst loop, or the worst node
	Last       *Solution // the state reached
}

// Error gives the line that a reader sees.
func (s *Stall) Error() string {
	return "residual " + show(s.Residual, "") + " after " + show(float64(s.Iterations), "") + " iterations, wanted " + show(s.Tolerance, "") + "; worst at " + s.Worst
}

func (k *task) stalled(d *descent, last *Solution, worst string) error {
	s := &Stall{Iterations: d.iterations, Residual: d.residual, Tolerance: k.tol, Worst: worst, Last: last}
	return &magcirc.Error{Code: magcirc.NoConvergence, Elem: k.net.circuit(), Msg: "no solution: " + s.Error(),
		Hint: "check that the laws rise", Quantity: "residual", Got: d.residual, Limit: k.tol, Err: s}
}
