package dsl

import (
	"ampturn/magcirc/gap"
	"ampturn/magcirc/tol"
)

// drawnPart is a circuit as a sampled function asks for it: its tolerances and its gaps.
type drawnPart struct {
	inputs []input
	tables map[place]*gap.Surface
}

// part finds what is known of a circuit. Variants at other temperatures share their paths, by which they are known.
func (of *roster) part(c *MagneticCircuit) *drawnPart {
	if len(c.paths) == 0 {
		c.model() // which refuses it
	}
	key := &c.paths[0]
	if p, ok := of.parts[key]; ok {
		return p
	}
	p := &drawnPart{inputs: c.spreads()}
	if !of.closed { // afterwards several goroutines may ask
		of.parts[key], of.circuits = p, append(of.circuits, c)
	}
	return p
}

// tabulate solves the gaps of all circuits ahead whose field would else be solved at every draw.
func (of *roster) tabulate() {
	for _, c := range of.circuits {
		p := of.parts[&c.paths[0]]
		p.tables = map[place]*gap.Surface{}
		for i := range c.paths {
			for k, part := range c.paths[i].parts {
				if g, ok := part.(GapPart); ok {
					if t := c.surface(place{i, k}, g); t != nil {
						p.tables[place{i, k}] = t
					}
				}
			}
		}
	}
}

// tableError is the relative error of a permeance up to which a table stands for the field solution, whose own uncertainty is
// hundreds of times larger.
const tableError = 1e-5

// surface is the table of a gap, nil where the method is quick or nothing varies.
func (c *MagneticCircuit) surface(at place, g GapPart) *gap.Surface {
	p := &c.paths[at.path]
	elem := p.full(c.name, at.part)
	beside := p.beside(elem, at.part)
	s := g.spec(elem, beside, p.legLength(at.part))
	area := 0.0
	if beside != nil && g.faces == nil {
		area = beside.across.reach(1)
	}
	length := g.spread.reach(g.length)
	if s.Method != gap.FieldSolve || length == 0 && area == 0 {
		return nil
	}
	t, err := gap.NewSurface(s, g.length-length, g.length+length, 1-area, 1+area)
	if err != nil || t.Error > tableError {
		return nil // every draw is solved
	}
	return t
}

// reach is how far draws go from nominal: to the limits, or five standard deviations.
func (s spread) reach(nominal float64) float64 {
	if s.shape == tol.Normal {
		return s.width(nominal) * 5 / 3
	}
	return s.width(nominal)
}

// permeance is the gap by its table where there is one, else by its method.
func (c *MagneticCircuit) permeance(at place, s gap.Spec, g GapPart, beside *LegPart) (gap.Result, error) {
	if t := c.tables[at]; t != nil {
		area := 1.0
		if beside != nil && g.faces == nil {
			area += beside.stretch
		}
		if r, ok := t.At(g.length, area); ok {
			return r, nil
		}
	}
	return gap.Permeance(s)
}
