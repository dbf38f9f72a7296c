package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// expr lowers an expression. What must be evaluated before the statement goes to l.pre.
func (l *lowering) expr(e ast.Expr) string {
	if tv, ok := l.info.Types[e]; ok && tv.Value != nil {
		return l.literal(tv.Value, tv.Type)
	}
	switch e := e.(type) {
	case *ast.ParenExpr:
		return l.expr(e.X)
	case *ast.Ident:
		return l.ident(e)
	case *ast.SelectorExpr:
		return l.selector(e)
	case *ast.BinaryExpr:
		return l.binary(e)
	case *ast.UnaryExpr:
		return l.unary(e)
	case *ast.StarExpr:
		return "*" + l.operand(e.X)
	case *ast.CallExpr:
		return l.call(e, false)
	case *ast.IndexExpr:
		return l.index(e)
	case *ast.IndexListExpr:
		return l.instance(e.X)
	case *ast.SliceExpr:
		return l.slice(e)
	case *ast.CompositeLit:
		return l.composite(e, l.info.TypeOf(e))
	case *ast.FuncLit:
		text := l.funcLit(e)
		f := l.name("f")
		l.before("%s := %s", f, text)
		return f
	case *ast.TypeAssertExpr:
		return l.asserted(e.X, l.info.TypeOf(e.Type), l.operand(e.X)) + ".(" + l.typ(l.info.TypeOf(e.Type)) + ")"
	}
	if l.info.Types[e].IsType() {
		return l.typ(l.info.TypeOf(e))
	}
	panic("expression without lowered form")
}

func (l *lowering) ident(id *ast.Ident) string {
	o := l.info.ObjectOf(id)
	switch o := o.(type) {
	case *types.Nil:
		return "nil"
	case *types.TypeName:
		return l.typ(l.info.TypeOf(id))
	case *types.Const: // true and false, or a constant of a type parameter's type
		return l.literal(o.Val(), o.Type())
	case *types.Func:
		return l.funcName(o, id)
	case *types.Builtin:
		return o.Name()
	}
	if v := l.r.lives[o]; v != nil {
		if l.fn != nil && (l.fn.values || !l.fn.top) {
			v.captured = true
		}
		return v.lowered
	}
	if foreign(o) {
		return l.pkg(o.Pkg().Path()) + "." + o.Name()
	}
	return l.local(o)
}

// funcName names a function. Code that outlives its cell calls functions of the notebook through a variable, which
// follows when they are declared again.
func (l *lowering) funcName(o *types.Func, id *ast.Ident) string {
	if v := l.r.lives[o]; v != nil {
		if _, ok := l.info.Instances[id]; ok {
			return l.instance(id)
		}
		if l.outlives() && o.Type().(*types.Signature).TypeParams().Len() == 0 {
			if v.indirect == "" {
				v.indirect = v.lowered + "__v"
				l.globals = append(l.globals, "var "+v.indirect+" "+l.typ(o.Type()))
				l.prolog = append(l.prolog, v.indirect+" = "+v.lowered)
			}
			return v.indirect
		}
		return v.lowered
	}
	if t := l.s.base.targets[o.Name()]; t != "" && o.Pkg() != nil && o.Pkg().Path() == "units" {
		i := strings.LastIndexByte(t, '.')
		return l.pkg(t[:i]) + "." + t[i+1:]
	}
	return l.pkg(o.Pkg().Path()) + "." + o.Name()
}

// outlives tells whether the code under way may run after its cell as a value.
func (l *lowering) outlives() bool {
	for f := l.fn; f != nil; f = f.parent {
		if f.values {
			return true
		}
	}
	return false
}

// instance names a generic function of the notebook with its type arguments.
func (l *lowering) instance(x ast.Expr) string {
	id, ok := ast.Unparen(x).(*ast.Ident)
	if !ok {
		return l.expr(x)
	}
	name := l.info.Uses[id].Name()
	if v := l.r.lives[l.info.Uses[id]]; v != nil {
		name = v.lowered
	}
	in := l.info.Instances[id]
	var list []string
	for i := 0; i < in.TypeArgs.Len(); i++ {
		list = append(list, l.typ(in.TypeArgs.At(i)))
	}
	return name + "[" + strings.Join(list, ", ") + "]"
}

