package dsl

import (
	"fmt"
	"math"
	"reflect"
	"runtime"
	"strings"
	"sync/atomic"

	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/tol"
)

// Sample is one set of values that tolerances can take: that of [WorstCase], or a draw of [MonteCarlo]. The function that
// they call gets it and asks it for its parts and numbers.
type Sample struct {
	of    *roster
	x     []float64 // nil in the first, nominal call
	group string
}

// roster lists what a sampled function asks for, as its first call, with nominal values, finds it.
type roster struct {
	elem   string
	inputs []input
	index  map[string]int
	closed bool

	parts    map[*path]*drawnPart
	circuits []*MagneticCircuit
}

// Part is the circuit with the values of this sample in place of its tolerances. A part or a material that is used in
// two circuits has the same value in both.
func (s *Sample) Part(circuit *MagneticCircuit) *MagneticCircuit {
	s.given()
	circuit.given()
	if circuit.drawn {
		return circuit
	}
	part := s.of.part(circuit)
	x := make([]float64, len(part.inputs))
	for i := range part.inputs {
		x[i] = s.take(part.inputs[i])
	}
	if !s.of.closed { // nominal: what it assumes enters the document
		next := *circuit
		next.of, next.variant = part, true
		return &next
	}
	next := circuit.with(part.inputs, x)
	next.of = part
	return next
}

// Of is a number of one's own with a tolerance given as a share of it: a capacitor, a current limit.
//
//	s.Of("Cr", 47*nF, 5*percent)
func (s *Sample) Of(name string, nominal Value, tolerance Ratio) Value {
	return s.OfWithUnits(nil, name, nominal, tolerance)
}

// OfWithUnits is [Sample.Of] with the unit of its number.
func (s *Sample) OfWithUnits(units []string, name string, nominal Value, tolerance Ratio) Value {
	s.given()
	wantName(s.of.elem+" input", name)
	wantFinite(name, "nominal value", nominal, "")
	wantRange(name, "tolerance", tolerance, 0, 0.99, "")
	return s.number(name, unitOf(unitAt(units, 1)), nominal, tolerance*math.Abs(nominal))
}

// Between is a number of one's own between two limits: an ambient temperature, a supply voltage. Its nominal value is
// half way.
func (s *Sample) Between(name string, low, high Value) Value {
	return s.BetweenWithUnits(nil, name, low, high)
}

// BetweenWithUnits is [Sample.Between] with the units of its limits.
func (s *Sample) BetweenWithUnits(units []string, name string, low, high Value) Value {
	s.given()
	wantName(s.of.elem+" input", name)
	wantFinite(name, "lower limit", low, "")
	wantFinite(name, "upper limit", high, "")
	if low >= high {
		refuseValue(magcirc.BadValue, name, "lower limit", low, high, "", "is not below the upper one", "the lower limit comes first")
	}
	text := unitOf(unitAt(units, 1))
	if text == "" {
		text = unitOf(unitAt(units, 2))
	}
	return s.number(name, text, (low+high)/2, (high-low)/2)
}

func (s *Sample) number(name, unit string, nominal, half float64) float64 {
	return s.take(input{Input: tol.Input{Name: name, Unit: unit, Nominal: nominal, Half: half, Group: s.group}, current: -1})
}

// Together has the numbers that are asked for through it move together with all others of the same group.
//
//	batch := s.Together("capacitors of one batch")
//	batch.Of("C1", 47*nF, 5*percent)
func (s *Sample) Together(group string) *Sample {
	s.given()
	wantName(s.of.elem+" group", group)
	next := *s
	next.group = group
	return &next
}

func (s *Sample) given() {
	if s == nil || s.of == nil {
		refuse(magcirc.BadValue, "sample", "there is none", "WorstCase and MonteCarlo give it to the function that they call")
	}
}

// take gives the value of an input in this sample.
func (s *Sample) take(in input) float64 {
	i, known := s.of.index[in.Name]
	switch {
	case known && (s.of.inputs[i].Nominal != in.Nominal || s.of.inputs[i].Half != in.Half):
		refuse(magcirc.Inconsistent, s.of.elem, fmt.Sprintf("%s is %s here and %s elsewhere", in.Name, in.tolerance(), s.of.inputs[i].tolerance()), "one name, one number with its tolerance")
	case !known && s.of.closed:
		refuse(magcirc.Inconsistent, s.of.elem, in.Name+" is asked for in some samples only", "ask for it before the function branches")
	case !known:
		s.of.index[in.Name] = len(s.of.inputs)
		s.of.inputs = append(s.of.inputs, in)
		return in.Nominal
	case s.x == nil:
		return in.Nominal
	}
	return s.x[i]
}

// sampling counts the calls of sampled functions under way, in which nothing enters the document.
var sampling atomic.Int32

// WorstCase gives the smallest and the largest result over all corners of the tolerances that a function asks its sample
// for: every corner for up to twelve of them, beyond that those that the slopes point to.
//
//	b := WorstCase(func(s *Sample) Henry { return s.Part(T1).Solve().Inductance("main") })
//	Limit("L", b.Min(), AtLeast(8*uH), b)
func WorstCase(same func(s *Sample) Value) *Band { return WorstCaseWithUnits(nil, same) }

