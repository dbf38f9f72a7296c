package induct

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Reading is what an inductance meter shows at one winding, or at several in series, while others are shorted and
// the rest open.
//
//	Reading{At: "P", Inductance: 630e-6}                           P, all others open
//	Reading{At: "P", Shorted: []string{"S"}, Inductance: 9.5e-6}   P with S shorted
//	Reading{At: "A", Aiding: []string{"B"}, Inductance: 2.38}      A and B in series, end to dot
//	Reading{At: "A", Opposing: []string{"B"}, Inductance: 1.02}    A and B in series, end to end
type Reading struct {
	Name        string   // how messages call it; "" names it by its connection: "P with S shorted"
	At          string   // the winding at the meter
	Aiding      []string // in series with it, the current entering each dot
	Opposing    []string // in series with it, the current leaving each dot
	Shorted     []string // shorted meanwhile; windings named nowhere are open
	Inductance  float64  // H
	Uncertainty float64  // relative, one standard deviation; 0 stands for 1 percent
}

// String names the reading.
func (r Reading) String() string {
	if r.Name != "" {
		return r.Name
	}
	s := r.At
	for _, w := range r.Aiding {
		s += " + " + w
	}
	for _, w := range r.Opposing {
		s += " - " + w
	}
	switch {
	case len(r.Shorted) > 0:
		return s + " with " + strings.Join(r.Shorted, ", ") + " shorted"
	case len(r.Aiding)+len(r.Opposing) > 0:
		return s + " in series"
	}
	return s + " open"
}

// quoted is the reading as a message lists it, with its value.
func (r Reading) quoted() string {
	return fmt.Sprintf("%q %s", r.String(), phys.Format(r.Inductance, "H"))
}

// names lists the windings that the reading touches, the measured ones first.
func (r Reading) names() []string {
	return slices.Concat([]string{r.At}, r.Aiding, r.Opposing, r.Shorted)
}

// uncertainty is the absolute uncertainty in H.
func (r Reading) uncertainty() float64 {
	if r.Uncertainty > 0 {
		return r.Uncertainty * r.Inductance
	}
	return 0.01 * r.Inductance
}

// check refuses a reading that cannot be one.
func (r Reading) check() error {
	e := &magcirc.Error{Code: magcirc.BadValue, Elem: fmt.Sprintf("reading %q", r.String()), Quantity: "inductance", Unit: "H", Got: r.Inductance}
	switch {
	case r.At == "":
		e.Msg = "it names no winding at the meter"
	case !(r.Inductance > 0) || math.IsInf(r.Inductance, 0):
		e.Msg = fmt.Sprintf("inductance %s is not a positive value", phys.Format(r.Inductance, "H"))
	case r.Inductance > 1e5:
		e.Code, e.Msg, e.Hint = magcirc.Implausible, fmt.Sprintf("inductance %s is larger than any part's", phys.Format(r.Inductance, "H")), "Was a unit left out?"
	case !(r.Uncertainty >= 0) || r.Uncertainty > 1:
		e.Quantity, e.Unit, e.Got = "uncertainty", "", r.Uncertainty
		e.Msg, e.Hint = fmt.Sprintf("uncertainty %s is not between 0 and 1", phys.Format(r.Uncertainty, "")), "it is relative: 0.01 for 1 percent"
	default:
		names := r.names()
		for i, n := range names {
			if slices.Contains(names[:i], n) {
				e.Code, e.Msg = magcirc.DuplicateName, fmt.Sprintf("winding %s stands twice in it", n)
				return e
			}
		}
		return nil
	}
	return e
}

// series gives the measured windings with their signs, by the index of the matrix.
func (r Reading) series(index map[string]int) []term {
	terms := []term{{index[r.At], 1}}
	for _, w := range r.Aiding {
		terms = append(terms, term{index[w], 1})
	}
	for _, w := range r.Opposing {
		terms = append(terms, term{index[w], -1})
	}
	return terms
}

// shorted gives the shorted windings by the index of the matrix.
func (r Reading) shorted(index map[string]int) []int {
	var s []int
	for _, w := range r.Shorted {
		s = append(s, index[w])
	}
	return s
}
