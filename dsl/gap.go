package dsl

import (
	"ampturn/magcirc"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
)

// Fringing says how the flux around a gap is computed: [NoFringe], [AddTheGap], [LogRule], [ConformalMap] or
// [FieldSolve], each also with .Window(height).
type Fringing interface {
	fringing() WindowRule
}

// FringeRule is a method for the flux around a gap.
type FringeRule Count

// The methods. A gap shows all of them side by side, with the range that each one is valid in.
const (
	// NoFringe takes the area of the faces and nothing else: too little permeance, the lower bound.
	NoFringe FringeRule = iota
	// AddTheGap adds the gap's length to each side of the faces.
	AddTheGap
	// LogRule is the logarithmic rule; it needs the height of the winding window: LogRule.Window(21*mm).
	LogRule
	// ConformalMap adds up conformal solutions of the field at the edges; the default where the faces' shape is known.
	ConformalMap
	// FieldSolve solves the field of the gap numerically.
	FieldSolve
)

func (r FringeRule) fringing() WindowRule { return WindowRule{rule: r} }

// Window gives the height of the winding window in which the gap lies, for the methods that need it.
func (r FringeRule) Window(height Metre) WindowRule {
	wantPositive("Window", "height of the window", height, "m")
	return WindowRule{rule: r, window: height}
}

// method is the method of the layer below.
func (r FringeRule) method() gap.Method {
	switch r {
	case NoFringe:
		return gap.NoFringe
	case AddTheGap:
		return gap.AddTheGap
	case LogRule:
		return gap.LogRule
	case ConformalMap:
		return gap.ConformalMap
	case FieldSolve:
		return gap.FieldSolve
	}
	refuse(magcirc.BadValue, "Fringe", "there is no such method", "it is NoFringe, AddTheGap, LogRule, ConformalMap or FieldSolve")
	return 0
}

// MIMEBundle shows the method in words.
func (r FringeRule) MIMEBundle() map[string]any { return words("fringing by " + r.method().String()) }

// WindowRule is a [FringeRule] with the size of the winding window.
type WindowRule struct {
	rule            FringeRule
	window, breadth float64
}

// Breadth gives the breadth of the window: from the pole's side to the wall beside it.
func (r WindowRule) Breadth(breadth Metre) WindowRule {
	wantPositive("Breadth", "breadth of the window", breadth, "m")
	r.breadth = breadth
	return r
}

// MIMEBundle shows the method in words.
func (r WindowRule) MIMEBundle() map[string]any { return r.rule.MIMEBundle() }

func (r WindowRule) fringing() WindowRule { return r }

// GapPart is an air gap in a path.
type GapPart struct {
	name   string
	length float64
	faces  *Section
	rule   *WindowRule
	spread spread  // of the length
	bias   float64 // share by which the permeance is off what its method gives
}

// Gap is an air gap. It takes the section of the leg beside it, or of .Faces(section), and counts the flux around it
// by [ConformalMap] unless .Fringe(method) says otherwise; by [FieldSolve] where only the area of its faces is known.
//
// How far that flux reaches up the sides of the poles follows from the height of the winding window, as in
// .Fringe(ConformalMap.Window(21*mm)). Not given, it is the square root of the area of the faces, or half the leg beside
// the gap if that is less, and the result says so.
func Gap(length Metre) GapPart {
	wantPositive("Gap", "length", length, "m")
	if length < leastGap {
		refuseValue(magcirc.Implausible, "Gap", "length", length, leastGap, "m", "is less than ground faces leave (0.1 um)", "leave the gap out, or look at its unit")
	}
	return GapPart{length: length}
}

// leastGap is far below the 1 to 2 um that mating ground faces leave, m.
const leastGap = 1e-7

// As names the gap.
func (g GapPart) As(name string) GapPart { wantName("gap", name); g.name = name; return g }

// Fringe says how the flux around the gap is computed.
func (g GapPart) Fringe(method Fringing) GapPart {
	if method == nil {
		refuse(magcirc.BadValue, "Fringe", "there is no method", "give NoFringe, AddTheGap, LogRule, ConformalMap or FieldSolve")
	}
	rule := method.fringing()
	rule.rule.method()
	g.rule = &rule
	return g
}

// Faces gives the section of the gap's faces where it is not that of the leg beside it.
func (g GapPart) Faces(section Section) GapPart {
	section.given("Faces")
	g.faces = &section
	return g
}

func (g GapPart) part() partKind { return gapKind }
func (g GapPart) label() string  { return g.name }

// MIMEBundle shows the methods for the flux around the gap side by side where its faces are known, else its length.
func (g GapPart) MIMEBundle() map[string]any {
	if g.faces == nil {
		return words("gap of " + phys.Format(g.length, "m"))
	}
	return compareGap("gap", g.spec("gap", nil, 0)).MIMEBundle()
}

// spec is the gap for the layer below. beside is the leg next to it, or nil where it has faces of its own; leg is the
// length of the legs on both sides.
func (g GapPart) spec(elem string, beside *LegPart, leg float64) gap.Spec {
	s := gap.Spec{Elem: elem, Length: g.length, Leg: leg}
	if beside != nil {
		s.Face = beside.section.shape.Scaled(1 + beside.stretch)
	}
	if g.faces != nil {
		s.Face = g.faces.shape
	}
	if g.rule != nil {
		s.Method, s.Window, s.Span = g.rule.rule.method(), g.rule.window, g.rule.breadth
	} else {
		s.Method = gap.DefaultFor(s.Face, 0)
	}
	return s
}
