package num

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Least is the end of a least-squares search.
type Least struct {
	X, R        []float64  // parameters and residuals there
	Sum         float64    // sum of squares of R
	J           *mat.Dense // dR/dX there, by differences
	Evaluations int
	Converged   bool
}

// LeastSquares finds parameters x that make the sum of squares of the residuals f(x, r), len(r) = m, smallest near a
// start, by Levenberg's and Marquardt's method with differences for derivatives. The parameters are of order one: their
// step of difference is 1e-6, and no step goes further than 2. It stops when a step promises less than tol of the sum.
//
// Source: D. W. Marquardt, SIAM J. 11 (1963) 431-441; the rule for the damping: H. B. Nielsen, IMM-REP-1999-05, DTU
// (from memory).
func LeastSquares(f func(x, r []float64), start []float64, m, limit int, tol float64) *Least {
	n := len(start)
	l := &Least{X: append([]float64(nil), start...), R: make([]float64, m), J: mat.NewDense(m, n, nil)}
	try, r := make([]float64, n), make([]float64, m)
	eval := func(x, r []float64) float64 {
		f(x, r)
		l.Evaluations++
		sum := 0.0
		for _, v := range r {
			sum += v * v
		}
		return sum
	}
	l.Sum = eval(l.X, l.R)
	a, damped, g := mat.NewSymDense(n, nil), mat.NewSymDense(n, nil), mat.NewVecDense(n, nil)
	damp, grow := 1e-3, 2.0
	for range limit {
		l.differentiate(f, try, r)
		a.SymOuterK(1, l.J.T())
		g.MulVec(l.J.T(), mat.NewVecDense(m, l.R))
		for {
			damped.CopySym(a)
			for i := range n {
				damped.SetSym(i, i, a.At(i, i)*(1+damp)+1e-30)
			}
			var ch mat.Cholesky
			var step mat.VecDense
			promise, longest := 0.0, 0.0
			if ch.Factorize(damped) && ch.SolveVecTo(&step, g) == nil {
				for i := range n {
					try[i] = l.X[i] - step.AtVec(i)
					longest = math.Max(longest, math.Abs(step.AtVec(i)))
					promise += step.AtVec(i) * (damp*a.At(i, i)*step.AtVec(i) + g.AtVec(i))
				}
				if promise <= tol*l.Sum {
					l.Converged = true
					return l
				}
				if longest > 2 {
					damp *= 4 // the model is not known that far away
					continue
				}
				if sum := eval(try, r); sum < l.Sum {
					gain := (l.Sum - sum) / promise
					copy(l.X, try)
					copy(l.R, r)
					l.Sum = sum
					damp *= math.Max(1.0/3, 1-math.Pow(2*gain-1, 3))
					grow = 2
					break
				}
			}
			damp *= grow
			grow *= 2
			if damp > 1e12 {
				l.Converged = true // nothing nearby is smaller
				return l
			}
		}
	}
	return l
}

// differentiate sets J at X by forward differences.
func (l *Least) differentiate(f func(x, r []float64), x, r []float64) {
	copy(x, l.X)
	for j := range x {
		const h = 1e-6
		x[j] = l.X[j] + h
		f(x, r)
		l.Evaluations++
		for i := range r {
			l.J.Set(i, j, (r[i]-l.R[i])/(x[j]-l.X[j]))
		}
		x[j] = l.X[j]
	}
}

// Covariance gives the covariance of the parameters under independent errors of equal size in the residuals,
// (J^T J)^-1 Sum/(m-n); ok is false where the residuals do not determine them.
func (l *Least) Covariance() (c *mat.SymDense, ok bool) {
	m, n := l.J.Dims()
	a := mat.NewSymDense(n, nil)
	a.SymOuterK(1, l.J.T())
	var ch mat.Cholesky
	if m <= n || !ch.Factorize(a) {
		return nil, false
	}
	c = mat.NewSymDense(n, nil)
	if err := ch.InverseTo(c); err != nil {
		if _, conditioned := err.(mat.Condition); !conditioned {
			return nil, false
		}
	}
	c.ScaleSym(l.Sum/float64(m-n), c)
	return c, true
}

// NonNegative gives x >= 0 that makes |A x - b|^2 smallest from the Gram matrix A^T A and A^T b: columns enter one by
// one by their gradient and leave where they would turn negative.
//
// Source: C. L. Lawson, R. J. Hanson, Solving Least Squares Problems, 1974, ch. 23; on the Gram matrix: R. Bro,
// S. de Jong, J. Chemometrics 11 (1997) 393-401 (from memory).
func NonNegative(gram *mat.SymDense, rhs []float64) []float64 {
	n := len(rhs)
	x := make([]float64, n)
	var active []int
	in := make([]bool, n)
	largest := 0.0
	for _, v := range rhs {
		largest = math.Max(largest, math.Abs(v))
	}
	for range 10 * n {
		best, most := -1, 1e-9*largest
		for j := range n {
			if in[j] {
				continue
			}
			w := rhs[j]
			for _, k := range active {
				w -= gram.At(j, k) * x[k]
			}
			if w > most {
				best, most = j, w
			}
		}
		if best < 0 {
			break
		}
		active, in[best] = append(active, best), true
		for len(active) > 0 {
			s, ok := solveActive(gram, rhs, active)
			if !ok { // the new column depends on the others
				in[best] = false
				active = active[:len(active)-1]
				rhs = append([]float64(nil), rhs...)
				rhs[best] = math.Inf(-1) // not again
				break
			}
			t := 1.0
			for i, k := range active {
				if s[i] <= 0 {
					t = math.Min(t, x[k]/(x[k]-s[i]))
				}
			}
			keep := active[:0]
			for i, k := range active {
				x[k] += t * (s[i] - x[k])
				if x[k] > 1e-14 || s[i] > 0 && t == 1 {
					keep = append(keep, k)
				} else {
					x[k], in[k] = 0, false
				}
			}
			active = keep
			if t == 1 {
				break
			}
		}
	}
	return x
}

// solveActive solves the normal equations of the active columns.
func solveActive(gram *mat.SymDense, rhs []float64, active []int) ([]float64, bool) {
	n := len(active)
	a, b := mat.NewSymDense(n, nil), mat.NewVecDense(n, nil)
	for i, p := range active {
		for j := i; j < n; j++ {
			a.SetSym(i, j, gram.At(p, active[j]))
		}
		a.SetSym(i, i, a.At(i, i)*(1+1e-12))
		b.SetVec(i, rhs[p])
	}
	var ch mat.Cholesky
	if !ch.Factorize(a) || ch.Cond() > 1e15 {
		return nil, false
	}
	var x mat.VecDense
	if err := ch.SolveVecTo(&x, b); err != nil {
		if _, conditioned := err.(mat.Condition); !conditioned {
			return nil, false
		}
	}
	return x.RawVector().Data, true
}
