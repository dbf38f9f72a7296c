package gap

import (
	"errors"
	"fmt"
	"math"
	"sync"

	"ampturn/magcirc"
	"ampturn/magcirc/field"
	"ampturn/magcirc/geom"
	"ampturn/magcirc/phys"
)

// factor is what is kept of a field solution.
type factor struct{ f, grid float64 }

// Field solutions of this process by their exact geometry. A solution depends on its geometry only, so the order in
// which goroutines ask does not matter.
var (
	planes = solved[field.Plane]{solve: field.PlaneGap}
	rounds = solved[field.Round]{solve: field.RoundGap}
)

// solved keeps field solutions; when full it starts anew.
type solved[K comparable] struct {
	solve func(K) (*field.Solution, error)
	mu    sync.Mutex
	known map[K]factor
}

const keptSolutions = 4096

func (c *solved[K]) at(k K) (factor, error) {
	c.mu.Lock()
	f, ok := c.known[k]
	c.mu.Unlock()
	if ok {
		return f, nil
	}
	s, err := c.solve(k)
	if err != nil {
		return factor{}, err
	}
	f = factor{s.Factor, s.Uncertainty}
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.known == nil || len(c.known) >= keptSolutions {
		c.known = make(map[K]factor)
	}
	c.known[k] = f
	return f, nil
}

// openShare is the share of the fringing that a window's wall, where it is not known, may change: 0.05 for a pole in a
// window half as broad as the pole, doubled.
const openShare = 0.1

// fieldSolve solves the field: about the axis for round and annular poles; in the two planes of a rectangle, whose
// factors are multiplied; for a face of unknown shape about the axis of the disc of equal area, which has the
// shortest edge of all. With a known span no flux crosses the window's wall: what it takes up is a stray path.
func (s Spec) fieldSolve() (Result, error) {
	h, _ := s.side()
	r := Result{Validity: "lengths that differ by less than 1 to 100000; poles not saturated",
		Source: "finite volumes on a graded grid, R. S. Varga, Matrix Iterative Analysis, 1962 (from memory); checked against the exact mapping"}
	var err error
	switch s.Face.Shape {
	case geom.Rectangle:
		err = s.solveRectangle(&r, h)
	case geom.PlainArea:
		d := 2 * math.Sqrt(s.Face.Gross()/math.Pi)
		err = s.solveRound(&r, d, 0, h)
		r.Uncertainty += spread * (r.Factor - 1) / r.Factor
		r.note(magcirc.Assumed, s.Elem, fmt.Sprintf("shape of the faces not known, a disc of equal area taken (diameter %s): no shape has less fringing", phys.Format(d, "m")))
	default:
		err = s.solveRound(&r, s.Face.Do, s.Face.Di, h)
	}
	if err != nil {
		var e *magcirc.Error
		if errors.As(err, &e) {
			named := *e
			named.Elem = s.Elem
			return Result{}, &named
		}
		return Result{}, err
	}
	s.noteSide(&r)
	if s.Span == 0 {
		r.Uncertainty += openShare * (r.Factor - 1) / r.Factor
		r.note(magcirc.Assumed, s.Elem, "breadth of the window not known: open space beside the poles")
	}
	return r, nil
}

// solveRound solves about the axis.
func (s Spec) solveRound(r *Result, outer, inner, h float64) error {
	k := field.Round{Outer: outer, Inner: inner, Length: s.Length, Wall: h, Span: s.Span}
	if s.Span > 0 {
		k.Boundary = field.Mirror
	}
	a, err := rounds.at(k)
	if err != nil {
		return err
	}
	r.Factor, r.Uncertainty = a.f, a.grid
	if s.Span > 0 {
		k.Boundary = field.Iron
		iron, err := rounds.at(k)
		if err != nil {
			return err
		}
		s.noteWall(r, iron.f/a.f)
	}
	return nil
}

// solveRectangle solves the plane across the width, in which the window lies, and the open one across the depth.
func (s Spec) solveRectangle(r *Result, h float64) error {
	across := field.Plane{Width: s.Face.W, Length: s.Length, Wall: h, Span: s.Span}
	if s.Span > 0 {
		across.Boundary = field.Mirror
	}
	x, err := planes.at(across)
	if err != nil {
		return err
	}
	y, err := planes.at(field.Plane{Width: s.Face.D, Length: s.Length, Wall: h})
	if err != nil {
		return err
	}
	r.Factor = x.f * y.f
	tall := s.tallness(h)
	r.Uncertainty = x.grid + y.grid + s.composition(r.Factor, tall)
	if s.Span > 0 {
		across.Boundary = field.Iron
		iron, err := planes.at(across)
		if err != nil {
			return err
		}
		s.noteWall(r, iron.f/x.f)
	}
	if tall <= tallNote {
		return nil
	}
	disc, err := rounds.at(field.Round{Outer: 2 * math.Sqrt(s.Face.Gross()/math.Pi), Length: s.Length, Wall: h})
	if err != nil {
		return err
	}
	r.Uncertainty = math.Max(r.Uncertainty, math.Abs(disc.f/r.Factor-1))
	r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("the pole's side is %.2g times its radius: two planes multiplied give a factor %.3g, the round pole of equal area %.3g",
		tall, r.Factor, disc.f))
	return nil
}

// noteWall counts half of what an iron wall would take up as uncertainty.
func (s Spec) noteWall(r *Result, ratio float64) {
	r.Uncertainty += (ratio - 1) / 2
	r.note(magcirc.Remark, s.Elem, fmt.Sprintf("no flux crosses the window's wall; were it iron at the potential of the gap's middle it would take up %.2g %% more, which is a stray path",
		100*(ratio-1)))
}
