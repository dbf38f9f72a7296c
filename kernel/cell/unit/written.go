package unit

import (
	"go/token"
	"go/types"
	"strings"
)

// tag is what a type says about the unit of its values, where it was written.
type tag struct {
	kind  tagKind
	q     quantity
	param *types.TypeParam
}

type tagKind int8

const (
	tagNone  tagKind = iota // nothing
	tagUnit                 // in a unit
	tagValue                // in the unit that the call is about
	tagParam                // like everything else of the same type parameter
)

// reader reads what types say. It remembers which types of the vocabulary carry a unit.
type reader struct {
	*table
	carriers map[*types.TypeName]bool
	scanned  map[*types.Package]bool
	known    map[string]rule // functions by "package.Name"
}

func newReader(t *table) *reader {
	return &reader{table: t, carriers: map[*types.TypeName]bool{}, scanned: map[*types.Package]bool{}, known: rules(t.Powers)}
}

// written gives the tag of a type as it was written in a declaration: that of an alias; for a container, that of its
// elements; for a function, that of its only result.
func (r *reader) written(t types.Type) tag { return r.read(t, 0) }

func (r *reader) read(t types.Type, depth int) tag {
	if depth > 20 {
		return tag{}
	}
	switch t := t.(type) {
	case *types.Alias:
		if tg, ok := r.alias(t); ok {
			return tg
		}
		return r.read(t.Rhs(), depth+1)
	case *types.Pointer:
		return r.read(t.Elem(), depth+1)
	case *types.Slice:
		return r.read(t.Elem(), depth+1)
	case *types.Array:
		return r.read(t.Elem(), depth+1)
	case *types.Map:
		return r.read(t.Elem(), depth+1)
	case *types.Chan:
		return r.read(t.Elem(), depth+1)
	case *types.Signature:
		if t.Results().Len() == 1 {
			return r.read(t.Results().At(0).Type(), depth+1)
		}
	case *types.TypeParam:
		return tag{kind: tagParam, param: t}
	case *types.Named:
		return r.named(t, depth)
	}
	return tag{}
}

// named gives the tag of a defined type: of its elements where it is a container, or that it is a carrier.
func (r *reader) named(t *types.Named, depth int) tag {
	switch u := t.Underlying().(type) {
	case *types.Slice, *types.Array, *types.Map, *types.Pointer, *types.Signature:
		if tg := r.read(u, depth+1); tg.kind != tagNone {
			return tg
		}
	}
	if r.carries(t) {
		return tag{kind: tagValue}
	}
	return tag{}
}

// alias gives the tag of an alias of the vocabulary: listed, the name for "the unit of the call", or a listed name in
// front of a type's name: VoltSignal = Signal.
func (r *reader) alias(t *types.Alias) (tag, bool) {
	obj := t.Obj()
	if !foreign(obj) {
		return tag{}, false
	}
	if obj.Name() == r.Value {
		return tag{kind: tagValue}, true
	}
	if q, ok := r.aliases[obj.Name()]; ok {
		return tag{kind: tagUnit, q: q}, true
	}
	if n, ok := types.Unalias(deref(t)).(*types.Named); ok {
		if name, ok := strings.CutSuffix(obj.Name(), n.Obj().Name()); ok {
			if q, ok := r.aliases[name]; ok {
				return tag{kind: tagUnit, q: q}, true
			}
		}
	}
	return tag{}, false
}

// deref gives the type that a pointer points to, or the type itself.
func deref(t types.Type) types.Type {
	if p, ok := t.Underlying().(*types.Pointer); ok {
		if _, named := types.Unalias(t).(*types.Named); !named {
			return p.Elem()
		}
	}
	return t
}

// carries tells whether values of a type of the vocabulary carry a unit: one of its methods or fields, or a function that
// makes it, speaks of the unit of the call, or an alias gives it one.
func (r *reader) carries(t *types.Named) bool {
	obj := t.Obj()
	if !foreign(obj) || !token.IsExported(obj.Name()) {
		return false
	}
	if !r.scanned[obj.Pkg()] {
		r.scanned[obj.Pkg()] = true
		r.scan(obj.Pkg())
	}
	return r.carriers[obj]
}

// scan finds the carriers of a package.
func (r *reader) scan(pkg *types.Package) {
	for _, name := range pkg.Scope().Names() {
		switch obj := pkg.Scope().Lookup(name).(type) {
		case *types.TypeName:
			r.scanType(obj)
		case *types.Func:
			if r.mentions(obj.Signature().Params()) {
				for v := range obj.Signature().Results().Variables() {
					if n, ok := types.Unalias(deref(v.Type())).(*types.Named); ok && n.Obj().Pkg() == pkg {
						r.carriers[n.Obj()] = true
					}
				}
			}
		}
	}
}

// scanType marks a type that speaks of the unit of the call in a field or method, or that an alias gives a unit.
func (r *reader) scanType(obj *types.TypeName) {
	if a, ok := obj.Type().(*types.Alias); ok {
		if n, ok := types.Unalias(deref(a)).(*types.Named); ok && n.Obj().Pkg() == obj.Pkg() {
			if tg, ok := r.alias(a); ok && tg.kind == tagUnit {
				r.carriers[n.Obj()] = true
			}
		}
		return
	}
	n, ok := obj.Type().(*types.Named)
	if !ok {
		return
	}
	for i := range n.NumMethods() {
		sig := n.Method(i).Signature()
		if r.mentions(sig.Params()) || r.mentions(sig.Results()) {
			r.carriers[obj] = true
		}
	}
	switch u := n.Underlying().(type) {
	case *types.Struct:
		for f := range u.Fields() {
			if r.isValue(f.Type()) {
				r.carriers[obj] = true
			}
		}
	case *types.Interface:
		for m := range u.Methods() {
			if r.mentions(m.Signature().Params()) || r.mentions(m.Signature().Results()) {
				r.carriers[obj] = true
			}
		}
	}
}

// mentions tells whether parameters or results speak of the unit of the call.
func (r *reader) mentions(list *types.Tuple) bool {
	for v := range list.Variables() {
		if r.isValue(v.Type()) {
			return true
		}
	}
	return false
}

// isValue tells whether a type is, or holds, or gives, the alias for the unit of the call.
func (r *reader) isValue(t types.Type) bool {
	switch t := t.(type) {
	case *types.Alias:
		return foreign(t.Obj()) && t.Obj().Name() == r.Value
	case *types.Pointer:
		return r.isValue(t.Elem())
	case *types.Slice:
		return r.isValue(t.Elem())
	case *types.Array:
		return r.isValue(t.Elem())
	case *types.Map:
		return r.isValue(t.Elem())
	case *types.Signature:
		return t.Results().Len() == 1 && r.isValue(t.Results().At(0).Type())
	}
	return false
}

// mainPath is the import path of the package of every cell.
const mainPath = "main"

// foreign tells whether an object belongs to a compiled package.
func foreign(o types.Object) bool { return o.Pkg() != nil && o.Pkg().Path() != mainPath }
