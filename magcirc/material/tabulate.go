package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// What a table of a function may miss of it: relative to B, and its size.
const (
	tableError  = 1e-7
	tablePoints = 20000
)

// Tabulate gives the law of a function b = f(h), flux density in T at field strength in A/m, for 0 <= h <= hmax. The
// function is called once, now, at as many points as the table needs to follow it within 1e-7 of B; the law joins
// them by monotone cubics and is odd. Beyond hmax B rises with mu0 only.
//
// Where f from some field strength on rises more slowly than B = mu0 H (a saturating formula without that term), the
// data end there, and a note says so ([Notes]).
//
// Errors: [magcirc.BadValue] where f gives no number, is not zero at 0 or not odd; [magcirc.NotMonotone] where it
// falls, or rises more slowly than in air and then faster again; [magcirc.Implausible] above 3 T of polarisation;
// [magcirc.NoConvergence] where f jumps, so that no table follows it.
func Tabulate(f func(h float64) float64, hmax float64) (Law, error) {
	if f == nil {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: tabulated, Msg: "there is no function"}
	}
	if !(hmax > 0) || hmax > mostH {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: tabulated, Quantity: "largest H", Unit: "A/m", Got: hmax,
			Msg: fmt.Sprintf("largest H %s is not a field strength", phys.Format(hmax, "A/m"))}
	}
	t := &table{f: f}
	if err := t.sample(hmax); err != nil {
		return nil, err
	}
	return t.law()
}

const tabulated = "law of a function"

// table collects points of f from the origin upwards, with the slopes there.
type table struct {
	f           func(float64) float64
	h, b, slope []float64
}

// sample lays a coarse grid, sixteen to the decade over nine decades, and refines each interval.
func (t *table) sample(hmax float64) error {
	zero, err := t.value(0)
	if err != nil {
		return err
	}
	if math.Abs(zero) > 1e-9*math.Abs(t.f(hmax)) {
		return refuseFunction(magcirc.BadValue, 0, zero, 0, fmt.Sprintf("B is %s at H = 0", phys.Format(zero, "T")), "a law without memory passes zero")
	}
	if _, err := t.value(hmax); err != nil { // the likeliest place to show what is wrong
		return err
	}
	t.h, t.b = []float64{0}, []float64{0}
	t.slope = []float64{t.difference(0, hmax*1e-12)} // a thousandth of the first interval: f may hold |h|, which bends at 0
	for k := -144; k <= 0; k++ {
		if err := t.refine(hmax*math.Pow(10, float64(k)/16), 0); err != nil {
			return err
		}
	}
	return nil
}

// refine appends points up to h so that the cubics between them follow f.
func (t *table) refine(h float64, depth int) error {
	last := len(t.h) - 1
	h0, b0, s0 := t.h[last], t.b[last], t.slope[last]
	b, err := t.value(h)
	if err != nil {
		return err
	}
	w := h - h0
	slope := t.difference(h, math.Min(w, h)*0.01)
	mid, err := t.value(h0 + w/2)
	if err != nil {
		return err
	}
	cubic := (b0+b)/2 + w/8*(s0-slope)
	if math.Abs(cubic-mid) <= tableError/4*math.Abs(mid) {
		t.h, t.b, t.slope = append(t.h, h), append(t.b, b), append(t.slope, slope)
		return nil
	}
	if len(t.h) > tablePoints || depth > 40 {
		return refuseFunction(magcirc.NoConvergence, h, b, 0, fmt.Sprintf("no table follows it at %s: it jumps or has no slope there", phys.Format(h, "A/m")), "")
	}
	if err := t.refine(h0+w/2, depth+1); err != nil {
		return err
	}
	return t.refine(h, depth+1)
}

