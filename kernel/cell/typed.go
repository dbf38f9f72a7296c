package cell

import (
	"fmt"
	"go/token"
	"go/types"
	"reflect"
	"sort"
	"strings"

	"ampturn/kernel/cell/nb"
)

// typed is a value on its way to fmt with its static type, which alone knows the names of fields and types.
type typed struct {
	s     *Session
	value any
	typ   types.Type
}

// typedAt joins a value and its static type where fmt would miss something.
func (s *Session) typedAt(k int, v any) any {
	boxed := reflect.ValueOf(v)
	if r := unboxed(boxed); r.IsValid() && r.CanInterface() {
		if a := s.ofName(boxedName(boxed)); a != nil && a.text != nil {
			return worded{r.Interface(), a}
		}
		v = r.Interface()
	}
	switch reflect.ValueOf(v).Kind() {
	case reflect.Struct, reflect.Pointer, reflect.Slice, reflect.Array, reflect.Map:
		if _, ok := v.(fmt.Formatter); ok {
			return v
		}
		return typed{s, v, s.shownAt(k).typ}
	}
	return v
}

// Error keeps an error one.
func (t typed) Error() string { return fmt.Sprint(t) }

// Unwrap gives the error that was typed.
func (t typed) Unwrap() error { e, _ := t.value.(error); return e }

// Format writes the value as fmt writes one of compiled Go.
func (t typed) Format(f fmt.State, verb rune) {
	format := fmt.FormatString(f, verb)
	if f.Flag('#') || verb != 'v' && verb != 's' && verb != 'q' {
		fmt.Fprintf(f, format, t.value)
		return
	}
	w := typedWriter{t.s, format, verb == 'v' && f.Flag('+')}
	fmt.Fprint(f, w.text(reflect.ValueOf(t.value), t.typ, 0, true))
}

type typedWriter struct {
	s      *Session
	format string // of a part
	plus   bool
}

func (w typedWriter) part(v reflect.Value) string {
	if v.IsValid() && v.CanInterface() {
		return fmt.Sprintf(w.format, v.Interface())
	}
	return fmt.Sprintf(w.format, v)
}

// text writes a value; open tells that fmt may call methods here, which it does not within fields of lower-case names.
func (w typedWriter) text(v reflect.Value, t types.Type, depth int, open bool) string {
	if v.IsValid() && v.Kind() == reflect.Interface {
		if v.IsNil() {
			return "<nil>"
		}
		v = v.Elem()
	}
	boxed := boxedName(v)
	if v = unboxed(v); !v.IsValid() {
		return "<nil>"
	}
	if open && v.CanInterface() {
		a := w.s.ofType(v.Type())
		if n := w.s.ofStatic(t); n != nil && !types.IsInterface(t) {
			a = n
		}
		if n := w.s.ofName(boxed); n != nil {
			a = n
		}
		if a != nil && a.text != nil {
			return fmt.Sprintf(strings.NewReplacer("v", "s", "+", "").Replace(w.format), a.text(v.Interface()))
		}
		switch v.Interface().(type) {
		case fmt.Formatter, error, fmt.Stringer:
			return w.part(v)
		}
	}
	switch v.Kind() {
	case reflect.Struct:
		return w.structText(v, t, depth, open)
	case reflect.Pointer:
		if !v.IsNil() && depth == 0 {
			switch v.Elem().Kind() {
			case reflect.Struct, reflect.Slice, reflect.Array, reflect.Map:
				return "&" + w.text(v.Elem(), deref(t), depth+1, open)
			}
		}
	case reflect.Slice, reflect.Array:
		if v.Type().Elem().Kind() == reflect.Uint8 {
			break
		}
		parts := make([]string, v.Len())
		for i := range parts {
			parts[i] = w.text(v.Index(i), elemOf(t), depth+1, open)
		}
		return "[" + strings.Join(parts, " ") + "]"
	case reflect.Map:
		key := types.Universe.Lookup("any").Type()
		if m, ok := t.Underlying().(*types.Map); ok {
			key = m.Key()
		}
		keys := v.MapKeys()
		sort.SliceStable(keys, func(i, j int) bool { return nb.Compare(keys[i], keys[j]) < 0 })
		parts := make([]string, len(keys))
		for i, k := range keys {
			parts[i] = w.text(k, key, depth+1, open) + ":" + w.text(v.MapIndex(k), elemOf(t), depth+1, open)
		}
		return "map[" + strings.Join(parts, " ") + "]"
	}
	return w.part(v)
}

func (w typedWriter) structText(v reflect.Value, t types.Type, depth int, open bool) string {
	st, _ := t.Underlying().(*types.Struct)
	if st != nil && st.NumFields() != v.NumField() {
		st = nil
	}
	if st == nil && v.NumField() > 0 && v.Type().Field(0).Tag.Get("cell") == "" {
		return w.part(v) // of compiled Go
	}
	parts := make([]string, v.NumField())
	for i := range parts {
		_, name, _ := strings.Cut(v.Type().Field(i).Tag.Get("cell"), ".")
		ft := types.Universe.Lookup("any").Type()
		if st != nil {
			name, ft = st.Field(i).Name(), st.Field(i).Type()
		}
		parts[i] = w.text(v.Field(i), ft, depth+1, open && token.IsExported(name))
		if w.plus {
			parts[i] = name + ":" + parts[i]
		}
	}
	return "{" + strings.Join(parts, " ") + "}"
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
