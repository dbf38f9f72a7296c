package dsl

import (
	"math"

	"ampturn/dsl/draw"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// Draw draws the circuit: paths, parts, winding dots, arrows.
func (c *MagneticCircuit) Draw() *Figure {
	c.model()
	return picture(c.sketch(c.state()))
}

// Draw draws the circuit with its fluxes.
func (op *OperatingPoint) Draw() *Figure {
	op.given()
	n := op.circuit.sketch(op.conditions())
	largest := 0.0
	for _, phi := range op.shown.Flux {
		largest = math.Max(largest, math.Abs(phi))
	}
	for i := range n.Paths {
		n.Paths[i].Flux = phys.Format(op.shown.Flux[i], "Wb")
		if largest > 0 {
			n.Paths[i].Share = op.shown.Flux[i] / largest
		}
		for k := range n.Paths[i].Parts {
			if kind := n.Paths[i].Parts[k].Kind; kind == draw.Leg || kind == draw.Magnet {
				n.Paths[i].Parts[k].Label = phys.Format(op.state(place{i, k}).B, "T")
			}
		}
	}
	return picture(n)
}

func picture(n draw.Network) *Figure {
	p := must(n.Draw())
	return &Figure{svg: p.SVG, text: p.Text}
}

// sketch describes the circuit for the drawing.
func (c *MagneticCircuit) sketch(title string) draw.Network {
	nodes := reluct.New(c.name)
	n := draw.Network{Title: title}
	for i := range c.paths {
		p := &c.paths[i]
		d := draw.Path{Name: p.name, From: nodes.Node(p.from), To: nodes.Node(p.to)}
		for k, part := range p.parts {
			d.Parts = append(d.Parts, sketchPart(p.names[k], part))
		}
		n.Paths = append(n.Paths, d)
	}
	n.Nodes = nodes.Nodes()
	return n
}

// sketchPart describes one part for the drawing.
func sketchPart(name string, part Part) draw.Part {
	switch p := part.(type) {
	case LegPart:
		return draw.Part{Kind: draw.Leg, Name: name, Label: phys.Format(p.length, "m"), Length: p.length}
	case GapPart:
		return draw.Part{Kind: draw.Gap, Name: name, Label: phys.Format(p.length, "m"), Length: p.length}
	case WindingPart:
		return draw.Part{Kind: draw.Winding, Name: name, Label: phys.Format(p.turns, "turn"), Reversed: p.reversed}
	case MagnetPart:
		return draw.Part{Kind: draw.Magnet, Name: name, Label: phys.Format(p.br, "T"), Length: p.length, Reversed: p.reversed}
	case PermeancePart:
		return draw.Part{Kind: draw.Stray, Name: name, Label: phys.Format(p.permeance, "H")}
	}
	return draw.Part{Name: name}
}
