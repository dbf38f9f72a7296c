package design

import (
	"context"
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// Inductances gives the incremental and the secant inductance in H of a winding at a current in A.
type Inductances func(current float64) (incremental, secant float64, err error)

// Curve is an inductance over current.
type Curve struct {
	Current     []float64 // A, rising
	Incremental []float64 // H: d linkage / d current
	Secant      []float64 // H: linkage / current; at zero current the incremental one

	at Inductances
}

// Follow computes the inductance at n currents spread evenly from one current to another.
//
// Inputs: from != to in A; n >= 2. Errors: [magcirc.BadValue] for equal ends; those of at.
func Follow(ctx context.Context, at Inductances, from, to float64, n int) (*Curve, error) {
	if !(from != to) || math.IsInf(from-to, 0) || math.IsNaN(from-to) || n < 2 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Msg: "the currents of a curve must differ", Quantity: "current", Unit: "A", Got: to, Limit: from}
	}
	if from > to {
		from, to = to, from
	}
	c := &Curve{at: at}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		i := from + (to-from)*float64(k)/float64(n-1)
		inc, sec, err := at(i)
		if err != nil {
			return nil, err
		}
		c.Current, c.Incremental, c.Secant = append(c.Current, i), append(c.Incremental, inc), append(c.Secant, sec)
	}
	return c, nil
}

// At computes both inductances at a current, which may lie outside the curve.
func (c *Curve) At(current float64) (incremental, secant float64, err error) { return c.at(current) }

// Drop gives the current in A, on the side of the curve's larger end, at which the incremental inductance has fallen by
// a share of its value at zero current: the saturation current. It is computed, not read off between the points.
//
// Inputs: share, above 0 and below 1. Errors: [magcirc.NoSolution] where the curve ends before the fall; [magcirc.BadValue].
// Source: the rating "current at which the inductance has dropped by 20 % (or 30 %)" of inductor data sheets; IEC
// 62024-2:2020 names the measurement (from memory).
func (c *Curve) Drop(ctx context.Context, elem string, share float64) (float64, error) {
	if !(share > 0 && share < 1) {
		return 0, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Msg: fmt.Sprintf("a fall by %s is outside 0..100 %%", phys.Format(share, "percent")),
			Hint: "write SaturationCurrent(20*percent)", Quantity: "fall", Got: share, Limit: 1}
	}
	zero, _, err := c.at(0)
	if err != nil {
		return 0, err
	}
	want := (1 - share) * zero
	inductance := func(i float64) (float64, error) {
		l, _, err := c.at(i)
		return l, err
	}
	last := point{x: 0, y: zero}
	for _, k := range outwards(c.Current) {
		next := point{x: c.Current[k], y: c.Incremental[k]}
		if next.y <= want {
			return root(ctx, inductance, want, last, next)
		}
		last = next
	}
	return 0, &magcirc.Error{Code: magcirc.NoSolution, Elem: elem,
		Msg: fmt.Sprintf("inductance has not fallen by %s up to %s: there it is %s, against %s at zero current",
			phys.Format(share, "percent"), phys.Format(last.x, "A"), phys.Format(last.y, "H"), phys.Format(zero, "H")),
		Hint: "follow the curve to a larger current", Quantity: "inductance", Unit: "H", Got: last.y, Limit: want}
}

// outwards lists the points of a curve from zero current towards its larger end.
func outwards(current []float64) []int {
	var order []int
	if n := len(current); math.Abs(current[n-1]) >= math.Abs(current[0]) {
		for k := range n {
			if current[k] > 0 {
				order = append(order, k)
			}
		}
		return order
	}
	for k := len(current) - 1; k >= 0; k-- {
		if current[k] < 0 {
			order = append(order, k)
		}
	}
	return order
}

// Nearness gives how far a material is driven towards saturation at field strength h in A/m and flux density b in T: the
// share of the saturation polarisation of its law that is reached,
//
//	s = |b - mu0 h| / Js,  Js = B(H) - mu0 H at 10 MA/m
//
// Valid: for laws that saturate. A law of constant permeability never does: s is then next to nothing, as it should be. A
// leg that remembers need not lie on the law.
func Nearness(law material.Law, h, b float64) float64 {
	js := polarisation(law, saturated)
	if js <= 0 {
		return 0
	}
	return math.Abs(b-phys.Mu0*h) / js
}

// along is the nearness on the law itself.
func along(law material.Law, h float64) float64 {
	b, _ := law.At(h)
	return Nearness(law, h, b)
}

// saturated is a field strength at which every soft material is saturated, A/m.
const saturated = 1e7

func polarisation(law material.Law, h float64) float64 {
	b, _ := law.At(h)
	return b - phys.Mu0*h
}

// Knee gives a field strength in A/m up to which a drawing of the law shows what is worth seeing: where 90 % of the
// saturation polarisation is reached, and 1 kA/m for a law that does not saturate.
func Knee(law material.Law) float64 {
	if along(law, 1e6) < 0.9 {
		return 1e3
	}
	low, high := 0.0, 1e6
	for range 60 {
		mid := (low + high) / 2
		if along(law, mid) < 0.9 {
			low = mid
		} else {
			high = mid
		}
	}
	return high
}
