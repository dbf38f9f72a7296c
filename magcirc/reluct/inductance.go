package reluct

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
)

// Incremental gives the incremental inductances d lambda_v / d i_w in H at the solution: all windings taken as driven
// by current, also those whose linkage was prescribed; windings in order of their indices.
//
//	L = M K^-1 M^T,   K = B R B^T,   M = N B^T
//
// with B the loop matrix, R the differential reluctances dU/dphi of the branches and N the turns. The matrix is
// symmetric and has no negative eigenvalue; it is singular where windings couple without leakage.
//
// Valid: small signals about the state, at frequencies at which no eddy currents flow.
// Errors: [magcirc.NoConvergence] when a loop has no finite reluctance.
// Source: differentiation of the loop equations of Solve.
func (s *Solution) Incremental() (*mat.SymDense, error) {
	return s.inductance(func(p *series, phi float64) float64 {
		_, r := p.drop(phi)
		return r
	})
}

// Secant gives the secant inductances in H: those of the linear network in which every leg is replaced by its
// reluctance U/phi at the solution (frozen permeability). For a single winding without magnets L = lambda/i.
//
// Valid: as a description of this one state; with magnets the linkages are L i plus what the magnets contribute.
// Errors: as Incremental; [magcirc.NoSolution] where flux remains in a leg that the field strength there does not drive, so
// that U/phi is no reluctance.
// Source: frozen permeability: J. A. Walker et al., IEEE Trans. Magn. 41 (2005) 3946-3948 (from memory).
func (s *Solution) Secant() (*mat.SymDense, error) {
	for i := range s.State {
		for k, x := range s.State[i] {
			if s.net.branches[i].Elements[k].Kind == Leg && remains(x) {
				return nil, &magcirc.Error{Code: magcirc.NoSolution, Elem: s.net.part(i, k), Quantity: "field strength", Unit: "A/m", Got: x.H,
					Msg:  "has no secant permeability: its field strength does not drive its " + show(x.B, "T"),
					Hint: "ask for the incremental inductance"}
			}
		}
	}
	return s.inductance((*series).secant)
}

func (s *Solution) inductance(reluctance func(p *series, phi float64) float64) (*mat.SymDense, error) {
	n := s.net
	nw := len(s.Current)
	if nw == 0 {
		return &mat.SymDense{}, nil
	}
	parts := n.compile()
	t := n.cut(parts, nil)
	r := make([]float64, len(parts))
	for i := range parts {
		if t.carry[i] {
			r[i] = reluctance(&parts[i], s.Flux[i])
		}
	}
	result := mat.NewSymDense(nw, nil)
	nc := len(t.chord)
	if nc == 0 {
		return result, nil
	}
	k, scale, ok := t.loopMatrix(r)
	var ch mat.Cholesky
	if !ok || !ch.Factorize(k) {
		return nil, &magcirc.Error{Code: magcirc.NoConvergence, Elem: n.circuit(), Msg: "the reluctances of its loops have no finite inverse", Hint: "check lengths, areas and permeances"}
	}
	m := mat.NewDense(nw, nc, nil)
	for w := range nw {
		row := m.RawRowView(w)
		t.link(w, row)
		for j := range row {
			row[j] *= scale[j]
		}
	}
	var half mat.Dense // C^-T M^T with K = C^T C
	var upper mat.TriDense
	ch.UTo(&upper)
	if err := half.Solve(upper.T(), m.T()); err != nil {
		if _, warned := err.(mat.Condition); !warned {
			return nil, err
		}
	}
	result.SymOuterK(1, half.T())
	return result, nil
}

// loopMatrix gives B R B^T scaled to a unit diagonal, and the scale of each loop.
func (t *topology) loopMatrix(r []float64) (k *mat.SymDense, scale []float64, ok bool) {
	nc, nb := len(t.chord), len(r)
	k, scale = mat.NewSymDense(nc, nil), make([]float64, nc)
	for i := range nc {
		for j := i; j < nc; j++ {
			sum := 0.0
			for e, z := range t.loop[i*nb : i*nb+nb] {
				if z != 0 {
					sum += z * t.loop[j*nb+e] * r[e]
				}
			}
			k.SetSym(i, j, sum)
		}
		scale[i] = 1 / math.Sqrt(k.At(i, i))
		if !(scale[i] > 0) || math.IsInf(scale[i], 0) {
			return nil, nil, false
		}
	}
	for i := range nc {
		for j := i; j < nc; j++ {
			k.SetSym(i, j, k.At(i, j)*scale[i]*scale[j])
		}
	}
	return k, scale, true
}
