package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

func (l *lowering) assign(s *ast.AssignStmt) {
	switch s.Tok {
	case token.ASSIGN, token.DEFINE:
		l.store(s.Lhs, s.Rhs, s.Tok == token.DEFINE, nil)
		return
	}
	op := strings.TrimSuffix(s.Tok.String(), "=")
	x := l.place(s.Lhs[0])
	y := l.expr(s.Rhs[0])
	l.flush()
	if _, ok := ast.Unparen(s.Lhs[0]).(*ast.Ident); ok {
		if v := l.info.Types[s.Rhs[0]].Value; v != nil && steady(operators[op]) {
			y = l.bare(v, l.info.TypeOf(s.Lhs[0]), y)
		}
		l.line("%s %s= %s", x, op, y) // the fastest form
		return
	}
	l.line("%s = %s %s %s", x, x, op, l.wrap(s.Rhs[0], y))
}

var operators = map[string]token.Token{"+": token.ADD, "-": token.SUB, "*": token.MUL, "/": token.QUO}

// target is where a value goes.
type target struct {
	text string // "" for the blank name
	typ  types.Type
	def  bool // a new variable of the function
}

// store assigns values to places. Names that are new in a function are defined; those of the notebook have storage.
func (l *lowering) store(lhs, rhs []ast.Expr, define bool, declared ast.Expr) {
	ts := make([]target, len(lhs))
	if !define {
		for i, x := range lhs {
			ts[i] = l.target(x, define, len(lhs) > 1)
		}
	}
	var values []string
	switch {
	case len(rhs) == len(lhs):
		var to []types.Type
		for i, x := range lhs {
			to = append(to, l.targetType(x, rhs[i], declared))
		}
		values = l.list(rhs, to)
	case isCommaOK(l.info, rhs[0]):
		values = l.commaOK(rhs[0])
	default:
		values = l.tuple(rhs[0])
	}
	if define {
		for i, x := range lhs {
			ts[i] = l.target(x, define, false)
		}
	}
	if len(ts) > 1 {
		for i, v := range values {
			if v != "nil" && (!strings.Contains(v, "__t") || !simple(v)) {
				values[i] = l.hold(v)
			}
		}
	}
	l.flush()
	for i, t := range ts {
		switch {
		case t.text == "":
			l.line("_ = %s", values[i])
		case t.def && values[i] == "nil":
			l.line("var %s %s", t.text, l.typ(t.typ))
		case t.def && (types.IsInterface(t.typ) || isFunc(t.typ)):
			l.line("var %s %s = %s", t.text, l.typ(t.typ), values[i])
		case t.def:
			l.line("%s := %s", t.text, values[i])
		default:
			l.line("%s = %s", t.text, values[i])
		}
	}
}

func isFunc(t types.Type) bool {
	_, ok := t.Underlying().(*types.Signature)
	return ok
}

func (l *lowering) targetType(x, value, declared ast.Expr) types.Type {
	if id, ok := x.(*ast.Ident); ok {
		if id.Name == "_" {
			if declared != nil {
				return l.info.TypeOf(declared)
			}
			return l.info.TypeOf(value)
		}
		if o := l.info.ObjectOf(id); o != nil {
			return o.Type()
		}
	}
	return l.info.TypeOf(x)
}

func (l *lowering) target(x ast.Expr, define, many bool) target {
	id, ok := ast.Unparen(x).(*ast.Ident)
	if !ok {
		text := ""
		if many {
			text = l.place(x)
		} else {
			text = l.expr(x)
		}
		return target{text: text, typ: l.info.TypeOf(x)}
	}
	if id.Name == "_" {
		return target{}
	}
	if o := l.info.Defs[id]; define && o != nil && l.r.lives[o] == nil {
		return target{text: l.local(o), typ: o.Type(), def: true}
	}
	return target{text: l.ident(id), typ: l.info.ObjectOf(id).Type()}
}

// place writes an expression that is assigned to, its operands evaluated once beforehand.
func (l *lowering) place(x ast.Expr) string {
	switch x := ast.Unparen(x).(type) {
	case *ast.IndexExpr:
		base := ""
		switch t := l.info.TypeOf(x.X).Underlying().(type) {
		case *types.Array:
			base = l.place(x.X)
		case *types.Map:
			return l.once(l.expr(x.X)) + "[" + l.once(l.convert(x.Index, t.Key())) + "]"
		default:
			base = l.once(l.expr(x.X))
		}
		return base + "[" + l.once(l.expr(x.Index)) + "]"
	case *ast.SelectorExpr:
		if sel := l.info.Selections[x]; sel != nil {
			if _, ok := sel.Recv().Underlying().(*types.Pointer); ok {
				return l.fieldPath(l.once(l.expr(x.X)), sel)
			}
			return l.fieldPath(l.place(x.X), sel)
		}
	case *ast.StarExpr:
		return "*" + l.once(l.expr(x.X))
	}
	return l.expr(x)
}

// once holds a text that is not a literal.
func (l *lowering) once(text string) string {
	if i := strings.IndexByte(text, '('); i > 0 && reserved(text[:i]) && simple(strings.TrimSuffix(text[i+1:], ")")) {
		return text // a literal of a basic type
	}
	if strings.Contains(text, "__t") && simple(text) {
		return text
	}
	return l.hold(text)
}

func isCommaOK(info *types.Info, e ast.Expr) bool {
	switch ast.Unparen(e).(type) {
	case *ast.IndexExpr, *ast.TypeAssertExpr:
		t, ok := info.TypeOf(e).(*types.Tuple)
		return ok && t.Len() == 2
	}
	return false
}

// commaOK evaluates v, ok forms into two temporaries.
func (l *lowering) commaOK(e ast.Expr) []string {
	var text string
	switch e := ast.Unparen(e).(type) {
	case *ast.IndexExpr:
		m := l.info.TypeOf(e.X).Underlying().(*types.Map)
		text = l.operand(e.X) + "[" + l.convert(e.Index, m.Key()) + "]"
	case *ast.TypeAssertExpr:
		text = l.asserted(e.X, l.info.TypeOf(e.Type), l.operand(e.X)) + ".(" + l.typ(l.info.TypeOf(e.Type)) + ")"
	}
	v, ok := l.name("v"), l.name("ok")
	l.before("%s, %s := %s", v, ok, text)
	l.moved++
	return []string{v, ok}
}

// tuple evaluates a call with several results into temporaries.
func (l *lowering) tuple(e ast.Expr) []string {
	call := ast.Unparen(e).(*ast.CallExpr)
	t := l.info.TypeOf(call).(*types.Tuple)
	text := l.call(call, false)
	var names []string
	for i := 0; i < t.Len(); i++ {
		names = append(names, l.name("v"))
	}
	l.before("%s := %s", strings.Join(names, ", "), text)
	l.moved++
	return names
}
