package material

import (
	"math"

	"ampturn/magcirc/internal/num"
)

// rising inverts a smooth increasing function of z >= 0 through the origin that is concave or convex: a table gives
// a start within about 1e-5, Newton steps the rest.
type rising struct {
	rise       func(z float64) (y, slope float64)
	table      *num.Increasing // z over y
	zTop, yTop float64
}

// newRising tabulates the inverse of rise from 0 to z = 1e4 in steps of a tenth of z.
func newRising(rise func(z float64) (y, slope float64)) rising {
	_, slope := rise(0)
	zs, ys, slopes := []float64{0}, []float64{0}, []float64{1 / slope}
	for z := 0.02; z < 1e4; z += 0.02 + 0.1*z {
		y, slope := rise(z)
		zs, ys, slopes = append(zs, z), append(ys, y), append(slopes, 1/slope)
	}
	num.LimitSlopes(ys, zs, slopes)
	last := len(zs) - 1
	return rising{rise, num.NewIncreasing(ys, zs, slopes), zs[last], ys[last]}
}

// solve gives z with rise(z) = y for y >= 0, to rounding. From any start the second Newton iterate lies on the side
// of the root from which the rest approach it, left for a concave and right for a convex function.
func (r *rising) solve(y float64) float64 {
	if y == 0 {
		return 0
	}
	z := r.zTop
	if y < r.yTop {
		z, _ = r.table.At(y)
	}
	for range 100 {
		v, slope := r.rise(z)
		next := z + (y-v)/slope
		if next <= 0 {
			next = z / 16
		}
		done := math.Abs(next-z) <= 3e-8*next // squared by the step
		z = next
		if done {
			break
		}
	}
	return z
}
