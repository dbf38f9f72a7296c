package induct_test

import (
	"testing"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc/induct"
)

// A mutual inductance of 1e-16 of the self inductances is what a solver leaves; one of 1e-6 is a weak coupling.
func TestRounded(t *testing.T) {
	m, err := induct.NewMatrix([]string{"A", "B", "C"}, mat.NewSymDense(3, []float64{1e-3, 1e-19, 2e-9, 1e-19, 2e-3, 0, 2e-9, 0, 4e-3}))
	if err != nil {
		t.Fatal(err)
	}
	r := m.Rounded()
	if r.Mutual(0, 1) != 0 || r.Mutual(0, 2) != 2e-9 || r.Self(1) != 2e-3 || m.Mutual(0, 1) != 1e-19 {
		t.Errorf("rounded: %v", r.L)
	}
}
