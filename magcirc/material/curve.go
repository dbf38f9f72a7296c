package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// Interpolation is the way from one measured point to the next.
type Interpolation int

const (
	Monotone Interpolation = iota // piecewise cubic that keeps the shape of the data
	Straight                      // straight lines, as handbooks read their tables
)

// Points are a measured magnetisation curve: flux density B in T over field strength H in A/m, from small to large
// H. The point (0, 0) may be left out.
type Points struct {
	Source   string    // where the points come from, for messages and notes: "bh.csv"; "" for points typed in
	FirstRow int       // row of the first point in its source; 0 counts points from 1
	H, B     []float64 // A/m and T, of equal length
	Between  Interpolation
}

// NewCurve gives the law through measured points: field strengths h in A/m, rising from 0 or above, and flux
// densities b in T of equal length. It is [Points.Law] with the monotone interpolation.
func NewCurve(h, b []float64) (Law, error) { return Points{H: h, B: b}.Law() }

// A measured curve may rise more slowly than B = mu0 H does, by rounding of its B, up to this share of its largest B.
const slack = 0.01

// Law gives the law through the points. What is interpolated keeps the polarisation J = B - mu0 H from falling, so
// dB/dH >= mu0 everywhere; beyond the last point B rises with mu0 only. It is odd in H.
//
// Where the points rise more slowly than mu0 H, as rounded data do in saturation, B is lifted to it, at most by 1
// percent of the largest B; [Notes] tells by how much.
//
// Errors: [magcirc.BadValue] for fewer than two points, unequal lengths, numbers that are none, negative or
// unsorted H, B not zero at H = 0; [magcirc.NotMonotone] where B falls, or rises more slowly than in air by more
// than the slack; [magcirc.Implausible] for polarisations above 3 T. The message names the point or row.
// Method: [num.MonotoneSlopes], Fritsch and Butland 1984.
func (p Points) Law() (Law, error) {
	h, b, err := p.fromOrigin()
	if err != nil {
		return nil, err
	}
	c := &curve{source: p.Source, count: len(p.H), between: p.Between, lifted: lift(h, b)}
	last := len(b) - 1
	if c.lifted > slack*b[last] {
		return nil, p.tooSlow(h, b)
	}
	c.join(h, b)
	return c, nil
}

// curve is a law through points: cubics of B up to (h, b), slope mu0 beyond.
type curve struct {
	law          *num.Increasing
	h, b, energy float64 // the last point, and the coenergy there
	source       string
	count        int
	between      Interpolation
	lifted       float64 // the most by which a point was lifted, T
	notes        []magcirc.Note
}

// join lays the cubics through points whose J does not fall.
func (c *curve) join(h, b []float64) {
	last := len(h) - 1
	if c.between == Straight {
		c.law = num.NewPolyline(h, b)
	} else {
		j := make([]float64, len(h))
		for i := range j {
			j[i] = b[i] - phys.Mu0*h[i]
		}
		slope := num.MonotoneSlopes(h, j)
		for i := range slope {
			slope[i] += phys.Mu0
		}
		c.law = num.NewIncreasing(h, b, slope)
	}
	c.h, c.b, c.energy = h[last], b[last], c.law.Integral(h[last])
}

func (c *curve) At(h float64) (b, slope float64) {
	x := math.Abs(h)
	if x > c.h {
		return math.Copysign(c.b+phys.Mu0*(x-c.h), h), phys.Mu0
	}
	b, slope = c.law.At(x)
	return math.Copysign(b, h), math.Max(slope, phys.Mu0)
}

func (c *curve) Inverse(b float64) (h, slope float64) {
	y := math.Abs(b)
	if y > c.b {
		return math.Copysign(c.h+(y-c.b)/phys.Mu0, b), 1 / phys.Mu0
	}
	h, slope = c.law.Inverse(y)
	return math.Copysign(h, b), 1 / math.Max(slope, phys.Mu0)
}

func (c *curve) Coenergy(h float64) float64 {
	x := math.Abs(h)
	if x > c.h {
		u := x - c.h
		return c.energy + u*(c.b+phys.Mu0*u/2)
	}
	return c.law.Integral(x)
}

func (c *curve) Range() (hmax, bmax float64) { return c.h, c.b }

func (c *curve) Describe() string {
	s := fmt.Sprintf("curve of %d points", c.count)
	if c.source != "" {
		s = fmt.Sprintf("curve %s, %d points", c.source, c.count)
	}
	if c.between == Straight {
		s += " joined by straight lines"
	}
	return s + " to " + phys.Format(c.b, "T") + " at " + phys.Format(c.h, "A/m")
}

// Notes gives what a reader should know of the law itself.
func (c *curve) Notes() []magcirc.Note {
	notes := c.notes
	if c.lifted > 0 {
		notes = append(notes[:len(notes):len(notes)], magcirc.Note{Kind: magcirc.Remark, Elem: Points{Source: c.source}.name(), Text: fmt.Sprintf(
			"B rises more slowly than in air in places; lifted there by up to %s", phys.FormatDigits(c.lifted, "T", 2))})
	}
	return notes
}

// Notes gives what a reader should know of a law itself, such as points that had to be lifted; most laws have none.
func Notes(law Law) []magcirc.Note {
	if n, ok := law.(interface{ Notes() []magcirc.Note }); ok {
		return n.Notes()
	}
	return nil
}

// lift raises B where it rises more slowly than mu0 H from the highest J so far, in place, and gives the most it raised.
func lift(h, b []float64) (most float64) {
	top := 0.0
	for i := range h {
		j := b[i] - phys.Mu0*h[i]
		if j < top {
			most = math.Max(most, top-j)
			b[i] = top + phys.Mu0*h[i]
		} else {
			top = j
		}
	}
	if most < 1e-12*b[len(b)-1] { // rounding of straight lines
		return 0
	}
	return most
}
