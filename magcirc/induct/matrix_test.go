package induct_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"ampturn/magcirc"
	"ampturn/magcirc/induct"
)

// two gives the matrix of two windings.
func two(t testing.TB, l1, l2, m float64) *induct.Matrix {
	t.Helper()
	x, err := induct.NewMatrix([]string{"P", "S"}, mat.NewSymDense(2, []float64{l1, m, m, l2}))
	if err != nil {
		t.Fatal(err)
	}
	return x
}

func near(t interface {
	Helper()
	Errorf(string, ...any)
}, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*math.Abs(want)) {
		t.Errorf("%s: %v, want %v", what, got, want)
	}
}

// value takes the result of a question that must have an answer.
func value(l float64, err error) float64 {
	if err != nil {
		return math.NaN()
	}
	return l
}

func TestBookCoils(t *testing.T) {
	// Guru, Hiziroglu, Electric Machinery and Transformers, 3rd ed. 2004, ex. 2.11 p. 106 and 2.12 p. 108.
	m := two(t, 1.6, 0.1, 0.34)
	near(t, "series aiding", value(m.Series([]int{0, 1}, []float64{1, 1})), 2.38, 1e-12)
	near(t, "series opposing", value(m.Series([]int{0, 1}, []float64{1, -1})), 1.02, 1e-12)
	near(t, "k", m.Coupling(0, 1), 0.85, 1e-12)
	// Printed 43.5 and 18.7 mH; in full precision 0.0444/1.02 and 0.0444/2.38 H.
	near(t, "parallel aiding", value(m.Parallel([]int{0, 1}, []float64{1, 1})), 0.0444/1.02, 1e-12)
	near(t, "parallel opposing", value(m.Parallel([]int{0, 1}, []float64{1, -1})), 0.0444/2.38, 1e-12)
	// Hambley, Electrical Engineering, 5th ed. 2011, ex. 15.8: N1 100, N2 200 on 1e7 1/H: 1, 4, 2 mH. The windings
	// share one path: the matrix is singular and every question has an answer.
	ideal := two(t, 100*100/1e7, 200*200/1e7, 100*200/1e7)
	near(t, "L1", ideal.Self(0), 1e-3, 1e-12)
	near(t, "L2", ideal.Self(1), 4e-3, 1e-12)
	near(t, "M", ideal.Mutual(0, 1), 2e-3, 1e-12)
}

func TestIdealNetworkIsAFinding(t *testing.T) {
	turns := []float64{100, 200, 35}
	l := mat.NewSymDense(3, nil)
	for i := range 3 {
		for j := range 3 {
			l.SetSym(i, j, turns[i]*turns[j]/1e7)
		}
	}
	m, err := induct.NewMatrix([]string{"P", "S", "B"}, l)
	if err != nil {
		t.Fatal(err)
	}
	kind, d := m.Definite()
	if kind != induct.Singular || !strings.Contains(d.Text, "store no energy, so the network is ideal") {
		t.Errorf("%v: %s", kind, d.Text)
	}
	for _, shorted := range [][]int{{1}, {2}, {1, 2}} {
		if leak, err := m.Leakage(0, shorted); err != nil || leak != 0 {
			t.Errorf("shorted %v: %v, %v; want 0", shorted, leak, err)
		}
	}
	c, err := m.EquivalentCircuit(0, 1)
	if err != nil || c.Series != 0 || math.Abs(c.Ratio-0.5) > 1e-12 || math.Abs(c.Magnetising-1e-3) > 1e-15 {
		t.Errorf("%+v, %v", c, err)
	}
	_, err = m.Parallel([]int{0, 1}, []float64{1, 1})
	var e *magcirc.Error
	if !errors.As(err, &e) || e.Code != magcirc.NoSolution {
		t.Errorf("1:2 in parallel: %v", err)
	}
	same := two(t, 1e-3, 1e-3, 1e-3) // equal windings on one path in parallel act as one
	near(t, "equal in parallel", value(same.Parallel([]int{0, 1}, []float64{1, 1})), 1e-3, 1e-12)
}

// Three-leg inductor of two phases: self 6 uH, k -0.6. Equal currents see L + M = 2.4 uH, opposite L - M = 9.6 uH
// (closed form of the symmetric pair).
func TestPhases(t *testing.T) {
	m := two(t, 6e-6, 6e-6, -3.6e-6)
	near(t, "in phase", value(m.InPhase()), 2.4e-6, 1e-12)
	near(t, "per phase", value(m.PerPhase(0, 1)), 9.6e-6, 1e-12)
	// Three symmetric phases: L - M and L + 2 M.
	l := mat.NewSymDense(3, []float64{5, -2, -2, -2, 5, -2, -2, -2, 5})
	three, _ := induct.NewMatrix([]string{"A", "B", "C"}, l)
	near(t, "three per phase", value(three.PerPhase()), 7, 1e-12)
	near(t, "three in phase", value(three.InPhase()), 1, 1e-12)
	if _, err := three.PerPhase(1); err == nil {
		t.Error("one phase has no balanced currents")
	}
}

