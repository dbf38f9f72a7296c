package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

func (l *lowering) block(list []ast.Stmt) {
	for _, s := range list {
		l.stmt(s)
	}
}

// stmt lowers a statement: its mark, what is due before it, itself.
func (l *lowering) stmt(s ast.Stmt) {
	switch s.(type) {
	case *ast.ExprStmt, *ast.AssignStmt, *ast.DeclStmt:
		defer l.keepDepth(s)()
	}
	switch s := s.(type) {
	case nil:
	case *ast.EmptyStmt:
		if name := l.r.help[s]; name != "" {
			l.showHelp(name)
		}
	case *ast.LabeledStmt:
		l.labeled(s)
	case *ast.ExprStmt:
		l.exprStmt(s)
	case *ast.AssignStmt:
		if l.fallible(s) {
			l.at(s)
		}
		l.assign(s)
	case *ast.IncDecStmt:
		if l.fallible(s.X) {
			l.at(s)
		}
		op := "+="
		if s.Tok == token.DEC {
			op = "-="
		}
		x := l.place(s.X)
		if _, ok := s.X.(*ast.Ident); ok {
			l.line("%s%s", x, s.Tok)
			return
		}
		one := l.typ(l.info.TypeOf(s.X)) + "(1)"
		l.flush()
		l.line("%s %s %s", x, op, one)
	case *ast.DeclStmt:
		l.declStmt(s.Decl.(*ast.GenDecl))
	case *ast.BlockStmt:
		l.line("{")
		l.ind++
		l.block(s.List)
		l.ind--
		l.line("}")
	case *ast.IfStmt:
		l.ifStmt(s)
	case *ast.ForStmt:
		l.forStmt(s, "")
	case *ast.RangeStmt:
		l.rangeStmt(s, "")
	case *ast.SwitchStmt:
		l.switchStmt(s, "")
	case *ast.TypeSwitchStmt:
		l.typeSwitch(s, "")
	case *ast.ReturnStmt:
		l.returnStmt(s)
	case *ast.BranchStmt:
		l.branch(s)
	default:
		panic("statement without lowered form")
	}
}

func (l *lowering) labeled(s *ast.LabeledStmt) {
	label := s.Label.Name + "__label"
	l.line("{") // the interpreter misses labels that stand in a case
	l.ind++
	defer func() {
		l.ind--
		l.line("}")
	}()
	switch b := s.Stmt.(type) {
	case *ast.ForStmt:
		l.forStmt(b, label)
	case *ast.RangeStmt:
		l.rangeStmt(b, label)
	case *ast.SwitchStmt:
		l.switchStmt(b, label)
	case *ast.TypeSwitchStmt:
		l.typeSwitch(b, label)
	default:
		l.stmt(s.Stmt)
	}
}

func (l *lowering) label(name string) {
	if name != "" {
		l.line("%s:", name)
	}
}

func (l *lowering) branch(s *ast.BranchStmt) {
	label := ""
	if s.Label != nil {
		label = s.Label.Name + "__label"
	}
	switch s.Tok {
	case token.CONTINUE:
		for i := len(l.fn.loops) - 1; i >= 0; i-- {
			if lp := l.fn.loops[i]; label == "" || lp.label == label {
				for _, t := range lp.next {
					l.line("%s", t)
				}
				break
			}
		}
		l.line("%s", strings.TrimSpace("continue "+label))
	case token.BREAK:
		l.line("%s", strings.TrimSpace("break "+label))
	case token.FALLTHROUGH:
		l.line("fallthrough")
	}
}

// exprStmt lowers an expression that stands alone; at the top level of a cell its value is shown.
func (l *lowering) exprStmt(s *ast.ExprStmt) {
	l.at(s)
	if l.fn.top && l.isTop(s) {
		if l.help(s.X) {
			return
		}
		if t := l.info.TypeOf(s.X); t != nil && !l.info.Types[s.X].IsVoid() && !l.prints(s.X) {
			l.showValue(s.X, l.fn.top)
			return
		}
	}
	call, ok := ast.Unparen(s.X).(*ast.CallExpr)
	if !ok {
		l.line("_ = %s", l.flushed(l.expr(s.X)))
		return
	}
	if l.clear(call) {
		return
	}
	text := l.call(call, true)
	l.flush()
	if text != "" {
		l.line("%s", text)
	}
}

// prints tells whether an expression is a call that writes text; its results are of no interest.
func (l *lowering) prints(x ast.Expr) bool {
	call, ok := ast.Unparen(x).(*ast.CallExpr)
	if !ok {
		return false
	}
	o := callee(l.info, ast.Unparen(call.Fun))
	if o == nil || o.Pkg() == nil {
		return false
	}
	return o.Pkg().Path() == "fmt" && strings.HasPrefix(o.Name(), "Print") || o.Pkg().Path() == l.s.voc.Open && o.Name() == "Show"
}

