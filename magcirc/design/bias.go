package design

import (
	"context"
	"fmt"
	"math"

	"ampturn/magcirc/phys"
)

// BiasedGap gives the gap length in m at which the inductance in H under a bias current is want, on the side where it falls
// with the gap: a short gap lets the core saturate, so that the inductance first rises with its length and then falls.
//
// Inputs: as of [Gap], without its start.
// Errors: [magcirc.NoSolution] where even the length of the largest inductance does not give the demand, or the longest that
// can be computed still gives more; those of inductance.
func BiasedGap(ctx context.Context, elem string, inductance Function, want, least, most float64) (float64, error) {
	var points []point
	var end error
	for x := least; ; x = math.Min(x*gapStep, most) {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		y, err := inductance(x)
		if err != nil {
			if !outside(err) || len(points) == 0 {
				return 0, err
			}
			end = err
			break
		}
		points = append(points, point{x: x, y: y})
		if x >= most {
			break
		}
	}
	last := len(points) - 1
	top := 0
	for k := range points {
		if points[k].y >= points[top].y {
			top = k
		}
		if k < last && points[k].y >= want && points[k+1].y < want && k >= top {
			return root(ctx, inductance, want, points[k], points[k+1])
		}
	}
	if points[last].y >= want {
		err := demand(elem, "inductance", want, points[last].y, "H", fmt.Sprintf("%s of gap, the longest that can be computed here, still gives", phys.Format(points[last].x, "m")), "fewer turns, or another method for the flux around the gap")
		err.Err = end
		return 0, err
	}
	best, err := crest(ctx, inductance, points[max(0, top-1)].x, points[min(last, top+1)].x)
	if err != nil {
		return 0, err
	}
	if best.y < want {
		return 0, demand(elem, "inductance", want, best.y, "H", fmt.Sprintf("at this current even the best gap, %s, gives only", phys.Format(best.x, "m")), "more turns, a larger section or less current")
	}
	return root(ctx, inductance, want, best, points[min(last, top+1)])
}

// gapStep is the ratio of neighbouring lengths at which a gap is tried.
const gapStep = 1.25

// crest finds the largest value between two places around it, to a millionth of the place: golden section.
//
// Source: J. Kiefer, Proc. Amer. Math. Soc. 4 (1953) 502.
func crest(ctx context.Context, f Function, a, b float64) (point, error) {
	ratio := (math.Sqrt(5) - 1) / 2
	at := func(x float64) (point, error) { y, err := f(x); return point{x: x, y: y}, err }
	l, err := at(b - ratio*(b-a))
	if err != nil {
		return l, err
	}
	r, err := at(a + ratio*(b-a))
	if err != nil {
		return r, err
	}
	for b-a > 1e-6*b {
		if err := ctx.Err(); err != nil {
			return l, err
		}
		if l.y > r.y {
			b, r = r.x, l
			l, err = at(b - ratio*(b-a))
		} else {
			a, l = l.x, r
			r, err = at(a + ratio*(b-a))
		}
		if err != nil {
			return l, err
		}
	}
	if l.y > r.y {
		return l, nil
	}
	return r, nil
}

// wholeCrest finds the whole number with the largest value between two whole numbers around it.
func wholeCrest(ctx context.Context, f Function, a, b float64) (point, error) {
	for b-a > 2 {
		if err := ctx.Err(); err != nil {
			return point{}, err
		}
		mid := math.Floor((a + b) / 2)
		y, err := f(mid)
		if err != nil {
			return point{}, err
		}
		next, err := f(mid + 1)
		if err != nil {
			return point{}, err
		}
		if next > y {
			a = mid
		} else {
			b = mid + 1
		}
	}
	best := point{y: math.Inf(-1)}
	for x := a; x <= b; x++ {
		y, err := f(x)
		if err != nil {
			return point{}, err
		}
		if y > best.y {
			best = point{x: x, y: y}
		}
	}
	return best, nil
}