// draw makes a positive definite matrix of n windings: a network of couplings, with turns over two decades.
func draw(t *rapid.T, n int) *induct.Matrix {
	g := mat.NewDense(n, n+2, nil)
	for i := range n {
		turns := math.Pow(10, rapid.Float64Range(0, 2).Draw(t, "lg N"))
		g.Set(i, 0, turns*math.Sqrt(1e-6)) // the path that all share
		for j := 1; j < n+2; j++ {
			g.Set(i, j, turns*1e-3*rapid.Float64Range(-0.5, 0.5).Draw(t, "g"))
		}
	}
	l := mat.NewSymDense(n, nil)
	var full mat.Dense
	full.Mul(g, g.T())
	for i := range n {
		for j := i; j < n; j++ {
			l.SetSym(i, j, full.At(i, j))
		}
	}
	for i := range n { // and some leakage of its own for each
		l.SetSym(i, i, l.At(i, i)*(1+math.Pow(10, rapid.Float64Range(-4, -1).Draw(t, "lg leak"))))
	}
	names := []string{"P", "S", "B", "T", "U"}[:n]
	m, err := induct.NewMatrix(names, l)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func TestLeakageAgainstClosedForms(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := draw(t, 3)
		l11, l22, l33 := m.Self(0), m.Self(1), m.Self(2)
		a, b, c := m.Mutual(0, 1), m.Mutual(0, 2), m.Mutual(1, 2)
		near(t, "two windings", value(m.Leakage(0, []int{1})), l11*(1-a*a/(l11*l22)), 1e-9)
		// det L / det of the shorted part
		det := l11*(l22*l33-c*c) - a*(a*l33-b*c) + b*(a*c-b*l22)
		near(t, "three windings", value(m.Leakage(0, []int{1, 2})), det/(l22*l33-c*c), 1e-8)
		near(t, "open", value(m.Leakage(0, nil)), l11, 1e-15)
	})
}

func TestLeakageAgainstDenseInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 5).Draw(t, "n")
		m := draw(t, n)
		i := rapid.IntRange(0, n-1).Draw(t, "i")
		var others []int
		for j := range n {
			if j != i {
				others = append(others, j)
			}
		}
		// All others shorted: the inverse matrix's diagonal is the reciprocal.
		var inverse mat.Dense
		if err := inverse.Inverse(m.L); err != nil {
			t.Skip(err.Error())
		}
		got := value(m.Leakage(i, others))
		near(t, "leakage", got, 1/inverse.At(i, i), 1e-8)
		// A further short never raises what is seen.
		if fewer := value(m.Leakage(i, others[1:])); fewer < got*(1-1e-9) {
			t.Errorf("with one short less %v, with all %v", fewer, got)
		}
		// All in parallel: the sum of the entries of the inverse is the reciprocal.
		all, signs, sum := make([]int, n), make([]float64, n), 0.0
		for a := range n {
			all[a], signs[a] = a, 1
			for b := range n {
				sum += inverse.At(a, b)
			}
		}
		near(t, "parallel", value(m.Parallel(all, signs)), 1/sum, 1e-7)
	})
}

// Windings of 50 and 7 turns on one path have no leakage: what rounding leaves of 1/R 7^2 - 1/R 50 7 7/50 is no inductance.
func TestIdealCircuitHasNoLeakage(t *testing.T) {
	for _, p := range []float64{8.2247e-7, 3.1e-7, 1.7e-6} {
		l := mat.NewSymDense(2, []float64{2500 * p, -350 * p, -350 * p, 49 * p})
		m, err := induct.NewMatrix([]string{"N", "Z"}, l)
		if err != nil {
			t.Fatal(err)
		}
		c, err := m.EquivalentCircuit(0, 1)
		if err != nil {
			t.Fatal(err)
		}
		if c.Series != 0 || c.T.First != 0 || c.T.Second != 0 {
			t.Errorf("permeance %g H: series %g, T form %g and %g H", p, c.Series, c.T.First, c.T.Second)
		}
	}
}

