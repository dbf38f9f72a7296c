// Package induct answers questions to an inductance matrix: coupling, leakage, phases, equivalent circuits, whether
// it can belong to a real part, and which matrix belongs to a set of meter readings.
//
//	m, err := induct.NewMatrix([]string{"P", "S"}, l)     // l in H, symmetric
//	leak, err := m.Leakage(0, []int{1})                   // seen at P with S shorted
//	c, err := m.EquivalentCircuit(0, 1)                   // series, magnetising, ratio; T form
//	model, err := induct.FromReadings(readings, nil)      // the matrix behind open, shorted and series readings
//
// Inductances in H. A current is positive into the dot; a positive mutual inductance means that currents into both
// dots help each other. A winding that is neither measured nor shorted is open. Resistances play no part.
package induct

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
)

// Matrix is an inductance matrix with the names of its windings: linkage = L current. A value made by hand must have
// as many names as L has rows.
type Matrix struct {
	Names []string
	L     *mat.SymDense // H
}

// NewMatrix gives the matrix of the named windings.
//
// Errors: [magcirc.BadValue] for a count that does not fit and for entries that are no numbers,
// [magcirc.DuplicateName].
func NewMatrix(names []string, l *mat.SymDense) (*Matrix, error) {
	if l == nil || l.SymmetricDim() != len(names) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "inductance matrix", Msg: fmt.Sprintf("%d names do not fit the matrix", len(names))}
	}
	seen := map[string]bool{}
	for i, name := range names {
		if seen[name] {
			return nil, &magcirc.Error{Code: magcirc.DuplicateName, Elem: "inductance matrix", Msg: fmt.Sprintf("winding %s stands twice", name)}
		}
		seen[name] = true
		for j := range names {
			if v := l.At(i, j); math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "inductance matrix", Unit: "H", Got: v,
					Msg: fmt.Sprintf("the entry of %s and %s is no number", name, names[j])}
			}
		}
	}
	return &Matrix{append([]string(nil), names...), l}, nil
}

// Len is the number of windings.
func (m *Matrix) Len() int { return len(m.Names) }

// Index gives the place of a winding. Errors: [magcirc.UnknownName], with the names there are.
func (m *Matrix) Index(name string) (int, error) {
	for i, n := range m.Names {
		if n == name {
			return i, nil
		}
	}
	return 0, &magcirc.Error{Code: magcirc.UnknownName, Elem: "inductance matrix",
		Msg: fmt.Sprintf("there is no winding %q; it has %s", name, strings.Join(m.Names, ", "))}
}

// Self gives the self inductance of winding i in H, the others open; NaN where there is no winding i.
func (m *Matrix) Self(i int) float64 { return m.Mutual(i, i) }

// Mutual gives the mutual inductance of windings i and j in H, positive where currents into both dots help each
// other; NaN where there is no such winding.
func (m *Matrix) Mutual(i, j int) float64 {
	if !m.has(i) || !m.has(j) {
		return math.NaN()
	}
	return m.L.At(i, j)
}

// Coupling gives the coupling factor of windings i and j,
//
//	k = M/sqrt(Li Lj)
//
// with the sign of M; NaN where a self inductance is not positive.
func (m *Matrix) Coupling(i, j int) float64 {
	return m.Mutual(i, j) / math.Sqrt(m.Self(i)*m.Self(j))
}

// Leakage gives the inductance in H seen at winding i with the given windings shorted and all others open.
//
//	L = Lii - Lis Lss^-1 Lsi
//
// It is the least energy that a current of 1 A in winding i can have when the shorted windings carry any currents,
// times two; so it exists for an ideal network, whose Lss may be singular. A difference below the rounding of the
// matrix is given as 0.
//
// Errors: [magcirc.UnknownName] for a winding that is not there, [magcirc.WrongUse] where winding i is itself
// shorted, [magcirc.NotPositive] where the shorted windings' matrix is indefinite.
func (m *Matrix) Leakage(i int, shorted []int) (float64, error) {
	if err := m.check(append([]int{i}, shorted...)); err != nil {
		return 0, err
	}
	for _, s := range shorted {
		if s == i {
			return 0, &magcirc.Error{Code: magcirc.WrongUse, Elem: "winding " + m.Names[i], Msg: "it cannot be measured while it is shorted"}
		}
	}
	l, _, err := m.seen([]term{{i, 1}}, shorted)
	return l, err
}

