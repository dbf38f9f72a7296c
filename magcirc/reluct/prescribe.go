package reluct

import (
	"math"
	"strings"

	"ampturn/magcirc"
)

// prescription holds the windings of prescribed linkage: by elimination they fix the flux of one loop each,
//
//	G f = lambda    ->    f_pivot = T lambda - K f_free,    [I K] = T G
//
// with G the linkage of winding and loop per loop flux. A winding whose row depends on the others' prescribes what
// they prescribe already, or contradicts them.
type prescription struct {
	winding []int     // windings of prescribed linkage
	lambda  []float64 // their linkages in Wb turn
	pivot   []int     // by prescription: the loop that it fixes; -1: it depends on the ones before
	reduced []float64 // rows T G over the loops
	apply   []float64 // T, square over the prescriptions
}

// prescribe eliminates one loop for each winding of prescribed linkage.
//
// Errors: [magcirc.Inconsistent] when windings prescribe fluxes that cannot be at the same time.
func (t *topology) prescribe(winding []int, lambda []float64) (*prescription, error) {
	m, nc := len(winding), len(t.chord)
	p := &prescription{winding: winding, lambda: lambda, pivot: make([]int, m), reduced: make([]float64, m*nc), apply: make([]float64, m*m)}
	for w := range m {
		row, mix := p.reduced[w*nc:w*nc+nc], p.apply[w*m:w*m+m]
		mix[w] = 1
		size := t.link(winding[w], row)
		for v := range w { // rows before are reduced already: subtract them
			if q := p.pivot[v]; q >= 0 && row[q] != 0 {
				p.add(w, v, -row[q], nc)
			}
		}
		best := -1
		for j, g := range row {
			if math.Abs(g) > 1e-11*size && (best < 0 || math.Abs(g) > math.Abs(row[best])) {
				best = j
			}
		}
		p.pivot[w] = best
		if best < 0 {
			if err := t.contradiction(p, w); err != nil {
				return nil, err
			}
			continue
		}
		p.normalise(w, best, nc)
	}
	return p, nil
}

// link sets the row of linkages of a winding per loop flux and gives the sum of its turns' magnitudes.
func (t *topology) link(winding int, row []float64) (size float64) {
	nb := len(t.net.branches)
	for i := range t.net.branches {
		for _, turn := range t.net.branches[i].Turns {
			if turn.Winding != winding {
				continue
			}
			size += math.Abs(turn.Turns)
			for j := range row {
				row[j] += turn.Turns * t.loop[j*nb+i]
			}
		}
	}
	return size
}

// add adds f times row v to row w.
func (p *prescription) add(w, v int, f float64, nc int) {
	m := len(p.winding)
	for j := range nc {
		p.reduced[w*nc+j] += f * p.reduced[v*nc+j]
	}
	for j := range m {
		p.apply[w*m+j] += f * p.apply[v*m+j]
	}
}

// normalise makes the pivot of row w one and clears its column in the rows before.
func (p *prescription) normalise(w, pivot, nc int) {
	m := len(p.winding)
	f := 1 / p.reduced[w*nc+pivot]
	for j := range nc {
		p.reduced[w*nc+j] *= f
	}
	for j := range m {
		p.apply[w*m+j] *= f
	}
	for v := range w {
		if g := p.reduced[v*nc+pivot]; g != 0 && p.pivot[v] >= 0 {
			p.add(v, w, -g, nc)
			p.reduced[v*nc+pivot] = 0
		}
	}
}

// contradiction gives an error when row w, which has become zero, leaves a linkage that is not zero.
func (t *topology) contradiction(p *prescription, w int) error {
	m := len(p.winding)
	left, size := 0.0, 0.0
	for v, f := range p.apply[w*m : w*m+m] {
		left += f * p.lambda[v]
		size += math.Abs(f * p.lambda[v])
	}
	if math.Abs(left) <= 1e-9*size {
		return nil
	}
	return t.clash(p, w)
}

// clash names the windings whose linkages contradict each other in row w.
func (t *topology) clash(p *prescription, w int) error {
	n, m := t.net, len(p.winding)
	mix := p.apply[w*m : w*m+m]
	var names, fluxes []string
	first := 0.0 // sign with which the first winding enters
	for v, f := range mix {
		if math.Abs(f) <= 1e-12*math.Abs(mix[w]) && v != w {
			continue
		}
		names = append(names, n.windings[p.winding[v]])
		turns, single := n.single(p.winding[v])
		if !single || turns == 0 {
			fluxes = append(fluxes, "linkage "+show(p.lambda[v], "Wb"))
			continue
		}
		flux := p.lambda[v] / turns
		if first == 0 {
			first = f * turns
		} else if first*f*turns > 0 { // its arrow runs against the first one's
			flux = -flux
		}
		fluxes = append(fluxes, show(flux, "Wb"))
	}
	e := &magcirc.Error{Code: magcirc.Inconsistent}
	switch len(names) {
	case 1:
		e.Msg = "winding " + names[0] + " prescribes " + fluxes[0] + " where no flux can flow: give its path a way back"
	case 2:
		e.Msg = "windings " + list(names) + " prescribe different fluxes in the same path (" + list(fluxes) + "): drive one by current"
	default:
		e.Msg = "windings " + list(names) + " prescribe fluxes that do not balance where their paths meet (" + list(fluxes) + "): drive one by current"
	}
	return e
}

// single gives the turns of a winding that lies on one branch only.
func (n *Network) single(winding int) (turns float64, ok bool) {
	on := -1
	for i := range n.branches {
		for _, t := range n.branches[i].Turns {
			if t.Winding != winding {
				continue
			}
			if on >= 0 && on != i {
				return 0, false
			}
			on = i
			turns += t.Turns
		}
	}
	return turns, on >= 0
}

func list(words []string) string {
	last := len(words) - 1
	return strings.Join(words[:last], ", ") + " and " + words[last]
}

// fixed gives the loop fluxes that the prescribed linkages alone set, with all free loops at zero.
func (p *prescription) fixed(nc int) []float64 {
	m := len(p.winding)
	f := make([]float64, nc)
	for w, q := range p.pivot {
		if q < 0 {
			continue
		}
		for v := range m {
			f[q] += p.apply[w*m+v] * p.lambda[v]
		}
	}
	return f
}

// currents gives the currents of the windings from the mmf that is missing in the loops they fix: i = T^T g_pivot.
func (p *prescription) currents(missing []float64) []float64 {
	m := len(p.winding)
	i := make([]float64, m)
	for w, q := range p.pivot {
		if q < 0 {
			continue
		}
		for v := range m {
			i[v] += p.apply[w*m+v] * missing[q]
		}
	}
	return i
}
