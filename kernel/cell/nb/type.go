package nb

import (
	"reflect"
	"regexp"
)

// compiled is the static type of a value in an exported program.
type compiled struct {
	t    reflect.Type
	name string // as typed; "" takes it from t
}

func typeOf[T any](name string) Type {
	return compiled{reflect.TypeFor[T](), name}
}

func valueOf(v any) reflect.Value { return reflect.ValueOf(v) }

func isNilPointer(v any) bool {
	r := reflect.ValueOf(v)
	return r.Kind() == reflect.Pointer && r.IsNil()
}

// version is what the lowering appends to a name that is declared again.
var version = regexp.MustCompile(`__\d+`)

func (c compiled) Name() string {
	if c.name != "" {
		return c.name
	}
	return version.ReplaceAllString(c.t.Name(), "")
}

func (c compiled) Named() bool { return c.t.Kind() != reflect.Interface && c.t.Name() != "" }

func (c compiled) Own() bool {
	t := c.t
	for t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	return t.PkgPath() == "main"
}

func (c compiled) Elem() Type {
	switch c.t.Kind() {
	case reflect.Slice, reflect.Array, reflect.Map, reflect.Pointer:
		return of(c.t.Elem())
	}
	return Any
}

func (c compiled) Key() Type {
	if c.t.Kind() == reflect.Map {
		return of(c.t.Key())
	}
	return Any
}

func (c compiled) Field(i int) (string, Type, bool) {
	if c.t.Kind() != reflect.Struct || i >= c.t.NumField() {
		return "", nil, false
	}
	f := c.t.Field(i)
	return version.ReplaceAllString(f.Name, ""), of(f.Type), true
}

// Struct tells whether lists of such values stand one below the other.
func (c compiled) Struct() bool {
	t := c.t
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	return t.Kind() == reflect.Struct
}

func of(t reflect.Type) Type {
	if t.Kind() == reflect.Interface && t.NumMethod() == 0 {
		return Any
	}
	return compiled{t, ""}
}
