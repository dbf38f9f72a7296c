package hyst

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Accommodation is a series of minor loops around a bias: how they creep before they repeat.
type Accommodation struct {
	Tip   []float64 // B in T at the upper tip: before the first cycle, then after each
	Creep []float64 // change of Tip over each cycle in T
	Loop  *Loop     // the last cycle
}

// Minor gives cycles of the minor loop between bias-amplitude and bias+amplitude, field strengths in A/m, that follow
// on state s: the state is first taken to the upper tip. State s is left as it was.
//
// Jiles-Atherton loops creep for many cycles towards the anhysteretic curve; loops of play cells close at once.
// Errors: [magcirc.BadValue] for an amplitude that is not positive, less than one cycle, or more than a million.
func Minor(law Law, s State, bias, amplitude float64, cycles int, set *Settings) (*Accommodation, error) {
	switch {
	case !(amplitude > 0) || math.IsInf(amplitude, 1) || math.IsNaN(bias) || math.IsInf(bias, 0):
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "minor loop", Quantity: "amplitude", Unit: "A/m", Got: amplitude,
			Msg: fmt.Sprintf("amplitude %s about %s is no swing", phys.Format(amplitude, "A/m"), phys.Format(bias, "A/m"))}
	case cycles < 1 || cycles > 1e6:
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "minor loop", Quantity: "cycles", Got: float64(cycles), Limit: 1,
			Msg: fmt.Sprintf("%d cycles", cycles), Hint: "give 1 to 1000000"}
	}
	now := s.Clone()
	tip := func(s *State, up bool) Point {
		if up {
			return law.ByField(s, bias+amplitude)
		}
		return law.ByField(s, bias-amplitude)
	}
	a := &Accommodation{}
	top := tip(&now, true)
	law.Commit(&now, top)
	a.Tip = append(a.Tip, top.B)
	for n := range cycles {
		if n == cycles-1 {
			a.Loop = take(law, &now, tip, set)
		} else {
			law.Commit(&now, tip(&now, false))
			law.Commit(&now, tip(&now, true))
		}
		b := law.Now(&now).B
		a.Creep = append(a.Creep, b-a.Tip[n])
		a.Tip = append(a.Tip, b)
	}
	a.Loop.Cycles = cycles
	lo, hi := a.Loop.span()
	a.Loop.Drift = math.Abs(a.Creep[cycles-1]) / (hi - lo)
	a.Loop.Notes = append(a.Loop.Notes, magcirc.Note{Kind: magcirc.Remark, Elem: a.Loop.elem(), Text: a.String()})
	return a, nil
}

// Total gives the creep in T from the first upper tip to the last.
func (a *Accommodation) Total() float64 { return a.Tip[len(a.Tip)-1] - a.Tip[0] }

// String says how the loops creep.
func (a *Accommodation) String() string {
	n := len(a.Creep)
	lo, hi := a.Loop.span()
	if math.Abs(a.Creep[0]) <= 1e-9*(hi-lo) && math.Abs(a.Total()) <= 1e-9*(hi-lo) {
		return "minor loops close at once"
	}
	return fmt.Sprintf("minor loops creep: tip by %s in the first cycle, %s in cycle %d, %s in all",
		phys.FormatDigits(a.Creep[0], "T", 3), phys.FormatDigits(a.Creep[n-1], "T", 3), n, phys.FormatDigits(a.Total(), "T", 3))
}
