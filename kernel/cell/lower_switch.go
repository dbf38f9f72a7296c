package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

func (l *lowering) switchStmt(s *ast.SwitchStmt, label string) {
	l.line("{")
	l.ind++
	defer func() {
		l.ind--
		l.line("}")
	}()
	if s.Init != nil {
		l.stmt(s.Init)
	}
	l.at(s)
	tag := "true"
	var tagType types.Type = types.Typ[types.Bool]
	if s.Tag != nil {
		tagType = l.info.TypeOf(s.Tag)
		tag = l.hold(l.expr(s.Tag))
	}
	held := s.Tag != nil && !l.s.plain && boxes(tagType, 0)
	var heads []string
	for _, c := range s.Body.List {
		var list []string
		for _, e := range c.(*ast.CaseClause).List {
			if s.Tag == nil {
				list = append(list, l.expr(e))
			} else if held {
				list = append(list, l.sameAs(tag, tagType, e))
			} else {
				list = append(list, l.convert(e, tagType))
			}
		}
		heads = append(heads, strings.Join(list, ", "))
	}
	l.flush()
	l.label(label)
	if s.Tag == nil || held {
		l.line("switch {")
	} else {
		l.line("switch %s {", tag)
	}
	for i, c := range s.Body.List {
		l.clause(heads[i], c.(*ast.CaseClause).Body)
	}
	l.line("}")
}

func (l *lowering) clause(head string, body []ast.Stmt) {
	if head == "" {
		l.line("default:")
	} else {
		l.line("case %s:", head)
	}
	l.ind++
	l.block(body)
	l.ind--
}

// typeSwitch lowers a type switch to assertions and a switch over their numbers: the interpreter's own one misses types
// that have methods.
func (l *lowering) typeSwitch(s *ast.TypeSwitchStmt, label string) {
	l.line("{")
	l.ind++
	defer func() {
		l.ind--
		l.line("}")
	}()
	if s.Init != nil {
		l.stmt(s.Init)
	}
	l.at(s)
	var x ast.Expr
	bound := ""
	switch a := s.Assign.(type) {
	case *ast.AssignStmt:
		x = a.Rhs[0].(*ast.TypeAssertExpr).X
		bound = a.Lhs[0].(*ast.Ident).Name
	case *ast.ExprStmt:
		x = a.X.(*ast.TypeAssertExpr).X
	}
	v := l.hold(l.expr(x))
	l.flush()
	sel := l.name("case")
	l.line("%s := 0", sel)
	for i, c := range s.Body.List {
		for _, e := range c.(*ast.CaseClause).List {
			if id, ok := e.(*ast.Ident); ok && id.Name == "nil" {
				l.line("if %s == nil { %s = %d }", v, sel, i+1)
				continue
			}
			ok := l.name("ok")
			l.line("if %s == 0 && %s != nil {", sel, v)
			l.line("\t_, %s := %s.(%s)", ok, l.asserted(x, l.info.TypeOf(e), v), l.typ(l.info.TypeOf(e)))
			l.line("\tif %s { %s = %d }", ok, sel, i+1)
			l.line("}")
		}
	}
	l.label(label)
	l.line("switch %s {", sel)
	for i, c := range s.Body.List {
		cl := c.(*ast.CaseClause)
		if cl.List == nil {
			l.line("default:")
		} else {
			l.line("case %d:", i+1)
		}
		l.ind++
		if o := l.info.Implicits[cl]; o != nil {
			l.locals[o] = v
			if len(cl.List) == 1 && !isNil(cl.List[0]) {
				l.locals[o] = l.name(bound)
				l.line("%s := %s.(%s)", l.locals[o], l.asserted(x, o.Type(), v), l.typ(o.Type()))
			}
		}
		l.block(cl.Body)
		l.ind--
	}
	l.line("}")
}

func isNil(e ast.Expr) bool {
	id, ok := e.(*ast.Ident)
	return ok && id.Name == "nil"
}
