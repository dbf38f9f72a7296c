package hyst

import "math"

// reversible gives the reversible magnetisation R and dR/dx at x in cell i: after a turning point M moves along it.
//
//	Form1992: R = c Man    Form1986: dR/dx = c Man'/(1 + c + alpha c Man')
func (j *JilesAtherton) reversible(i int, x float64) (r, slope float64) {
	if j.rev == nil || i == first || i == last {
		l, a := at(i, x)
		if j.rev == nil {
			return j.c * l, j.c * a
		}
		edge := &j.rev[last]
		if i == first {
			return -edge.l + j.c*(l+langevin[last].l), j.c * a
		}
		return edge.l + j.c*(l-langevin[last].l), j.c * a
	}
	c := &j.rev[i]
	v := x - langevin[i].z0
	return c.l + v*(c.c1+v*(c.c2+v*c.c3)), c.c1 + v*(2*c.c2+3*v*c.c3)
}

// guard goes upwards with M above Man, reversibly: m = m0 + R - R0, until the goal (done) or until M meets Man, at which
// it gives the place where it does.
func (j *JilesAtherton) guard(x, m0 float64, i int, beta, goal float64) (x1, m, chi float64, i1 int, done bool) {
	r0, _ := j.reversible(i, x)
	free := m0 - r0
	for ; i < last; i++ {
		end := langevin[i+1].z0
		r, _ := j.reversible(i+1, end)
		met, beyond := langevin[i+1].l-r > free, end+beta*(free+r) < goal
		if met || !beyond {
			return j.guardIn(x, i, end, free, beta, goal, beyond)
		}
		x = end
	}
	return j.guardIn(x, last, math.Abs(goal)+math.Abs(beta)+1, free, beta, goal, false)
}

// guardIn ends a reversible move between x and end of cell i.
func (j *JilesAtherton) guardIn(x float64, i int, end, free, beta, goal float64, beyond bool) (x1, m, chi float64, i1 int, done bool) {
	if !beyond {
		v := goal
		if beta != 0 {
			v = j.solveGuard(i, x, end, func(l, a, r, b, v float64) (float64, float64) { return v + beta*(free+r) - goal, 1 + beta*b })
		}
		l, _ := at(i, v)
		r, b := j.reversible(i, v)
		if l-r <= free {
			return v, free + r, b, i, true
		}
		end = v
	}
	v := j.solveGuard(i, x, end, func(l, a, r, b, v float64) (float64, float64) { return l - r - free, a - b })
	return v, 0, 0, i, false
}

// solveGuard finds the root of a rising function of x in [lo, hi] of cell i by Newton steps in a bracket.
func (j *JilesAtherton) solveGuard(i int, lo, hi float64, f func(l, a, r, b, v float64) (float64, float64)) float64 {
	v := lo
	for range 100 {
		l, a := at(i, v)
		r, b := j.reversible(i, v)
		y, slope := f(l, a, r, b, v)
		switch {
		case y == 0:
			return v
		case y < 0:
			lo = v
		default:
			hi = v
		}
		next := v - y/slope
		if !(next >= lo && next <= hi) {
			next = lo + (hi-lo)/2
		}
		if math.Abs(next-v) <= 2*0x1p-52*math.Abs(v) {
			return next
		}
		v = next
	}
	return v
}
