// Package tol computes what the spread of inputs does to a result: sensitivities, the worst case over all corners,
// seeded random draws, the single input that turns a verdict, the uncertainty that methods bring.
//
//	[Effects]     slope and swing of the result for each input alone
//	[WorstCase]   smallest and largest result over the corners of all limits
//	[MonteCarlo]  random draws: mean, deviation, quantiles, yield
//	[Flip]        how far one input alone must move until a margin is used up
//	[Explain]     the move of each input that by itself makes the result a measured one
//	[Propagate]   the uncertainty of a result from those of its inputs
//
//	inputs := []tol.Input{{Name: "gap", Unit: "m", Nominal: 0.45e-3, Half: 0.02e-3}}
//	band, err := tol.WorstCase(ctx, inductance, inputs)
//
// A result is a [Function] of the inputs' values in their order. Inputs of one Group move together, from the lower
// limit of each to its upper one: parts ground in one pass, sheets of one lot. Units: those of the inputs; nothing
// here depends on them.
//
// Left out: correlation other than full, distributions other than uniform and normal, interactions in [Propagate].
package tol

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Shape is how an input is distributed between its limits.
type Shape int

// The shapes.
const (
	Uniform Shape = iota // every value between the limits is equally likely, none beyond
	Normal               // the limits are three standard deviations away; 0.27 % of draws lie beyond
)

// String gives the word for the shape.
func (s Shape) String() string { return [...]string{"uniform", "normal"}[s] }

// Input is a number that may differ from its nominal value.
type Input struct {
	Name    string  // in its user's words: "gap L1.core.gap, length"
	Unit    string  // SI unit, for messages
	Nominal float64 // nominal value
	Half    float64 // limits are Nominal - Half and Nominal + Half; >= 0
	Shape   Shape
	Group   string  // inputs of one group move together; "" alone
	Scale   float64 // [Flip]: the move that counts as one; 0: Half, or a tenth of Nominal
	Least   float64 // [Flip]: the values that the input can have; Least == Most: any
	Most    float64
}

// Function gives the result for values of the inputs, in their order. It must not keep x.
type Function func(x []float64) (float64, error)

// axes gives the independent directions: the inputs of a group together, in the order of first mention.
func axes(inputs []Input) [][]int {
	var all [][]int
	of := map[string]int{}
	for i, in := range inputs {
		if in.Half == 0 {
			continue
		}
		if at, ok := of[in.Group]; ok && in.Group != "" {
			all[at] = append(all[at], i)
			continue
		}
		of[in.Group] = len(all)
		all = append(all, []int{i})
	}
	return all
}

// nominal gives the nominal values.
func nominal(inputs []Input) []float64 {
	x := make([]float64, len(inputs))
	for i, in := range inputs {
		x[i] = in.Nominal
	}
	return x
}

// move sets the inputs of an axis to share of their half widths from nominal: -1 lower limits, +1 upper ones.
func move(x []float64, inputs []Input, axis []int, share float64) {
	for _, i := range axis {
		x[i] = inputs[i].Nominal + share*inputs[i].Half
	}
}

// check refuses inputs that no draw could use.
func check(inputs []Input) error {
	for _, in := range inputs {
		if math.IsNaN(in.Nominal+in.Half) || math.IsInf(in.Nominal+in.Half, 0) || in.Half < 0 {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: in.Name, Quantity: "tolerance", Unit: in.Unit, Got: in.Half,
				Msg: fmt.Sprintf("%s +- %s has no limits", phys.Format(in.Nominal, in.Unit), phys.Format(in.Half, in.Unit)), Hint: "give a tolerance that is not negative"}
		}
	}
	return nil
}

// value asks f and refuses what is no number.
func value(f Function, x []float64) (float64, error) {
	y, err := f(x)
	if err == nil && (math.IsNaN(y) || math.IsInf(y, 0)) {
		err = &magcirc.Error{Code: magcirc.BadValue, Msg: "the result is not a number", Hint: "look where it is computed", Got: y}
	}
	return y, err
}

// at says in an error at which values of the inputs it came up.
func at(err error, inputs []Input, x []float64, where string) error {
	if err == nil {
		return nil
	}
	words := ""
	for i, in := range inputs {
		if in.Half > 0 && len(words) < 160 {
			words += fmt.Sprintf(", %s %s", in.Name, phys.Format(x[i], in.Unit))
		}
	}
	return &magcirc.Error{Code: codeOf(err), Elem: where + words, Msg: err.Error(), Err: err}
}

func codeOf(err error) magcirc.Code {
	if e, ok := err.(*magcirc.Error); ok {
		return e.Code
	}
	return magcirc.NoSolution
}
