package reluct

import (
	"math"

	"ampturn/magcirc"
)

// note adds what a reader must know: laws used beyond their data, paths without a way back, currents that the
// linkages leave open.
func (k *task) note(s *Solution) {
	n := k.net
	for i := range n.branches {
		for e := range n.branches[i].Elements {
			k.noteRange(s, i, e)
		}
		if k.topo.carry[i] && k.lonely(i) {
			s.Notes = append(s.Notes, magcirc.Note{Kind: magcirc.Remark, Elem: "path " + n.path(i), Text: "carries no flux: no other path leads it back"})
		}
	}
	for w, q := range k.fixed.pivot {
		if q < 0 {
			name := n.windings[k.fixed.winding[w]]
			s.Notes = append(s.Notes, magcirc.Note{Kind: magcirc.Assumed, Elem: "winding " + name,
				Text: "its flux linkage follows from that of other windings; it is taken to carry no current, and they all of it"})
		}
	}
}

// noteRange notes a leg beyond the data of its law.
func (k *task) noteRange(s *Solution, i, e int) {
	law := k.net.branches[i].Elements[e].Law
	if k.net.branches[i].Elements[e].Kind != Leg {
		return
	}
	hmax, bmax := law.Range()
	x := s.State[i][e]
	if math.Abs(x.H) <= hmax || math.Abs(x.B) <= bmax {
		return
	}
	s.Notes = append(s.Notes, magcirc.Note{Kind: magcirc.Extrapolated, Elem: k.net.part(i, e),
		Text: show(x.B, "T") + " is beyond the data of " + law.Describe() + " (to " + show(bmax, "T") + "). Add points; the document lists it"})
}

// lonely says whether no loop runs through branch i.
func (k *task) lonely(i int) bool {
	nb := len(k.parts)
	for j := range k.topo.chord {
		if k.topo.loop[j*nb+i] != 0 {
			return false
		}
	}
	return true
}
