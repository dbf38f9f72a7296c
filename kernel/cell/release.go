package cell

import (
	"go/types"
	"reflect"
	"regexp"
	"strings"
	"unsafe"
)

// The interpreter keeps the syntax tree of everything that it has ever compiled, some 60 KB for a cell of eight lines:
//
//	Interpreter.roots             the trees themselves, for a debugger
//	scope "main".child            the scopes of functions, whose symbols point into the trees
//	scope "main".sym              functions, types and variables by name; a function's symbol points to its tree
//
// What runs holds on to its tree by itself. The lists are emptied before each cell is compiled, and names that no
// later text can mention are taken out. If the interpreter's fields are called otherwise one day, nothing is released
// (TestAgain tells).

// release lets go of what the interpreter has compiled, but for the names to keep.
func (m *machine) release(keep map[string]bool) {
	in := reflect.ValueOf(m.i).Elem()
	if roots, ok := field(in, "roots", reflect.Slice); ok {
		roots.SetZero()
	}
	scopes, ok := field(in, "scopes", reflect.Map)
	if !ok {
		return
	}
	main := scopes.MapIndex(reflect.ValueOf("main"))
	if !main.IsValid() || main.Kind() != reflect.Pointer || main.IsNil() {
		return
	}
	if child, ok := field(main.Elem(), "child", reflect.Slice); ok {
		child.SetZero()
	}
	sym, ok := field(main.Elem(), "sym", reflect.Map)
	if !ok {
		return
	}
	for _, name := range sym.MapKeys() {
		n := name.String()
		if base, _, ok := strings.Cut(n, "["); ok && keep[strings.TrimPrefix(base, "main.")] {
			continue // a generic type with its types filled in
		}
		if !keep[n] && !strings.HasPrefix(n, "nb__") && !strings.HasPrefix(n, "p_") {
			sym.SetMapIndex(name, reflect.Value{})
		}
	}
}

// field gives a field of the interpreter so that it can be set.
func field(v reflect.Value, name string, kind reflect.Kind) (reflect.Value, bool) {
	f := v.FieldByName(name)
	if !f.IsValid() || f.Kind() != kind || !f.CanAddr() {
		return reflect.Value{}, false
	}
	return reflect.NewAt(f.Type(), unsafe.Pointer(f.UnsafeAddr())).Elem(), true
}

// unboxed takes a value of a named type out of what the interpreter puts around it where it is held in an interface.
func unboxed(v reflect.Value) reflect.Value {
	for v.IsValid() && v.Kind() == reflect.Struct && v.Type().Name() == "valueInterface" && v.CanInterface() {
		box := reflect.New(v.Type()).Elem()
		box.Set(v)
		inner, ok := field(box, "value", reflect.Struct)
		if !ok {
			return v
		}
		x, ok := inner.Interface().(reflect.Value)
		if !ok {
			return v
		}
		v = x
	}
	return v
}

// boxedName gives the lowered name of the type of such a value; "" if nothing is around it.
func boxedName(v reflect.Value) string {
	if !v.IsValid() || v.Kind() != reflect.Struct || v.Type().Name() != "valueInterface" || !v.CanInterface() {
		return ""
	}
	box := reflect.New(v.Type()).Elem()
	box.Set(v)
	node, ok := field(box, "node", reflect.Pointer)
	if !ok || node.IsNil() {
		return ""
	}
	typ, ok := field(node.Elem(), "typ", reflect.Pointer)
	if !ok || typ.IsNil() {
		return ""
	}
	name, ok := field(typ.Elem(), "name", reflect.String)
	if !ok {
		return ""
	}
	return name.String()
}

// keepNames lists the lowered names that the text of a later cell can mention: those of the live names, and of the types
// that they rest on.
func (s *Session) keepNames() map[string]bool {
	keep := map[string]bool{}
	seen := map[types.Type]bool{}
	for _, l := range s.scope.names {
		keep[l.lowered], keep[l.indirect] = true, true
		if l.obj != nil {
			s.keepTypes(l.obj.Type(), keep, seen)
		}
	}
	for _, m := range s.methods {
		keep[m.body], keep[m.impl] = true, true
	}
	for again := true; again; { // bodies of generic code are compiled when they get their types
		again = false
		for owner, words := range s.generic {
			for _, w := range words {
				if keep[owner] && !keep[w] {
					keep[w], again = true, true
				}
			}
		}
	}
	return keep
}

