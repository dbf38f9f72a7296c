package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"strings"
)

// What makes loops over numbers faster in the interpreter, where a conversion costs as much as two operations.

// beside writes a constant operand of an operator. Beside a variable of type float64 or int it needs no conversion.
func (l *lowering) beside(e, other ast.Expr, text string) string {
	tv := l.info.Types[e]
	if tv.Value == nil || l.info.Types[other].Value != nil {
		return text
	}
	return l.bare(tv.Value, l.info.TypeOf(other), text)
}

// bare writes a constant that is not negative as a plain literal where its type is float64 or int.
func (l *lowering) bare(v constant.Value, t types.Type, text string) string {
	b, ok := types.Unalias(t).(*types.Basic)
	if !ok {
		return text
	}
	switch b.Kind() {
	case types.Float64:
		if v = constant.ToFloat(v); v.Kind() == constant.Float || v.Kind() == constant.Int {
			if lit := floatText(v, false); !strings.HasPrefix(lit, "-") && constant.Sign(v) > 0 {
				return lit
			}
		}
	case types.Int:
		if v = constant.ToInt(v); v.Kind() == constant.Int && constant.Sign(v) >= 0 && constant.BitLen(v) < 31 {
			return v.ExactString()
		}
	}
	return text
}

// steady tells whether an operator takes a plain literal beside a variable.
func steady(op token.Token) bool {
	switch op {
	case token.ADD, token.SUB, token.MUL, token.QUO, token.LSS, token.LEQ, token.GTR, token.GEQ, token.EQL, token.NEQ:
		return true
	}
	return false
}

// counter is a loop variable of type int that goes up by one in each pass, with a float64 that goes along where the body
// converts it.
type counter struct {
	obj  types.Object
	name string
}

// count prepares the float64 that goes along with a loop variable which starts at a small whole number; nil if the body
// does not convert the variable or sets it. The float64 is exact below 2^53, which no loop reaches.
func (l *lowering) count(o types.Object, start string, body ast.Node) *counter {
	if b, ok := o.Type().(*types.Basic); !ok || b.Kind() != types.Int || !l.converts(o, body) {
		return nil
	}
	if held, set := l.held(map[types.Object]bool{o: true}, body); held || set {
		return nil
	}
	c := &counter{obj: o, name: l.name("float")}
	l.line("%s := float64(%s)", c.name, start)
	l.floats[o] = c.name
	return c
}

// step gives the lines that are due before the next pass.
func (c *counter) step() []string {
	if c == nil {
		return nil
	}
	return []string{c.name + " += 1.0"}
}

// done ends the use of a counter after its loop.
func (l *lowering) done(c *counter) {
	if c != nil {
		delete(l.floats, c.obj)
	}
}

// converts tells whether a tree holds float64(o).
func (l *lowering) converts(o types.Object, n ast.Node) bool {
	found := false
	ast.Inspect(n, func(n ast.Node) bool {
		if call, ok := n.(*ast.CallExpr); ok && l.converted(call) == o {
			found = true
		}
		return !found
	})
	return found
}

// converted gives the variable of a conversion float64(variable); nil for anything else.
func (l *lowering) converted(e *ast.CallExpr) types.Object {
	if tv := l.info.Types[e.Fun]; !tv.IsType() || len(e.Args) != 1 || !isFloat64(tv.Type) {
		return nil
	}
	if id, ok := ast.Unparen(e.Args[0]).(*ast.Ident); ok {
		return l.info.Uses[id]
	}
	return nil
}

// countFor prepares the float64 of a loop with a condition: for i := 0; ..; i++.
func (l *lowering) countFor(s *ast.ForStmt) *counter {
	as, ok := s.Init.(*ast.AssignStmt)
	post, okPost := s.Post.(*ast.IncDecStmt)
	if !ok || !okPost || as.Tok != token.DEFINE || len(as.Lhs) != 1 || len(as.Rhs) != 1 || post.Tok != token.INC {
		return nil
	}
	id, ok := as.Lhs[0].(*ast.Ident)
	v := l.info.Types[as.Rhs[0]].Value
	if !ok || v == nil || l.info.Defs[id] == nil {
		return nil
	}
	if x, ok := post.X.(*ast.Ident); !ok || l.info.Uses[x] != l.info.Defs[id] {
		return nil
	}
	if v = constant.ToInt(v); v.Kind() != constant.Int || constant.BitLen(v) > 40 {
		return nil
	}
	if s.Cond != nil {
		if held, set := l.held(map[types.Object]bool{l.info.Defs[id]: true}, s.Cond); held || set {
			return nil
		}
	}
	return l.count(l.info.Defs[id], v.ExactString(), s.Body)
}

// passes tells whether the body of a loop may call the vocabulary, which wants to know about the end of each pass.
func (l *lowering) passes(body []ast.Stmt) bool {
	found := false
	for _, s := range body {
		ast.Inspect(s, func(n ast.Node) bool {
			if call, ok := n.(*ast.CallExpr); ok && !found {
				fun := ast.Unparen(call.Fun)
				tv := l.info.Types[fun]
				o := callee(l.info, fun)
				library := o != nil && foreign(o) && l.s.base.byName[o.Pkg().Name()] == o.Pkg()
				found = !tv.IsType() && !tv.IsBuiltin() && !library
			}
			return !found
		})
	}
	return found
}
