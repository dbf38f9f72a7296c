package dsl

import (
	"fmt"
	"math"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// Loop is a closed loop of flux density over field strength: computed by [MagneticMaterial.Loop] or measured
// ([ReadLoop]).
type Loop struct {
	loop   *hyst.Loop
	name   string
	weight float64 // in a fit; 0: 1

	split     *hyst.Split // of [MagneticMaterial.DynamicLoop]
	frequency float64
}

// memory gives the law with memory of a material at a temperature.
func (m *MagneticMaterial) memory(temperature []Celsius) hyst.Law {
	m.given()
	t := roomTemperature
	if len(temperature) > 0 {
		t = temperature[0]
	}
	if l, ok := m.law(t).(interface{ Memory() hyst.Law }); ok {
		return l.Memory()
	}
	refuse(magcirc.WrongUse, "material "+m.Name(), "has no loop: its law has no memory", "give it a JilesAtherton or Play law")
	return nil
}

// Loop is the steady loop up to a peak field strength, at 25 degC or another temperature.
//
//	core.Loop(200).Area()
func (m *MagneticMaterial) Loop(peak AmperePerMetre, temperature ...Celsius) *Loop {
	law := m.memory(temperature)
	return &Loop{loop: must(hyst.Steady(law, peak, nil)), name: m.Name() + " to " + phys.Format(peak, "A/m")}
}

// LoopTo is the steady loop up to a peak flux density, at 25 degC or another temperature.
func (m *MagneticMaterial) LoopTo(peak Tesla, temperature ...Celsius) *Loop {
	law := m.memory(temperature)
	return &Loop{loop: must(hyst.SteadyTo(law, peak, nil)), name: m.Name() + " to " + phys.Format(peak, "T")}
}

// MinorLoop is a small loop around a bias, the given number of cycles after the field came there from the demagnetised
// state. Its notes say by how much it creeps per cycle: Jiles-Atherton loops do, loops of play cells close at once.
func (m *MagneticMaterial) MinorLoop(bias, amplitude AmperePerMetre, cycles Count) *Loop {
	wantRange("minor loop of "+m.Name(), "cycles", cycles, 1, 1e6, "")
	law := m.memory(nil)
	a := must(hyst.Minor(law, law.Start(), bias, amplitude, int(math.Round(cycles)), nil))
	return &Loop{loop: a.Loop, name: fmt.Sprintf("%s about %s", m.Name(), phys.Format(bias, "A/m"))}
}

// given refuses the loop that nobody made.
func (l *Loop) given() {
	if l == nil || l.loop == nil {
		refuse(magcirc.BadValue, "loop", "there is none", `make it with core.Loop(200) or ReadLoop("loop.csv")`)
	}
}

// Peak is half the swing of flux density.
func (l *Loop) Peak() Tesla { l.given(); return l.loop.Peak() }

// PeakField is half the swing of field strength.
func (l *Loop) PeakField() AmperePerMetre { l.given(); return l.loop.PeakField() }

// Remanence is the flux density that is left where the field is zero.
func (l *Loop) Remanence() Tesla { l.given(); return l.loop.Remanence() }

// Coercivity is the field strength at which the flux density is zero.
func (l *Loop) Coercivity() AmperePerMetre { l.given(); return l.loop.Coercivity() }

// Area is the energy that one cycle turns to heat.
func (l *Loop) Area() JoulePerCubicMetre { l.given(); return l.loop.Area() }

// FieldStrengths are the points' field strengths, from the upper tip down and up again.
func (l *Loop) FieldStrengths() []AmperePerMetre {
	l.given()
	return append([]float64(nil), l.loop.H...)
}

// FluxDensities are the points' flux densities.
func (l *Loop) FluxDensities() []Tesla { l.given(); return append([]float64(nil), l.loop.B...) }

// Centred is the loop moved to lie about zero: what an offset of the measurement added is taken out, and noted.
func (l *Loop) Centred() *Loop {
	l.given()
	next := *l
	next.loop = l.loop.Centred()
	return &next
}

// As gives the loop another name, for pictures.
func (l *Loop) As(name string) *Loop {
	l.given()
	next := *l
	next.name = name
	return &next
}

// Weight gives the loop a weight in a fit, beside the 1 of the others.
func (l *Loop) Weight(weight Ratio) *Loop {
	l.given()
	wantPositive("loop "+l.name, "weight", weight, "")
	next := *l
	next.weight = weight
	return &next
}

// Notes lists what a reader must know of the loop.
func (l *Loop) Notes() []Remark { l.given(); return append([]Remark(nil), l.loop.Notes...) }

// Plot draws the loop.
func (l *Loop) Plot() *Figure {
	l.given()
	f := newFigure(l.name, axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	f.add(l.name, closedList(l.loop.H), closedList(l.loop.B))
	return f
}

// closedList repeats the first value at the end.
func closedList(x []float64) []float64 { return append(append([]float64(nil), x...), x[0]) }

// MIMEBundle shows the figures of the loop as a table.
func (l *Loop) MIMEBundle() map[string]any {
	if l == nil || l.loop == nil {
		return nil
	}
	return l.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (l *Loop) MIMEMetadata() map[string]any {
	if l == nil || l.loop == nil {
		return nil
	}
	return l.table().Metadata()
}

func (l *Loop) table() doc.Table {
	t := doc.Table{Caption: "loop of " + l.name, Columns: []doc.Column{{Name: "quantity"}, {Name: "value", Mixed: true}}, Notes: noteLines(l.loop.Notes)}
	for _, r := range []struct {
		name  string
		value float64
		unit  string
	}{{"peak field strength", l.PeakField(), "A/m"}, {"peak flux density", l.Peak(), "T"}, {"remanence", l.Remanence(), "T"},
		{"coercivity", l.Coercivity(), "A/m"}, {"area, loss of a cycle", l.Area(), "J/m3"}} {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(r.name), doc.Quantity(r.value, r.unit)})
	}
	t.Rows = append(t.Rows, l.splitRows()...)
	return t
}
