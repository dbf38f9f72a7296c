// Package design turns a computed circuit around: it finds the gap, the current or the turns at which a computed
// quantity meets a demand, and follows an inductance over current. It knows a circuit only as functions of one number,
// and leaves to them what such a number changes.
//
//	Gap       the length at which an inductance is met; inductance falls with the gap
//	Current   the least current, of either sign, at which a flux density is reached
//	BiasedGap the same under a current, where the inductance first rises with the gap
//	Turns     the smallest whole number of turns that gives at least an inductance
//	Follow    incremental and secant inductance over current, and where it has fallen by a share
//	Nearness  how far a law is driven towards its saturation
package design

import (
	"context"
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Function is a computed quantity over the number that is sought.
type Function func(x float64) (float64, error)

// Gap gives the gap length in m at which the inductance in H meets want.
//
// Inputs: elem, the gap as messages name it; inductance, which must fall with the length; want > 0; start, a length in
// m to begin from; least and most, the lengths between which it is sought.
// Errors: [magcirc.NoSolution] where the inductance at the ends does not enclose the demand; those of inductance.
func Gap(ctx context.Context, elem string, inductance Function, want, start, least, most float64) (float64, error) {
	low, high, err := enclose(ctx, inductance, want, start, least, most, -1)
	if err != nil {
		return 0, err
	}
	switch {
	case low.miss(want) < 0:
		return 0, demand(elem, "inductance", want, low.y, "H", fmt.Sprintf("even %s of gap gives only", phys.Format(low.x, "m")), "more turns or a larger section")
	case high.miss(want) > 0:
		err := demand(elem, "inductance", want, high.y, "H", fmt.Sprintf("%s of gap, the longest that can be computed here, still gives", phys.Format(high.x, "m")), "fewer turns, or another method for the flux around the gap")
		err.Err = high.err
		return 0, err
	}
	return root(ctx, inductance, want, low, high)
}

// Current gives the current in A of least magnitude, of either sign, at which the magnitude of a flux density in T is want;
// of two equally large ones the positive.
//
// Inputs: elem, the winding as messages name it; density, with its sign; want > 0; most, the largest magnitude that is
// tried. Where zero current exceeds the demand the search is for the current that takes the flux density down to it.
// Errors: [magcirc.NoSolution] where no current up to most, of either sign, meets it; those of density.
func Current(ctx context.Context, elem string, density Function, want, most float64) (float64, error) {
	b0, err := density(0)
	if err != nil {
		return 0, err
	}
	if math.Abs(b0) == want {
		return 0, nil
	}
	sides := [2]*side{{sign: 1, last: point{y: b0}}, {sign: -1, last: point{y: b0}}}
	for step := firstCurrent; ; step = math.Min(4*step, most) {
		best := math.Inf(1)
		for _, s := range sides {
			i, ok, err := s.reach(ctx, density, want, step)
			switch {
			case err != nil:
				return 0, err
			case ok && math.Abs(i) < math.Abs(best)*(1-1e-9):
				best = i
			}
		}
		if !math.IsInf(best, 1) {
			return best, nil
		}
		if step >= most || sides[0].err != nil && sides[1].err != nil {
			break
		}
		if err := ctx.Err(); err != nil {
			return 0, err
		}
	}
	for _, s := range sides {
		if s.err != nil {
			return 0, s.err
		}
	}
	says, got := fmt.Sprintf("even %s, of either sign, gives only", phys.Format(most, "A")), math.Max(math.Abs(sides[0].last.y), math.Abs(sides[1].last.y))
	if math.Abs(b0) > want {
		says, got = fmt.Sprintf("no current up to %s, of either sign, takes it down from", phys.Format(most, "A")), math.Abs(b0)
	}
	return 0, demand(elem, "flux density", want, got, "T", says, "look at the turns and the winding's path")
}

// side is the search for a current on one side of zero.
type side struct {
	sign float64
	last point // the flux density with its sign
	err  error // why the search on this side ended
}

// reach looks between the last current and a further one.
func (s *side) reach(ctx context.Context, density Function, want, step float64) (float64, bool, error) {
	if s.err != nil {
		return 0, false, nil
	}
	next := point{x: s.sign * step}
	if next.y, s.err = density(next.x); s.err != nil {
		return 0, false, nil
	}
	last := s.last
	s.last = next
	// Between two flux densities of different sign the magnitude passes through zero: the demand is met before that.
	toward, over := math.Copysign(1, last.y), math.Abs(last.y) > want
	if last.y == 0 {
		toward = math.Copysign(1, next.y)
	}
	if (toward*next.y > want) == over && toward*next.y != want {
		if !over && next.y*toward < -want { // through zero to beyond the demand on the other toward
			toward = -toward
		} else {
			return 0, false, nil
		}
	}
	f := func(x float64) (float64, error) {
		b, err := density(x)
		return toward * b, err
	}
	last.y, next.y = toward*last.y, toward*next.y
	i, err := root(ctx, f, want, last, next)
	if err != nil {
		return 0, false, err
	}
	b, err := density(i)
	if err != nil || math.Abs(math.Abs(b)-want) > 1e-6*want {
		return 0, false, err // a jump from one leg to another, not a crossing
	}
	return i, true, nil
}

// firstCurrent begins the search for a current, A.
const firstCurrent = 1e-3

// Turns gives the smallest whole number of turns at which the inductance in H is at least want.
//
// Inputs: elem, the winding as messages name it; inductance, which rises with the turns, or under a bias current rises,
// falls where they saturate the core, and rises again; most, the largest number that is tried.
// Errors: [magcirc.NoSolution] where even that number does not give it, or only one far in saturation, at which the
// inductance is beyond its fall.
func Turns(ctx context.Context, elem string, inductance Function, want, most float64) (float64, error) {
	low, high := 0.0, 1.0
	var before, at point // the two numbers tried before
	for {
		l, err := inductance(high)
		if err != nil {
			return 0, err
		}
		if l < at.y { // fallen: the core saturates
			best, err := wholeCrest(ctx, inductance, before.x+1, high)
			if err != nil {
				return 0, err
			}
			if best.y < want {
				return 0, demand(elem, "inductance", want, best.y, "H", fmt.Sprintf("at this current even the best number of turns, %s, gives only", phys.Format(best.x, "")), "a longer gap, a larger section or less current")
			}
			low, high = before.x, best.x
			break
		}
		before, at = at, point{x: high, y: l}
		if l >= want {
			break
		}
		if high >= most {
			return 0, demand(elem, "inductance", want, l, "H", fmt.Sprintf("even %s turns give only", phys.Format(high, "")), "a shorter gap or a larger section")
		}
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		low, high = high, math.Min(2*high, most)
	}
	for high-low > 1 {
		mid := math.Floor((low + high) / 2)
		l, err := inductance(mid)
		if err != nil {
			return 0, err
		}
		if l >= want {
			high = mid
		} else {
			low = mid
		}
	}
	return high, nil
}

// demand is the refusal of a demand that nothing meets.
func demand(elem, quantity string, want, got float64, unit, says, hint string) *magcirc.Error {
	return &magcirc.Error{Code: magcirc.NoSolution, Elem: elem,
		Msg:      fmt.Sprintf("%s of %s is out of reach: %s %s", quantity, phys.Format(want, unit), says, phys.Format(got, unit)),
		Hint:     hint,
		Quantity: quantity, Unit: unit, Got: got, Limit: want}
}
