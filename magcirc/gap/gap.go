// Package gap gives the permeance of an air gap between two equal, aligned poles, with the fringing flux beside it,
// by several methods of which each knows its own limits.
//
//	method        what it is                                                       faces it knows
//	NoFringe      mu0 A/g                                                          all
//	AddTheGap     each side of the face longer by the gap                          rectangle, round, ring
//	LogRule       F = 1 + g/sqrt(A) ln(2 G/g)                                      all; needs the window's height G
//	ConformalMap  exact mapping of the pole's edge, two planes multiplied          rectangle, round, thin ring
//	FieldSolve    finite volumes, two planes multiplied or about the axis          all
//
//	r, err := gap.Permeance(gap.Spec{Elem: "gap T1.g", Length: 0.6e-3, Face: geom.Rect(12e-3, 15e-3),
//		Method: gap.ConformalMap, Window: 20e-3})
//	if err != nil {
//		return err // outside the method's validity, with the way out
//	}
//	fmt.Println(r.Permeance, r.Factor, r.Uncertainty)
//
// Units: SI. The permeance is positive. F is the fringing factor, the permeance over mu0 A/g with the gross area A of
// the face: in a gap the flux spreads over the insulation between sheets as well.
//
// Left out: saturated pole edges, windings beside the gap, faces that are not parallel or not aligned.
package gap

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/geom"
	"ampturn/magcirc/phys"
)

// Method names a way to the permeance of a gap.
type Method int

// The methods.
const (
	NoFringe Method = iota
	AddTheGap
	LogRule
	ConformalMap
	FieldSolve
)

var methodNames = [...]string{"NoFringe", "AddTheGap", "LogRule", "ConformalMap", "FieldSolve"}

// String gives the method's name.
func (m Method) String() string {
	if m < 0 || int(m) >= len(methodNames) {
		return fmt.Sprintf("Method(%d)", int(m))
	}
	return methodNames[m]
}

// Methods lists all methods in the order in which they are shown side by side.
func Methods() []Method { return []Method{NoFringe, AddTheGap, LogRule, ConformalMap, FieldSolve} }

// DefaultFor is the method for a gap whose author named none: ConformalMap where the shape of the faces is known,
// otherwise LogRule where the height of the window is known, otherwise FieldSolve.
func DefaultFor(face geom.Section, window float64) Method {
	switch {
	case face.Shape != geom.PlainArea:
		return ConformalMap
	case window > 0:
		return LogRule
	}
	return FieldSolve
}

// Spec is the gap asked for.
type Spec struct {
	Elem   string       // the gap in its user's words, for messages: "gap T1.centre.gap"
	Length float64      // length g of the gap, pole to pole, m
	Face   geom.Section // the poles' faces
	Method Method
	Window float64 // height G of the winding window, gap included, m; 0: not known
	Span   float64 // breadth of the window, from the pole's side to the wall beside it, m; 0: not known, open space
	Wall   float64 // height h of the side of one pole, m; 0: (Window - Length)/2, or if that is not known see Leg
	Leg    float64 // length of the leg on both sides of the gap together, m; 0: not known. It bounds an assumed height of the sides
}

// Result is the gap's permeance by one method.
type Result struct {
	Method      Method
	Permeance   float64 // H
	Reluctance  float64 // 1/H
	Factor      float64 // fringing factor F, 1: none
	Uncertainty float64 // relative uncertainty of the permeance by the method (not of the dimensions)
	Validity    string  // the range in which the method holds, in words
	Source      string
	Notes       []magcirc.Note
}

// Permeance returns the permeance of the gap s in H by the method that s names.
//
//	P = F mu0 A/g
//
// Inputs: lengths in m; A is the gross area of the face. Valid: see the methods; a rule at the edge of its range adds
// a note, beyond it the gap is refused.
// Errors: [magcirc.BadValue] for a length or a face that is not positive and finite; [magcirc.WrongUse] for LogRule
// without the window's height; [magcirc.OutsideValidity] where the method does not hold, with FieldSolve as way out.
func Permeance(s Spec) (Result, error) {
	if err := s.check(); err != nil {
		return Result{}, err
	}
	var r Result
	var err error
	switch s.Method {
	case NoFringe:
		r, err = s.noFringe()
	case AddTheGap:
		r, err = s.addTheGap()
	case LogRule:
		r, err = s.logRule()
	case ConformalMap:
		r, err = s.conformalMap()
	case FieldSolve:
		r, err = s.fieldSolve()
	default:
		return Result{}, &magcirc.Error{Code: magcirc.BadValue, Elem: s.Elem, Quantity: "method", Got: float64(s.Method),
			Msg: fmt.Sprintf("fringing method %d is not known", int(s.Method)), Hint: "see gap.Methods"}
	}
	if err != nil {
		return Result{}, err
	}
	r.Method = s.Method
	r = r.of(s)
	if s.Face.Stacking > 0 && s.Face.Stacking < 1 {
		r.note(magcirc.Remark, s.Elem, "the gap takes the gross area of its face; the stacking counts for the metal only")
	}
	return r, nil
}

