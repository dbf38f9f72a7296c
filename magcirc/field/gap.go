package field

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Boundary says what limits the space beside the gap.
type Boundary int

// The boundaries.
const (
	Open   Boundary = iota // nothing: the pole's side runs on, the space has no end; flux is counted up to Wall
	Mirror                 // no flux crosses the window's wall at Span, nor the plane at the end of the pole's side
	Iron                   // iron at the potential of the mid-plane at Span; no flux crosses the end of the pole's side
)

// String gives the boundary's name.
func (b Boundary) String() string {
	switch b {
	case Open:
		return "open"
	case Mirror:
		return "mirror"
	case Iron:
		return "iron"
	}
	return "unknown"
}

// Plane is the gap between two long rectangular poles, seen in a section across them.
type Plane struct {
	Width    float64  // width w of the poles, m
	Length   float64  // length g of the gap, pole to pole, m
	Wall     float64  // height h of the side of one pole, from its face to its end, m
	Span     float64  // distance from the pole's side to the wall of the window, m; not used by Open
	Boundary Boundary // what is at the span
	Steps    int      // steps of the fine grid per segment, an even number from 8 to 256; 0 stands for 32
}

// Round is the gap between two round or annular poles on one axis.
type Round struct {
	Outer    float64  // outer diameter of the poles, m
	Inner    float64  // diameter of the hole in them, m; 0: none
	Length   float64  // length g of the gap, pole to pole, m
	Wall     float64  // height h of the side of one pole, m
	Span     float64  // distance from the pole's side to the wall of the window, m; not used by Open
	Boundary Boundary // what is at the span
	Steps    int      // steps of the fine grid per segment, an even number from 8 to 256; 0 stands for 32
}

// Solution is the solved gap.
type Solution struct {
	Factor      float64 // fringing factor F: flux of the pole over the flux of a uniform field below its face
	Permeance   float64 // plane: per metre of depth, H/m; round: H
	Uncertainty float64 // relative uncertainty of the factor from the step of the grid, |F(h) - F(2h)|/(3 F)
	Fine        float64 // factor on the fine grid
	Coarse      float64 // factor on the grid of half as many steps
	Unknowns    int     // of the fine grid
	Iterations  int     // of the conjugate gradients on the fine grid
	Map         Map     // the field on the fine grid, for drawing
}

const defaultSteps = 32

// PlaneGap returns the fringing factor F and the permeance per metre of depth, in H/m, of a plane gap.
//
//	F = flux / (mu0 w/g),  flux per metre and unit difference of potential
//
// Inputs: the gap p, lengths in m. Valid: any ratio of the lengths from 1/100000 to 100000; the pole's side up to Wall
// counts as part of the pole. The result is extrapolated from two grids by the second order of the method.
// Errors: [magcirc.BadValue] for a length that is not positive and finite, or a ratio out of range;
// [magcirc.NoConvergence] if the equations do not meet their tolerance.
// Source: finite volumes, R. S. Varga, Matrix Iterative Analysis, 1962, sec. 6.3 (from memory); checked against the
// exact Schwarz-Christoffel mapping of the corner.
func PlaneGap(p Plane) (*Solution, error) {
	g := geometry{half: p.Width / 2, gap: p.Length / 2, wall: p.Wall, span: p.Span, boundary: p.Boundary}
	if err := check(p.Steps, p.Boundary, named{"width", p.Width}, named{"length", p.Length}, named{"side wall", p.Wall},
		named{"span", p.Span}); err != nil {
		return nil, err
	}
	s, err := solve(g, p.Steps)
	if err != nil {
		return nil, err
	}
	s.Permeance = phys.Mu0 * p.Width / p.Length * s.Factor
	return s, nil
}

// RoundGap returns the fringing factor F and the permeance, in H, of a gap between round or annular poles.
//
//	F = flux / (mu0 A/g),  A = pi/4 (Outer^2 - Inner^2), flux per unit difference of potential
//
// Inputs: the gap r, lengths in m. Valid and Errors: as [PlaneGap]; the hole of an annular pole has sides as high as
// the outer one. Source: as [PlaneGap], with the weights of rotational symmetry.
func RoundGap(r Round) (*Solution, error) {
	g := geometry{half: (r.Outer - r.Inner) / 2, hole: r.Inner / 2, gap: r.Length / 2, wall: r.Wall, span: r.Span,
		boundary: r.Boundary, round: true}
	checks := []named{{"diameter", r.Outer}, {"length", r.Length}, {"side wall", r.Wall}, {"span", r.Span}}
	if r.Inner != 0 {
		checks = append(checks, named{"hole", r.Inner}, named{"breadth of the ring", g.half})
	}
	if err := check(r.Steps, r.Boundary, checks...); err != nil {
		return nil, err
	}
	s, err := solve(g, r.Steps)
	if err != nil {
		return nil, err
	}
	s.Permeance = phys.Mu0 * math.Pi / 4 * (r.Outer*r.Outer - r.Inner*r.Inner) / r.Length * s.Factor
	return s, nil
}

// named is a length with its name.
type named struct {
	name  string
	value float64
}

// maxRatio is the largest ratio of two lengths of one gap that the grid is made for.
const maxRatio = 100000

func check(steps int, b Boundary, lengths ...named) error {
	if steps != 0 && (steps < 8 || steps > 256 || steps%2 != 0) {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: "field of the gap", Quantity: "steps", Got: float64(steps), Limit: 256,
			Msg: fmt.Sprintf("%d steps per segment", steps), Hint: "An even number from 8 to 256 is possible"}
	}
	if b < Open || b > Iron {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: "field of the gap", Quantity: "boundary", Got: float64(b),
			Msg: fmt.Sprintf("boundary %d is not known", b), Hint: "Open, Mirror and Iron are possible"}
	}
	smallest, largest := math.Inf(1), 0.0
	for _, l := range lengths {
		if l.name == "span" && b == Open {
			continue
		}
		if !(l.value > 0) || math.IsInf(l.value, 1) {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: "field of the gap", Quantity: l.name, Unit: "m", Got: l.value,
				Msg: fmt.Sprintf("%s %g m must be positive", l.name, l.value)}
		}
		smallest, largest = math.Min(smallest, l.value), math.Max(largest, l.value)
	}
	if largest > maxRatio*smallest {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: "field of the gap", Quantity: "ratio of lengths", Got: largest / smallest,
			Limit: maxRatio, Msg: fmt.Sprintf("lengths from %g m to %g m differ by more than a factor %d", smallest, largest, maxRatio),
			Hint: "a formula for short gaps is exact enough there"}
	}
	return nil
}

// solve runs the two grids and extrapolates.
func solve(g geometry, steps int) (*Solution, error) {
	if steps == 0 {
		steps = defaultSteps
	}
	coarse, err := g.grid(steps / 2).solve()
	if err != nil {
		return nil, err
	}
	fine, err := g.grid(steps).solve()
	if err != nil {
		return nil, err
	}
	f := fine.factor + (fine.factor-coarse.factor)/3 // second order
	return &Solution{
		Factor:      f,
		Uncertainty: math.Abs(fine.factor-coarse.factor) / 3 / f,
		Fine:        fine.factor,
		Coarse:      coarse.factor,
		Unknowns:    fine.unknowns,
		Iterations:  fine.iterations,
		Map:         fine.chart(),
	}, nil
}