func (l *lowering) selector(e *ast.SelectorExpr) string {
	sel := l.info.Selections[e]
	if sel == nil { // a name of a package
		o := l.info.Uses[e.Sel]
		if isList(o) {
			return l.listFunc(o, l.info.Instances[e.Sel].TypeArgs)
		}
		if t, ok := o.(*types.TypeName); ok {
			return l.typ(t.Type())
		}
		return l.pkg(o.Pkg().Path()) + "." + o.Name()
	}
	switch sel.Kind() {
	case types.FieldVal:
		return l.fieldPath(l.operand(e.X), sel)
	case types.MethodVal:
		return l.methodValue(e, sel)
	default:
		return l.methodExpr(sel)
	}
}

// operand lowers what stands beside an operator, before a dot, an index or a call. Only there are brackets written: the
// interpreter loses values of bracketed expressions that are assigned or returned.
func (l *lowering) operand(e ast.Expr) string { return l.wrap(e, l.expr(e)) }

// wrap puts brackets around the text of an expression that has an operator of its own.
func (l *lowering) wrap(e ast.Expr, text string) string {
	if l.info.Types[e].Value != nil || simple(text) {
		return text
	}
	switch ast.Unparen(e).(type) {
	case *ast.BinaryExpr, *ast.UnaryExpr, *ast.StarExpr, *ast.CompositeLit:
		return "(" + text + ")"
	}
	return text
}

// isOperation tells whether an expression is computed by an operator.
func (l *lowering) isOperation(e ast.Expr) bool {
	if l.info.Types[e].Value != nil {
		return false
	}
	switch ast.Unparen(e).(type) {
	case *ast.BinaryExpr, *ast.UnaryExpr:
		return true
	}
	return false
}

// fieldPath writes a selection with all embedded fields on its way.
func (l *lowering) fieldPath(text string, sel *types.Selection) string {
	return text + l.path(sel, sel.Index())
}

func (l *lowering) path(sel *types.Selection, index []int) string {
	t := sel.Recv()
	text := ""
	for _, i := range index {
		st, ok := deref(t).Underlying().(*types.Struct)
		if !ok {
			return text
		}
		f := st.Field(i)
		text += "." + l.fieldName(f)
		t = f.Type()
	}
	return text
}

// receiver writes what a method is called on: the embedded field that has it, if any.
func (l *lowering) receiver(e *ast.SelectorExpr, sel *types.Selection) string {
	index := sel.Index()
	return l.operand(e.X) + l.path(sel, index[:len(index)-1])
}

// methodValue lowers x.M as a function: the receiver is evaluated now.
func (l *lowering) methodValue(e *ast.SelectorExpr, sel *types.Selection) string {
	sig := sel.Obj().Type().(*types.Signature)
	recv := l.receiver(e, sel)
	if sig.Recv() != nil {
		_, ptr := sig.Recv().Type().(*types.Pointer)
		if at := l.receiverType(sel); ptr && !isPointer(at) {
			recv = "&" + recv
		}
	}
	r := l.hold(recv)
	params, args := l.forward(sel.Type().(*types.Signature))
	f := l.name("f")
	l.before("%s := func(%s)%s { %s%s.%s(%s) }", f, params, l.results(sig.Results(), nil), returning(sig), r, l.methodName(sel.Obj()), args)
	return f
}

// receiverType gives the type of the embedded field, or of the operand, that a method is called on.
func (l *lowering) receiverType(sel *types.Selection) types.Type {
	t := sel.Recv()
	index := sel.Index()
	for _, i := range index[:len(index)-1] {
		t = deref(t).Underlying().(*types.Struct).Field(i).Type()
	}
	return t
}

func isPointer(t types.Type) bool {
	_, ok := t.Underlying().(*types.Pointer)
	return ok
}

func returning(sig *types.Signature) string {
	if sig.Results().Len() > 0 {
		return "return "
	}
	return ""
}

