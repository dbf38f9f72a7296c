// Package design turns a computed circuit around: it finds the gap, the current or the turns at which a computed
// quantity meets a demand, and follows an inductance over current. It knows a circuit only as functions of one number,
// and leaves to them what such a number changes.
//
//	Gap       the length at which an inductance is met; inductance falls with the gap
//	Current   the current at which a flux density is reached; its magnitude rises with the current
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

// Current gives the current in A at which the magnitude of a flux density in T reaches want.
//
// Inputs: elem, the winding as messages name it; density, whose magnitude must rise with the current; want > 0; most,
// the largest current that is tried.
// Errors: [magcirc.NoSolution] where even the largest current does not reach it, or where zero current exceeds it.
func Current(ctx context.Context, elem string, density Function, want, most float64) (float64, error) {
	magnitude := func(x float64) (float64, error) {
		b, err := density(x)
		return math.Abs(b), err
	}
	at0, err := magnitude(0)
	if err != nil {
		return 0, err
	}
	if at0 >= want {
		return 0, demand(elem, "flux density", want, at0, "T", "without current it is already", "a magnet or another winding has set it")
	}
	low, high := point{x: 0, y: at0}, point{x: firstCurrent}
	for {
		if high.y, err = magnitude(high.x); err != nil {
			return 0, err
		}
		if high.y >= want {
			return root(ctx, magnitude, want, low, high)
		}
		if high.x >= most {
			return 0, demand(elem, "flux density", want, high.y, "T", fmt.Sprintf("even %s gives only", phys.Format(high.x, "A")), "look at the turns and the winding's path")
		}
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		low, high.x = high, math.Min(4*high.x, most)
	}
}

// firstCurrent begins the search for a current, A.
const firstCurrent = 1e-3

// Turns gives the smallest whole number of turns at which the inductance in H is at least want.
//
// Inputs: elem, the winding as messages name it; inductance, which must rise with the turns; most, the largest number
// that is tried.
// Errors: [magcirc.NoSolution] where even that number does not give it.
func Turns(ctx context.Context, elem string, inductance Function, want, most float64) (float64, error) {
	low, high := 0.0, 1.0
	for {
		l, err := inductance(high)
		if err != nil {
			return 0, err
		}
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
