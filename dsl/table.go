package dsl

import (
	"fmt"
	"reflect"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
)

// TableOf shows a slice of structs as a table: a row for each, a column for each field.
//
//	type Row struct { Name string; Current Ampere; Inductance Henry }
//	TableOf([]Row{{"nominal", 8*amp, 9.1*uH}})
func TableOf(rows any) *TableView { return TableOfWithUnits(nil, rows) }

// TableOfWithUnits is [TableOf] with the unit of each field: "{Current=A;Inductance=H}".
func TableOfWithUnits(units []string, rows any) *TableView {
	v := reflect.ValueOf(rows)
	for v.IsValid() && (v.Kind() == reflect.Pointer || v.Kind() == reflect.Interface) {
		v = v.Elem()
	}
	if !v.IsValid() || v.Kind() != reflect.Slice && v.Kind() != reflect.Array {
		refuse(magcirc.BadValue, "TableOf", "wants a slice of structs", "write TableOf([]Row{{...}, {...}})")
	}
	kind := v.Type().Elem()
	for kind.Kind() == reflect.Pointer {
		kind = kind.Elem()
	}
	if kind.Kind() != reflect.Struct {
		refuse(magcirc.BadValue, "TableOf", "wants a slice of structs, and its elements are "+kind.Kind().String(), "declare type Row struct { ... }")
	}
	fields := fieldUnits(unitAt(units, 0))
	t := doc.Table{}
	for k := range kind.NumField() {
		name := fieldName(kind.Field(k).Name)
		t.Columns = append(t.Columns, doc.Column{Name: headOf(name), Unit: fields[name]})
	}
	for i := range v.Len() {
		t.Rows = append(t.Rows, rowOf(v.Index(i), kind.NumField()))
	}
	return &TableView{table: t}
}

// rowOf gives the fields of one struct as cells; a nil pointer gives an empty row.
func rowOf(v reflect.Value, n int) []doc.Cell {
	row := make([]doc.Cell, n)
	for v.Kind() == reflect.Pointer {
		if v.IsNil() {
			return row
		}
		v = v.Elem()
	}
	for k := range n {
		row[k] = cellOf(v.Field(k))
	}
	return row
}

// cellOf gives one field as a cell.
func cellOf(f reflect.Value) doc.Cell {
	switch f.Kind() {
	case reflect.Float64, reflect.Float32:
		return doc.Num(f.Float())
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		return doc.Num(float64(f.Int()))
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		return doc.Num(float64(f.Uint()))
	case reflect.String:
		return doc.Text(f.String())
	case reflect.Bool:
		return doc.Text(map[bool]string{true: "yes", false: "no"}[f.Bool()])
	}
	if !f.CanInterface() {
		return doc.Text("")
	}
	if s, ok := f.Interface().(interface{ MIMEBundle() map[string]any }); ok {
		if text, ok := s.MIMEBundle()["text/plain"].(string); ok {
			return doc.Text(text)
		}
	}
	return doc.Text(fmt.Sprint(f.Interface()))
}

// fieldName is the name of a field as its author wrote it: an evaluator may prefix lower-case fields with X.
func fieldName(name string) string {
	if len(name) > 1 && name[0] == 'X' && name[1] >= 'a' && name[1] <= 'z' {
		return name[1:]
	}
	return name
}

// unitAt is the unit text of argument i: "" where there is none.
func unitAt(units []string, i int) string {
	if i < len(units) {
		return units[i]
	}
	return ""
}

// bare tells a unit text that a number typed without a unit carries, and gives it without that mark.
func bare(unit string) (text string, typed bool) {
	return strings.TrimSuffix(unit, "#"), strings.HasSuffix(unit, "#")
}

// unitOf is a unit text for display: "" where nothing is known.
func unitOf(unit string) string {
	text, _ := bare(unit)
	if text == "?" || text == "turn" {
		return ""
	}
	return text
}

// fieldUnits reads "{Vin=V;Peak=A}".
func fieldUnits(text string) map[string]string {
	units := map[string]string{}
	text = strings.TrimSuffix(strings.TrimPrefix(text, "{"), "}")
	for _, pair := range strings.Split(text, ";") {
		if name, unit, ok := strings.Cut(pair, "="); ok {
			units[name] = unitOf(unit)
		}
	}
	return units
}
