package num

import (
	"math"

	"gonum.org/v1/gonum/interp"
)

// Increasing is a strictly increasing, piecewise cubic function through points that begin at the origin. It is
// immutable and safe for use by many goroutines.
type Increasing struct {
	pieces []piece
	x, y   locator
}

// piece is the cubic y0 + u (c1 + u (c2 + u c3)) of u = x - x0, with the integral of the function up to x0.
type piece struct {
	x0, y0, c1, c2, c3, area float64
}

// NewIncreasing joins the points by cubics with the given slopes there. x and y rise strictly from 0, at least two
// points; the slopes are such that each cubic rises (see [MonotoneSlopes]).
func NewIncreasing(x, y, slope []float64) *Increasing {
	n := len(x)
	if n < 2 || len(y) != n || len(slope) != n || x[0] != 0 || y[0] != 0 {
		panic("num: Increasing wants two points or more, from the origin")
	}
	s := &Increasing{pieces: make([]piece, n)}
	area := 0.0
	for i := range n - 1 {
		h, k := x[i+1]-x[i], y[i+1]-y[i]
		if !(h > 0 && k > 0) {
			panic("num: Increasing wants rising points")
		}
		p := piece{x0: x[i], y0: y[i], c1: slope[i], area: area}
		p.c2 = (3*k/h - 2*slope[i] - slope[i+1]) / h
		p.c3 = (slope[i] + slope[i+1] - 2*k/h) / (h * h)
		s.pieces[i] = p
		area += p.integral(h)
	}
	s.pieces[n-1] = piece{x0: x[n-1], y0: y[n-1], c1: slope[n-1], area: area}
	s.x = newLocator(append([]float64(nil), x...))
	s.y = newLocator(append([]float64(nil), y...))
	return s
}

// NewPolyline joins the points by straight lines.
func NewPolyline(x, y []float64) *Increasing {
	s := NewIncreasing(x, y, make([]float64, len(x)))
	area := 0.0
	for i := range len(x) - 1 {
		h := x[i+1] - x[i]
		s.pieces[i] = piece{x0: x[i], y0: y[i], c1: (y[i+1] - y[i]) / h, area: area}
		area += s.pieces[i].integral(h)
	}
	last := len(x) - 1
	s.pieces[last].c1, s.pieces[last].area = s.pieces[last-1].c1, area
	return s
}

// At gives value and slope at x, 0 <= x <= the last point.
func (s *Increasing) At(x float64) (y, slope float64) {
	p := &s.pieces[s.x.find(x)]
	u := x - p.x0
	return p.y0 + u*(p.c1+u*(p.c2+u*p.c3)), p.c1 + u*(2*p.c2+3*u*p.c3)
}

// Integral gives the integral from 0 to x, exact but for rounding.
func (s *Increasing) Integral(x float64) float64 {
	p := &s.pieces[s.x.find(x)]
	return p.area + p.integral(x-p.x0)
}

func (p *piece) integral(u float64) float64 {
	return u * (p.y0 + u*(p.c1/2+u*(p.c2/3+u*p.c3/4)))
}

// Inverse gives x and the slope of the function there, at the value y, 0 <= y <= the last point's.
func (s *Increasing) Inverse(y float64) (x, slope float64) {
	i := s.y.find(y)
	p, next := &s.pieces[i], &s.pieces[i+1]
	lo, hi := 0.0, next.x0-p.x0
	rest := y - p.y0
	u := hi * rest / (next.y0 - p.y0)
	if p.c2 == 0 && p.c3 == 0 {
		return p.x0 + u, p.c1
	}
	for range 100 {
		f := u*(p.c1+u*(p.c2+u*p.c3)) - rest
		slope = p.c1 + u*(2*p.c2+3*u*p.c3)
		if f > 0 {
			hi = u
		} else {
			lo = u
		}
		v := u - f/slope
		if !(v >= lo && v <= hi) {
			v = lo + (hi-lo)/2
		}
		if done := math.Abs(v-u) <= 1e-10*v; done || v == u {
			u = v
			break
		}
		u = v
	}
	return p.x0 + u, p.c1 + u*(2*p.c2+3*u*p.c3)
}

// MonotoneSlopes gives slopes at the points (x, y), x rising and y not falling from the origin, with which
// piecewise cubics keep the shape of the data: they do not fall, do not overshoot, and continue through the origin
// as an odd function.
//
// Method: F. N. Fritsch and J. Butland, A method for constructing local monotone piecewise cubic interpolants,
// SIAM J. Sci. Stat. Comput. 5 (1984) 300-304, as gonum carries it.
func MonotoneSlopes(x, y []float64) []float64 {
	n := len(x)
	odd := make([]float64, n+1)
	oddY := make([]float64, n+1)
	odd[0], oddY[0] = -x[1], -y[1]
	copy(odd[1:], x)
	copy(oddY[1:], y)
	var f interp.FritschButland
	if err := f.Fit(odd, oddY); err != nil {
		panic("num: " + err.Error())
	}
	slope := make([]float64, n)
	for i := range slope {
		slope[i] = math.Max(f.PredictDerivative(x[i]), 0)
	}
	return slope
}

// LimitSlopes lowers slopes, in place, to at most three times the smaller secant beside each point and to zero at
// least: then every cubic rises.
//
// Source: F. N. Fritsch and R. E. Carlson, Monotone piecewise cubic interpolation, SIAM J. Numer. Anal. 17 (1980)
// 238-246: the square region 0 <= slopes <= 3 secants is sufficient.
func LimitSlopes(x, y, slope []float64) {
	for i := range slope {
		limit := math.Inf(1)
		if i > 0 {
			limit = math.Min(limit, 3*(y[i]-y[i-1])/(x[i]-x[i-1]))
		}
		if i < len(x)-1 {
			limit = math.Min(limit, 3*(y[i+1]-y[i])/(x[i+1]-x[i]))
		}
		slope[i] = math.Min(math.Max(slope[i], 0), math.Max(limit, 0))
	}
}
