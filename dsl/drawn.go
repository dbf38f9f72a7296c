package dsl

import (
	"ampturn/magcirc/gap"
	"ampturn/magcirc/tol"
)

// drawnPart is a circuit as a sampled function asks for it: its tolerances and its gaps.
type drawnPart struct {
	roster *roster
	inputs []input
	varies []place // the parts that differ from draw to draw, path by path
	tables map[place]*gap.Surface
	bases  map[float64]*model // the nominal model at the temperatures that the function asks for
}

// base is the nominal model that a draw differs from in some parts; nil where there is none.
func (d *drawnPart) base(c *MagneticCircuit) *model {
	if d == nil || !c.drawn {
		return nil
	}
	return d.bases[c.temperature]
}

// learn keeps a nominal model. Only the first call of the function fills the list; afterwards several goroutines may read it.
func (d *drawnPart) learn(c *MagneticCircuit, m *model) {
	if d != nil && !c.drawn && !d.roster.closed {
		d.bases[c.temperature] = m
	}
}

// varying lists the parts that inputs change: of a section also the gaps of its path, which may take theirs from it.
func (c *MagneticCircuit) varying() []place {
	var all []place
	for i := range c.paths {
		section := false
		for _, part := range c.paths[i].parts {
			leg, ok := part.(LegPart)
			section = section || ok && leg.across.half > 0
		}
		for k, part := range c.paths[i].parts {
			varies := false
			switch p := part.(type) {
			case LegPart:
				varies = p.along.half > 0 || p.across.half > 0 || p.material.below.Spread() > 0
			case GapPart:
				varies = section || p.spread.half > 0
			case PermeancePart:
				varies = p.spread.half > 0
			case MagnetPart:
				varies = p.spread.half > 0
			}
			if varies {
				all = append(all, place{i, k})
			}
		}
	}
	return all
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
	p := &drawnPart{roster: of, inputs: c.spreads(), varies: c.varying(), bases: map[float64]*model{}}
	if !of.closed { // afterwards several goroutines may ask
		of.parts[key], of.circuits = p, append(of.circuits, c)
	}
	return p
}

// tabulate computes the gaps of all circuits ahead whose field would else be mapped or solved at every draw.
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

// tableError is the relative error of a permeance up to which a table stands for the method, whose own uncertainty is
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
	if s.Method == gap.NoFringe || s.Method == gap.AddTheGap || length == 0 && area == 0 {
		return nil
	}
	t, err := gap.NewSurface(s, g.length-length, g.length+length, 1-area, 1+area)
	if err != nil || t.Error > tableError {
		return nil // every draw is solved
	}
	return t
}

// table is the table of a gap, nil where there is none.
func (d *drawnPart) table(at place) *gap.Surface {
	if d == nil {
		return nil
	}
	return d.tables[at]
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
	if t := c.of.table(at); t != nil {
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
