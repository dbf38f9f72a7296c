// Package stdlib holds published data on magnetic materials under generic names, each row with its source.
//
// The figures are representative of a class. They serve a first design and its comparison with others; before a part
// is ordered they are replaced by the supplier's data. Every material of the shelf says so in its notes.
//
//	fer, err := stdlib.Material("power ferrite PW3a")
//	law, notes, err := fer.Law(100)
package stdlib

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"sync"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
)

// The table: one row for each material and temperature. law says how the other columns are read: "saturation point"
// (mu_i and B at H, a Langevin law), "saturation" (mu_i and the saturation polarisation), "bias" (mu_i, H at half
// of it, exponent), "curve" (points "H B; H B").
//
//go:embed materials.csv
var materialsCSV string

// MaterialRow is what the shelf holds of one material.
type MaterialRow struct {
	Name         string
	Class        string    // standard class or use
	Temperatures []float64 // degC, of its laws
	Law          string    // the law at the first of them, in words
	Tolerance    float64   // relative, of the initial permeability; 0 where the source gives none
	Source       string
	Note         string
}

// Representative is the note that goes with every material of the shelf.
const Representative = "representative of its class; replace by your supplier's data"

// Materials lists the shelf, in the order of its table.
func Materials() []MaterialRow {
	rows := make([]MaterialRow, 0, len(shelf().order))
	for _, name := range shelf().order {
		rows = append(rows, shelf().row[name])
	}
	return rows
}

// Kind is the class of material that the name begins with, and grade what distinguishes it there: "power ferrite", "PW3a".
func (r MaterialRow) Kind() (kind, grade string) {
	words := strings.Fields(r.Name)
	n := slices.IndexFunc(words, func(w string) bool { return strings.ContainsAny(w, "0123456789") })
	if n < 0 {
		n = len(words)
	}
	return strings.Join(words[:n], " "), strings.Join(words[n:], " ")
}

// Material gives a material of the shelf by its name.
//
// Errors: [magcirc.UnknownName], with the names nearest to it; where none is near, with those that share a word with it, or
// with the kinds that the shelf holds.
func Material(name string) (*material.Material, error) {
	if m, ok := shelf().material[name]; ok {
		return m, nil
	}
	says, hint := suggest(name)
	return nil, &magcirc.Error{Code: magcirc.UnknownName, Elem: "shelf of materials", Msg: fmt.Sprintf("there is no %q; %s", name, says), Hint: hint}
}

// suggest says what the shelf holds in place of a name.
func suggest(name string) (says, hint string) {
	names := shelf().order
	if near(name, names) {
		return "nearest to it are " + strings.Join(nearest(name, names, 3), ", "), "Materials() lists them all"
	}
	if alike := shares(name, Materials()); len(alike) > 0 {
		return "of its kind are " + strings.Join(nearest(name, alike, 4), ", "), "Materials() lists them all"
	}
	kinds := Kinds()
	return "the shelf holds classes, no makers' grades: " + strings.Join(kinds, ", "), fmt.Sprintf("Materials(%q) lists the names of one; your supplier's curve goes into NewMaterial", kinds[0])
}

// Kinds lists the kinds of material on the shelf, each once, in the order of its table.
func Kinds() []string {
	var kinds []string
	for _, r := range Materials() {
		if kind, _ := r.Kind(); !slices.Contains(kinds, kind) {
			kinds = append(kinds, kind)
		}
	}
	return kinds
}

// materials is the table as read.
type materials struct {
	order    []string
	row      map[string]MaterialRow
	material map[string]*material.Material
}

// shelf reads the table once. A fault of the table is a fault of this package, which its tests find.
var shelf = sync.OnceValue(func() *materials {
	m, err := readMaterials(materialsCSV)
	if err != nil {
		panic("stdlib: materials.csv: " + err.Error())
	}
	return m
})

// readMaterials reads a table of materials.
func readMaterials(text string) (*materials, error) {
	records, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		return nil, err
	}
	m := &materials{row: map[string]MaterialRow{}, material: map[string]*material.Material{}}
	for line, fields := range records[1:] {
		r := record{header: records[0], fields: fields}
		if err := m.add(&r); err != nil {
			return nil, fmt.Errorf("line %d: %w", line+2, err)
		}
	}
	return m, nil
}

// add takes one row: a new material, or a further temperature of one.
func (m *materials) add(r *record) error {
	name, t := r.text("name"), r.number("temperature_degC")
	law, err := r.law()
	if r.err != nil {
		return r.err
	}
	if err != nil {
		return err
	}
	row, known := m.row[name]
	if known {
		row.Temperatures = append(row.Temperatures, t)
		m.row[name] = row
		m.material[name], err = m.material[name].Also(t, law)
		return err
	}
	m.order = append(m.order, name)
	m.row[name] = MaterialRow{Name: name, Class: r.text("class"), Temperatures: []float64{t}, Law: law.Describe(),
		Tolerance: r.number("tolerance"), Source: r.text("source"), Note: r.text("note")}
	m.material[name] = material.NewAt(name, t, law).Tolerance(r.number("tolerance")).
		Noted(magcirc.Assumed, Representative).Noted(magcirc.Remark, r.text("note"))
	return r.err
}

// record is a row with its header. The first fault sticks in err.
type record struct {
	header, fields []string
	err            error
}

func (r *record) text(column string) string {
	i := slices.Index(r.header, column)
	if i < 0 {
		r.err = fmt.Errorf("no column %s", column)
		return ""
	}
	return r.fields[i]
}

// number reads a column; an empty one is 0.
func (r *record) number(column string) float64 {
	s := r.text(column)
	if s == "" {
		return 0
	}
	x, err := strconv.ParseFloat(s, 64)
	if err != nil && r.err == nil {
		r.err = fmt.Errorf("column %s: %q is no number", column, s)
	}
	return x
}

// law makes the law of the row.
func (r *record) law() (material.Law, error) {
	mui, h, b := r.number("mu_i"), r.number("H_A_per_m"), r.number("B_T")
	switch kind := r.text("law"); kind {
	case "saturation point":
		return material.LangevinThrough(mui, h, b)
	case "saturation":
		return material.NewFroehlich(mui, b)
	case "bias":
		return material.NewBias(mui, h, r.number("exponent"))
	case "curve":
		return r.points().Law()
	default:
		return nil, fmt.Errorf("there is no law %q", kind)
	}
}

// points reads "H B; H B".
func (r *record) points() material.Points {
	p := material.Points{Source: r.text("name")}
	for pair := range strings.SplitSeq(r.text("points_A_per_m_T"), ";") {
		var h, b float64
		if _, err := fmt.Sscan(pair, &h, &b); err != nil && r.err == nil {
			r.err = fmt.Errorf("point %q is no pair of numbers", pair)
		}
		p.H, p.B = append(p.H, h), append(p.B, b)
	}
	return p
}
