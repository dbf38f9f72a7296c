package cell

import (
	"fmt"
	"go/types"
	"reflect"
	"sort"
	"strings"

	"ampturn/kernel/cell/nb"
)

// typed is a value of a cell's type on its way to fmt.
type typed struct {
	value any
	typ   types.Type
}

// Format writes the names of fields as they were typed; anything else as fmt does.
func (t typed) Format(f fmt.State, verb rune) {
	switch {
	case verb == 'v' && f.Flag('+'):
		fmt.Fprint(f, plus(reflect.ValueOf(t.value), t.typ, 0))
	default:
		fmt.Fprintf(f, fmt.FormatString(f, verb), t.value)
	}
}

// plus writes a value in the form of %+v.
func plus(v reflect.Value, t types.Type, depth int) string {
	if v.IsValid() && v.Kind() == reflect.Interface && !v.IsNil() {
		v = v.Elem()
	}
	if !v.IsValid() {
		return "<nil>"
	}
	var parts []string
	switch u := t.Underlying().(type) {
	case *types.Struct:
		if v.Kind() != reflect.Struct || v.NumField() != u.NumFields() {
			break
		}
		for i := range u.NumFields() {
			parts = append(parts, u.Field(i).Name()+":"+plus(v.Field(i), u.Field(i).Type(), depth+1))
		}
		return "{" + strings.Join(parts, " ") + "}"
	case *types.Pointer:
		if v.Kind() == reflect.Pointer && !v.IsNil() && depth == 0 && isStruct(u) {
			return "&" + plus(v.Elem(), u.Elem(), depth+1)
		}
	case *types.Slice, *types.Array:
		if v.Kind() != reflect.Slice && v.Kind() != reflect.Array {
			break
		}
		for i := range v.Len() {
			parts = append(parts, plus(v.Index(i), elemOf(t), depth+1))
		}
		return "[" + strings.Join(parts, " ") + "]"
	case *types.Map:
		if v.Kind() != reflect.Map {
			break
		}
		keys := v.MapKeys()
		sort.SliceStable(keys, func(i, j int) bool { return nb.Compare(keys[i], keys[j]) < 0 })
		for _, k := range keys {
			parts = append(parts, plus(k, u.Key(), depth+1)+":"+plus(v.MapIndex(k), u.Elem(), depth+1))
		}
		return "map[" + strings.Join(parts, " ") + "]"
	}
	return fmt.Sprintf("%+v", v)
}

func elemOf(t types.Type) types.Type {
	switch u := t.Underlying().(type) {
	case *types.Slice:
		return u.Elem()
	case *types.Array:
		return u.Elem()
	}
	return types.Universe.Lookup("any").Type()
}
