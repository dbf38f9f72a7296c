package cell

import (
	"fmt"
	"go/types"
	"maps"
	"math"
	"reflect"
	"sort"
	"strconv"
	"strings"

	"ampturn/kernel"
)

// bundler is a value that shows itself. A nil bundle shows nothing.
type bundler interface{ MIMEBundle() map[string]any }

// measured is a value that carries its numbers in full beside its bundle.
type measured interface{ MIMEMetadata() map[string]any }

// showAt shows a value in the way that was noted when the cell was lowered.
func (s *Session) showAt(k int, v any) {
	how := s.shownAt(k)
	if b, ok := v.(bundler); ok && !isNilPointer(v) {
		var beside map[string]any
		if m, ok := v.(measured); ok {
			beside = m.MIMEMetadata()
		}
		s.show(k, b.MIMEBundle(), beside)
		return
	}
	beside := map[string]any{}
	if r := reflect.ValueOf(v); r.Kind() == reflect.Float64 && !math.IsNaN(r.Float()) && !math.IsInf(r.Float(), 0) {
		beside["ampturn"] = map[string]any{"value": r.Float(), "unit": strings.TrimPrefix(how.unit, "?")}
	}
	s.show(k, map[string]any{"text/plain": s.text(reflect.ValueOf(v), how.typ, how.unit, true)}, beside)
}

func isNilPointer(v any) bool {
	r := reflect.ValueOf(v)
	return r.Kind() == reflect.Pointer && r.IsNil()
}

func (s *Session) shownAt(k int) shown {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.shows[k]
}

func (s *Session) showBundle(k int, data map[string]any) { s.show(k, data, nil) }

// show sends what a value shows. Its metadata says under "ampturn" the expression as typed, and the numbers in full.
func (s *Session) show(k int, data, beside map[string]any) {
	if data == nil {
		return
	}
	if _, ok := data["text/plain"]; !ok {
		with := map[string]any{"text/plain": ""}
		for key, v := range data {
			with[key] = v
		}
		data = with
	}
	how, kind := s.shownAt(k), kernel.Display
	if how.top {
		kind = kernel.Result
	}
	own, _ := beside["ampturn"].(map[string]any)
	all := map[string]any{"expression": how.text}
	maps.Copy(all, own)
	meta := maps.Clone(beside)
	if meta == nil {
		meta = map[string]any{}
	}
	meta["ampturn"] = all
	s.Emit(kernel.Output{Kind: kind, Data: data, Metadata: meta})
}

func (s *Session) showText(k int, text string) {
	s.showBundle(k, map[string]any{"text/plain": text})
}

// showHelp shows what a name means.
func (s *Session) showHelp(name string) {
	s.mu.Lock()
	data, ok := s.describe(name)
	s.mu.Unlock()
	if ok {
		s.Emit(kernel.Output{Kind: kernel.Result, Data: data})
	}
}

// number writes a real number with its unit.
func (s *Session) number(x float64, unit string) string {
	if unit == "?" {
		return s.number(x, "") + "  (unit not traced)"
	}
	if s.voc.Format != nil {
		return s.voc.Format(x, unit)
	}
	text := strconv.FormatFloat(x, 'g', 4, 64)
	if unit != "" {
		text += " " + unit
	}
	return text
}

const longest = 50 // elements of a list that are written out

// text writes a value; its static type gives the names of fields and types as typed.
func (s *Session) text(v reflect.Value, t types.Type, unit string, top bool) string {
	if !v.IsValid() {
		return "nil"
	}
	if v.Kind() == reflect.Interface && !v.IsNil() {
		v = v.Elem()
	}
	if own, ok := ownText(v); ok && !isCellType(t) {
		return own
	}
	quiet := unit
	if !top && unit == "?" {
		quiet = ""
	}
	switch v.Kind() {
	case reflect.Float32, reflect.Float64:
		return s.number(v.Float(), quiet)
	case reflect.String:
		if top {
			return v.String()
		}
		return strconv.Quote(v.String())
	case reflect.Slice, reflect.Array:
		if v.Kind() == reflect.Slice && v.IsNil() {
			return "[]"
		}
		return s.list(v, elemOf(t), quiet)
	case reflect.Map:
		return s.mapText(v, t, quiet)
	case reflect.Struct:
		return s.structText(v, t, quiet)
	case reflect.Pointer:
		if v.IsNil() {
			return "nil"
		}
		if v.Elem().Kind() == reflect.Struct {
			return "&" + s.structText(v.Elem(), deref(t), quiet)
		}
		return "pointer to " + s.text(v.Elem(), deref(t), quiet, false)
	case reflect.Func:
		if v.IsNil() {
			return "nil"
		}
		return shortType(t)
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
	if !v.CanInterface() || v.Kind() == reflect.Pointer && v.IsNil() {
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

func elemOf(t types.Type) types.Type {
	switch u := t.Underlying().(type) {
	case *types.Slice:
		return u.Elem()
	case *types.Array:
		return u.Elem()
	case *types.Map:
		return u.Elem()
	}
	return types.Universe.Lookup("any").Type()
}

func (s *Session) list(v reflect.Value, elem types.Type, unit string) string {
	var parts []string
	for i := 0; i < v.Len() && i < longest; i++ {
		parts = append(parts, s.text(v.Index(i), elem, unit, false))
	}
	more := ""
	if v.Len() > longest {
		more = fmt.Sprintf(", .. (%d values)", v.Len())
	}
	if isStruct(elem) && len(parts) > 1 {
		return "[\n  " + strings.Join(parts, "\n  ") + more + "\n]"
	}
	return "[" + strings.Join(parts, ", ") + more + "]"
}

func (s *Session) mapText(v reflect.Value, t types.Type, unit string) string {
	if v.IsNil() {
		return "map[]"
	}
	var key types.Type = types.Universe.Lookup("any").Type()
	if m, ok := t.Underlying().(*types.Map); ok {
		key = m.Key()
	}
	keys := v.MapKeys()
	sort.SliceStable(keys, func(i, j int) bool { return compare(keys[i], keys[j]) < 0 })
	var parts []string
	for i, k := range keys {
		if i == longest {
			parts = append(parts, fmt.Sprintf(".. (%d values)", len(keys)))
			break
		}
		parts = append(parts, s.text(k, key, "", false)+": "+s.text(v.MapIndex(k), elemOf(t), unit, false))
	}
	return "map[" + strings.Join(parts, ", ") + "]"
}

func (s *Session) structText(v reflect.Value, t types.Type, unit string) string {
	units := fieldUnits(unit)
	st, _ := t.Underlying().(*types.Struct)
	var parts []string
	for i := 0; i < v.NumField(); i++ {
		name, ft := v.Type().Field(i).Name, types.Universe.Lookup("any").Type()
		if st != nil && i < st.NumFields() {
			name, ft = st.Field(i).Name(), st.Field(i).Type()
		}
		parts = append(parts, name+": "+s.text(v.Field(i), ft, units[name], false))
	}
	name := ""
	if _, ok := types.Unalias(t).(*types.Named); ok {
		name = shortType(t)
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
