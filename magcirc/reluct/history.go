package reluct

import (
	"context"
	"math"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// remembers is what a law of a leg does that belongs to a law with memory.
type remembers interface{ Memory() hyst.Law }

// memory is a leg's law from the state that the leg is in: the trials of its law with memory.
type memory struct {
	law   hyst.Law
	state hyst.State
	work  float64 // integral of H dB in J/m3 since the start
	still bool    // stands for small signals about the state, not for a move from it
}

func (m *memory) clone() *memory {
	c := *m
	c.state = m.state.Clone()
	return &c
}

func (m *memory) At(h float64) (b, slope float64) {
	p := m.law.ByField(&m.state, h)
	return p.B, p.Slope()
}

func (m *memory) Inverse(b float64) (h, slope float64) {
	return m.share(b, 1, 0)
}

// share gives field strength and dH/dB of metal that carries the flux phi together with air beside it.
func (m *memory) share(phi, area, air float64) (h, slope float64) {
	r, b := air/area, phi/area
	if m.still {
		now := m.law.Now(&m.state)
		if at := now.B + phys.Mu0*r*now.H; math.Abs(b-at) <= 1e-9*(math.Abs(at)+phys.Mu0*math.Abs(now.H)) {
			return now.H, now.DH / now.DB
		}
	}
	p := m.law.ByMix(&m.state, r, b)
	return p.H, p.DH / p.DB
}

// Coenergy is H B less the work since the start, at the state itself.
func (m *memory) Coenergy(float64) float64 {
	now := m.law.Now(&m.state)
	return now.H*now.B - m.work
}

func (m *memory) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (m *memory) Describe() string { return m.law.Describe() }

// Memory gives the law with memory.
func (m *memory) Memory() hyst.Law { return m.law }

// History is a network whose legs remember: it goes from state to state, quasi-statically. Legs with a law of package
// hyst ([hyst.Initial] carries it) begin demagnetised; the others have no memory.
//
//	h, err := n.History(nil)
//	on, err := h.Step(ctx, reluct.Drive{Current: map[int]float64{main: 5}})
//	off, err := h.Step(ctx, reluct.Drive{}) // off.Flux: what stays
//
// A step takes every leg from its state to the next in one monotone move; drives that turn must stop at the turning
// points, and [History.Ramp] divides a step in which legs may turn at different times.
type History struct {
	net  *Network
	set  *Settings
	legs []*memory // by leg with memory, in the order of branches and elements
	flux []float64 // by branch: of the last state
}

// History gives the history of the network from the demagnetised state; nil settings mean the defaults.
//
// Errors: those of [Network.Validate].
func (n *Network) History(s *Settings) (*History, error) {
	if err := n.Validate(); err != nil {
		return nil, err
	}
	h := &History{net: n, set: s, flux: make([]float64, len(n.branches))}
	n.eachMemory(func(e *Element, law hyst.Law) { h.legs = append(h.legs, &memory{law: law, state: law.Start()}) })
	return h, nil
}

// Memories gives the number of legs that remember.
func (h *History) Memories() int { return len(h.legs) }

// Clone gives an independent history in the same state.
func (h *History) Clone() *History {
	c := *h
	c.flux = append([]float64(nil), h.flux...)
	c.legs = make([]*memory, len(h.legs))
	for i, m := range h.legs {
		c.legs[i] = m.clone()
	}
	return &c
}

// eachMemory visits the legs whose law remembers.
func (n *Network) eachMemory(see func(e *Element, law hyst.Law)) {
	for i := range n.branches {
		for k := range n.branches[i].Elements {
			e := &n.branches[i].Elements[k]
			if r, ok := e.Law.(remembers); ok && e.Kind == Leg {
				see(e, r.Memory())
			}
		}
	}
}

// at gives the network with the laws of its legs as they are from the present state.
func (h *History) at() *Network {
	n := *h.net
	n.branches = append([]Branch(nil), h.net.branches...)
	for i := range n.branches {
		n.branches[i].Elements = append([]Element(nil), n.branches[i].Elements...)
	}
	next := 0
	n.eachMemory(func(e *Element, _ hyst.Law) {
		e.Law = h.legs[next]
		next++
	})
	return &n
}

// Trial gives the state under a drive, reached from the present one, and stays where it is: the loop fluxes of least
// energy as in [Network.Solve], from the fluxes of the present state, with the trials of the laws for laws. They rise,
// so the energy is convex.
//
// Incremental inductances of the result are those of this arrival, not of a turn.
// Errors: as [Network.Solve].
func (h *History) Trial(ctx context.Context, d Drive) (*Solution, error) {
	k, err := h.at().task(d, h.set)
	if err != nil {
		return nil, err
	}
	h.own(k)
	var desc descent
	k.loopForm(&desc)
	defer desc.release()
	for to, j := range k.free {
		desc.y[to] = h.flux[k.topo.chord[j]]
	}
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

// eachLeg visits the legs that remember, with their branch and element.
func (h *History) eachLeg(see func(i, k int, e *Element, m *memory)) {
	next := 0
	for i := range h.net.branches {
		for k := range h.net.branches[i].Elements {
			e := &h.net.branches[i].Elements[k]
			if _, ok := e.Law.(remembers); ok && e.Kind == Leg {
				see(i, k, e, h.legs[next])
				next++
			}
		}
	}
}

// own adds to the size of the mmfs on a branch what its legs hold by themselves: a remanent ring has drops that cancel
// and no winding's mmf beside which its residual is small.
func (h *History) own(k *task) {
	h.eachLeg(func(i, _ int, e *Element, m *memory) {
		now, none := m.law.Now(&m.state), m.law.ByFluxDensity(&m.state, 0)
		k.size[i] += e.Length * (math.Abs(now.H) + math.Abs(none.H))
	})
}

// TrialNodal gives the same state by the formulation of [Network.SolveNodal], as a check.
func (h *History) TrialNodal(ctx context.Context, d Drive) (*Solution, error) {
	k, err := h.at().task(d, h.set)
	if err != nil {
		return nil, err
	}
	f := newNodalForm(k)
	defer f.release()
	h.eachLeg(func(i, k int, e *Element, m *memory) { // remanent fluxes that cancel at a node, as own has it for drops
		if f.topo.carry[i] {
			now, none := m.law.Now(&m.state), m.law.ByField(&m.state, 0)
			f.base[f.first[i]+k] += e.Area * (math.Abs(now.B) + math.Abs(none.B))
		}
	})
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

// Step goes to the state under a drive. The solution's incremental inductances are those of small signals about the new
// state, its energy that of gaps, air and magnets plus the work on the legs since the demagnetised state, of which a part
// is heat by now.
//
// Errors: as [History.Trial]; the history then stays where it was.
func (h *History) Step(ctx context.Context, d Drive) (*Solution, error) {
	s, err := h.Trial(ctx, d)
	if err != nil {
		return nil, err
	}
	h.commit(s)
	return s, nil
}

// Ramp goes to the state under a drive in the given number of steps, from the drive before it (nil maps: no current)
// in straight lines.
func (h *History) Ramp(ctx context.Context, from, to Drive, steps int) (*Solution, error) {
	var s *Solution
	for n := 1; n <= max(steps, 1); n++ {
		d := to
		if n < steps {
			d = between(from, to, float64(n)/float64(steps))
		}
		var err error
		if s, err = h.Step(ctx, d); err != nil {
			return nil, err
		}
	}
	return s, nil
}

// between gives the drive at w of the way; a winding whose kind of drive changes has the new kind at its end at once.
func between(from, to Drive, w float64) Drive {
	mix := func(a, b map[int]float64, currents bool) map[int]float64 {
		m := map[int]float64{}
		for i, x := range b {
			m[i] = a[i] + w*(x-a[i])
		}
		for i, x := range a {
			_, linked := to.Linkage[i]
			_, driven := to.Current[i]
			if _, named := b[i]; !named && currents && !linked && !driven {
				m[i] = (1 - w) * x
			}
		}
		return m
	}
	return Drive{Current: mix(from.Current, to.Current, true), Linkage: mix(from.Linkage, to.Linkage, false)}
}

// commit takes the legs to the state of a solution.
func (h *History) commit(s *Solution) {
	copy(h.flux, s.Flux)
	next := 0
	h.eachLeg(func(i, _ int, e *Element, m *memory) {
		m = m.clone()
		p := m.law.ByMix(&m.state, e.Air/e.Area, s.Flux[i]/e.Area)
		m.work += m.law.Work(&m.state, p)
		m.law.Commit(&m.state, p)
		h.legs[next] = m
		next++
	})
	s.net = h.at()
	s.net.eachMemory(func(e *Element, _ hyst.Law) {
		m := *e.Law.(*memory) // its state is shared and never changes: the next commit makes a new one
		m.still = true
		e.Law = &m
	})
}