// WorstCaseWithUnits is [WorstCase] with the unit of what its function gives.
func WorstCaseWithUnits(units []string, same func(s *Sample) Value) *Band {
	b, f := survey("WorstCase", unitOf(unitAt(units, 0)), same)
	defer sampling.Add(-1)
	w := must(tol.WorstCase(session.Context(), watched("WorstCase", 0, f), below(b.inputs)))
	b.worst, b.nominal, b.min, b.max, b.atMin, b.atMax, b.effects = w, w.Nominal, w.Min, w.Max, w.AtMin, w.AtMax, w.Effects
	for _, n := range b.inside() {
		review.Assume(n.String(), review.OutOfRange, "MonteCarlo(10000, 1, ...) looks between the limits")
	}
	return b
}

// MonteCarlo gives the result over random draws of the tolerances that a function asks its sample for. The same seed gives
// the same draws, on any number of cores. A function written in a cell is called by one core, for it may change what
// it likes; [MagneticCircuit.InductanceAt] and [MagneticCircuit.FluxDensityAt] give functions that all cores call.
//
//	b := MonteCarlo(10000, 7, func(s *Sample) Henry { return s.Part(T1).Solve().Inductance("main") })
func MonteCarlo(count, seed Count, same func(s *Sample) Value) *Band {
	return MonteCarloWithUnits(nil, count, seed, same)
}

// MonteCarloWithUnits is [MonteCarlo] with the unit of what its function gives.
func MonteCarloWithUnits(units []string, count, seed Count, same func(s *Sample) Value) *Band {
	if count != math.Trunc(count) || count < 2 || count > 1e7 {
		refuseValue(magcirc.BadValue, "MonteCarlo", "number of draws", count, 2, "", "is not a whole number from 2 to 10000000", "10000 draws are usual")
	}
	if seed != math.Trunc(seed) || seed < 0 || seed > 1<<53 {
		refuseValue(magcirc.BadValue, "MonteCarlo", "seed", seed, 0, "", "is not a whole number from zero", "any number will do: 1")
	}
	b, f := survey("MonteCarlo", unitOf(unitAt(units, 2)), same)
	defer sampling.Add(-1)
	if count >= 200 { // fewer draws cost less than the tables
		b.of.tabulate()
	}
	d := tol.Draws{Count: int(count), Seed: uint64(seed), Workers: 1}
	if compiled(same) {
		d.Workers = runtime.GOMAXPROCS(0)
	}
	r := must(tol.MonteCarlo(session.Context(), watched("MonteCarlo", count, f), below(b.inputs), d))
	b.drawn, b.seed = r, uint64(seed)
	b.nominal, b.min, b.max, b.atMin, b.atMax, b.effects = r.Nominal, r.Min, r.Max, r.AtMin, r.AtMax, r.Effects
	b.assume()
	session.Rest(session.Source{Kind: "seed", Name: fmt.Sprintf("MonteCarlo of %d draws", d.Count), Value: fmt.Sprint(d.Seed)})
	return b
}

// survey calls a function with nominal values to find what it asks for, and gives it as a function of these inputs. The
// caller ends the sampling.
func survey(elem, unit string, same func(s *Sample) float64) (*Band, tol.Function) {
	if same == nil {
		refuse(magcirc.BadValue, elem, "there is no function", "write "+elem+"(..., func(s *Sample) Henry { ... })")
	}
	if sampling.Add(1) > 1 {
		sampling.Add(-1)
		refuse(magcirc.WrongUse, elem, "is called within a sampled function", "sample once, around everything")
	}
	failed := true
	defer func() {
		if failed {
			sampling.Add(-1)
		}
	}()
	of := &roster{elem: elem, index: map[string]int{}, parts: map[*path]*drawnPart{}}
	value := same(&Sample{of: of})
	wantFinite(elem, "result at nominal values", value, unit)
	of.closed = true
	b := &Band{elem: elem, unit: unit, of: of, inputs: of.inputs, nominal: value, from: answerOf(value)}
	if b.unit == "" && b.from != nil {
		b.unit = b.from.unit
	}
	if !b.spreads() {
		refuse(magcirc.WrongUse, elem, "nothing in its function has a tolerance", `ask for s.Part(T1) with parts that have .PlusMinus or .Tolerance, or for s.Of("Cr", 47*nF, 5*percent)`)
	}
	failed = false
	return b, func(x []float64) (y float64, err error) {
		err = Try(func() { y = same(&Sample{of: of, x: x}) })
		return y, err
	}
}

// compiled tells whether a function is one of this package, which keeps nothing between its calls.
func compiled(f any) bool {
	fn := runtime.FuncForPC(reflect.ValueOf(f).Pointer())
	return fn != nil && strings.HasPrefix(fn.Name(), "ampturn/dsl.(*MagneticCircuit).")
}

// InductanceAt gives, for [WorstCase] and [MonteCarlo], the incremental inductance of a winding under a drive: the same as
//
//	func(s *Sample) Henry { return s.Part(T1).Solve(drives).Inductance(winding) }
//
// and called by all cores at once.
func (c *MagneticCircuit) InductanceAt(winding string, drives ...Drive) func(s *Sample) Henry {
	d := c.driveOf(drives)
	w := c.windingOf(winding)
	return func(s *Sample) float64 {
		op := s.state(c, d)
		if !op.circuit.drawn {
			return op.Inductance(winding)
		}
		return must(op.solution.Incremental()).At(w, w)
	}
}

// FluxDensityAt gives, for [WorstCase] and [MonteCarlo], the flux density in a leg or a path under a drive.
func (c *MagneticCircuit) FluxDensityAt(path string, drives ...Drive) func(s *Sample) Tesla {
	c.pathOrPart(path)
	d := c.driveOf(drives)
	return func(s *Sample) float64 { return s.state(c, d).FluxDensity(path) }
}