// of completes the result from its fringing factor.
func (r Result) of(s Spec) Result {
	r.Permeance = r.Factor * phys.Mu0 * s.Face.Gross() / s.Length
	r.Reluctance = 1 / r.Permeance
	return r
}

// Compared is the outcome of one method: a result, or the reason why the method refuses.
type Compared struct {
	Method Method
	Result Result
	Err    error
}

// Compare returns the outcome of every method for the gap s, whatever method s names, in the order of [Methods].
func Compare(s Spec) []Compared {
	var all []Compared
	for _, m := range Methods() {
		s.Method = m
		r, err := Permeance(s)
		all = append(all, Compared{m, r, err})
	}
	return all
}

// check refuses what cannot be a gap.
func (s Spec) check() error {
	if err := s.positive("length", s.Length); err != nil {
		return err
	}
	if err := s.Face.Validate(s.Elem); err != nil {
		return err
	}
	for _, l := range []struct {
		name  string
		value float64
	}{{"window height", s.Window}, {"window breadth", s.Span}, {"height of the pole's side", s.Wall}, {"length of the leg", s.Leg}} {
		if l.value == 0 {
			continue
		}
		if err := s.positive(l.name, l.value); err != nil {
			return err
		}
	}
	if s.Window > 0 && s.Length >= s.Window {
		return &magcirc.Error{Code: magcirc.Implausible, Elem: s.Elem, Quantity: "length", Unit: "m", Got: s.Length, Limit: s.Window,
			Msg:  fmt.Sprintf("length %s is not below the height of its window (%s)", phys.Format(s.Length, "m"), phys.Format(s.Window, "m")),
			Hint: "check the units of both"}
	}
	return nil
}

func (s Spec) positive(name string, v float64) error {
	if v > 0 && !math.IsInf(v, 1) {
		return nil
	}
	return &magcirc.Error{Code: magcirc.BadValue, Elem: s.Elem, Quantity: name, Unit: "m", Got: v,
		Msg: fmt.Sprintf("%s %s must be positive and finite", name, phys.Format(v, "m"))}
}

// side is the height of the pole's side in m; assumed says where it comes from when nobody gave it.
//
// The flux beside a gap leaves a pole's side up to the yoke, so a leg of known length gives it half of that at most. On
// a long leg the flux from far up no longer goes to the other pole: the wall across the window, whose breadth is mostly
// below that of the leg, takes it. The side of the square of the leg's area stands for that breadth.
func (s Spec) side() (h float64, assumed string) {
	switch {
	case s.Wall > 0:
		return s.Wall, ""
	case s.Window > 0:
		return (s.Window - s.Length) / 2, ""
	}
	h = math.Sqrt(s.Face.Gross())
	if s.Leg > 0 && s.Leg/2 < h {
		return s.Leg / 2, "half the leg beside it"
	}
	return h, "square root of the face's area"
}

// noteSide adds the note that the height of the pole's side was assumed.
func (s Spec) noteSide(r *Result) {
	if h, assumed := s.side(); assumed != "" {
		r.note(magcirc.Assumed, s.Elem, fmt.Sprintf("height of the poles' sides not given, %s taken (%s)", phys.Format(h, "m"), assumed))
	}
}

func (r *Result) note(k magcirc.NoteKind, elem, text string) {
	r.Notes = append(r.Notes, magcirc.Note{Kind: k, Elem: elem, Text: text})
}

// outside refuses the method with the quantity that left its range, and names the way out.
func (s Spec) outside(quantity, msg string, got, limit float64) error {
	return &magcirc.Error{Code: magcirc.OutsideValidity, Elem: s.Elem, Quantity: quantity, Got: got, Limit: limit, Msg: msg,
		Hint: "Use .Fringe(FieldSolve), or split the gap"}
}
