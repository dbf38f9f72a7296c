package design

import (
	"context"
	"errors"
	"math"

	"ampturn/magcirc"
)

// point is one evaluation of a function.
type point struct {
	x, y float64
	err  error // why the search went no further than x
}

func (p point) miss(want float64) float64 { return p.y - want }

// enclose seeks a demand from start outwards by factors of two, between least and most. falling is -1 for a function
// that falls. low and high enclose the demand, or are the ends of what could be computed.
func enclose(ctx context.Context, f Function, want, start, least, most float64, rise float64) (low, high point, err error) {
	x := math.Min(math.Max(start, least), most)
	y, err := f(x)
	if err != nil {
		return low, high, err
	}
	low, high = point{x: x, y: y}, point{x: x, y: y}
	for rise*low.miss(want) > 0 && low.x > least {
		if err := ctx.Err(); err != nil {
			return low, high, err
		}
		high = low
		low.x = math.Max(low.x/2, least)
		if low.y, err = f(low.x); err != nil {
			return low, high, err
		}
	}
	for rise*high.miss(want) < 0 && high.x < most {
		if err := ctx.Err(); err != nil {
			return low, high, err
		}
		next := point{x: math.Min(high.x*2, most)}
		if next.y, err = f(next.x); err != nil {
			if !outside(err) {
				return low, high, err
			}
			return shorten(ctx, f, want, low, high, next.x, err, rise)
		}
		low, high = high, next
	}
	return low, high, nil
}

// shorten looks between the last point that could be computed and one that could not.
func shorten(ctx context.Context, f Function, want float64, low, high point, beyond float64, cause error, rise float64) (point, point, error) {
	for range 40 {
		if err := ctx.Err(); err != nil {
			return low, high, err
		}
		mid := point{x: (high.x + beyond) / 2}
		y, err := f(mid.x)
		if err != nil {
			beyond = mid.x
			continue
		}
		mid.y = y
		low, high = high, mid
		if rise*high.miss(want) >= 0 {
			return low, high, nil
		}
	}
	high.err = cause
	return low, high, nil
}

// outside tells a formula's end of validity from other faults.
func outside(err error) bool {
	var e *magcirc.Error
	return errors.As(err, &e) && (e.Code == magcirc.OutsideValidity || e.Code == magcirc.Implausible)
}

// root finds where f is want between two points that enclose it: false position with Illinois halving, and bisection
// where that is slow. Converges to 1e-12 of x.
//
// Source: M. Dowell, P. Jarratt, A modified regula falsi method for computing the root of an equation, BIT 11 (1971)
// 168-174 (from memory).
func root(ctx context.Context, f Function, want float64, a, b point) (float64, error) {
	fa, fb := a.miss(want), b.miss(want)
	if fa == 0 {
		return a.x, nil
	}
	width := math.Abs(b.x - a.x)
	for n := 0; n < 200 && fb != 0 && math.Abs(b.x-a.x) > 1e-12*math.Abs(b.x); n++ {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		x := b.x - fb*(b.x-a.x)/(fb-fa)
		if n%4 == 3 { // four steps must at least halve the bracket twice
			if math.Abs(b.x-a.x) > width/4 {
				x = (a.x + b.x) / 2
			}
			width = math.Abs(b.x - a.x)
		}
		if x == a.x || x == b.x {
			break
		}
		y, err := f(x)
		if err != nil {
			return 0, err
		}
		fx := y - want
		if math.Abs(fx) <= 1e-14*math.Abs(want) {
			return x, nil
		}
		if (fx > 0) != (fb > 0) {
			a, fa = b, fb
		} else {
			fa /= 2
		}
		b, fb = point{x: x, y: y}, fx
	}
	return b.x, nil
}
