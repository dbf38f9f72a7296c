package unit

import (
	"go/ast"
	"go/types"
)

// composite gives what is known of a composite literal.
func (in *inference) composite(e *ast.CompositeLit) value {
	t := in.info.TypeOf(e)
	if t == nil {
		return lost
	}
	if s, ok := deref(t).Underlying().(*types.Struct); ok {
		return in.structure(e, s, t)
	}
	var elems []ast.Expr
	for _, el := range e.Elts {
		if kv, ok := el.(*ast.KeyValueExpr); ok {
			in.mapKey(kv.Key, t)
			el = kv.Value
		}
		elems = append(elems, el)
	}
	_, keyed := t.Underlying().(*types.Map)
	if tg := in.written(t); tg.kind == tagUnit {
		in.elements(elems, tg.q, keyed, in.typeName(e, t))
		return inUnit(tg.q)
	}
	return in.joined(elems, keyed)
}

// mapKey passes over the key of an element of a literal.
func (in *inference) mapKey(key ast.Expr, t types.Type) {
	m, ok := t.Underlying().(*types.Map)
	if !ok {
		return
	}
	v := in.expr(key)
	if tg := in.written(m.Key()); tg.kind == tagUnit {
		in.door(v, tg.q, place{what: "key of the map"}, key)
	}
}

// elements passes over elements that were declared with a unit. A list of bare numbers only is a data table in SI.
func (in *inference) elements(elems []ast.Expr, q quantity, keyed bool, typ string) {
	got := make([]value, len(elems))
	bare := !keyed
	for i, el := range elems {
		got[i] = in.expr(el)
		bare = bare && (got[i].plain() || got[i].kind == zero)
	}
	if bare {
		return
	}
	for i, el := range elems {
		in.door(got[i], q, place{what: "element of " + typ}, el)
	}
}

// joined gives what the elements of a literal have in common.
func (in *inference) joined(elems []ast.Expr, keyed bool) value {
	v := nothing
	for i, el := range elems {
		x := in.expr(el)
		x.table = x.plain()
		if i == 0 {
			v = x
			continue
		}
		v = join(v, x)
	}
	v.table = v.plain() && !keyed
	return v
}

// structure passes over the fields of a struct literal. The literal of a carrier has the unit of its fields.
func (in *inference) structure(e *ast.CompositeLit, s *types.Struct, t types.Type) value {
	set := map[int]bool{}
	carried := nothing
	for i, el := range e.Elts {
		var f *types.Var
		if kv, ok := el.(*ast.KeyValueExpr); ok {
			if id, ok := kv.Key.(*ast.Ident); ok {
				f, _ = in.info.Uses[id].(*types.Var)
			}
			el = kv.Value
		} else if i < s.NumFields() {
			f = s.Field(i)
		}
		v := in.expr(el)
		if f == nil {
			continue
		}
		for j := range s.NumFields() {
			set[j] = set[j] || s.Field(j).Name() == f.Name()
		}
		carried = join(carried, in.field(f, v, el, t))
	}
	for j := range s.NumFields() {
		if f := s.Field(j); !set[j] && !foreign(f) && numeric(f.Type()) && in.written(f.Origin().Type()).kind == tagNone {
			in.assign(f.Origin(), fits)
		}
	}
	if carried.kind == unset {
		return lost
	}
	return carried
}

// field passes a value into a field of a literal and gives what it adds to the carrier.
func (in *inference) field(f *types.Var, v value, from ast.Expr, t types.Type) value {
	switch tg := in.written(f.Origin().Type()); tg.kind {
	case tagUnit:
		what := "field " + f.Name()
		if n, ok := types.Unalias(deref(t)).(*types.Named); ok {
			what += " of " + n.Obj().Name()
		}
		in.door(v, tg.q, place{what: what}, from)
	case tagValue:
		return v
	case tagNone:
		if !foreign(f) {
			in.assign(f.Origin(), v)
		}
	}
	return nothing
}

// funcLit passes over a function literal and gives what its only result is known to be.
func (in *inference) funcLit(e *ast.FuncLit) value {
	f := &function{of: e, inner: true}
	in.body(f, e.Type, e.Body)
	if len(f.results) != 1 {
		return lost
	}
	if f.results[0].kind == tagUnit {
		return value{kind: known, quantity: f.results[0].q}
	}
	return in.result(e, 0)
}
