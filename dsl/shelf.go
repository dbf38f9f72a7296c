package dsl

import (
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/stdlib"
)

// Material is a material of the shelf, by the name that [Materials] lists. Its figures are representative of a class and
// serve a first design; every result says so until the supplier's data replace them.
//
//	fer := Material("power ferrite PW3a")
func Material(name string) *MagneticMaterial {
	m, err := stdlib.Material(name)
	check(err)
	return &MagneticMaterial{below: m}
}

// Materials lists the shelf by kinds of material. Given words, it lists those whose name or class holds one of them, each
// with its temperatures, its law and where it comes from: Materials("power ferrite").
func Materials(words ...string) *TableView {
	if len(words) == 0 {
		return kinds()
	}
	t := doc.Table{Caption: "materials of the shelf: " + stdlib.Representative, Columns: []doc.Column{{Name: "name"}, {Name: "class"},
		{Name: "degC"}, {Name: "law, at the first of them"}, {Name: "source"}}}
	for _, r := range stdlib.Materials() {
		if !holds(r.Name+" "+r.Class, words) {
			continue
		}
		var at []string
		for _, temperature := range r.Temperatures {
			at = append(at, phys.Format(temperature, ""))
		}
		law := r.Law
		if r.Tolerance > 0 {
			law += " +-" + phys.Format(r.Tolerance, "percent")
		}
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(r.Name), doc.Text(r.Class), doc.Text(strings.Join(at, ", ")), doc.Text(law), doc.Text(r.Source)})
	}
	if len(t.Rows) == 0 {
		refuse(magcirc.UnknownName, "shelf of materials", "holds nothing of "+strings.Join(words, ", "), "Materials() lists it all")
	}
	return &TableView{table: t}
}

// kinds lists the names on the shelf, a row for each kind.
func kinds() *TableView {
	t := doc.Table{Caption: "materials of the shelf: " + stdlib.Representative, Columns: []doc.Column{{Name: "kind"}, {Name: "grades"}, {Name: "degC"}},
		Notes: []string{`a name is kind and grade: Material("power ferrite PW3a")`, `Materials("power ferrite") shows class, law and source`}}
	for _, kind := range stdlib.Kinds() {
		var grades, at []string
		for _, r := range stdlib.Materials() {
			k, grade := r.Kind()
			if k != kind {
				continue
			}
			grades = append(grades, grade)
			for _, temperature := range r.Temperatures {
				if words := phys.Format(temperature, ""); !slices.Contains(at, words) {
					at = append(at, words)
				}
			}
		}
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(kind), doc.Text(strings.Join(grades, "; ")), doc.Text(strings.Join(at, ", "))})
	}
	return &TableView{table: t}
}

// holds tells whether a text holds one of the words, whatever their case; without words every text does.
func holds(text string, words []string) bool {
	for _, w := range words {
		if strings.Contains(strings.ToLower(text), strings.ToLower(w)) {
			return true
		}
	}
	return len(words) == 0
}
