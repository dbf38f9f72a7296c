package dsl

import (
	"fmt"
	"math"
	"slices"

	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// GapFor is the length of a gap at which a winding has an incremental inductance: without current, or as the drives say. Under
// a current the inductance first rises with the gap, for a core with a short one saturates, and then falls: the length is
// the one on the falling side. It answers and changes nothing:
//
//	T1.With(Length("centre.gap", T1.GapFor("centre.gap", "main", 630*uH)))
//	T1.GapFor("centre.gap", "main", 500*uH, Currents{"main": 3*amp})
func (c *MagneticCircuit) GapFor(part, winding string, inductance Henry, drives ...Drive) Metre {
	at := c.partOf(part, gapKind)
	w := c.windingOf(winding)
	p := &c.paths[at.path]
	elem := p.full(c.name, at.part)
	wantPositive(elem, "wanted inductance", inductance, "H")
	most := p.parts[at.part].(GapPart).length * 100
	if beside := p.beside(elem, at.part); beside != nil {
		most = beside.length
	}
	d := c.driveOf(drives)
	seek := func(length float64) (float64, error) { return c.changed(lengthOf(at, length)).under(d, w) }
	var length float64
	if len(drives) == 0 {
		length = must(design.Gap(session.Context(), elem, seek, inductance, p.parts[at.part].(GapPart).length, leastGap, most))
	} else {
		length = must(design.BiasedGap(session.Context(), elem, seek, inductance, leastGap, most))
	}
	c.keepAnswer(c.changed(lengthOf(at, length)), d)
	return length
}

// keepAnswer enters what a length, current or number of turns that was found rests on: the notes of the state that it leads
// to. One that lies beyond data or outside a formula's range is said beside the number, for the number itself carries no
// notes; in a cell each part says it once.
func (c *MagneticCircuit) keepAnswer(found *MagneticCircuit, d reluct.Drive) {
	if c.drawn {
		return
	}
	notes := found.solved(d).Notes()
	c.keepAssumptions(notes)
	if sampling.Load() > 0 {
		return
	}
	for _, n := range notes {
		if key := (saidOf{n.Kind, n.Elem}); (n.Kind == magcirc.Extrapolated || n.Kind == magcirc.OutOfRange) && !said[key] {
			said[key] = true
			say("note", "note: ", n.String())
		}
	}
}

// saidOf is what a note said beside a number is about.
type saidOf struct {
	kind magcirc.NoteKind
	elem string
}

// said are the notes that the running cell has said.
var said = map[saidOf]bool{}

func init() {
	session.OnReset(func() { clear(said) })
	session.OnBegin(func(string) { clear(said) })
}

// CurrentFor is the current of a winding at which the first leg of the circuit reaches a flux density; the other
// windings carry none. Where a magnet drives more than that already, it is the current that takes the circuit down to it. Of
// both signs the smaller current is taken.
func (c *MagneticCircuit) CurrentFor(winding string, fluxDensity Tesla) Ampere {
	w := c.windingOf(winding)
	elem := "winding " + c.name + "." + c.windings()[w]
	wantPositive(elem, "wanted flux density", fluxDensity, "T")
	m := c.model()
	seek := func(i float64) (float64, error) {
		s, err := m.net.Solve(session.Context(), reluct.Drive{Current: map[int]float64{w: i}}, nil)
		if err != nil {
			return 0, err
		}
		op := &OperatingPoint{circuit: *c, model: m, solution: s, shown: s}
		most := 0.0
		for i := range c.paths {
			if k := op.fullest(i); k >= 0 {
				if b := op.state(place{i, k}).B; math.Abs(b) > math.Abs(most) {
					most = b
				}
			}
		}
		return most, nil
	}
	i := must(design.Current(session.Context(), elem, seek, fluxDensity, mostCurrent))
	c.keepAnswer(c, reluct.Drive{Current: map[int]float64{w: i}})
	return i
}

// mostCurrent ends the search for a current, A.
const mostCurrent = 1e7

// TurnsFor is the smallest whole number of turns of a winding that gives at least an incremental inductance: without current,
// or as the drives say. Of a winding that lies on several paths it is the number on each of them; one with different
// numbers is refused.
//
//	T1.TurnsFor("main", 500*uH, Currents{"main": 3*amp})
func (c *MagneticCircuit) TurnsFor(winding string, inductance Henry, drives ...Drive) Turns {
	w := c.windingOf(winding)
	elem := "winding " + c.name + "." + c.windings()[w]
	wantPositive(elem, "wanted inductance", inductance, "H")
	c.wantEven(elem, c.windings()[w])
	d := c.driveOf(drives)
	seek := func(turns float64) (float64, error) { return c.changed(turnsOf(c.windings()[w], turns)).under(d, w) }
	turns := must(design.Turns(session.Context(), elem, seek, inductance, mostTurns))
	c.keepAnswer(c.changed(turnsOf(c.windings()[w], turns)), d)
	return turns
}

// wantEven refuses a winding with different turns on its paths: one number says nothing of how they divide.
func (c *MagneticCircuit) wantEven(elem, winding string) {
	turns := 0.0
	for i := range c.paths {
		for k, part := range c.paths[i].parts {
			w, ok := part.(WindingPart)
			if !ok || c.paths[i].names[k] != winding {
				continue
			}
			if turns != 0 && w.turns != turns {
				refuse(magcirc.WrongUse, elem, fmt.Sprintf("has %s turns on one path and %s on another, and TurnsFor seeks one number for all",
					phys.Format(turns, ""), phys.Format(w.turns, "")), "try turns in a loop, or name the coils apart")
			}
			turns = w.turns
		}
	}
}

// mostTurns ends the search for a number of turns.
const mostTurns = 1 << 20

// zeroBias is the incremental inductance of a winding without any current.
func (c *MagneticCircuit) zeroBias(w int) (inductance float64, err error) {
	return c.under(reluct.Drive{}, w)
}

// under is the incremental inductance of a winding under a drive.
func (c *MagneticCircuit) under(d reluct.Drive, w int) (inductance float64, err error) {
	err = Try(func() {
		s := c.model().solve(d)
		inductance = must(s.Incremental()).At(w, w)
	})
	return inductance, err
}

// changed is a copy of the circuit with a change to its parts, unchecked.
func (c *MagneticCircuit) changed(change func(paths []path)) *MagneticCircuit {
	next := *c
	next.variant, next.of = true, nil
	next.paths = slices.Clone(c.paths)
	for i := range next.paths {
		next.paths[i].parts = slices.Clone(c.paths[i].parts)
	}
	change(next.paths)
	return &next
}

func lengthOf(at place, length float64) func([]path) {
	return func(paths []path) {
		switch part := paths[at.path].parts[at.part].(type) {
		case GapPart:
			part.length = length
			paths[at.path].parts[at.part] = part
		case LegPart:
			part.length = length
			paths[at.path].parts[at.part] = part
		case MagnetPart:
			part.length = length
			paths[at.path].parts[at.part] = part
		}
	}
}

func turnsOf(winding string, turns float64) func([]path) {
	return func(paths []path) {
		for i := range paths {
			for k, part := range paths[i].parts {
				if w, ok := part.(WindingPart); ok && paths[i].names[k] == winding {
					w.turns = turns
					paths[i].parts[k] = w
				}
			}
		}
	}
}

// Reluctance is the reluctance of a gap, a stray path, or a leg without flux.
func (c *MagneticCircuit) Reluctance(part string) PerHenry {
	at := c.partOf(part)
	m := c.model()
	return design.Reluctance(m.net.Branches()[at.path].Elements[m.element[at.path][at.part]])
}

// Fringing shows the methods for the flux around a gap side by side, each with its validity.
func (c *MagneticCircuit) Fringing(part string) *GapComparison {
	at := c.partOf(part, gapKind)
	p := &c.paths[at.path]
	elem := p.full(c.name, at.part)
	g := p.parts[at.part].(GapPart)
	return compareGap(elem, g.spec(elem, p.beside(elem, at.part), p.legLength(at.part)))
}

// compareGap asks every method.
func compareGap(elem string, s gap.Spec) *GapComparison {
	return &GapComparison{spec: s, elem: elem, length: s.Length, face: s.Face.Describe(), chosen: s.Method, all: gap.Compare(s)}
}

// At is the circuit at a temperature: its core laws there. Never asked, it is 25 degC, and every result says so.
func (c *MagneticCircuit) At(temperature Celsius) *MagneticCircuit {
	c.given()
	wantTemperature("circuit "+c.name, temperature)
	next := *c
	next.temperature, next.asked, next.variant = temperature, true, true
	return &next
}

// Temperature is the temperature at which the circuit is computed.
func (c *MagneticCircuit) Temperature() Celsius { c.given(); return c.temperature }

// Change is what [MagneticCircuit.With] changes: [Length].
type Change struct {
	part     string
	quantity string
	value    float64
}

// MIMEBundle shows the change in words.
func (c Change) MIMEBundle() map[string]any {
	return words(fmt.Sprintf("%s of %s: %s", c.quantity, c.part, phys.Format(c.value, "m")))
}

// Length is the change of a gap, a leg or a magnet to another length.
func Length(part string, length Metre) Change {
	wantPositive("Length", "length of "+part, length, "m")
	return Change{part: part, quantity: "length", value: length}
}

// With is a variant of the circuit; the circuit itself stays as it is.
//
//	T1.With(Length("centre.gap", 0.55*mm)).Solve().Inductance("main")
func (c *MagneticCircuit) With(changes ...Change) *MagneticCircuit {
	c.given()
	next := *c
	next.variant = true
	var changed []place
	for _, change := range changes {
		if change.quantity == "" {
			refuse(magcirc.BadValue, "With", "is given an empty change", `write With(Length("centre.gap", 0.55*mm))`)
		}
		at := next.partOf(change.part, gapKind, legKind, magnetKind)
		if slices.Contains(changed, at) {
			refuse(magcirc.DuplicateName, next.paths[at.path].full(c.name, at.part), "is changed twice, and only the last would count", "leave one of the two changes out")
		}
		changed = append(changed, at)
		earlier := next.changes
		next = *next.changed(lengthOf(at, change.value))
		p := &next.paths[at.path]
		next.changes = append(slices.Clone(earlier), p.name+"."+p.names[at.part]+" "+phys.Format(change.value, "m"))
		for k := range p.parts {
			p.checkPart(c.name, k)
		}
	}
	return &next
}
