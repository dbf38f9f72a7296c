package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

// composite lowers a literal; structs by field name, elided types written out.
func (l *lowering) composite(e *ast.CompositeLit, t types.Type) string {
	switch u := t.Underlying().(type) {
	case *types.Struct:
		return l.structLit(e, t, u)
	case *types.Slice:
		return l.typ(t) + l.elements(e, u.Elem(), nil)
	case *types.Array:
		return l.typ(t) + l.elements(e, u.Elem(), nil)
	case *types.Map:
		return l.typ(t) + l.elements(e, u.Elem(), u.Key())
	case *types.Pointer:
		return "&" + l.composite(e, u.Elem())
	}
	panic("literal without lowered form")
}

func (l *lowering) structLit(e *ast.CompositeLit, t types.Type, u *types.Struct) string {
	var values []ast.Expr
	var to []types.Type
	var names []string
	for i, x := range e.Elts {
		f := (*types.Var)(nil)
		if kv, ok := x.(*ast.KeyValueExpr); ok {
			f, _ = l.info.Uses[kv.Key.(*ast.Ident)].(*types.Var)
			if f == nil {
				f = fieldNamed(u, kv.Key.(*ast.Ident).Name)
			}
			x = kv.Value
		} else {
			f = u.Field(i)
		}
		values = append(values, x)
		to = append(to, f.Type())
		names = append(names, l.fieldName(f))
	}
	texts := l.list(values, to)
	for i := range texts {
		texts[i] = names[i] + ": " + texts[i]
	}
	return l.typ(t) + "{" + strings.Join(texts, ", ") + "}"
}

func fieldNamed(u *types.Struct, name string) *types.Var {
	for i := 0; i < u.NumFields(); i++ {
		if u.Field(i).Name() == name {
			return u.Field(i)
		}
	}
	return nil
}

func (l *lowering) elements(e *ast.CompositeLit, elem, key types.Type) string {
	var list []ast.Expr
	var to []types.Type
	for _, x := range e.Elts {
		if kv, ok := x.(*ast.KeyValueExpr); ok {
			if key != nil {
				list, to = append(list, kv.Key), append(to, key)
			}
			x = kv.Value
		}
		list, to = append(list, x), append(to, elem)
	}
	texts := l.list(list, to)
	var b strings.Builder
	b.WriteString("{")
	k := 0
	for i, x := range e.Elts {
		if i > 0 {
			b.WriteString(", ")
		}
		if kv, ok := x.(*ast.KeyValueExpr); ok {
			if key != nil {
				b.WriteString(texts[k] + ": ")
				k++
			} else {
				b.WriteString(l.info.Types[kv.Key].Value.ExactString() + ": ")
			}
		}
		b.WriteString(texts[k])
		k++
	}
	b.WriteString("}")
	return b.String()
}