// Both forms of the circuit are the matrix.
func TestEquivalentCircuits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := draw(t, 2)
		if rapid.Bool().Draw(t, "dots oppose") {
			l := mat.NewSymDense(2, []float64{m.Self(0), -m.Mutual(0, 1), -m.Mutual(0, 1), m.Self(1)})
			m = &induct.Matrix{Names: m.Names, L: l}
		}
		c, err := m.EquivalentCircuit(0, 1)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "Lp", c.Series+c.Magnetising, m.Self(0), 1e-12)
		near(t, "M", c.Magnetising/c.Ratio, m.Mutual(0, 1), 1e-12)
		near(t, "Ls", c.Magnetising/(c.Ratio*c.Ratio), m.Self(1), 1e-12)
		ratio := rapid.Float64Range(0.1, 10).Draw(t, "ratio")
		own, err := m.TForm(0, 1, ratio)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range []induct.TForm{c.T, own} {
			near(t, "T: Lp", f.First+f.Magnetising, m.Self(0), 1e-11)
			near(t, "T: M", f.Magnetising/f.Ratio, m.Mutual(0, 1), 1e-11)
			near(t, "T: Ls", f.Second+f.Magnetising/(f.Ratio*f.Ratio), m.Self(1), 1e-9)
		}
		if k := math.Abs(m.Coupling(0, 1)); math.Abs(c.T.First-(1-k)*m.Self(0)) > 1e-9*m.Self(0) {
			t.Errorf("T: %v, want %v", c.T.First, (1-k)*m.Self(0))
		}
	})
}

func TestDefinite(t *testing.T) {
	if kind, d := two(t, 1e-3, 4e-3, 1.9e-3).Definite(); kind != induct.Positive || math.Abs(d.Least-0.05) > 1e-12 {
		t.Errorf("%v %+v", kind, d)
	}
	kind, d := two(t, 1e-3, 4e-3, 2.06e-3).Definite()
	if kind != induct.Indefinite || d.Text != "not positive definite: M of P and S is 2.06 mH, more than sqrt(L L) = 2 mH (k = 1.03)" {
		t.Errorf("%v %s", kind, d.Text)
	}
	// Couplings that are each possible but not together: eigenvalue 1 - 2*0.6 of the cycle with one sign turned.
	l := mat.NewSymDense(3, []float64{1, 0.6, 0.6, 0.6, 1, -0.6, 0.6, -0.6, 1})
	m, _ := induct.NewMatrix([]string{"A", "B", "C"}, l)
	kind, d = m.Definite()
	if kind != induct.Indefinite || math.Abs(d.Least+0.2) > 1e-12 || !strings.HasPrefix(d.Text, "not positive definite: the couplings of A, B, C cannot all be") {
		t.Errorf("%v %+v", kind, d)
	}
	if _, err := m.Leakage(0, []int{1, 2}); err != nil {
		t.Errorf("B and C alone are possible: %v", err)
	}
	if kind, d := two(t, -1e-3, 1, 0).Definite(); kind != induct.Indefinite || !strings.Contains(d.Text, "self inductance of P is negative") {
		t.Errorf("%v %s", kind, d.Text)
	}
}

func TestQuestionsRefused(t *testing.T) {
	m := two(t, 1, 1, 0)
	rows := []struct {
		ask  func() error
		line string
	}{
		{func() error { _, err := m.Leakage(2, nil); return err }, "inductance matrix: there is no winding number 3; it has 2"},
		{func() error { _, err := m.Leakage(0, []int{0}); return err }, "winding P: it cannot be measured while it is shorted"},
		{func() error { _, err := m.EquivalentCircuit(0, 1); return err }, "windings P and S: they are not coupled, so they have no common equivalent circuit"},
		{func() error { _, err := m.EquivalentCircuit(1, 1); return err }, "windings S and S: an equivalent circuit wants two windings"},
		{func() error { _, err := m.Index("T"); return err }, `inductance matrix: there is no winding "T"; it has P, S`},
		{func() error { _, err := m.Series([]int{0, 1}, []float64{1}); return err }, "inductance matrix: 2 windings with 1 signs"},
		{func() error { _, err := induct.NewMatrix([]string{"P"}, mat.NewSymDense(2, nil)); return err }, "inductance matrix: 1 names do not fit the matrix"},
		{func() error {
			_, err := induct.NewMatrix([]string{"P", "P"}, mat.NewSymDense(2, nil))
			return err
		}, "inductance matrix: winding P stands twice"},
	}
	for _, r := range rows {
		if err := r.ask(); err == nil || err.Error() != r.line {
			t.Errorf("\n got %v\nwant %s", err, r.line)
		}
	}
	if !math.IsNaN(m.Self(7)) || !math.IsNaN(m.Coupling(0, -1)) {
		t.Error("a winding that is not there has no inductance")
	}
}
