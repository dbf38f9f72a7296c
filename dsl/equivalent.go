package dsl

import (
	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/induct"
	"ampturn/magcirc/phys"
)

// EquivalentCircuit is two coupled windings as a circuit of inductances, the others open: a series inductance at the
// first, then the magnetising inductance across an ideal transformer. [EquivalentCircuit.T] is the same in T form.
type EquivalentCircuit struct {
	matrix             *InductanceMatrix
	at                 [2]int
	circuit            induct.Circuit
	primary, secondary string
}

// Series is the inductance in series with the first winding: what is seen there with the second shorted.
func (e *EquivalentCircuit) Series() Henry { e.given(); return e.circuit.Series }

// Magnetising is the magnetising inductance, on the side of the first winding.
func (e *EquivalentCircuit) Magnetising() Henry { e.given(); return e.circuit.Magnetising }

// Ratio is the effective ratio of turns, first to second; negative where the dots oppose.
func (e *EquivalentCircuit) Ratio() Ratio { e.given(); return e.circuit.Ratio }

// T is the T form with the ratio that divides the leakage evenly.
func (e *EquivalentCircuit) T() *TeeCircuit {
	e.given()
	return &TeeCircuit{form: e.circuit.T, of: e}
}

// TFor is the T form for a ratio of one's own, such as that of the turns.
func (e *EquivalentCircuit) TFor(ratio Ratio) *TeeCircuit {
	e.given()
	return &TeeCircuit{form: must(e.matrix.matrix.TForm(e.at[0], e.at[1], ratio)), of: e}
}

func (e *EquivalentCircuit) given() {
	if e == nil || e.matrix == nil {
		refuse(magcirc.BadValue, "equivalent circuit", "there is none", `make it with op.EquivalentCircuit("P", "S")`)
	}
}

// MIMEBundle shows both forms as a table.
func (e *EquivalentCircuit) MIMEBundle() map[string]any {
	if e == nil || e.matrix == nil {
		return nil
	}
	return e.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (e *EquivalentCircuit) MIMEMetadata() map[string]any {
	if e == nil || e.matrix == nil {
		return nil
	}
	return e.table().Metadata()
}

func (e *EquivalentCircuit) table() doc.Table {
	t := equivalentTable("equivalent circuit of " + e.primary + " and " + e.secondary + ", " + e.matrix.caption)
	t.Rows = append(t.Rows,
		[]doc.Cell{doc.Text("series, at " + e.primary), doc.Quantity(e.circuit.Series, "H")},
		[]doc.Cell{doc.Text("magnetising, at " + e.primary), doc.Quantity(e.circuit.Magnetising, "H")},
		[]doc.Cell{doc.Text("ideal transformer " + phys.Format(e.circuit.Ratio, "") + " : 1"), doc.Text("")})
	t.Rows = append(t.Rows, e.T().rows("T form: ")...)
	return t
}

func equivalentTable(caption string) doc.Table {
	return doc.Table{Caption: caption, Columns: []doc.Column{{Name: "element"}, {Name: "inductance", Mixed: true}}}
}

// TeeCircuit is the T form: three inductances and an ideal transformer at the second terminals.
type TeeCircuit struct {
	form induct.TForm
	of   *EquivalentCircuit
}

// First is the inductance in series with the first winding.
func (t *TeeCircuit) First() Henry { t.given(); return t.form.First }

// Magnetising is the magnetising inductance, on the side of the first winding.
func (t *TeeCircuit) Magnetising() Henry { t.given(); return t.form.Magnetising }

// Second is the inductance in series with the second winding, on its own side of the transformer.
func (t *TeeCircuit) Second() Henry { t.given(); return t.form.Second }

// Ratio is that of the ideal transformer, first to second.
func (t *TeeCircuit) Ratio() Ratio { t.given(); return t.form.Ratio }

// MIMEBundle shows the circuit as a table.
func (t *TeeCircuit) MIMEBundle() map[string]any {
	if t == nil || t.of == nil {
		return nil
	}
	table := equivalentTable("T form of " + t.of.primary + " and " + t.of.secondary + ", " + t.of.matrix.caption)
	table.Rows = t.rows("")
	return table.Bundle()
}

func (t *TeeCircuit) given() {
	if t == nil || t.of == nil {
		refuse(magcirc.BadValue, "T form", "there is none", "take it from an equivalent circuit: .T()")
	}
}

func (t *TeeCircuit) rows(lead string) [][]doc.Cell {
	return [][]doc.Cell{
		{doc.Text(lead + "series, at " + t.of.primary), doc.Quantity(t.form.First, "H")},
		{doc.Text(lead + "magnetising, at " + t.of.primary), doc.Quantity(t.form.Magnetising, "H")},
		{doc.Text(lead + "series, at " + t.of.secondary), doc.Quantity(t.form.Second, "H")},
		{doc.Text(lead + "ideal transformer " + phys.Format(t.form.Ratio, "") + " : 1"), doc.Text("")},
	}
}
