package dsl

import (
	"fmt"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// MagneticCircuit is paths of legs, gaps and windings between nodes. It is complete at the end of the cell that made
// it; [MagneticCircuit.With] and [MagneticCircuit.At] give variants.
type MagneticCircuit struct {
	name        string
	paths       []path
	serial      int // the run of the cell that made it
	cell        int // that cell's number
	temperature float64
	asked       bool     // the temperature was asked for
	changes     []string // what With changed, in words
	variant     bool
	of          *drawnPart // of a sample: what is known of the circuit
	drawn       bool       // a draw of a sample or a trial: nothing of it enters the document
}

// path is one branch: where it runs, and its parts in order.
type path struct {
	name     string
	from, to string
	ring     bool
	parts    []Part
	names    []string // of the parts
}

// Magnetic begins a magnetic circuit.
//
//	T1 := Magnetic("T1")
//	T1.Path("centre", "bottom -> top", Leg(fer, 36*mm, Rect(12.2*mm, 15*mm)), Gap(0.6*mm), Winding("main", 34*turn))
//	T1.Path("left", "top -> bottom", Yoke(fer, 61*mm, Rect(6*mm, 15*mm)))
func Magnetic(name string) *MagneticCircuit {
	wantName("circuit", name)
	_, cell := session.Cell()
	return &MagneticCircuit{name: name, serial: session.Serial(), cell: cell, temperature: roomTemperature}
}

// Path adds a path from one node to another: "bottom -> top". The arrow is the positive direction of its flux.
func (c *MagneticCircuit) Path(name, route string, parts ...Part) {
	c.open("path", name)
	from, to := c.route(name, route)
	c.add(path{name: name, from: from, to: to, parts: append([]Part(nil), parts...)})
}

// Ring adds a path that closes on itself. Its arrow runs in the order of its parts.
func (c *MagneticCircuit) Ring(name string, parts ...Part) {
	c.open("ring", name)
	node := "ring " + name
	c.add(path{name: name, from: node, to: node, ring: true, parts: append([]Part(nil), parts...)})
}

// open refuses to add to a circuit that is complete.
func (c *MagneticCircuit) open(what, name string) {
	c.given()
	wantName(what, name)
	elem := "circuit " + c.name
	if c.variant {
		refuse(magcirc.Sealed, elem, "is a variant: nothing can be added to it", "put the path into the circuit that it came from")
	}
	if c.serial != session.Serial() {
		refuse(magcirc.Sealed, elem, fmt.Sprintf("is complete since the end of cell %d", c.cell),
			fmt.Sprintf("put this line into cell %d, or use %s.With(...)", c.cell, c.name))
	}
}

// given refuses the circuit that nobody made.
func (c *MagneticCircuit) given() {
	if c == nil || c.name == "" {
		refuse(magcirc.BadValue, "circuit", "there is none", `make it with Magnetic("T1")`)
	}
}

// route splits "bottom -> top".
func (c *MagneticCircuit) route(name, route string) (from, to string) {
	ends := strings.Split(route, "->")
	if len(ends) != 2 || strings.TrimSpace(ends[0]) == "" || strings.TrimSpace(ends[1]) == "" {
		refuse(magcirc.BadValue, "path "+c.name+"."+name, fmt.Sprintf("route %q has no start, arrow and end", route), `write "bottom -> top"`)
	}
	from, to = strings.TrimSpace(ends[0]), strings.TrimSpace(ends[1])
	if from == to {
		refuse(magcirc.BadValue, "path "+c.name+"."+name, fmt.Sprintf("begins and ends at node %s", from), fmt.Sprintf("make it a Ring: %s.Ring(%q, ...)", c.name, name))
	}
	return from, to
}

// add checks a path and takes it into the circuit.
func (c *MagneticCircuit) add(p path) {
	elem := "path " + c.name + "." + p.name
	for _, other := range c.paths {
		if other.name == p.name {
			refuse(magcirc.DuplicateName, elem, "there is a path of this name already", "name it otherwise")
		}
	}
	carries := false
	for i, part := range p.parts {
		if part == nil {
			refuse(magcirc.BadValue, elem, fmt.Sprintf("part %d is missing (nil)", i+1), "give it a Leg, Gap, Winding, Permeance or Magnet")
		}
		carries = carries || part.part() != windingKind
	}
	if !carries {
		refuse(magcirc.BadValue, elem, "has no leg, gap, stray path or magnet", "give it one: a path without reluctance has no flux of its own")
	}
	p.nameParts(c.name)
	for i := range p.parts {
		p.checkPart(c.name, i)
	}
	c.paths = append(c.paths, p)
}

// nameParts gives the unnamed parts the word of their kind: leg, gap, gap2.
func (p *path) nameParts(circuit string) {
	p.names = make([]string, len(p.parts))
	taken := map[string]bool{}
	for i, part := range p.parts {
		name := part.label()
		if name == "" {
			continue
		}
		if taken[name] {
			refuse(magcirc.DuplicateName, fmt.Sprintf("%s %s.%s.%s", part.part(), circuit, p.name, name), "its path has another part of this name", "name it otherwise with .As")
		}
		taken[name], p.names[i] = true, name
	}
	for i, part := range p.parts {
		if p.names[i] != "" {
			continue
		}
		name := string(part.part())
		for n := 2; taken[name]; n++ {
			name = fmt.Sprintf("%s%d", part.part(), n)
		}
		taken[name], p.names[i] = true, name
	}
}

// full is a part as messages name it: "gap T1.centre.gap".
func (p *path) full(circuit string, i int) string {
	return string(p.parts[i].part()) + " " + circuit + "." + p.name + "." + p.names[i]
}

// checkPart refuses parts that do not fit their neighbours.
func (p *path) checkPart(circuit string, i int) {
	elem := p.full(circuit, i)
	switch part := p.parts[i].(type) {
	case GapPart:
		beside := p.beside(elem, i)
		if beside != nil && part.length > beside.length {
			refuseValue(magcirc.Implausible, elem, "length", part.length, beside.length, "m",
				fmt.Sprintf("is longer than its leg (%s)", phys.Format(beside.length, "m")), slipOfLength(part.length))
		}
	case WindingPart:
		p.checkTurn(elem, part)
	case LegPart:
		if part.length <= 0 {
			refuse(magcirc.BadValue, elem, "was not made with Leg", "write Leg(material, length, section)")
		}
	}
}

// slipOfLength asks whether a length was meant a thousand times smaller.
func slipOfLength(length float64) string {
	meant := length / 1000
	if meant < 0.1e-3 {
		return fmt.Sprintf("Was %s*um meant?", phys.Format(meant*1e6, ""))
	}
	return fmt.Sprintf("Was %s*mm meant?", phys.Format(meant*1e3, ""))
}

// beside is the leg whose section a gap takes: the nearest one before it, else after it; nil where the gap has faces
// of its own and no leg. Two legs of different sections beside a gap leave its faces open.
func (p *path) beside(elem string, i int) *LegPart {
	before, after := p.nearest(i, -1), p.nearest(i, 1)
	own := p.parts[i].(GapPart).faces != nil
	switch {
	case before == nil && after == nil && !own:
		refuse(magcirc.BadValue, elem, "has no leg beside it that gives its section", "add .Faces(Rect(w, d))")
	case before != nil && after != nil && before.section != after.section && !own:
		refuse(magcirc.Ambiguous, elem, fmt.Sprintf("lies between legs of different sections (%s and %s)", before.section.shape.Describe(), after.section.shape.Describe()),
			"say which with .Faces(section)")
	}
	if before != nil {
		return before
	}
	return after
}

// legLength is the length of the legs on both sides of a gap together, 0 where there is none.
func (p *path) legLength(i int) float64 {
	before, after := p.nearest(i, -1), p.nearest(i, 1)
	switch {
	case before == nil && after == nil:
		return 0
	case before == nil:
		return after.length
	case after == nil:
		return before.length
	case p.ring && p.legs() == 1: // around the corner it is the same leg
		return before.length
	}
	return before.length + after.length
}

// legs counts the legs of the path.
func (p *path) legs() int {
	n := 0
	for _, part := range p.parts {
		if part.part() == legKind {
			n++
		}
	}
	return n
}

// nearest is the next leg from part i in a direction, across windings and gaps; in a ring around the corner.
func (p *path) nearest(i, step int) *LegPart {
	for k := 1; k < len(p.parts); k++ {
		j := i + step*k
		if p.ring {
			j = (j + len(p.parts)) % len(p.parts)
		}
		if j < 0 || j >= len(p.parts) {
			return nil
		}
		switch leg := p.parts[j].(type) {
		case LegPart:
			return &leg
		case MagnetPart:
			return nil
		}
	}
	return nil
}

// MIMEBundle shows the circuit's parts as a table.
func (c *MagneticCircuit) MIMEBundle() map[string]any {
	if c == nil || c.name == "" {
		return nil
	}
	return c.partsTable().Bundle()
}

func (c *MagneticCircuit) partsTable() doc.Table {
	t := doc.Table{Caption: c.state(), Columns: []doc.Column{{Name: "path"}, {Name: "route"}, {Name: "part"}, {Name: "what"}}}
	for _, p := range c.paths {
		route := p.from + " -> " + p.to
		if p.ring {
			route = "ring"
		}
		for i, part := range p.parts {
			what := describe(part)
			if part.part() == windingKind {
				what = "winding " + what
			}
			t.Rows = append(t.Rows, []doc.Cell{doc.Text(p.name), doc.Text(route), doc.Text(p.names[i]), doc.Text(what)})
		}
	}
	return t
}

// state says the conditions that the circuit itself carries: "T1 at 25 degC (the default)".
func (c *MagneticCircuit) state() string {
	s := c.name + " at " + phys.Format(c.temperature, "degC")
	if !c.asked {
		s += " (the default)"
	}
	if len(c.changes) > 0 {
		s += ", " + strings.Join(c.changes, ", ")
	}
	return s
}
