package dsl

import (
	"fmt"

	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// model is a circuit at its temperature as the layer below computes it.
type model struct {
	net     *reluct.Network
	element [][]int // by path and part: index of the element in its branch, -1 for a winding
	gaps    map[place]gap.Result
	notes   []magcirc.Note
}

// model builds the network. It is cheap beside solving it, and a circuit may still grow in its cell.
func (c *MagneticCircuit) model() *model {
	c.given()
	if len(c.paths) == 0 {
		refuse(magcirc.WrongUse, "circuit "+c.name, "has no path", fmt.Sprintf("add one: %s.Ring(...) or %s.Path(...)", c.name, c.name))
	}
	if base := c.of.base(c); base != nil {
		return base.varied(c)
	}
	m := &model{net: reluct.New(c.name), gaps: map[place]gap.Result{}}
	for i := range c.paths {
		m.path(c, i)
	}
	c.of.learn(c, m)
	return m
}

// varied is the model of a draw: of the nominal model all but the parts that vary.
func (m *model) varied(c *MagneticCircuit) *model {
	next := &model{element: m.element, gaps: m.gaps, notes: m.notes}
	branches := m.net.Branches()
	elements := make([][]reluct.Element, len(branches))
	for i := range branches {
		elements[i] = branches[i].Elements
	}
	gaps := map[place]gap.Result{}
	scratch := &model{gaps: gaps}
	for n, at := range c.of.varies {
		if n == 0 || c.of.varies[n-1].path != at.path {
			elements[at.path] = append([]reluct.Element(nil), elements[at.path]...)
		}
		elements[at.path][m.element[at.path][at.part]] = scratch.part(c, at)
	}
	if len(gaps) > 0 {
		next.gaps = gaps
		for at, r := range m.gaps {
			if _, ok := gaps[at]; !ok {
				gaps[at] = r
			}
		}
	}
	next.net = m.net.Varied(elements)
	return next
}

// path adds path i as a branch.
func (m *model) path(c *MagneticCircuit, i int) {
	p := &c.paths[i]
	b := reluct.Branch{Name: p.name, From: m.net.Node(p.from), To: m.net.Node(p.to)}
	index := make([]int, len(p.parts))
	for k, part := range p.parts {
		index[k] = -1
		if w, ok := part.(WindingPart); ok {
			b.Turns = append(b.Turns, reluct.Turn{Winding: m.net.Winding(p.names[k]), Turns: w.signed()})
			continue
		}
		index[k] = len(b.Elements)
		b.Elements = append(b.Elements, m.part(c, place{i, k}))
	}
	m.element = append(m.element, index)
	m.note(p.turnNotes(c.name)...)
	m.net.Branch(b)
}

// part gives one part as an element.
func (m *model) part(c *MagneticCircuit, at place) reluct.Element {
	p := &c.paths[at.path]
	elem := p.full(c.name, at.part)
	e := reluct.Element{Name: p.names[at.part]}
	switch part := p.parts[at.part].(type) {
	case LegPart:
		law, notes, err := part.material.below.Law(c.temperature)
		named(elem, err)
		m.note(notes...)
		e.Kind, e.Law, e.Length = reluct.Leg, law, part.length
		e.Area, e.Air = part.section.Metal()*(1+part.stretch), p.enclosed(part)
	case GapPart:
		beside := p.beside(elem, at.part)
		s := part.spec(elem, beside, p.legLength(at.part))
		r, err := c.permeance(at, s, part, beside)
		named(elem, err)
		m.note(r.Notes...)
		m.gaps[at] = r
		e.Kind, e.Permeance, e.Length, e.Area = reluct.Gap, r.Permeance*(1+part.bias), part.length, s.Face.Gross()
	case PermeancePart:
		e.Kind, e.Permeance = reluct.Stray, part.permeance
	case MagnetPart:
		e.Kind, e.Br, e.Mur, e.Length, e.Area = reluct.Magnet, part.signed(), part.mur, part.length, part.section.Metal()
	}
	return e
}

// note adds notes that are not there yet.
func (m *model) note(notes ...magcirc.Note) { m.notes = mergeNotes(m.notes, notes) }

func mergeNotes(have, more []magcirc.Note) []magcirc.Note {
next:
	for _, n := range more {
		for _, h := range have {
			if h == n {
				continue next
			}
		}
		have = append(have, n)
	}
	return have
}

// checkTurn refuses a winding whose mean turn encloses less than a leg of its path.
func (p *path) checkTurn(elem string, w WindingPart) {
	for _, part := range p.parts {
		leg, ok := part.(LegPart)
		if ok && w.encloses > 0 && w.encloses < leg.section.Gross() {
			refuseValue(magcirc.Implausible, elem, "enclosed area", w.encloses, leg.section.Gross(), "m2",
				fmt.Sprintf("is less than the section of its leg (%s)", phys.Format(leg.section.Gross(), "m2")), "it is the whole area inside the mean turn, metal included")
		}
	}
}

// enclosed is the air beside a leg's metal inside the largest turn of its path, in m2.
func (p *path) enclosed(leg LegPart) float64 {
	largest := 0.0
	for _, part := range p.parts {
		if w, ok := part.(WindingPart); ok {
			largest = max(largest, w.encloses)
		}
	}
	return max(0, largest-leg.section.Metal())
}

// turnNotes says where windings of different enclosed areas lie on one path with a leg: the model has one flux a path, so that
// the largest area counts for all of them.
func (p *path) turnNotes(circuit string) []magcirc.Note {
	largest, at, differ, leg := 0.0, "", false, false
	first := -1.0
	for k, part := range p.parts {
		leg = leg || part.part() == legKind
		w, ok := part.(WindingPart)
		if !ok {
			continue
		}
		differ = differ || first >= 0 && w.encloses != first
		first = w.encloses
		if w.encloses > largest {
			largest, at = w.encloses, p.names[k]
		}
	}
	if !differ || !leg {
		return nil
	}
	return []magcirc.Note{{Kind: magcirc.Assumed, Elem: "path " + circuit + "." + p.name,
		Text: fmt.Sprintf("its windings enclose different areas: the air inside winding %s (%s), the largest, counts for all of them; the flux between two windings is a stray path of its own", at, phys.Format(largest, "m2"))}}
}

// solve gives the state of the model under a drive.
func (m *model) solve(d reluct.Drive) *reluct.Solution {
	s, err := m.net.Solve(session.Context(), d, nil)
	check(err)
	return s
}
