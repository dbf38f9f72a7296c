package induct

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc/phys"
)

// Definiteness tells what kind of network an inductance matrix can belong to.
type Definiteness int

const (
	Positive   Definiteness = iota // every current stores energy: a real part
	Singular                       // some currents store none: an ideal network without leakage
	Indefinite                     // some currents would give energy away: no part is like that
)

// String gives the word.
func (d Definiteness) String() string {
	return [...]string{"positive definite", "singular", "not positive definite"}[d]
}

// Detail tells why a matrix has its definiteness.
type Detail struct {
	Least    float64   // smallest eigenvalue of the matrix scaled to unit diagonal, 1 - |k| for two windings
	Currents []float64 // the currents that belong to it, in A, the largest 1
	Text     string    // one line for a reader
}

// Definite tells whether the matrix is positive definite, singular or neither. An ideal network, whose windings all
// share one path, is singular: that is a finding, not a fault, and every question to the matrix has an answer still.
//
// An eigenvalue of the matrix scaled to unit diagonal within 1e-9 of zero counts as zero.
func (m *Matrix) Definite() (Definiteness, Detail) {
	n := m.Len()
	if n == 0 {
		return Positive, Detail{Text: "no windings"}
	}
	idx := make([]int, n)
	for i := range idx {
		idx[i] = i
		if l := m.Self(i); l < 0 {
			return Indefinite, Detail{Least: -1, Currents: unit(n, i), Text: fmt.Sprintf(
				"not positive definite: the self inductance of %s is negative (%s)", m.Names[i], phys.Format(l, "H"))}
		}
	}
	scaled, scale := m.scaled(idx)
	var eigen mat.EigenSym
	if !eigen.Factorize(scaled, true) {
		return Indefinite, Detail{Least: math.NaN(), Text: "its eigenvalues were not found"}
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	d := Detail{Least: eigen.Values(nil)[0], Currents: make([]float64, n)}
	most := 0.0
	for i := range n {
		d.Currents[i] = vectors.At(i, 0) * scale[i]
		if math.Abs(d.Currents[i]) > math.Abs(most) {
			most = d.Currents[i]
		}
	}
	for i := range d.Currents {
		d.Currents[i] /= most
	}
	switch limit := singular * float64(n); {
	case d.Least < -limit:
		d.Text = "not positive definite: " + m.culprit(d.Currents)
		return Indefinite, d
	case d.Least <= limit:
		d.Text = fmt.Sprintf("singular: the currents %s store no energy, so the network is ideal (windings on one path, no leakage)", m.list(d.Currents))
		return Singular, d
	}
	d.Text = fmt.Sprintf("positive definite: the least eigenvalue of the scaled matrix is %s", phys.FormatDigits(d.Least, "", 3))
	return Positive, d
}

// tightest gives the pair of windings with the largest coupling, whatever its sign.
func (m *Matrix) tightest() (a, b int, k float64) {
	for j := range m.Names {
		for i := range j {
			if c := m.Coupling(i, j); math.Abs(c) > math.Abs(k) {
				a, b, k = i, j, c
			}
		}
	}
	return a, b, k
}

// culprit names the pair whose coupling exceeds 1, or the windings whose couplings cannot all be.
func (m *Matrix) culprit(currents []float64) string {
	if i, j, k := m.tightest(); math.Abs(k) > 1 {
		return fmt.Sprintf("M of %s and %s is %s, more than sqrt(L L) = %s (k = %s)", m.Names[i], m.Names[j],
			phys.Format(m.Mutual(i, j), "H"), phys.Format(math.Sqrt(m.Self(i)*m.Self(j)), "H"), phys.Format(k, ""))
	}
	var names []string
	for i, c := range currents {
		if math.Abs(c) > 1e-3 {
			names = append(names, m.Names[i])
		}
	}
	return fmt.Sprintf("the couplings of %s cannot all be: the currents %s would have negative energy", strings.Join(names, ", "), m.list(currents))
}

// list prints currents: "P 0.2 A, S -1 A".
func (m *Matrix) list(currents []float64) string {
	var words []string
	for i, c := range currents {
		if math.Abs(c) > 1e-6 {
			words = append(words, m.Names[i]+" "+phys.FormatDigits(c, "A", 3))
		}
	}
	return strings.Join(words, ", ")
}

func unit(n, i int) []float64 {
	v := make([]float64, n)
	v[i] = 1
	return v
}