var wordText = regexp.MustCompile(`\w+`)

// keepGeneric notes the names in the text of generic code that belongs to a function or type.
func (s *Session) keepGeneric(owner, text string) {
	s.generic[owner] = append(s.generic[owner], wordText.FindAllString(text, -1)...)
}

func (s *Session) keepTypes(t types.Type, keep map[string]bool, seen map[types.Type]bool) {
	if t == nil || seen[t] {
		return
	}
	seen[t] = true
	walk := func(t types.Type) { s.keepTypes(t, keep, seen) }
	switch t := t.(type) {
	case *types.Alias:
		walk(types.Unalias(t))
	case *types.Named:
		if n := s.typeNames[t.Origin().Obj()]; n != "" {
			keep[n] = true
			walk(t.Underlying())
			walk(t.Origin().Underlying())
			for i := range t.NumMethods() {
				walk(t.Method(i).Type())
			}
		}
		for i := range t.TypeArgs().Len() {
			walk(t.TypeArgs().At(i))
		}
	case *types.Pointer:
		walk(t.Elem())
	case *types.Slice:
		walk(t.Elem())
	case *types.Array:
		walk(t.Elem())
	case *types.Map:
		walk(t.Key())
		walk(t.Elem())
	case *types.Struct:
		for i := range t.NumFields() {
			walk(t.Field(i).Type())
		}
	case *types.Tuple:
		for i := range t.Len() {
			walk(t.At(i).Type())
		}
	case *types.Signature:
		walk(t.Params())
		walk(t.Results())
		for i := range t.TypeParams().Len() {
			walk(t.TypeParams().At(i).Constraint())
		}
	case *types.Interface:
		for i := range t.NumExplicitMethods() {
			walk(t.ExplicitMethod(i).Type())
		}
		for i := range t.NumEmbeddeds() {
			walk(t.EmbeddedType(i))
		}
	case *types.Union:
		for i := range t.Len() {
			walk(t.Term(i).Type())
		}
	}
}

// same compares two values as Go does; x and y are the lowered names of their types where these are known.
func same(a, b any, x, y string) bool {
	va, vb := reflect.ValueOf(a), reflect.ValueOf(b)
	if n := boxedName(va); n != "" {
		x = n
	}
	if n := boxedName(vb); n != "" {
		y = n
	}
	return sameValue(unboxed(va), unboxed(vb), x, y)
}

func sameValue(a, b reflect.Value, x, y string) bool {
	if !a.IsValid() || !b.IsValid() {
		return a.IsValid() == b.IsValid()
	}
	if a.Type() != b.Type() {
		return false
	}
	inner := func(a, b reflect.Value) bool {
		if a.Kind() == reflect.Interface {
			a, b = a.Elem(), b.Elem()
		}
		return sameValue(unboxed(a), unboxed(b), boxedName(a), boxedName(b))
	}
	switch a.Kind() {
	case reflect.Struct:
		for i := range a.NumField() {
			if !inner(a.Field(i), b.Field(i)) {
				return false
			}
		}
		return true
	case reflect.Array:
		for i := range a.Len() {
			if !inner(a.Index(i), b.Index(i)) {
				return false
			}
		}
		return true
	case reflect.Pointer:
		return a.Pointer() == b.Pointer()
	}
	return (x == "" || y == "" || x == y) && a.Interface() == b.Interface()
}

// boxes tells whether the interpreter puts something around values of a type, or around parts of them: interfaces which may
// hold values of a cell's types.
func boxes(t types.Type, depth int) bool {
	if t == nil || depth > 6 {
		return false
	}
	if _, ok := types.Unalias(t).(*types.TypeParam); ok {
		return false
	}
	if types.IsInterface(t) {
		return isAny(t) || isCellType(t)
	}
	switch u := t.Underlying().(type) {
	case *types.Struct:
		for i := range u.NumFields() {
			if boxes(u.Field(i).Type(), depth+1) {
				return true
			}
		}
	case *types.Array:
		return boxes(u.Elem(), depth+1)
	}
	return false
}
