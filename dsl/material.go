package dsl

import (
	"fmt"
	"math"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// roomTemperature is what a circuit is computed at when nobody asked for a temperature, degC. Every such result says
// so.
const roomTemperature = 25.0

// MagneticMaterial is a magnetisation law, or several at different temperatures, with a name. It never changes:
// methods give a new one.
type MagneticMaterial struct {
	below *material.Material
	lot   spread      // how its permeability is spread, as far as Normal and Together say it
	sheet *hyst.Sheet // its laminations, as far as Sheet says them
}

// NewMaterial makes a material of a law at 25 degC.
//
//	fer := NewMaterial("lot 12", Froehlich(2200, 0.49*tesla)).Also(100*degC, Froehlich(2200, 0.39*tesla))
func NewMaterial(name string, law Law) *MagneticMaterial {
	if name == "" {
		refuse(magcirc.BadValue, "material", "has no name", `write NewMaterial("lot 12", law)`)
	}
	return &MagneticMaterial{below: material.New(name, lawBelow("material "+name, law))}
}

// Also adds the law at another temperature. Between two temperatures the flux density at equal field strength is
// interpolated; up to 20 K beyond the outermost ones a result carries a note, further it is refused unless
// [MagneticMaterial.Extrapolate] allows it.
func (m *MagneticMaterial) Also(temperature Celsius, law Law) *MagneticMaterial {
	m.given()
	elem := "material " + m.Name()
	wantTemperature(elem, temperature)
	next, err := m.below.Also(temperature, lawBelow(elem, law))
	named(elem, err)
	return &MagneticMaterial{next, m.lot, m.sheet}
}

// Extrapolate allows temperatures further than 20 K beyond the data; every result then says how far.
func (m *MagneticMaterial) Extrapolate() *MagneticMaterial {
	m.given()
	return &MagneticMaterial{m.below.Extrapolate(), m.lot, m.sheet}
}

// Tolerance states the spread of the permeability, relative: what the maker guarantees.
func (m *MagneticMaterial) Tolerance(spread Ratio) *MagneticMaterial {
	m.given()
	wantRange("material "+m.Name(), "tolerance", spread, 0, 1, "")
	return &MagneticMaterial{m.below.Tolerance(spread), m.lot, m.sheet}
}

// Name is the name it was given.
func (m *MagneticMaterial) Name() string { m.given(); return m.below.Name() }

// FluxDensity is the flux density at a field strength and a temperature.
func (m *MagneticMaterial) FluxDensity(field AmperePerMetre, temperature Celsius) Tesla {
	m.given()
	wantFinite("material "+m.Name(), "field strength", field, "A/m")
	b, _ := m.law(temperature).At(field)
	return b
}

// law is the law at a temperature, or a fault.
func (m *MagneticMaterial) law(temperature Celsius) material.Law {
	wantTemperature("material "+m.Name(), temperature)
	law, _, err := m.below.Law(temperature)
	check(err)
	return law
}

// Plot draws flux density over field strength at each temperature of the material.
func (m *MagneticMaterial) Plot() *Figure {
	m.given()
	f := newFigure(m.Name()+": magnetisation", axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	top := m.plotEnd()
	for _, t := range m.below.Temperatures() {
		law := m.law(t)
		h := Span(0, top, 121)
		b := make([]float64, len(h))
		for i := range h {
			b[i], _ = law.At(h[i])
		}
		f.add(phys.Format(t, "degC"), h, b)
	}
	return f
}

// plotEnd is the field strength to which the magnetisation is drawn: the end of the data, or where it has saturated.
func (m *MagneticMaterial) plotEnd() float64 {
	end := 0.0
	for _, t := range m.below.Temperatures() {
		law := m.law(t)
		knee := design.Knee(law)
		h, _ := law.Range()
		if math.IsInf(h, 1) {
			h = knee
		}
		end = math.Max(end, math.Min(h, 10*knee)) // far beyond the knee there is nothing to see
	}
	return end
}

// MIMEBundle shows the laws over temperature as a table.
func (m *MagneticMaterial) MIMEBundle() map[string]any {
	if m == nil || m.below == nil {
		return nil
	}
	t := doc.Table{Caption: "material " + m.Name(), Columns: []doc.Column{{Name: "temperature"}, {Name: "law"}, {Name: "data to", Unit: "T"}}}
	var remarks []magcirc.Note
	for _, at := range m.below.Temperatures() {
		law, notes, err := m.below.Law(at)
		check(err)
		remarks = mergeNotes(remarks, notes)
		row := []doc.Cell{doc.Text(phys.Format(at, "degC")), doc.Text(law.Describe()), doc.Text("formula")}
		if _, b := law.Range(); !math.IsInf(b, 1) {
			row[2] = doc.Num(b)
		}
		t.Rows = append(t.Rows, row)
	}
	t.Notes = noteLines(remarks)
	if m.sheet != nil {
		t.Notes = append(t.Notes, fmt.Sprintf("laminations of %s, %s", phys.Format(m.sheet.Thickness, "m"), phys.Format(m.sheet.Resistivity, "ohm m")))
	}
	return t.Bundle()
}

// given refuses the material that nobody made.
func (m *MagneticMaterial) given() {
	if m == nil || m.below == nil {
		refuse(magcirc.BadValue, "material", "there is none", `make it with NewMaterial("lot 12", law)`)
	}
}

// wantTemperature refuses what no part stands: temperatures below absolute zero, kelvin taken for degC.
func wantTemperature(elem string, temperature Celsius) {
	wantFinite(elem, "temperature", temperature, "degC")
	if temperature < -273.15 {
		refuseValue(magcirc.BadValue, elem, "temperature", temperature, -273.15, "degC", "is below absolute zero", "temperatures are written in degC")
	}
	if temperature > material.MostTemperature {
		refuseValue(magcirc.Implausible, elem, "temperature", temperature, material.MostTemperature, "degC",
			fmt.Sprintf("is above %s", phys.Format(material.MostTemperature, "degC")), "was kelvin meant?")
	}
}
