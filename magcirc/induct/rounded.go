package induct

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Rounded returns the matrix of a solved network without the mutual inductances that only rounding made: those with
// |M| below 1e-9 sqrt(Li Lj) become 0, for a network is not solved any further.
func (m *Matrix) Rounded() *Matrix {
	l := mat.NewSymDense(m.Len(), nil)
	l.CopySym(m.L)
	for i := range m.Len() {
		for j := range i {
			if math.Abs(m.L.At(i, j)) < singular*math.Sqrt(m.L.At(i, i)*m.L.At(j, j)) {
				l.SetSym(i, j, 0)
			}
		}
	}
	return &Matrix{m.Names, l}
}