// InPhase gives the inductance in H that each winding shows when all carry the same current: the mean over the
// windings of linkage per current. No index stands for all windings.
//
//	L = (1/n) sum_ij Lij     two equal windings: L + M
func (m *Matrix) InPhase(windings ...int) (float64, error) {
	idx, err := m.all(windings)
	if err != nil {
		return 0, err
	}
	_, sum := m.sums(idx)
	return sum / float64(len(idx)), nil
}

// PerPhase gives the inductance in H that each winding shows for balanced currents, whose sum is zero at any time:
// the mean over all such sets. No index stands for all windings.
//
//	L = (1/n) sum_i Lii - (1/(n(n-1))) sum_i/=j Lij     two equal windings: L - M
//
// Valid: exact for a symmetric arrangement; else a mean, while the phases differ.
// Errors: [magcirc.WrongUse] for a single winding, which has no balanced current.
func (m *Matrix) PerPhase(windings ...int) (float64, error) {
	idx, err := m.all(windings)
	if err != nil {
		return 0, err
	}
	if len(idx) < 2 {
		return 0, &magcirc.Error{Code: magcirc.WrongUse, Elem: "inductance matrix", Msg: "one winding alone carries no balanced currents", Hint: "name two or more"}
	}
	trace, sum := m.sums(idx)
	n := float64(len(idx))
	return (trace - sum/n) / (n - 1), nil
}

// Series gives the inductance in H of windings in series: each with its sign, +1 carried from the dot, -1 towards it.
//
//	L = sum_ij si sj Lij
func (m *Matrix) Series(windings []int, signs []float64) (float64, error) {
	terms, err := m.terms(windings, signs)
	if err != nil {
		return 0, err
	}
	l, _, err := m.seen(terms, nil)
	return l, err
}

// Parallel gives the inductance in H of windings in parallel: each with its sign, +1 with its dot at the common
// terminal, -1 with its end there.
//
//	1/L = s' L^-1 s     two windings aiding: (L1 L2 - M^2)/(L1 + L2 - 2 M)
//
// Errors: as [Matrix.Leakage], and [magcirc.NoSolution] where perfectly coupled windings of different voltage are
// joined: the network is a short circuit.
func (m *Matrix) Parallel(windings []int, signs []float64) (float64, error) {
	terms, err := m.terms(windings, signs)
	if err != nil {
		return 0, err
	}
	p, err := m.project(windings)
	if err != nil {
		return 0, err
	}
	s := mat.NewVecDense(len(terms), nil)
	for k, t := range terms {
		s.SetVec(k, t.sign)
	}
	i, missed := p.solve(s)
	if missed > 1e-7 {
		return 0, &magcirc.Error{Code: magcirc.NoSolution, Elem: "inductance matrix",
			Msg: "the windings are perfectly coupled and differ in voltage; in parallel they short each other", Hint: "an ideal network has no leakage to limit the current"}
	}
	return 1 / mat.Dot(s, i), nil
}

func (m *Matrix) has(i int) bool {
	return i >= 0 && i < len(m.Names) && m.L != nil && i < m.L.SymmetricDim()
}

func (m *Matrix) check(windings []int) error {
	for _, i := range windings {
		if !m.has(i) {
			return &magcirc.Error{Code: magcirc.UnknownName, Elem: "inductance matrix", Got: float64(i),
				Msg: fmt.Sprintf("there is no winding number %d; it has %d", i+1, m.Len())}
		}
	}
	return nil
}

// all gives the checked indices, or those of all windings for none.
func (m *Matrix) all(windings []int) ([]int, error) {
	if len(windings) == 0 {
		for i := range m.Names {
			windings = append(windings, i)
		}
	}
	return windings, m.check(windings)
}

// sums gives the trace and the sum of all entries of the named part of the matrix.
func (m *Matrix) sums(idx []int) (trace, sum float64) {
	for _, i := range idx {
		trace += m.L.At(i, i)
		for _, j := range idx {
			sum += m.L.At(i, j)
		}
	}
	return trace, sum
}
