package main

import (
	"fmt"
	"go/types"
	"sort"
)

// walker looks for what cells could not use in all that the exported names of a package reach.
type walker struct {
	home    *types.Package
	table   map[string]bool
	renamed map[*types.TypeName]string // types of other packages, and the alias that home has for each
	seen    map[types.Type]bool
	shallow bool // take the types of home as they are
	faults  []string
}

// newWalker collects the aliases of a package.
func newWalker(pkg *types.Package, table map[string]bool) *walker {
	w := &walker{home: pkg, table: table, renamed: map[*types.TypeName]string{}, seen: map[types.Type]bool{}}
	for _, name := range pkg.Scope().Names() {
		if t, ok := pkg.Scope().Lookup(name).(*types.TypeName); ok && t.IsAlias() && t.Exported() {
			if n, ok := types.Unalias(t.Type()).(*types.Named); ok {
				w.renamed[n.Obj()] = name
			}
		}
	}
	return w
}

// inexpressible lists what cells could not use of a package, one line each.
func inexpressible(pkg *types.Package, table map[string]bool) []string {
	w := newWalker(pkg, table)
	for _, name := range pkg.Scope().Names() {
		if obj := pkg.Scope().Lookup(name); obj.Exported() {
			w.object(name, obj)
		}
	}
	sort.Strings(w.faults)
	return w.faults
}

// fault notes one fault.
func (w *walker) fault(at, format string, args ...any) {
	w.faults = append(w.faults, at+": "+fmt.Sprintf(format, args...))
}

// object walks one exported name.
func (w *walker) object(at string, obj types.Object) {
	switch obj := obj.(type) {
	case *types.Var:
		w.fault(at, "an exported variable could not be assigned from a cell; make it a function or a constant")
	case *types.Func:
		if obj.Signature().TypeParams().Len() > 0 {
			w.fault(at, "a generic function has no symbol; write one function per type")
			return
		}
		w.walk(at, obj.Type())
	case *types.TypeName:
		if isGeneric(obj.Type()) {
			w.fault(at, "a generic type has no symbol")
			return
		}
		w.walk(at, obj.Type())
	case *types.Const:
		w.walk(at, obj.Type())
	}
}

// isGeneric tells whether a type has type parameters of its own.
func isGeneric(t types.Type) bool {
	switch t := t.(type) {
	case *types.Alias:
		return t.TypeParams().Len() > 0
	case *types.Named:
		return t.TypeParams().Len() > 0
	}
	return false
}

// walk walks a type as it is written.
func (w *walker) walk(at string, t types.Type) {
	if w.seen[t] {
		return
	}
	w.seen[t] = true
	switch t := t.(type) {
	case *types.Basic:
		if t.Kind() == types.UnsafePointer {
			w.fault(at, "an unsafe pointer")
		}
	case *types.Alias:
		if pkg := t.Obj().Pkg(); pkg != nil && pkg != w.home && !w.table[pkg.Path()] {
			w.fault(at, "type %s is of a package that cells cannot name; use one of %s", t.Obj().Name(), w.home.Name())
		}
		w.walk(at, t.Rhs())
	case *types.Named:
		w.named(at, t)
	case *types.Pointer:
		w.walk(at, t.Elem())
	case *types.Slice:
		w.walk(at, t.Elem())
	case *types.Array:
		w.walk(at, t.Elem())
	case *types.Chan:
		w.walk(at, t.Elem())
	case *types.Map:
		w.walk(at, t.Key())
		w.walk(at, t.Elem())
	case *types.Signature:
		w.tuple(at, t.Params())
		w.tuple(at, t.Results())
	case *types.Struct, *types.Interface:
		w.members(at, t)
	case *types.TypeParam:
		w.fault(at, "a type parameter")
	}
}

// tuple walks parameters or results.
func (w *walker) tuple(at string, list *types.Tuple) {
	for v := range list.Variables() {
		w.walk(at, v.Type())
	}
}

// named walks a defined type: who may name it, its fields and its methods.
func (w *walker) named(at string, t *types.Named) {
	obj := t.Obj()
	switch {
	case obj.Pkg() == nil: // error
		return
	case t.TypeArgs().Len() > 0:
		w.fault(at, "an instance of the generic type %s", obj.Name())
		return
	case w.renamed[obj] != "" || obj.Pkg() == w.home && obj.Exported():
	case obj.Pkg() == w.home:
		w.fault(at, "type %s is not exported; a cell could hold a value of it without a name for its type", obj.Name())
		return
	case w.table[obj.Pkg().Path()]:
		return
	default:
		w.fault(at, "type %s.%s is of a package that cells cannot name; give it an alias in %s",
			obj.Pkg().Name(), obj.Name(), w.home.Name())
		return
	}
	if w.shallow {
		return
	}
	name := obj.Name()
	if alias := w.renamed[obj]; alias != "" {
		name = alias
	}
	w.members(name, t.Underlying())
	if types.IsInterface(t) {
		return
	}
	for sel := range types.NewMethodSet(types.NewPointer(t)).Methods() {
		if sel.Obj().Exported() {
			w.walk(name+"."+sel.Obj().Name(), sel.Obj().Type())
		}
	}
}

// members walks the exported fields of a struct or methods of an interface; another type as itself.
func (w *walker) members(at string, t types.Type) {
	switch t := t.(type) {
	case *types.Struct:
		for f := range t.Fields() {
			switch {
			case f.Exported():
				w.walk(at+"."+f.Name(), f.Type())
			case f.Embedded():
				if n, ok := types.Unalias(f.Type()).(*types.Named); ok {
					w.members(at, n.Underlying())
				}
			}
		}
	case *types.Interface:
		for m := range t.Methods() {
			if m.Exported() {
				w.walk(at+"."+m.Name(), m.Type())
			}
		}
	default:
		w.walk(at, t)
	}
}
