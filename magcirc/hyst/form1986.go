package hyst

import (
	"math"

	"ampturn/magcirc/internal/num"
)

// With chi = -D/k' (k' = k as given, moving upwards, D = M - Man <= 0) and a = Man'
//
//	dM/dx = [chi + c a q]/[(1+c) q + alpha chi + alpha c a q],   q = 1 - alpha chi
//
// which is the form of [NewJilesAtherton] without its pole. For alpha = 0 this is Form1992 with k (1+c) for k and
// c/(1+c) for c; what alpha adds is a small smooth term N beside the linear decay:
//
//	dD/dx = -D/(k (1+c)) + N(x, D)

// tolerance1986 is the difference in D, in Ms, that the formulas of fourth and third order may have over a step; the
// error of the fourth is a hundredth of it or less.
const tolerance1986 = 2e-7

// weights of one step of the exponential Runge-Kutta method over h.
type weights struct{ half, p1half, e, p1, w0, wm, w1, h float64 }

func newWeights(h, k float64) weights {
	e, p1, p2, p3 := num.Phi(h / k)
	half, p1half, _, _ := num.Phi(h / (2 * k))
	p3 /= 2 // of s^2/2
	return weights{half: half, p1half: p1half * h / 2, e: e, p1: p1 * h,
		w0: h * (p1 - 3*p2 + 4*p3), wm: h * (2*p2 - 4*p3), w1: h * (4*p3 - p2), h: h}
}

// prepare1986 sets the weights of every whole cell and the reversible magnetisation.
func (j *JilesAtherton) prepare1986() {
	j.etd, j.rev = make([]weights, last+1), make([]cell, last+1)
	r := 0.0
	slope := func(a float64) float64 { return j.c * a / (1 + j.alpha*j.c*a) } // c is c/(1+c) here
	for i := nodes + 1; i <= cells; i++ {
		z0, h := langevin[i].z0, langevin[i+1].z0-langevin[i].z0
		j.etd[i] = newWeights(h, j.k)
		j.etd[mirror(i)] = j.etd[i]
		gain := 0.0
		for q, t := range gaussNode {
			_, a := at(i, z0+h*(1+t)/2)
			gain += gaussWeight[q] * h / 2 * slope(a)
		}
		s0, s1 := slope(langevin[i].c1), slope(langevin[i+1].c1)
		j.rev[i] = hermite(z0, h, r, r+gain, s0, s1)
		j.rev[mirror(i)] = hermite(-z0-h, h, -r-gain, -r, s1, s0)
		r += gain
	}
	j.rev[last] = cell{l: r}
}

// total gives dM/dx of Form1986 for d = M - Man <= 0 and a = Man'.
func (j *JilesAtherton) total(d, a float64) float64 {
	// Numerator and denominator are divided by 1+c: j.k is k (1+c)/a, j.c is c/(1+c).
	chi := math.Max(0, -d) / j.k
	q := 1 - j.alpha*chi*(1+j.p.C)
	ca := j.c * a * q
	return (chi + ca) / (q + j.alpha*(chi+ca))
}

// excess is N(x, D): what the slope of D has beside its linear decay.
func (j *JilesAtherton) excess(i int, x, d float64) float64 {
	_, a := at(i, x)
	d = math.Min(d, 0)
	return j.total(d, a) - a + d/j.k
}

// step takes d from x over the step of w in cell i by the method of fourth order, and gives the difference to one of
// third order.
func (j *JilesAtherton) step(i int, x, d float64, w *weights) (d1, miss float64) {
	n0 := j.excess(i, x, d)
	a := d*w.half + w.p1half*n0
	na := j.excess(i, x+w.h/2, a)
	b := d*w.half + w.p1half*na
	nb := j.excess(i, x+w.h/2, b)
	c := a*w.half + w.p1half*(2*nb-n0)
	nc := j.excess(i, x+w.h, c)
	n3 := j.excess(i, x+w.h, d*w.e+w.p1*(2*na-n0))
	head := d*w.e + w.w0*n0
	d1 = head + w.wm*(na+nb) + w.w1*nc
	return d1, math.Abs(w.wm*(nb-na) + w.w1*(nc-n3))
}

// slide1986 takes d from x to x1 on the way to end. Where the step to the end misses the tolerance, the way is
// halved: the places of halving depend on where it starts and may end, never on x1, so that d is continuous in x1.
func (j *JilesAtherton) slide1986(i int, x, d, end, x1 float64) float64 {
	if x1 == x {
		return d
	}
	if i == first || i == last {
		return j.slide1992(i, x, d, x1)
	}
	if x == langevin[i].z0 && end == langevin[i+1].z0 {
		if d1, miss := j.step(i, x, d, &j.etd[i]); miss <= tolerance1986 {
			if x1 == end {
				return d1
			}
			w := newWeights(x1-x, j.k)
			d1, _ = j.step(i, x, d, &w)
			return d1
		}
	}
	return j.halve(i, x, d, end, x1, 0)
}

func (j *JilesAtherton) halve(i int, x, d, end, x1 float64, depth int) float64 {
	w := newWeights(end-x, j.k)
	d1, miss := j.step(i, x, d, &w)
	if miss <= tolerance1986 || depth == 12 {
		if x1 == end {
			return d1
		}
		w = newWeights(x1-x, j.k)
		d1, _ = j.step(i, x, d, &w)
		return d1
	}
	mid := x + (end-x)/2
	if x1 <= mid {
		return j.halve(i, x, d, mid, x1, depth+1)
	}
	d = j.halve(i, x, d, mid, mid, depth+1)
	return j.halve(i, mid, d, end, x1, depth+1)
}
