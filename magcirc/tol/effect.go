package tol

import (
	"context"
	"math"
)

// Effect is what one input, or one group of inputs, does to the result by itself.
type Effect struct {
	Inputs    []int   // indices of the inputs that move together
	Slope     float64 // dy/dx at nominal for a single input; for a group the change of y over one half width
	Low, High float64 // the result with these inputs at their lower and at their upper limits, all others nominal
}

// Swing is the larger of the two changes of the result, always positive.
func (e Effect) Swing(nominal float64) float64 {
	return math.Max(math.Abs(e.Low-nominal), math.Abs(e.High-nominal))
}

// step is the share of the half width at which slopes are taken: the error of a central difference grows with its
// square, that of rounding with its inverse.
const step = 1e-3

// Effects gives the effect of each input that has a tolerance, groups as one, in the order of first mention.
//
//	dy/dx = (y(x + d) - y(x - d)) / (2 d),   d = Half/1000
//
// Errors: [magcirc.BadValue] for inputs without limits; those of f, with the values at which they came up.
// Source: central difference, any textbook (error of order d squared).
func Effects(ctx context.Context, f Function, inputs []Input) ([]Effect, error) {
	if err := check(inputs); err != nil {
		return nil, err
	}
	var all []Effect
	for _, axis := range axes(inputs) {
		var y [4]float64
		for k, share := range [4]float64{-1, -step, step, 1} {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			x := nominal(inputs)
			move(x, inputs, axis, share)
			var err error
			if y[k], err = value(f, x); err != nil {
				return nil, at(err, inputs, x, "at a limit")
			}
		}
		e := Effect{Inputs: axis, Low: y[0], High: y[3], Slope: (y[2] - y[1]) / (2 * step)}
		if len(axis) == 1 {
			e.Slope /= inputs[axis[0]].Half
		}
		all = append(all, e)
	}
	return all, nil
}

// Propagate gives the uncertainty of the result from the half widths of the inputs. Errors of one group, such as those
// of one method used twice, have one sign and add; errors of different groups are independent and add by squares.
//
//	u = sqrt(sum over groups ((y(x + u_x) - y(x - u_x))/2)^2)
//
// Errors: as [Effects]. Source: JCGM 100:2008 (GUM), 5.1.2 and 5.2.2 note 1 for full correlation (from memory).
func Propagate(ctx context.Context, f Function, inputs []Input) (float64, error) {
	if err := check(inputs); err != nil {
		return 0, err
	}
	sum := 0.0
	for _, axis := range axes(inputs) {
		var y [2]float64
		for k, share := range [2]float64{-1, 1} {
			if err := ctx.Err(); err != nil {
				return 0, err
			}
			x := nominal(inputs)
			move(x, inputs, axis, share)
			var err error
			if y[k], err = value(f, x); err != nil {
				return 0, at(err, inputs, x, "at the edge of the uncertainty")
			}
		}
		sum += (y[1] - y[0]) * (y[1] - y[0]) / 4
	}
	return math.Sqrt(sum), nil
}
