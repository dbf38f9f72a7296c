package unit

import (
	"go/ast"
	"go/types"
	"strings"
)

// word says a unit in a message: "square metre".
func (r *table) word(q quantity) string {
	text := q.as
	if d, err := r.ParseDim(text); text == "" || err != nil || d != q.dim {
		text = r.text(q.dim)
	}
	if q.dim == Number && text != radian {
		return "a plain number"
	}
	for _, s := range r.Symbols {
		if s.Name == text {
			return s.Word
		}
	}
	if w, ok := r.Words[text]; ok {
		return w
	}
	return text
}

// shown gives the unit text of a quantity as it is displayed; names of plain numbers are not.
func (r *table) shown(q quantity) string {
	if q.dim == Number {
		return ""
	}
	if q.as != "" {
		return q.as
	}
	return r.text(q.dim)
}

// textOf gives the unit text of an expression of a type.
func (in *inference) textOf(e ast.Expr, t types.Type, v value) string {
	text := in.typeText(t, v, 0)
	if text == "" && t != nil && numeric(t) && isLiteral(e) {
		return "#"
	}
	return text
}

// typeText gives the unit text of a value of a type: of numbers and of what holds numbers.
func (in *inference) typeText(t types.Type, v value, depth int) string {
	if t == nil || depth > 8 {
		return "?"
	}
	if t == types.Typ[types.UntypedNil] {
		return ""
	}
	switch u := t.Underlying().(type) {
	case *types.Basic:
		if !numeric(u) || whole(u) {
			return ""
		}
		return in.valueText(v)
	case *types.Slice:
		return in.typeText(u.Elem(), v, depth+1)
	case *types.Array:
		return in.typeText(u.Elem(), v, depth+1)
	case *types.Map:
		return in.typeText(u.Elem(), v, depth+1)
	case *types.Chan:
		return in.typeText(u.Elem(), v, depth+1)
	case *types.Pointer:
		return in.typeText(u.Elem(), v, depth+1)
	case *types.Struct:
		if v.kind == known {
			return in.shown(v.quantity)
		}
		return in.structText(u, depth)
	}
	return in.valueText(v)
}

// valueText gives the unit text of numbers.
func (in *inference) valueText(v value) string {
	switch v.kind {
	case known:
		return in.shown(v.quantity)
	case zero:
		return ""
	}
	return "?"
}

// structText gives the unit texts of the fields of a struct that are numbers or hold numbers.
func (in *inference) structText(s *types.Struct, depth int) string {
	var fields []string
	for f := range s.Fields() {
		if !f.Exported() && foreign(f) {
			continue
		}
		if text := in.typeText(f.Type(), in.lookup(f), depth+1); text != "" && (numeric(f.Type()) || text != "?") {
			fields = append(fields, f.Name()+"="+text)
		}
	}
	if len(fields) == 0 {
		return ""
	}
	return "{" + strings.Join(fields, ";") + "}"
}

// typeName names the type of a literal in messages.
func (in *inference) typeName(e *ast.CompositeLit, t types.Type) string {
	if e.Type != nil {
		return in.source(e.Type)
	}
	return types.TypeString(t, func(*types.Package) string { return "" })
}
