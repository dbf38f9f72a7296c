package num_test

import (
	"math"
	"math/rand"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"ampturn/magcirc/internal/num"
)

// The weights against Gauss's rule on 200 panels.
func TestPhi(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := math.Pow(10, rapid.Float64Range(-8, 1.8).Draw(t, "lg r"))
		e, p1, p2, p3 := num.Phi(r)
		got := [4]float64{e, p1, p2, p3}
		want := [4]float64{math.Exp(-r)}
		for k := range 3 {
			for i := range 200 {
				want[k+1] += gauss5(func(s float64) float64 { return math.Pow(s, float64(k)) * math.Exp(-r*(1-s)) }, float64(i)/200, float64(i+1)/200)
			}
		}
		for k := range got {
			if math.Abs(got[k]-want[k]) > 1e-12*want[k] {
				t.Fatalf("r %v, weight %d: %v, want %v", r, k, got[k], want[k])
			}
		}
	})
	if e, p1, p2, p3 := num.Phi(0); e != 1 || p1 != 1 || p2 != 0.5 || math.Abs(p3-1.0/3) > 1e-16 {
		t.Errorf("at zero %v, %v, %v, %v", e, p1, p2, p3)
	}
}

// A decay with noise: the search finds the same as the normal equations at its end, and the covariance holds the truth.
func TestLeastSquares(t *testing.T) {
	inside, trials := 0, 200
	r := rand.New(rand.NewSource(1))
	for range trials {
		const m = 60
		y := make([]float64, m)
		for i := range y {
			y[i] = 2*math.Exp(-1.3*float64(i)/20) + 0.5 + 0.02*r.NormFloat64()
		}
		l := num.LeastSquares(func(x, res []float64) {
			for i := range res {
				res[i] = x[0]*math.Exp(-x[1]*float64(i)/20) + x[2] - y[i]
			}
		}, []float64{1, 1, 0}, m, 100, 1e-14)
		if !l.Converged {
			t.Fatal("not converged")
		}
		g := mat.NewVecDense(3, nil)
		g.MulVec(l.J.T(), mat.NewVecDense(m, l.R))
		if n := mat.Norm(g, 2); n > 1e-4 { // the differences know the slope to 1e-6
			t.Fatalf("gradient %v", n)
		}
		c, ok := l.Covariance()
		if !ok {
			t.Fatal("no covariance")
		}
		if math.Abs(l.X[1]-1.3) < 1.96*math.Sqrt(c.At(1, 1)) {
			inside++
		}
	}
	if share := float64(inside) / float64(trials); share < 0.9 || share > 0.99 { // 95 percent
		t.Errorf("%v of the intervals hold the truth", share)
	}
}

// The solution meets the conditions of Karush, Kuhn and Tucker: x >= 0, gradient zero where x > 0 and not negative where
// x = 0.
func TestNonNegative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, m := rapid.IntRange(1, 15).Draw(t, "n"), rapid.IntRange(15, 40).Draw(t, "m")
		r := rand.New(rand.NewSource(int64(rapid.IntRange(0, 1e9).Draw(t, "seed"))))
		a, b := mat.NewDense(m, n, nil), mat.NewVecDense(m, nil)
		for i := range m {
			for j := range n {
				a.Set(i, j, r.NormFloat64())
			}
			b.SetVec(i, r.NormFloat64())
		}
		gram := mat.NewSymDense(n, nil)
		gram.SymOuterK(1, a.T())
		rhs := mat.NewVecDense(n, nil)
		rhs.MulVec(a.T(), b)
		x := num.NonNegative(gram, rhs.RawVector().Data)
		for j := range n {
			g := -rhs.AtVec(j)
			for k := range n {
				g += gram.At(j, k) * x[k]
			}
			if x[j] < 0 || x[j] > 0 && math.Abs(g) > 1e-8 || x[j] == 0 && g < -1e-7 {
				t.Fatalf("x[%d] = %v with gradient %v", j, x[j], g)
			}
		}
	})
}
