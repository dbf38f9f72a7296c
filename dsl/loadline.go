package dsl

import (
	"fmt"
	"slices"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/phys"
)

// LoadLine is a permanent magnet in its circuit: the load line that the circuit sets, the magnet's recoil line, and the
// working point where they meet. Field strength and flux density count along the magnetisation.
type LoadLine struct {
	line       *design.LoadLine
	elem       string
	caption    string
	remarks    []Remark
	fromOrigin bool // neither a current nor another magnet moves the load line off the origin
}

// loadPoints is how many points a load line is computed at: enough for a core that bends it.
const loadPoints = 25

// LoadLine is the load line of a magnet in the circuit, with the currents of this operating point.
//
//	op := M1.Solve()
//	op.LoadLine("yoke.magnet").Plot()
func (op *OperatingPoint) LoadLine(magnet string) *LoadLine {
	op.given()
	c := &op.circuit
	at := c.partOf(magnet, magnetKind)
	elem := c.paths[at.path].full(c.name, at.part)
	m := c.paths[at.path].parts[at.part].(MagnetPart)
	work := func(br float64) (h, b float64, err error) {
		err = Try(func() {
			weaker := c.changed(remanenceOf(at, br)).model()
			s := weaker.solve(op.drive).Rounded().State[at.path][weaker.element[at.path][at.part]]
			h, b = s.H*m.direction(), s.B*m.direction()
		})
		return h, b, err
	}
	l := &LoadLine{elem: elem, caption: op.conditions(), remarks: op.Notes(), fromOrigin: op.undriven() && c.magnets() == 1}
	line, err := design.Load(session.Context(), elem, work, m.br, m.mur, loadPoints)
	named(elem, err)
	l.line = line
	return l
}

// undriven says whether no winding carries current or has a linkage of its own.
func (op *OperatingPoint) undriven() bool {
	for _, i := range op.drive.Current {
		if i != 0 {
			return false
		}
	}
	return len(op.drive.Linkage) == 0
}

// magnets counts the magnets of the circuit.
func (c *MagneticCircuit) magnets() int {
	n := 0
	for i := range c.paths {
		for _, part := range c.paths[i].parts {
			if part.part() == magnetKind {
				n++
			}
		}
	}
	return n
}

func remanenceOf(at place, br float64) func([]path) {
	return func(paths []path) {
		m := paths[at.path].parts[at.part].(MagnetPart)
		m.br = br
		paths[at.path].parts[at.part] = m
	}
}

// FluxDensity is the flux density in the magnet at its working point.
func (l *LoadLine) FluxDensity() Tesla { l.given(); _, b := l.line.Point(); return b }

// FieldStrength is the field strength in the magnet at its working point, negative: it opposes the magnetisation.
func (l *LoadLine) FieldStrength() AmperePerMetre { l.given(); h, _ := l.line.Point(); return h }

// PermeanceCoefficient is B over mu0 H at the working point, as a positive number: the slope of the load line of a
// circuit without currents.
func (l *LoadLine) PermeanceCoefficient() Ratio { l.given(); return l.line.PermeanceCoefficient() }

// EnergyProduct is B times H at the working point, as a positive number; the magnet is smallest where it is largest.
func (l *LoadLine) EnergyProduct() JoulePerCubicMetre { l.given(); return l.line.EnergyProduct() }

// Notes lists what a reader must know about this result.
func (l *LoadLine) Notes() []Remark { l.given(); return append([]Remark(nil), l.remarks...) }

func (l *LoadLine) given() {
	if l == nil || l.line == nil {
		refuse(magcirc.BadValue, "load line", "there is none", `take it from an operating point: op.LoadLine("yoke.magnet")`)
	}
}

// Plot draws recoil line and load line, and where they meet.
func (l *LoadLine) Plot() *Figure {
	l.given()
	h, b := l.line.Point()
	f := newFigure(l.elem+", "+l.caption, axis{Label: "field strength in the magnet", Unit: "A/m"}, axis{Label: "flux density in the magnet", Unit: "T"})
	f.add("recoil line", []float64{l.line.Coercivity, 0}, []float64{0, l.line.Remanence})
	x, y := slices.Clone(l.line.H), slices.Clone(l.line.B)
	slices.Reverse(x) // from the working point outwards: the name of a line stands at its end
	slices.Reverse(y)
	if l.fromOrigin {
		x, y = append(x, 0), append(y, 0)
	}
	f.add("load line", x, y)
	f.add("working point", []float64{h, h, 0}, []float64{0, b, b})
	return f
}

// MIMEBundle shows recoil line, load line and working point as a picture, with the figures of the point in words.
func (l *LoadLine) MIMEBundle() map[string]any {
	if l == nil || l.line == nil {
		return nil
	}
	f := l.Plot()
	text := l.words() + "\n" + f.lines.Text()
	for _, n := range noteLines(l.remarks) {
		text += "\nnote: " + n
	}
	return doc.Bundle(text, "", f.lines.SVG())
}

// words is the working point in one line.
func (l *LoadLine) words() string {
	h, b := l.line.Point()
	text := fmt.Sprintf("%s works at %s and %s: ", l.elem, phys.Format(h, "A/m"), phys.Format(b, "T"))
	if l.fromOrigin { // else the load line has no slope through the origin
		text += "permeance coefficient " + phys.FormatDigits(l.line.PermeanceCoefficient(), "", 3) + ", "
	}
	return text + "energy product " + phys.Format(l.line.EnergyProduct(), "J/m3") + " (" + l.caption + ")"
}
