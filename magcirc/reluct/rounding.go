package reluct

import (
	"math"
	"slices"

	"ampturn/magcirc/phys"
)

// rounding is the share of the largest flux below which a flux is taken for what rounding leaves: no law and no length
// is known to nine digits.
const rounding = 1e-9

// fieldless is the field strength in A/m per T below which there is none: a permeability of 1e12.
const fieldless = 1e-12 / phys.Mu0

// remains says whether the flux density of a leg is not driven by the field strength there: remanence.
func remains(x ElementState) bool { return x.B != 0 && x.H*x.B <= fieldless*x.B*x.B }

// Rounded returns the solution for showing: a flux below 1e-9 of the largest of the network, or below the solution's
// Floor if that is more, is set to zero, and with it the state of legs, gaps and stray paths that carry it and the flux
// density of magnets; so is a linkage or a current that is as small beside what the windings could link or the mmf that
// there is, and the field strength of a leg whose flux no material carries at so little: what stays in a closed ring without
// current. The solution itself stays as it is.
func (s *Solution) Rounded() *Solution {
	t := *s
	t.Flux, t.Linkage, t.Current = slices.Clone(s.Flux), slices.Clone(s.Linkage), slices.Clone(s.Current)
	t.State = make([][]ElementState, len(s.State))
	share := max(rounding, s.Floor)
	flux, mmf := s.largest()
	link, turns := make([]float64, len(s.Linkage)), make([]float64, len(s.Linkage))
	for i := range s.Flux {
		b := &s.net.branches[i]
		t.State[i] = slices.Clone(s.State[i])
		for _, w := range b.Turns {
			link[w.Winding] += math.Abs(w.Turns) * flux
			turns[w.Winding] += math.Abs(w.Turns)
		}
		for k := range t.State[i] {
			if x := t.State[i][k]; b.Elements[k].Kind == Leg && math.Abs(x.H) < fieldless*math.Abs(x.B) {
				t.State[i][k].H, t.State[i][k].MMF = 0, 0
			}
		}
		if s.Flux[i] == 0 || math.Abs(s.Flux[i]) >= share*flux {
			continue
		}
		t.Flux[i] = 0
		for k := range t.State[i] {
			t.State[i][k] = b.Elements[k].at(0)
		}
	}
	for w := range t.Linkage {
		if math.Abs(t.Linkage[w]) < share*link[w] {
			t.Linkage[w] = 0
		}
		if math.Abs(t.Current[w])*turns[w] < share*mmf {
			t.Current[w] = 0
		}
	}
	return &t
}

// largest gives the largest flux of the network in Wb and its largest mmf, of a winding on a branch or a drop, in A.
func (s *Solution) largest() (flux, mmf float64) {
	for i := range s.Flux {
		flux = max(flux, math.Abs(s.Flux[i]))
		wound := 0.0
		for _, w := range s.net.branches[i].Turns {
			wound += w.Turns * s.Current[w.Winding]
		}
		mmf = max(mmf, math.Abs(wound))
		for _, e := range s.State[i] {
			mmf = max(mmf, math.Abs(e.MMF))
		}
	}
	return flux, mmf
}
