package material

import (
	"fmt"
	"math"

	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// blend is the law between two laws at equal field strength: B = (1-w) B_cold + w B_hot. For 0 <= w <= 1 it is
// monotone because both are; outside it must be checked by rises.
type blend struct {
	cold, hot      Law
	w              float64
	tCold, tHot, t float64 // degC, for the description
}

func (l *blend) At(h float64) (b, slope float64) {
	b0, s0 := l.cold.At(h)
	b1, s1 := l.hot.At(h)
	return b0 + l.w*(b1-b0), s0 + l.w*(s1-s0)
}

// Inverse brackets H between the inverses of the two laws, or where it is extrapolated between 0 and B/mu0.
func (l *blend) Inverse(b float64) (h, slope float64) {
	y := math.Abs(b)
	h0, _ := l.cold.Inverse(y)
	h1, _ := l.hot.Inverse(y)
	lo, hi := math.Min(h0, h1), math.Max(h0, h1)
	if l.w < 0 || l.w > 1 {
		lo, hi = 0, y/phys.Mu0
	}
	h = num.Root(func(h float64) (float64, float64) {
		v, s := l.At(h)
		return v - y, s
	}, lo, hi, h0+l.w*(h1-h0), 1e-13)
	_, s := l.At(h)
	return math.Copysign(h, b), 1 / s
}

func (l *blend) Coenergy(h float64) float64 {
	w0, w1 := l.cold.Coenergy(h), l.hot.Coenergy(h)
	return w0 + l.w*(w1-w0)
}

func (l *blend) Range() (hmax, bmax float64) {
	h0, _ := l.cold.Range()
	h1, _ := l.hot.Range()
	if hmax = math.Min(h0, h1); math.IsInf(hmax, 1) {
		return hmax, hmax
	}
	bmax, _ = l.At(hmax)
	return hmax, bmax
}

func (l *blend) Describe() string {
	verb := "interpolated"
	if l.w < 0 || l.w > 1 {
		verb = "extrapolated"
	}
	return fmt.Sprintf("%s to %s from %s (%s) and %s (%s)", verb, phys.Format(l.t, "degC"),
		phys.Format(l.tCold, "degC"), l.cold.Describe(), phys.Format(l.tHot, "degC"), l.hot.Describe())
}

// rises reports whether the law keeps dB/dH >= mu0 on a grid of field strengths, 24 to the octave, and if not, the
// first at which it does not.
func (l *blend) rises() (h float64, ok bool) {
	const step = 1.0293 // 2^(1/24)
	last, _ := l.At(1e-3)
	for h := 1e-3 * step; h < 1e7; h *= step {
		b, slope := l.At(h)
		if slope < phys.Mu0*(1-1e-9) || b <= last {
			return h, false
		}
		last = b
	}
	return 0, true
}
