// Package review keeps the verdicts of a notebook: values judged against limits, requirements that wait for their
// check, open points, waivers. It arranges them in one table and counts them for the exit code. It knows limits and
// words, and nothing of what the values stand for.
//
//	status   it means
//	PASS     the value keeps the limit
//	FAIL     it does not
//	OPEN     nothing has judged it yet
//	WAIVED   it fails or is open, and somebody answers for that by name
//
// A verdict belongs to the cell that stated it; running that cell again replaces it.
package review

import (
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Kind is the kind of a rule.
type Kind int

// The kinds of rule.
const (
	AtMost    Kind = iota // the magnitude does not exceed High; a temperature itself
	AtLeast               // the value is not below Low
	Within                // the value, with its sign, lies in Low..High
	Tolerance             // the value lies within Share of Nominal
)

// Rule is a limit on one value.
type Rule struct {
	Kind           Kind
	Low, High      float64 // infinite where there is none
	Nominal, Share float64 // of a Tolerance
	Unit           string  // SI unit of the bounds; "" for none, "?" where it is not known
}

// NewRule makes a rule. AtMost and AtLeast take a bound, Within takes two, Tolerance a nominal value and a share.
//
// Errors: [magcirc.BadValue] for bounds that are no numbers or that nothing could miss or meet, and for a share of a
// temperature, whose zero means nothing.
func NewRule(kind Kind, unit string, first, second float64) (Rule, error) {
	r := Rule{Kind: kind, Unit: unit, Low: math.Inf(-1), High: math.Inf(1)}
	elem := [...]string{"AtMost", "AtLeast", "Within", "Tolerance"}[kind]
	refuse := func(msg, hint string) (Rule, error) {
		return Rule{}, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Msg: msg, Hint: hint, Quantity: "limit", Got: first}
	}
	if math.IsNaN(first-first) || math.IsNaN(second-second) { // infinite too
		return refuse("limit is not a number", "look where it was computed")
	}
	switch kind {
	case AtMost:
		if first < 0 && unit != celsius {
			return refuse("limit "+phys.Format(first, known(unit))+" is negative, and AtMost judges the magnitude", "write Within(low, high) for a signed bound")
		}
		r.High = first
	case AtLeast:
		r.Low = first
	case Within:
		if first >= second {
			return refuse("the lower bound "+phys.Format(first, known(unit))+" is not below the upper one, "+phys.Format(second, known(unit)), "write Within(low, high)")
		}
		r.Low, r.High = first, second
	case Tolerance:
		switch {
		case unit == celsius:
			return refuse("a share of "+phys.Format(first, unit)+" is no range of temperature", "write Within(low, high)")
		case first == 0:
			return refuse("a share of zero is no range", "write Within(low, high)")
		}
		if second <= 0 || second >= 10 {
			return refuse("the tolerance "+phys.Format(second, "percent")+" is outside 0..1000 %", "write Tolerance(630*uH, 8*percent)")
		}
		half := math.Abs(first) * second
		r.Nominal, r.Share, r.Low, r.High = first, second, first-half, first+half
	}
	return r, nil
}

// celsius is the one unit whose magnitude means nothing.
const celsius = "degC"

// Margin is what is left to the nearest bound, in the value's unit; negative: by how much the value misses.
func (r Rule) Margin(value float64) float64 {
	if r.Kind == AtMost && r.Unit != celsius {
		value = math.Abs(value)
	}
	return math.Min(r.High-value, value-r.Low)
}

// MarginShare is the margin relative to the bound that is nearest; for a range, to half its width.
func (r Rule) MarginShare(value float64) float64 {
	reference := r.High
	switch r.Kind {
	case AtLeast:
		reference = r.Low
	case Within, Tolerance:
		reference = (r.High - r.Low) / 2
	}
	if reference == 0 || r.Unit == celsius {
		return math.NaN()
	}
	return r.Margin(value) / math.Abs(reference)
}

// Keeps says whether a value keeps the rule: at the bound it does.
func (r Rule) Keeps(value float64) bool { return r.Margin(value) >= 0 }

// String says the rule in words: "at most 0.32 T".
func (r Rule) String() string {
	unit := known(r.Unit)
	switch r.Kind {
	case AtMost:
		return "at most " + phys.Format(r.High, unit)
	case AtLeast:
		return "at least " + phys.Format(r.Low, unit)
	case Tolerance:
		return phys.Format(r.Nominal, unit) + " +-" + phys.Format(r.Share, "percent")
	}
	return phys.Format(r.Low, unit) + ".." + phys.Format(r.High, unit)
}

// known is a unit for printing: none where it is not known.
func known(unit string) string {
	if unit == "?" {
		return ""
	}
	return unit
}