// value is f at h >= 0, refused where it is no flux density or differs from -f(-h).
func (t *table) value(h float64) (float64, error) {
	b := t.f(h)
	at := phys.Format(h, "A/m")
	switch {
	case math.IsNaN(b) || math.IsInf(b, 0):
		return 0, refuseFunction(magcirc.BadValue, h, b, 0, fmt.Sprintf("it gives %s at %s", phys.Format(b, "T"), at), "")
	case b-phys.Mu0*h > MostPolarisation:
		return 0, refuseFunction(magcirc.Implausible, h, b, MostPolarisation, fmt.Sprintf("B %s at %s is above that of any material (%s)",
			phys.Format(b, "T"), at, phys.Format(MostPolarisation, "T")), "")
	case h > 0 && math.Abs(t.f(-h)+b) > 1e-6*math.Abs(b):
		return 0, refuseFunction(magcirc.BadValue, h, b, -t.f(-h), fmt.Sprintf("B is %s at %s but %s at -%s",
			phys.Format(b, "T"), at, phys.Format(t.f(-h), "T"), at), "a law without memory is odd: f(-h) = -f(h)")
	}
	return b, nil
}

// difference is the slope of f at h by a central difference of fourth order over the step d.
func (t *table) difference(h, d float64) float64 {
	return (8*(t.f(h+d)-t.f(h-d)) - (t.f(h+2*d) - t.f(h-2*d))) / (12 * d)
}

// law checks that the table rises, cuts it where f stays flatter than mu0, and joins its points.
func (t *table) law() (Law, error) {
	for i := 1; i < len(t.h); i++ {
		if t.b[i] < t.b[i-1]-1e-12*t.b[i-1] {
			return nil, refuseFunction(magcirc.NotMonotone, t.h[i], t.b[i], t.b[i-1], fmt.Sprintf("B falls from %s at %s to %s at %s; a magnetisation curve cannot fall",
				phys.FormatDigits(t.b[i-1], "T", 7), phys.Format(t.h[i-1], "A/m"), phys.FormatDigits(t.b[i], "T", 7), phys.Format(t.h[i], "A/m")), "")
		}
	}
	end, err := t.flatFrom()
	if err != nil {
		return nil, err
	}
	c := &curve{source: "of a function"}
	if end < len(t.h)-1 {
		c.notes = []magcirc.Note{{Kind: magcirc.Remark, Elem: tabulated, Text: fmt.Sprintf(
			"above %s it rises more slowly than in air; taken to there, beyond it B rises with mu0", phys.FormatDigits(t.h[end], "A/m", 3))}}
	}
	h, b, slope := t.h[:end+1], t.b[:end+1], t.slope[:end+1]
	lift(h, b)
	j := make([]float64, len(h))
	for i := range j {
		j[i] = b[i] - phys.Mu0*h[i]
		slope[i] -= phys.Mu0
	}
	num.LimitSlopes(h, j, slope)
	for i := range slope {
		slope[i] += phys.Mu0
	}
	c.law, c.count = num.NewIncreasing(h, b, slope), len(h)-1
	c.h, c.b, c.energy = h[end], b[end], c.law.Integral(h[end])
	return c, nil
}

// flatFrom gives the last point that still rises faster than in air, refusing a function that is flatter and then
// steeper again.
func (t *table) flatFrom() (int, error) {
	top, end := 0.0, 0
	for i := 1; i < len(t.h); i++ {
		j := t.b[i] - phys.Mu0*t.h[i]
		// The rounding of f at the largest b hides a fall of this size.
		if noise := 1e-9 * t.b[i]; j < top-noise {
			continue
		} else if i > end+1 && t.b[i-1]-phys.Mu0*t.h[i-1] < top-noise {
			return 0, refuseFunction(magcirc.NotMonotone, t.h[end], t.b[end], 0, fmt.Sprintf(
				"B rises more slowly than in air from %s on, then faster again", phys.FormatDigits(t.h[end], "A/m", 3)), "")
		}
		top, end = math.Max(top, j), i
	}
	if end < 2 {
		return 0, refuseFunction(magcirc.NotMonotone, t.h[1], t.b[1], phys.Mu0*t.h[1], "B rises more slowly than in air", "is it B in T over H in A/m?")
	}
	return end, nil
}

func refuseFunction(code magcirc.Code, h, got, limit float64, msg, hint string) error {
	return &magcirc.Error{Code: code, Elem: tabulated, Quantity: "B", Unit: "T", Got: got, Limit: limit, Msg: msg, Hint: hint}
}