// methodExpr lowers T.M as a function with the receiver as its first parameter.
func (l *lowering) methodExpr(sel *types.Selection) string {
	sig := sel.Type().(*types.Signature)
	m := sel.Obj().Type().(*types.Signature)
	params, args := l.forward(m)
	index := sel.Index()
	recv := "r__" + l.path(sel, index[:len(index)-1])
	f := l.name("f")
	l.before("%s := func(%s)%s { %s%s.%s(%s) }", f, joinComma("r__ "+l.typ(sel.Recv()), params), l.results(sig.Results(), nil),
		returning(sig), recv, l.methodName(sel.Obj()), args)
	return f
}

func (l *lowering) binary(e *ast.BinaryExpr) string {
	if e.Op == token.LAND || e.Op == token.LOR {
		return l.shortCircuit(e)
	}
	x, y := e.X, e.Y
	var texts []string
	if e.Op == token.EQL || e.Op == token.NEQ {
		tx, ty := l.info.TypeOf(x), l.info.TypeOf(y)
		if isError(tx) && isCellType(ty) {
			ty = tx
		} else if isError(ty) && isCellType(tx) {
			tx = ty
		}
		texts = l.list([]ast.Expr{x, y}, []types.Type{tx, ty})
		if texts[0] == "nil" {
			return texts[1] + " " + e.Op.String() + " nil"
		}
		if texts[1] != "nil" && !l.s.plain && (boxes(tx, 0) || boxes(ty, 0)) {
			return l.same(e.Op, tx, ty, texts)
		}
	} else {
		texts = l.list([]ast.Expr{x, y}, []types.Type{l.info.TypeOf(x), l.info.TypeOf(y)})
	}
	if steady(e.Op) {
		texts[0], texts[1] = l.beside(x, y, texts[0]), l.beside(y, x, texts[1])
	}
	return l.wrap(x, texts[0]) + " " + e.Op.String() + " " + l.wrap(y, texts[1])
}

// same compares two values of which one is held in an interface.
func (l *lowering) same(op token.Token, tx, ty types.Type, texts []string) string {
	name := func(t types.Type) string {
		if n, ok := types.Unalias(t).(*types.Named); ok && !types.IsInterface(t) && isCellType(t) {
			return l.typ(n)
		}
		return ""
	}
	text := fmt.Sprintf("%s(%s, %s, %q, %q)", l.nb("Same"), texts[0], texts[1], name(tx), name(ty))
	if op == token.NEQ {
		text = "!" + text
	}
	return text
}

// sameAs compares the tag of a switch, held in an interface, with a case.
func (l *lowering) sameAs(tag string, t types.Type, e ast.Expr) string {
	if isNil(e) {
		return tag + " == nil"
	}
	return l.same(token.EQL, t, l.info.TypeOf(e), []string{tag, l.expr(e)})
}

// shortCircuit keeps the right side of && and || from being evaluated early.
func (l *lowering) shortCircuit(e *ast.BinaryExpr) string {
	left := l.operand(e.X)
	outer, moved := l.pre, l.moved
	l.pre = nil
	right := l.operand(e.Y)
	inner := l.pre
	l.pre = outer
	if len(inner) == 0 {
		return left + " " + e.Op.String() + " " + right
	}
	l.moved = moved + 1
	t := l.name("b")
	l.before("%s := %s", t, left)
	test := t
	if e.Op == token.LOR {
		test = "!" + t
	}
	l.before("if %s {", test)
	l.pre = append(l.pre, inner...)
	l.before("%s = %s", t, right)
	l.before("}")
	return t
}

func (l *lowering) unary(e *ast.UnaryExpr) string {
	if e.Op == token.AND {
		x := ast.Unparen(e.X)
		if c, ok := x.(*ast.CompositeLit); ok {
			return "&" + l.composite(c, l.info.TypeOf(c))
		}
		l.capture(x)
		return "&" + l.operand(x)
	}
	return e.Op.String() + l.operand(e.X)
}

// capture notes that a pointer into a variable of the notebook is taken.
func (l *lowering) capture(e ast.Expr) {
	for {
		switch x := ast.Unparen(e).(type) {
		case *ast.SelectorExpr:
			e = x.X
		case *ast.IndexExpr:
			e = x.X
		case *ast.Ident:
			if v := l.r.lives[l.info.ObjectOf(x)]; v != nil {
				v.captured = true
			}
			return
		default:
			return
		}
	}
}

