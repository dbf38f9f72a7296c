package dsl

import (
	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// Sheet says that the material comes in laminations of a thickness and a resistivity (ohm m; 48 uohm cm is 4.8e-7), for
// [MagneticMaterial.DynamicLoop]. The field strength of their eddy currents at the rate dB/dt is
//
//	d^2/(12 rho) dB/dt
//
//	lam := NewMaterial("grade 7", JilesAtherton(JA{...})).Sheet(0.35*mm, 4.8e-7)
func (m *MagneticMaterial) Sheet(thickness Metre, resistivity OhmMetre) *MagneticMaterial {
	m.given()
	sheet := hyst.Sheet{Thickness: thickness, Resistivity: resistivity}
	named("material "+m.Name(), sheet.Check())
	next := *m
	next.sheet = &sheet
	return &next
}

// Excess adds the excess field of a loss separation to the laminations, C sqrt|dB/dt|: its points are of this material
// under sinusoidal flux.
//
//	lam := lam.Excess(Separate(points...))
func (m *MagneticMaterial) Excess(from *Separation) *MagneticMaterial {
	sheet := m.laminated()
	from.given()
	sheet.Excess = from.parts.Excess()
	next := *m
	next.sheet = &sheet
	return &next
}

// laminated gives the laminations, or refuses the material without.
func (m *MagneticMaterial) laminated() hyst.Sheet {
	m.given()
	if m.sheet == nil {
		refuse(magcirc.WrongUse, "material "+m.Name(), "has no laminations", "say what they are: lam.Sheet(0.35*mm, 4.8e-7)")
	}
	return *m.sheet
}

// DynamicLoop is the loop of a laminated material under sinusoidal flux density of a peak and a frequency, at 25 degC or
// another temperature: the steady quasi-static loop with the field strength of the eddy currents added. It shows its
// loss by where it comes from. Sheets thicker than half a skin depth get a note: the classical loss is overstated there.
//
//	lam.DynamicLoop(1.2*tesla, 50*Hz).LossDensity()
func (m *MagneticMaterial) DynamicLoop(peak Tesla, frequency Hertz, temperature ...Celsius) *Loop {
	sheet := m.laminated()
	loop, split, err := hyst.Dynamic(m.memory(temperature), sheet, peak, frequency, nil)
	named("material "+m.Name(), err)
	return &Loop{loop: loop, name: m.Name() + " to " + phys.Format(peak, "T") + " at " + phys.Format(frequency, "Hz"),
		split: &split, frequency: frequency}
}

// dynamic refuses the loop that knows no frequency.
func (l *Loop) dynamic() *hyst.Split {
	l.given()
	if l.split == nil {
		refuse(magcirc.WrongUse, "loop "+l.name, "has no frequency", "take lam.DynamicLoop(1.2*tesla, 50*Hz), or multiply .Area() by the frequency")
	}
	return l.split
}

// Hysteresis is the part of [Loop.Area] that the quasi-static loop has.
func (l *Loop) Hysteresis() JoulePerCubicMetre { return l.dynamic().Hysteresis }

// Classical is the part of [Loop.Area] by eddy currents as of an even flux over the sheet.
func (l *Loop) Classical() JoulePerCubicMetre { return l.dynamic().Classical }

// Excess is the part of [Loop.Area] by eddy currents around moving walls.
func (l *Loop) Excess() JoulePerCubicMetre { return l.dynamic().Excess }

// LossDensity is the loss at the loop's frequency: its area times the frequency.
func (l *Loop) LossDensity() WattPerCubicMetre { return l.dynamic().Total() * l.frequency }

// splitRows are the rows of the loss by where it comes from.
func (l *Loop) splitRows() [][]doc.Cell {
	if l.split == nil {
		return nil
	}
	var rows [][]doc.Cell
	for _, r := range []struct {
		name  string
		value float64
		unit  string
	}{{"hysteresis", l.split.Hysteresis, "J/m3"}, {"classical eddy currents", l.split.Classical, "J/m3"}, {"excess", l.split.Excess, "J/m3"},
		{"loss density", l.LossDensity(), "W/m3"}} {
		rows = append(rows, []doc.Cell{doc.Text(r.name), doc.Quantity(r.value, r.unit)})
	}
	return rows
}
