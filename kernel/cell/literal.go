package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

// keyLiterals writes the names of fields into struct literals of earlier cells' types, whose lower-case fields the
// type checker would refuse otherwise. It tells whether there were any.
func (c *checking) keyLiterals(r *checked) bool {
	due := false
	for _, e := range c.errs {
		due = due || strings.HasPrefix(e.Msg, "implicit assignment to unexported field")
	}
	if !due || r == nil {
		return false
	}
	n := 0
	key := func(x ast.Node) bool {
		lit, ok := x.(*ast.CompositeLit)
		if !ok || len(lit.Elts) == 0 {
			return true
		}
		t := c.info.TypeOf(lit)
		if t == nil {
			return true
		}
		st, ok := deref(t).Underlying().(*types.Struct)
		if _, keyed := lit.Elts[0].(*ast.KeyValueExpr); !ok || keyed || st.NumFields() != len(lit.Elts) {
			return true
		}
		for i, e := range lit.Elts {
			lit.Elts[i] = &ast.KeyValueExpr{Key: &ast.Ident{NamePos: e.Pos(), Name: st.Field(i).Name()}, Colon: e.Pos(), Value: e}
		}
		n++
		return true
	}
	for _, f := range r.funcs {
		ast.Inspect(f.decl, key)
	}
	ast.Inspect(c.p.body, key)
	return n > 0
}
