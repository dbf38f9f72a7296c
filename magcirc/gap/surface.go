package gap

import (
	"math"
)

// Surface is a gap whose length and face vary within ranges, as a polynomial through solutions at Chebyshev points: for
// draws by the thousand of a gap whose field is solved numerically.
type Surface struct {
	spec          Spec
	low, high     [2]float64 // length in m, factor of the area of the face
	node, weight  [2][]float64
	factor, doubt [][]float64 // fringing factor and uncertainty at the points
	nominal       Result
	Error         float64 // largest relative deviation of the permeance found at points between
}

// points is the number of points along a range that is not a single value.
const points = 7

// NewSurface solves the gap s over lengths from l0 to l1 in m, and areas of its face from a0 to a1 times its own; equal
// ends mean that it does not vary. The polynomial is compared with solutions half way between its points; the largest
// deviation is kept in Error.
//
// Errors: those of [Permeance] at any of the points.
// Source: barycentric interpolation, J.-P. Berrut, L. N. Trefethen, SIAM Review 46 (2004) 501-517 (from memory).
func NewSurface(s Spec, l0, l1, a0, a1 float64) (*Surface, error) {
	nominal, err := Permeance(s)
	if err != nil {
		return nil, err
	}
	t := &Surface{spec: s, low: [2]float64{l0, a0}, high: [2]float64{l1, a1}, nominal: nominal}
	for d := range 2 {
		t.node[d], t.weight[d] = chebyshev(t.low[d], t.high[d])
	}
	for _, l := range t.node[0] {
		var f, u []float64
		for _, a := range t.node[1] {
			r, err := t.solve(l, a)
			if err != nil {
				return nil, err
			}
			f, u = append(f, r.Factor), append(u, r.Uncertainty)
		}
		t.factor, t.doubt = append(t.factor, f), append(t.doubt, u)
	}
	return t, t.compare()
}

// solve asks the method itself.
func (t *Surface) solve(length, area float64) (Result, error) {
	s := t.spec
	s.Length, s.Face = length, s.Face.Scaled(area)
	return Permeance(s)
}

// compare finds the deviation between the points.
func (t *Surface) compare() error {
	for _, share := range [2][2]float64{{0.07, 0.62}, {0.81, 0.13}} {
		l, a := t.low[0]+share[0]*(t.high[0]-t.low[0]), t.low[1]+share[1]*(t.high[1]-t.low[1])
		r, err := t.solve(l, a)
		if err != nil {
			return err
		}
		got, _ := t.At(l, a)
		t.Error = math.Max(t.Error, math.Abs(got.Factor/r.Factor-1))
	}
	return nil
}

// At gives the result for a length in m and a factor of the area of the face; false outside the ranges. Its notes are
// those of the nominal gap.
func (t *Surface) At(length, area float64) (Result, bool) {
	x := [2]float64{length, area}
	for d := range 2 {
		if slack := 1e-9 * math.Abs(t.high[d]); x[d] < t.low[d]-slack || x[d] > t.high[d]+slack {
			return Result{}, false
		}
	}
	r := t.nominal
	r.Factor, r.Uncertainty = t.interpolate(t.factor, x), t.interpolate(t.doubt, x)
	s := t.spec
	s.Length, s.Face = length, s.Face.Scaled(area)
	return r.of(s), true
}

func (t *Surface) interpolate(values [][]float64, x [2]float64) float64 {
	column := make([]float64, len(values))
	for i := range values {
		column[i] = barycentric(t.node[1], t.weight[1], values[i], x[1])
	}
	return barycentric(t.node[0], t.weight[0], column, x[0])
}

// chebyshev gives the points of the second kind on a range, and their weights.
func chebyshev(low, high float64) (node, weight []float64) {
	if low == high {
		return []float64{low}, []float64{1}
	}
	for k := range points {
		c := -math.Cos(math.Pi * float64(k) / (points - 1))
		w := 1.0
		if k == 0 || k == points-1 {
			w = 0.5
		}
		if k%2 == 1 {
			w = -w
		}
		node, weight = append(node, (low+high)/2+c*(high-low)/2), append(weight, w)
	}
	return node, weight
}

// barycentric is the polynomial through points at x: Berrut and Trefethen, eq. (4.2).
func barycentric(node, weight, y []float64, x float64) float64 {
	above, below := 0.0, 0.0
	for k := range node {
		if x == node[k] {
			return y[k]
		}
		w := weight[k] / (x - node[k])
		above += w * y[k]
		below += w
	}
	return above / below
}
