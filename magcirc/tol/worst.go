package tol

import (
	"context"
	"math"
)

// Band is the range of a result over the limits of its inputs.
type Band struct {
	Nominal, Min, Max float64
	AtMin, AtMax      []float64 // values of the inputs there
	Exhaustive        bool      // every corner was computed
	Inside            bool      // an extreme lies with some input between its limits
	Evaluations       int
	Effects           []Effect
}

// mostAxes is up to how many independent inputs every corner is computed: 2^12 = 4096 of them.
const mostAxes = 12

// WorstCase gives the smallest and the largest result over the corners of the inputs' limits. Up to 12 independent
// inputs every corner is computed; beyond that the corner that the slopes point to, improved by one input at a time
// until none improves it.
//
// Valid: a result that rises or falls throughout with each input has its extremes at corners; nominal values and each
// input alone at its limits are compared as well, and an extreme among them is reported by Inside.
// Errors: as [Effects].
func WorstCase(ctx context.Context, f Function, inputs []Input) (*Band, error) {
	effects, err := Effects(ctx, f, inputs)
	if err != nil {
		return nil, err
	}
	x := nominal(inputs)
	y, err := value(f, x)
	if err != nil {
		return nil, at(err, inputs, x, "at nominal values")
	}
	s := &search{ctx: ctx, f: f, inputs: inputs, axes: axes(inputs)}
	s.band = Band{Nominal: y, Min: math.Inf(1), Max: math.Inf(-1), Effects: effects, Evaluations: 1 + 4*len(effects)}
	s.band.Exhaustive = len(s.axes) <= mostAxes
	if s.band.Exhaustive {
		err = s.everyCorner()
	} else if err = s.climb(-1); err == nil {
		err = s.climb(1)
	}
	if err != nil {
		return nil, err
	}
	s.inside()
	return &s.band, nil
}

type search struct {
	ctx    context.Context
	f      Function
	inputs []Input
	axes   [][]int
	band   Band
}

// corner computes one corner: high[k] puts axis k at its upper limits.
func (s *search) corner(high []bool) (float64, error) {
	if err := s.ctx.Err(); err != nil {
		return 0, err
	}
	x := nominal(s.inputs)
	for k, axis := range s.axes {
		share := -1.0
		if high[k] {
			share = 1
		}
		move(x, s.inputs, axis, share)
	}
	y, err := value(s.f, x)
	if err != nil {
		return 0, at(err, s.inputs, x, "at a corner")
	}
	s.band.Evaluations++
	if y < s.band.Min {
		s.band.Min, s.band.AtMin = y, x
	}
	if y > s.band.Max {
		s.band.Max, s.band.AtMax = y, x
	}
	return y, nil
}

func (s *search) everyCorner() error {
	n := len(s.axes)
	high := make([]bool, n)
	for mask := range 1 << n {
		for k := range high {
			high[k] = mask>>k&1 == 1
		}
		if _, err := s.corner(high); err != nil {
			return err
		}
	}
	return nil
}

// climb goes to the largest (sign 1) or smallest (sign -1) corner.
func (s *search) climb(sign float64) error {
	high := make([]bool, len(s.axes))
	for k, e := range s.band.Effects {
		high[k] = sign*(e.High-e.Low) > 0
	}
	best, err := s.corner(high)
	for improved := true; err == nil && improved; {
		improved = false
		for k := range high {
			high[k] = !high[k]
			var y float64
			if y, err = s.corner(high); err != nil {
				return err
			}
			if sign*(y-best) > 0 {
				best, improved = y, true
				continue
			}
			high[k] = !high[k]
		}
	}
	return err
}

// inside compares the corners with what was computed at nominal and with each input alone.
func (s *search) inside() {
	b := &s.band
	rounding := 1e-12 * math.Max(math.Abs(b.Min), math.Abs(b.Max))
	take := func(y float64, axis []int, share float64) {
		if y >= b.Min-rounding && y <= b.Max+rounding {
			return
		}
		x := nominal(s.inputs)
		move(x, s.inputs, axis, share)
		if b.Inside = true; y < b.Min {
			b.Min, b.AtMin = y, x
		} else {
			b.Max, b.AtMax = y, x
		}
	}
	take(b.Nominal, nil, 0)
	for k, e := range b.Effects {
		if len(s.axes) > 1 {
			take(e.Low, s.axes[k], -1)
			take(e.High, s.axes[k], 1)
		}
	}
}
