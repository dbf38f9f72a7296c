package tol

import (
	"cmp"
	"context"
	"math"
	"slices"
)

// Move is a single input moved until a margin is used up.
type Move struct {
	Input  int
	To, By float64 // the value of the input, and its distance from nominal
	Value  float64 // the result there, computed
	Margin float64 // the margin there, computed: next to nothing
	Length float64 // By in units of the input's Scale
}

// Flip gives the single input that turns a verdict with the smallest move, all others nominal; false where none of them
// does within ten times its Scale. The slopes of the margin say which inputs to try, and a root search with the
// function itself finds how far.
//
// Inputs: margin, of a result: positive on one side of the bound, negative on the other.
// Errors: as [Effects]; a move into values that f refuses ends the search of that input.
func Flip(ctx context.Context, f Function, inputs []Input, margin func(y float64) float64) (Move, bool, error) {
	all, err := moves(ctx, f, inputs, margin, tried, reach)
	if err != nil || len(all) == 0 {
		return Move{}, false, err
	}
	return all[0], true, nil
}

// Explain gives for each input the move that by itself makes the result a wanted one, the shortest in units of the inputs'
// Scale first; inputs that cannot within fifty times their Scale are left out.
//
// Errors: as [Flip].
func Explain(ctx context.Context, f Function, inputs []Input, want float64) ([]Move, error) {
	return moves(ctx, f, inputs, func(y float64) float64 { return y - want }, len(inputs), 5*reach)
}

func moves(ctx context.Context, f Function, inputs []Input, margin func(y float64) float64, most int, far float64) ([]Move, error) {
	y, err := value(f, nominal(inputs))
	if err != nil {
		return nil, err
	}
	s := &flip{ctx: ctx, f: f, inputs: inputs, margin: margin, nominal: margin(y), reach: far}
	var all []Move
	order := s.ranked()
	for _, i := range order[:min(len(order), most)] {
		if m, ok := s.seek(i); ok {
			all = append(all, m)
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
	}
	slices.SortStableFunc(all, func(a, b Move) int { return cmp.Compare(math.Abs(a.Length), math.Abs(b.Length)) })
	return all, nil
}

type flip struct {
	ctx     context.Context
	f       Function
	inputs  []Input
	margin  func(y float64) float64
	nominal float64
	guess   []float64 // by input: the move that a straight line would need
	reach   float64   // how far an input is moved, in units of its scale
}

// reach is how far an input is moved to turn a verdict, in units of its scale.
const reach = 10

// tried is how many inputs are moved by the function itself.
const tried = 4

func (in Input) scale() float64 {
	switch {
	case in.Scale > 0:
		return in.Scale
	case in.Half > 0:
		return in.Half
	}
	return math.Abs(in.Nominal) / 10
}

// at gives the margin with one input at x.
func (s *flip) at(i int, x float64) (m, y float64, err error) {
	v := nominal(s.inputs)
	v[i] = x
	if y, err = value(s.f, v); err != nil {
		return 0, 0, err
	}
	return s.margin(y), y, nil
}

// ranked lists the inputs to try, the nearest first by the slopes.
func (s *flip) ranked() []int {
	s.guess = make([]float64, len(s.inputs))
	var order []int
	for i, in := range s.inputs {
		scale := in.scale()
		if scale == 0 {
			continue
		}
		d := scale * 1e-3
		up, _, err1 := s.at(i, in.Nominal+d)
		down, _, err2 := s.at(i, in.Nominal-d)
		slope := (up - down) / (2 * d)
		if err1 != nil || err2 != nil || math.Abs(slope)*scale < 1e-9*math.Abs(s.nominal) {
			continue
		}
		s.guess[i] = -s.nominal / slope
		if math.Abs(s.guess[i]) < 5*s.reach*scale {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int {
		return cmp.Compare(math.Abs(s.guess[a])/s.inputs[a].scale(), math.Abs(s.guess[b])/s.inputs[b].scale())
	})
	return order
}

// seek moves one input outwards until the margin changes its sign, then closes in on the place.
func (s *flip) seek(i int) (Move, bool) {
	in := s.inputs[i]
	side := math.Copysign(1, s.guess[i])
	most := s.reach * in.scale()
	near, far := 0.0, math.Min(math.Max(math.Abs(s.guess[i]), 1e-6*in.scale()), most)
	mNear := s.nominal
	if mNear == 0 {
		return Move{Input: i, To: in.Nominal}, true
	}
	for {
		if s.ctx.Err() != nil {
			return Move{}, false
		}
		x := in.Nominal + side*far
		if in.Least < in.Most {
			x = math.Min(math.Max(x, in.Least), in.Most)
		}
		m, _, err := s.at(i, x)
		if err != nil {
			return Move{}, false
		}
		if m*mNear <= 0 {
			return s.close(i, in.Nominal+side*near, mNear, x, m)
		}
		if far >= most || x != in.Nominal+side*far {
			return Move{}, false
		}
		near, mNear, far = far, m, math.Min(far*1.4, most)
	}
}

// close finds the place between two values by the Illinois form of false position.
func (s *flip) close(i int, a, ma, b, mb float64) (Move, bool) {
	in := s.inputs[i]
	x, m, y := b, mb, 0.0
	for n := 0; n < 60; n++ {
		if math.Abs(b-a) <= 1e-9*in.scale() || ma == mb {
			break
		}
		x = b - mb*(b-a)/(mb-ma)
		var err error
		if m, y, err = s.at(i, x); err != nil {
			return Move{}, false
		}
		if math.Abs(m) <= 1e-9*math.Abs(s.nominal) {
			break
		}
		if m*mb < 0 {
			a, ma = b, mb
		} else {
			ma /= 2
		}
		b, mb = x, m
	}
	if y == 0 {
		var err error
		if m, y, err = s.at(i, x); err != nil {
			return Move{}, false
		}
	}
	if math.Abs(m) > 1e-3*math.Abs(s.nominal) {
		return Move{}, false // a jump, not a crossing
	}
	return Move{Input: i, To: x, By: x - in.Nominal, Value: y, Margin: m, Length: (x - in.Nominal) / in.scale()}, true
}