func (l *lowering) index(e *ast.IndexExpr) string {
	if tv := l.info.Types[e.X]; tv.IsType() {
		return l.typ(l.info.TypeOf(e))
	}
	t := l.info.TypeOf(e.X).Underlying()
	if _, ok := t.(*types.Signature); ok {
		return l.instance(e.X)
	}
	to := l.info.TypeOf(e.Index)
	if m, ok := t.(*types.Map); ok {
		to = m.Key()
	}
	texts := l.list([]ast.Expr{e.X, e.Index}, []types.Type{l.info.TypeOf(e.X), to})
	return l.wrap(e.X, texts[0]) + "[" + texts[1] + "]"
}

func (l *lowering) slice(e *ast.SliceExpr) string {
	if _, ok := l.info.TypeOf(e.X).Underlying().(*types.Array); ok {
		l.capture(e.X)
	}
	list := []ast.Expr{e.X}
	for _, x := range []ast.Expr{e.Low, e.High, e.Max} {
		if x != nil {
			list = append(list, x)
		}
	}
	to := make([]types.Type, len(list))
	for i, x := range list {
		to[i] = l.info.TypeOf(x)
	}
	texts := l.list(list, to)
	next := func(x ast.Expr) string {
		if x == nil {
			return ""
		}
		t := texts[1]
		texts = append(texts[:1], texts[2:]...)
		return t
	}
	out := l.wrap(e.X, texts[0]) + "[" + next(e.Low) + ":" + next(e.High)
	if e.Slice3 {
		out += ":" + next(e.Max)
	}
	return out + "]"
}

// list lowers expressions in order; to gives the types they become. Where a later one is evaluated beforehand, the
// earlier ones are too.
func (l *lowering) list(es []ast.Expr, to []types.Type) []string {
	texts := make([]string, len(es))
	for i, e := range es {
		at, moved := len(l.pre), l.moved
		texts[i] = l.convert(e, to[i])
		if l.moved == moved || i == 0 {
			continue
		}
		late := append([]string{}, l.pre[at:]...)
		l.pre = l.pre[:at]
		for j := 0; j < i; j++ {
			if l.mayChange(es[j], texts[j]) {
				texts[j] = l.hold(texts[j])
			}
		}
		l.pre = append(l.pre, late...)
	}
	return texts
}

// mayChange tells whether an expression could give another value when evaluated later, or has effects.
func (l *lowering) mayChange(e ast.Expr, text string) bool {
	if l.info.Types[e].Value != nil || l.info.Types[e].IsType() || text == "nil" || strings.Contains(text, "__t") && simple(text) {
		return false
	}
	if id, ok := ast.Unparen(e).(*ast.Ident); ok {
		_, isVar := l.info.Uses[id].(*types.Var)
		return isVar
	}
	return true
}

// convert lowers an expression that becomes a value of type to. A value of a cell's type becomes a value of a compiled
// interface through a variable of that type: only so the interpreter wraps its methods.
func (l *lowering) convert(e ast.Expr, to types.Type) string {
	if lit, ok := ast.Unparen(e).(*ast.CompositeLit); ok && lit.Type == nil {
		return l.composite(lit, to)
	}
	text := l.expr(e)
	from := l.info.TypeOf(e)
	if to != nil && from != nil && types.IsInterface(to) && !isAny(to) && !types.IsInterface(from) && l.renamed(from) {
		panic(cannot(shortType(from) + " has a method whose name another generic type of the notebook has, and cannot be held in an interface: give the method another name"))
	}
	if to != nil && from != nil && types.IsInterface(to) && !types.IsInterface(from) && l.isOperation(e) {
		text = l.hold(text) // the interpreter computes in place, which an interface is not
	}
	if to == nil || from == nil || text == "nil" || !compiledInterface(to) || types.Identical(from, to) {
		return text
	}
	if !isCellType(from) && !types.IsInterface(from) {
		return text
	}
	if types.IsInterface(from) && !isCellType(from) {
		return text
	}
	if isError(to) && !l.s.plain {
		return l.fault(from, text)
	}
	t := l.name("i")
	l.before("var %s %s = %s", t, l.typ(to), text)
	l.moved++
	return t
}
