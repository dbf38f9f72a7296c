package num

import "math"

// Root finds x in [lo, hi] with f(x) = 0 for an increasing f that gives value and slope, by Newton steps from x
// kept inside a bracket that shrinks with every step; where two steps running have not halved the smallest |f| met, the
// next is a bisection, so that steps to and fro across the root come to an end too. It stops when a step is shorter than tol relative to x, or when f is zero. f(lo) <= 0 <= f(hi).
func Root(f func(x float64) (y, slope float64), lo, hi, x, tol float64) float64 {
	if !(lo <= hi) {
		panic("num: Root without a bracket")
	}
	if !(x >= lo && x <= hi) {
		x = lo + (hi-lo)/2
	}
	best, slow := math.Inf(1), 0
	for range 200 {
		y, slope := f(x)
		switch {
		case y == 0:
			return x
		case y < 0:
			lo = x
		default:
			hi = x
		}
		if slow++; math.Abs(y) <= 0.5*best {
			slow = 0
		}
		best = math.Min(best, math.Abs(y))
		next := x - y/slope
		if !(next > lo && next < hi) || slow >= 2 {
			if math.Abs(next-x) <= tol*math.Abs(x) {
				return math.Min(math.Max(next, lo), hi)
			}
			next, slow = lo+(hi-lo)/2, 0
		}
		if math.Abs(next-x) <= tol*math.Abs(x) || next == x {
			return next
		}
		x = next
	}
	return x
}
