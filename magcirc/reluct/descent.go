package reluct

import (
	"context"
	"math"
	"sync"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// descent minimises a convex function of y
//
//	E(y) = sum_k G_k(x_k) - c . y,    x_k = x0_k + sum_j z_jk y_j,    dG_k/dx = g_k(x) rising
//
// by Newton's method with a line search on the directional derivative. In the loop form x is the flux of a branch, g
// its drop less its mmf and y the loop fluxes; in the nodal form x is the mmf over an element, g its flux and y the
// node potentials.
//
// Source: the line search on the derivative of a convex function: J. Nocedal, S. J. Wright, Numerical Optimization,
// 2nd ed., Springer 2006, sec. 3.5 (from memory); the symmetric scaling: van der Sluis, Numer. Math. 14 (1969) 14-23
// (from memory).
type descent struct {
	n, m  int       // unknowns, terms
	start []int     // term k touches entries start[k]:start[k+1] of ...
	index []int     // ... the unknown j
	coef  []float64 // ... and its factor z_jk
	c     []float64 // linear part, nil for none
	base  []float64 // constant magnitude that belongs to the size of a term
	shift []float64 // g_k + shift_k is the part whose magnitude belongs to the size of a term

	eval func(x, g, slope []float64) // g_k(x_k) and dg_k/dx_k of all terms

	y, x, g, slope []float64 // state
	reach          []float64 // |x0_k| + sum |z_jk y_j|
	x0             []float64

	row, scale, floor  []float64 // residual per unknown, its size, its rounding floor
	step, dx           []float64
	tryY               []float64
	tryX, tryG, trySlp []float64
	hess, jacobi       []float64

	slab               *[]float64
	iterations, sweeps int
	residual           float64
	worst              int // unknown with the largest residual
}

// slabs holds work space that is free.
var slabs = sync.Pool{New: func() any { return new([]float64) }}

// alloc takes the work space, all zero, from one slab, which release gives back; x0 and the sparse rows are set by the
// caller.
func (d *descent) alloc(n, m int) {
	d.n, d.m = n, m
	d.slab = slabs.Get().(*[]float64)
	if size := n*n + 7*n + 11*m; cap(*d.slab) < size {
		*d.slab = make([]float64, size)
	} else {
		*d.slab = (*d.slab)[:size]
		clear(*d.slab)
	}
	slab := *d.slab
	cut := func(size int) []float64 {
		s := slab[:size:size]
		slab = slab[size:]
		return s
	}
	for _, p := range [...]*[]float64{&d.y, &d.tryY, &d.row, &d.scale, &d.floor, &d.step, &d.jacobi} {
		*p = cut(n)
	}
	for _, p := range [...]*[]float64{&d.x0, &d.x, &d.g, &d.slope, &d.reach, &d.dx, &d.tryX, &d.tryG, &d.trySlp, &d.base, &d.shift} {
		*p = cut(m)
	}
	d.hess = cut(n * n)
}

// release gives the work space back; the descent is of no more use.
func (d *descent) release() { slabs.Put(d.slab) }

// run iterates from y until every row is met to tol or to its rounding floor, then takes one more step for the
// digits that the quadratic convergence gives for it. It reports whether the tolerance was met.
func (d *descent) run(ctx context.Context, tol float64, limit int) (bool, error) {
	d.sum(d.y, d.x)
	d.sweep(d.x, d.g, d.slope)
	for d.iterations = 0; ; d.iterations++ {
		if err := ctx.Err(); err != nil {
			return false, err
		}
		d.measure()
		if d.residual <= tol {
			d.polish()
			return true, nil
		}
		if d.iterations >= limit || math.IsNaN(d.residual) || !d.direction() {
			return false, nil
		}
		d.search()
	}
}

func (d *descent) sweep(x, g, slope []float64) {
	d.eval(x, g, slope)
	d.sweeps++
}

// measure sets the residual of every row, its size and its rounding floor, and the largest relative residual. A row
// that is met to the rounding of its terms counts as met, and so does one that is below nothing (1e-24 of the largest
// term in the network): what a part without a source of its own receives is the rounding of the others.
func (d *descent) measure() {
	const eps, nothing = 4 * 0x1p-52, 0x1p-80
	for j := range d.row {
		d.row[j], d.scale[j], d.floor[j] = 0, 0, 0
		if d.c != nil {
			d.row[j], d.scale[j] = -d.c[j], math.Abs(d.c[j])
		}
	}
	largest := 0.0
	for k := range d.m {
		reach := math.Abs(d.x0[k])
		for p := d.start[k]; p < d.start[k+1]; p++ {
			reach += math.Abs(d.coef[p] * d.y[d.index[p]])
		}
		size := math.Abs(d.g[k]+d.shift[k]) + d.base[k]
		d.reach[k] = reach
		largest = max(largest, size)
		blur := eps * (d.slope[k]*reach + size)
		for p := d.start[k]; p < d.start[k+1]; p++ {
			j, z := d.index[p], d.coef[p]
			d.row[j] += z * d.g[k]
			d.scale[j] += math.Abs(z) * size
			d.floor[j] += math.Abs(z) * blur
		}
	}
	d.residual, d.worst = 0, 0
	for j, r := range d.row {
		if math.Abs(r) <= d.floor[j]+nothing*largest {
			continue
		}
		if rel := math.Abs(r) / d.scale[j]; !(rel <= d.residual) {
			d.residual, d.worst = rel, j
		}
	}
}

// direction sets the Newton step: hess step = -row, scaled to a unit diagonal (Jacobi scaling), and the change dx of
// the terms along it. It reports false when the matrix has no finite factor.
func (d *descent) direction() bool {
	n := d.n
	d.assemble()
	for j := range n {
		diag := d.hess[j*n+j]
		if !(diag > 0) || math.IsInf(diag, 0) {
			return false
		}
		d.jacobi[j] = 1 / math.Sqrt(diag)
	}
	for i := range n {
		h := d.hess[i*n : i*n+i+1]
		for j := range h {
			h[j] *= d.jacobi[i] * d.jacobi[j]
		}
	}
	if !d.factor() {
		return false
	}
	for j := range n {
		d.step[j] = -d.row[j] * d.jacobi[j]
	}
	t := blas64.Triangular{Uplo: blas.Lower, Diag: blas.NonUnit, N: n, Stride: n, Data: d.hess}
	v := blas64.Vector{N: n, Data: d.step, Inc: 1}
	blas64.Trsv(blas.NoTrans, t, v)
	blas64.Trsv(blas.Trans, t, v)
	for j := range n {
		d.step[j] *= d.jacobi[j]
		if !finite(d.step[j]) {
			return false
		}
	}
	d.along()
	return true
}

// assemble sets the lower half of the matrix sum_k slope_k z_k z_k^T.
func (d *descent) assemble() {
	n := d.n
	clear(d.hess)
	for k := range d.m {
		lo, hi := d.start[k], d.start[k+1]
		for p := lo; p < hi; p++ {
			f := d.slope[k] * d.coef[p]
			h := d.hess[d.index[p]*n:]
			for q := lo; q <= p; q++ { // indices of a term rise
				h[d.index[q]] += f * d.coef[q]
			}
		}
	}
}

// factor replaces the scaled matrix by its Cholesky factor. A matrix that rounding has made indefinite is lifted by a
// part of its unit diagonal; the step stays one of descent.
func (d *descent) factor() bool {
	n := d.n
	for lift := 0.0; lift < 1e-3; lift = max(1e-14, 100*lift) {
		if lift > 0 {
			d.assemble()
			for i := range n {
				for j := range i + 1 {
					d.hess[i*n+j] *= d.jacobi[i] * d.jacobi[j]
				}
				d.hess[i*n+i] += lift
			}
		}
		if _, ok := lapack64.Potrf(blas64.Symmetric{Uplo: blas.Lower, N: n, Stride: n, Data: d.hess}); ok {
			return true
		}
	}
	return false
}

// along sets dx, the change of the terms for the step.
func (d *descent) along() {
	for k := range d.m {
		sum := 0.0
		for p := d.start[k]; p < d.start[k+1]; p++ {
			sum += d.coef[p] * d.step[d.index[p]]
		}
		d.dx[k] = sum
	}
}

// search goes t steps along the direction, with t such that the directional derivative p(t) has lost half of p(0) and
// the function has not risen. p rises, so a bracket with Newton steps in t and bisection finds such a t. Where p(0) is
// below its own rounding there is nothing to search and the full step is taken.
func (d *descent) search() {
	p0, blur := 0.0, 0.0
	for j, r := range d.row {
		p0 += r * d.step[j]
		blur += d.floor[j] * math.Abs(d.step[j])
	}
	linear := 0.0
	for j := range d.c {
		linear += d.c[j] * d.step[j]
	}
	t, lo, hi := 1.0, 0.0, math.Inf(1)
	for tries := 1; ; tries++ {
		p, curve := d.try(t, linear)
		if p >= 0.5*p0 && downhill(t, p0, p, curve) || -p0 <= blur || tries == 60 {
			break
		}
		if p < 0 {
			lo = t
		} else {
			hi = t // also where p is not a number: come back
		}
		if hi-lo <= 1e-15*hi {
			break
		}
		next := t - p/curve
		switch {
		case next > lo && next < hi:
			t = min(next, 10*t)
		case math.IsInf(hi, 1):
			t *= 4
		default:
			t = 0.5 * (lo + hi)
		}
	}
	d.take()
}

// downhill says whether t steps lead downhill, from the directional derivative p and its slope at both ends; at the
// start of a Newton step the slope is -p(0). An overshoot p > 0 is safe where p bends upwards, as with laws in the
// loop form: Hermite's rule for the integral of p then says by how much the function falls. Where p rises fast at
// first and then hardly at all, as with laws that saturate in the nodal form, hardly any overshoot is safe.
func downhill(t, p0, p, curve float64) bool {
	if p <= -0.1*p0 {
		return true
	}
	fall := 0.5*(p0+p) - t*(p0+curve)/12 // of the function per step
	return curve*t >= p-p0 && fall <= 0.05*p0
}

// try evaluates the terms at t steps along the direction and gives the directional derivative there and its slope.
// The terms are summed anew: what has been added to them and taken off again in earlier steps would blur small ones.
func (d *descent) try(t, linear float64) (p, curve float64) {
	for j := range d.y {
		d.tryY[j] = d.y[j] + t*d.step[j]
	}
	d.sum(d.tryY, d.tryX)
	d.sweep(d.tryX, d.tryG, d.trySlp)
	p = -linear
	for k, dx := range d.dx {
		p += d.tryG[k] * dx
		curve += d.trySlp[k] * dx * dx
	}
	return p, curve
}

// sum sets the terms x = x0 + z y.
func (d *descent) sum(y, x []float64) {
	for k, sum := range d.x0 {
		for p := d.start[k]; p < d.start[k+1]; p++ {
			sum += d.coef[p] * y[d.index[p]]
		}
		x[k] = sum
	}
}

// take moves to the point that was tried last; a second call moves back.
func (d *descent) take() {
	d.y, d.tryY = d.tryY, d.y
	d.x, d.tryX = d.tryX, d.x
	d.g, d.tryG = d.tryG, d.g
	d.slope, d.trySlp = d.trySlp, d.slope
}

// polish takes one more full step and keeps it where it does not harm.
func (d *descent) polish() {
	before := d.residual
	if d.n == 0 || before == 0 || !d.direction() {
		return
	}
	d.try(1, 0)
	d.take()
	d.measure()
	if d.residual <= before {
		d.iterations++
		return
	}
	d.take()
	d.measure()
}