// keepDepth counts the depth of calls as before after a statement in which compiled code may have caught a failure that
// came from deep within functions of the notebook. It gives what is due after the statement.
func (l *lowering) keepDepth(s ast.Stmt) func() {
	if l.s.plain || !l.callsBack(s) {
		return func() {}
	}
	d := l.name("d")
	if racing {
		l.line("%s := %s()", d, l.nb("Depth"))
		return func() { l.line("%s(%s)", l.nb("SetDepth"), d) }
	}
	l.line("%s := nb__depth", d)
	return func() { l.line("nb__depth = %s", d) }
}

// callsBack tells whether a statement gives a function to compiled code.
func (l *lowering) callsBack(s ast.Stmt) bool {
	found := false
	ast.Inspect(s, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.FuncLit, *ast.BlockStmt:
			return false
		case *ast.CallExpr:
			if o := callee(l.info, ast.Unparen(n.Fun)); o != nil && foreign(o) {
				for _, a := range n.Args {
					if t := l.info.TypeOf(a); t != nil {
						found = found || isFunc(t)
					}
				}
			}
		}
		return !found
	})
	return found
}

// isTop tells whether a statement is one of the cell's top level.
func (l *lowering) isTop(s ast.Stmt) bool {
	for _, t := range l.r.stmts {
		if unlabel(t) == s {
			return true
		}
	}
	return false
}

// flushed gives a text after writing what is due before it.
func (l *lowering) flushed(text string) string {
	l.flush()
	return text
}

// clear lowers the builtin of this name.
func (l *lowering) clear(call *ast.CallExpr) bool {
	id, ok := ast.Unparen(call.Fun).(*ast.Ident)
	if !ok {
		return false
	}
	if b, ok := l.info.Uses[id].(*types.Builtin); !ok || b.Name() != "clear" {
		return false
	}
	x := l.hold(l.expr(call.Args[0]))
	l.flush()
	k := l.name("k")
	switch t := l.info.TypeOf(call.Args[0]).Underlying().(type) {
	case *types.Map:
		l.line("for %s := range %s { delete(%s, %s) }", k, x, x, k)
	case *types.Slice:
		l.line("for %s := range %s { %s[%s] = %s }", k, x, x, k, l.zero(t.Elem()))
	}
	return true
}

func (l *lowering) declStmt(d *ast.GenDecl) {
	if d.Tok != token.VAR {
		return // types move to the top when they are used; constants are folded
	}
	for _, sp := range d.Specs {
		v := sp.(*ast.ValueSpec)
		if len(v.Values) > 0 {
			if l.fallible(v) {
				l.at(v)
			}
			lhs := make([]ast.Expr, len(v.Names))
			for i, n := range v.Names {
				lhs[i] = n
			}
			l.store(lhs, v.Values, true, v.Type)
			continue
		}
		for _, n := range v.Names {
			o := l.info.Defs[n]
			if n.Name == "_" || o == nil {
				continue
			}
			if g := l.r.lives[o]; g != nil {
				l.line("%s = %s", g.lowered, l.zero(o.Type()))
			} else {
				l.line("var %s %s", l.local(o), l.typ(o.Type()))
			}
		}
	}
}

func (l *lowering) ifStmt(s *ast.IfStmt) {
	if s.Init != nil {
		l.line("{")
		l.ind++
		l.stmt(s.Init)
		defer func() {
			l.ind--
			l.line("}")
		}()
	}
	if l.fallible(s.Cond) {
		l.at(s.Cond)
	}
	l.line("if %s {", l.flushed(l.expr(s.Cond)))
	l.ind++
	l.block(s.Body.List)
	l.ind--
	if s.Else == nil {
		l.line("}")
		return
	}
	l.line("} else {")
	l.ind++
	if b, ok := s.Else.(*ast.BlockStmt); ok {
		l.block(b.List)
	} else {
		l.stmt(s.Else)
	}
	l.ind--
	l.line("}")
}

func (l *lowering) returnStmt(s *ast.ReturnStmt) {
	if l.fallible(s) {
		l.at(s)
	}
	var texts []string
	res := l.fn.sig.Results()
	if len(s.Results) == 0 {
		texts = append(texts, l.fn.named...)
	} else if len(s.Results) == 1 && res.Len() > 1 {
		texts = l.tuple(s.Results[0])
	} else {
		var to []types.Type
		for i := range s.Results {
			to = append(to, res.At(i).Type())
		}
		texts = l.list(s.Results, to)
	}
	if len(texts) > 1 { // the interpreter mixes up several results that it computes in place
		for i, t := range texts {
			if !simple(t) {
				texts[i] = l.hold(t)
			}
		}
	}
	if l.fn.guarded {
		for i, t := range texts {
			if !simple(t) {
				texts[i] = l.hold(t)
			}
		}
		if len(texts) > 0 {
			l.flush()
		}
		l.leave()
	}
	l.flush()
	l.line("%s", strings.TrimSpace("return "+strings.Join(texts, ", ")))
}

// simple tells whether a text is a name or a literal.
func simple(t string) bool { return !strings.ContainsAny(t, "([{ .*&") }
