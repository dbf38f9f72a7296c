package nb

import (
	"fmt"
	"reflect"
	"sort"
	"strconv"
	"strings"
)

// bundler is a value that shows itself. A nil bundle shows nothing.
type bundler interface{ MIMEBundle() map[string]any }

// Type is the static type of a value as far as its text depends on it.
type Type interface {
	Name() string // as typed, without packages: "Rod", "func(x float64) float64"
	Named() bool  // it has a name of its own
	Own() bool    // a cell declares it: its methods are not asked for a text
	Struct() bool // a struct or a pointer to one
	Elem() Type   // of a slice, an array, a map or a pointer; Any for others
	Key() Type    // of a map; Any for others
	Field(i int) (name string, t Type, ok bool)
}

// Any is a static type that says nothing.
var Any Type = unknown{}

type unknown struct{}

func (unknown) Name() string                   { return "" }
func (unknown) Named() bool                    { return false }
func (unknown) Own() bool                      { return false }
func (unknown) Struct() bool                   { return false }
func (unknown) Elem() Type                     { return Any }
func (unknown) Key() Type                      { return Any }
func (unknown) Field(int) (string, Type, bool) { return "", nil, false }

// Writer writes values as text.
type Writer struct {
	Format func(x float64, unit string) string // nil: four significant digits and the unit text
	Bare   func(v reflect.Value) reflect.Value // takes a value out of what an interpreter puts around it; nil: nothing is around
}

// number writes a real number with its unit.
func (w Writer) number(x float64, unit string) string {
	if unit == "?" {
		return w.number(x, "") + "  (unit not traced)"
	}
	if w.Format != nil {
		return w.Format(x, unit)
	}
	text := strconv.FormatFloat(x, 'g', 4, 64)
	if unit != "" {
		text += " " + unit
	}
	return text
}

const longest = 50 // elements of a list that are written out

// Text writes a value; its static type gives the names of fields and types as typed.
func (w Writer) Text(v reflect.Value, t Type, unit string, top bool) string {
	if !v.IsValid() {
		return "nil"
	}
	if v.Kind() == reflect.Interface && !v.IsNil() {
		v = v.Elem()
	}
	if w.Bare != nil {
		v = w.Bare(v)
	}
	if own, ok := ownText(v); ok && !t.Own() {
		return own
	}
	quiet := unit
	if !top && unit == "?" {
		quiet = ""
	}
	switch v.Kind() {
	case reflect.Float32, reflect.Float64:
		return w.number(v.Float(), quiet)
	case reflect.String:
		if top {
			return v.String()
		}
		return strconv.Quote(v.String())
	case reflect.Slice, reflect.Array:
		if v.Kind() == reflect.Slice && v.IsNil() {
			return "[]"
		}
		return w.list(v, t.Elem(), quiet)
	case reflect.Map:
		return w.mapText(v, t, quiet)
	case reflect.Struct:
		return w.structText(v, t, quiet)
	case reflect.Pointer:
		if v.IsNil() {
			return "nil"
		}
		if v.Elem().Kind() == reflect.Struct {
			return "&" + w.structText(v.Elem(), t.Elem(), quiet)
		}
		return "pointer to " + w.Text(v.Elem(), t.Elem(), quiet, false)
	case reflect.Func:
		if v.IsNil() {
			return "nil"
		}
		return t.Name()
	case reflect.Invalid:
		return "nil"
	}
	if v.CanInterface() {
		return fmt.Sprint(v.Interface())
	}
	return fmt.Sprint(v)
}

// ownText gives the text that a compiled value writes of itself.
func ownText(v reflect.Value) (string, bool) {
	if !v.CanInterface() || v.Kind() == reflect.Pointer && v.IsNil() || v.Type().PkgPath() == "main" {
		return "", false
	}
	switch x := v.Interface().(type) {
	case bundler:
		if text, ok := x.MIMEBundle()["text/plain"].(string); ok {
			return text, true
		}
	case error:
		return x.Error(), true
	case fmt.Stringer:
		return x.String(), true
	}
	return "", false
}

func (w Writer) list(v reflect.Value, elem Type, unit string) string {
	var parts []string
	for i := 0; i < v.Len() && i < longest; i++ {
		parts = append(parts, w.Text(v.Index(i), elem, unit, false))
	}
	more := ""
	if v.Len() > longest {
		more = fmt.Sprintf(", .. (%d values)", v.Len())
	}
	if elem.Struct() && len(parts) > 1 {
		return "[\n  " + strings.Join(parts, "\n  ") + more + "\n]"
	}
	return "[" + strings.Join(parts, ", ") + more + "]"
}

func (w Writer) mapText(v reflect.Value, t Type, unit string) string {
	if v.IsNil() {
		return "map[]"
	}
	keys := v.MapKeys()
	sort.SliceStable(keys, func(i, j int) bool { return Compare(keys[i], keys[j]) < 0 })
	var parts []string
	for i, k := range keys {
		if i == longest {
			parts = append(parts, fmt.Sprintf(".. (%d values)", len(keys)))
			break
		}
		parts = append(parts, w.Text(k, t.Key(), "", false)+": "+w.Text(v.MapIndex(k), t.Elem(), unit, false))
	}
	return "map[" + strings.Join(parts, ", ") + "]"
}

func (w Writer) structText(v reflect.Value, t Type, unit string) string {
	units := fieldUnits(unit)
	var parts []string
	for i := range v.NumField() {
		name, ft, ok := t.Field(i)
		if !ok {
			name, ft = v.Type().Field(i).Name, Any
		}
		parts = append(parts, name+": "+w.Text(v.Field(i), ft, units[name], false))
	}
	name := ""
	if t.Named() {
		name = t.Name()
	}
	return name + "{" + strings.Join(parts, ", ") + "}"
}

// fieldUnits reads the unit texts of a struct: "{Vin=V;Core=degC}".
func fieldUnits(text string) map[string]string {
	m := map[string]string{}
	if !strings.HasPrefix(text, "{") {
		return m
	}
	for _, p := range strings.Split(strings.Trim(text, "{}"), ";") {
		if k, v, ok := strings.Cut(p, "="); ok {
			m[k] = strings.TrimSuffix(v, "#")
		}
	}
	return m
}
