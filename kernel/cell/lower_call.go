package cell

import (
	"fmt"
	"go/ast"
	"go/constant"
	"go/types"
	"strconv"
	"strings"
)

// call lowers a call, a conversion or a builtin; alone tells that it is a statement.
func (l *lowering) call(e *ast.CallExpr, alone bool) string {
	fun := ast.Unparen(e.Fun)
	tv := l.info.Types[fun]
	switch {
	case tv.IsType():
		return l.conversion(e, tv.Type)
	case tv.IsBuiltin():
		return l.builtin(e, fun)
	}
	sig := tv.Type.Underlying().(*types.Signature)
	if o := callee(l.info, fun); o != nil && foreign(o) {
		if text, ok := l.vocabularyCall(e, o, sig, alone); ok {
			return text
		}
	}
	name, lit := "", false
	switch f := fun.(type) {
	case *ast.SelectorExpr:
		sel := l.info.Selections[f]
		switch {
		case sel != nil && sel.Kind() == types.MethodVal:
			return l.methodCall(e, f, sel, sig)
		case sel != nil && sel.Kind() == types.FieldVal:
			name = l.hold(l.expr(f))
		default:
			name = l.expr(f)
		}
	case *ast.FuncLit:
		name, lit = l.expr(f), true
	case *ast.CallExpr, *ast.IndexExpr:
		if l.isInstance(f) {
			name = l.expr(f)
		} else {
			name = l.hold(l.expr(f))
		}
	default:
		name = l.expr(fun)
	}
	_ = lit
	return name + "(" + l.args(e, sig, "") + ")"
}

func (l *lowering) isInstance(e ast.Expr) bool {
	x, ok := e.(*ast.IndexExpr)
	if !ok {
		return false
	}
	_, ok = l.info.TypeOf(x.X).Underlying().(*types.Signature)
	return ok
}

// callee gives the function or method that is called by name.
func callee(info *types.Info, fun ast.Expr) types.Object {
	switch f := fun.(type) {
	case *ast.Ident:
		o, _ := info.Uses[f].(*types.Func)
		if o != nil {
			return o
		}
	case *ast.SelectorExpr:
		o, _ := info.Uses[f.Sel].(*types.Func)
		if o != nil {
			return o
		}
	}
	return nil
}

// methodCall lowers x.M(..). The receiver is held when arguments are evaluated beforehand.
func (l *lowering) methodCall(e *ast.CallExpr, f *ast.SelectorExpr, sel *types.Selection, sig *types.Signature) string {
	if s, ok := sel.Obj().Type().(*types.Signature); ok && s.Recv() != nil && isPointer(s.Recv().Type()) && !isPointer(l.receiverType(sel)) {
		l.capture(f.X)
	}
	return l.called(e, l.receiver(f, sel), sel, sig, l.methodName(sel.Obj()), "")
}

func (l *lowering) called(e *ast.CallExpr, recv string, sel *types.Selection, sig *types.Signature, name, units string) string {
	at, moved := len(l.pre), l.moved
	args := l.args(e, sig, units)
	if l.moved != moved && strings.ContainsAny(recv, "([") && !strings.HasPrefix(recv, "(&") {
		late := append([]string{}, l.pre[at:]...)
		l.pre = l.pre[:at]
		if s := sel.Obj().Type().(*types.Signature); s.Recv() != nil && isPointer(s.Recv().Type()) && !isPointer(l.receiverType(sel)) {
			recv = l.hold("&" + recv)
		} else {
			recv = l.hold(recv)
		}
		l.pre = append(l.pre, late...)
	}
	return recv + "." + name + "(" + args + ")"
}

// args lowers the arguments of a call as its parameters want them.
func (l *lowering) args(e *ast.CallExpr, sig *types.Signature, units string) string {
	if len(e.Args) == 1 && sig.Params().Len() != 1 || len(e.Args) == 1 && l.isTuple(e.Args[0]) {
		if l.isTuple(e.Args[0]) {
			return joinComma(units, strings.Join(l.tuple(e.Args[0]), ", "))
		}
	}
	var to []types.Type
	n := sig.Params().Len()
	for i := range e.Args {
		switch {
		case sig.Variadic() && i >= n-1 && !e.Ellipsis.IsValid():
			to = append(to, types.Unalias(sig.Params().At(n-1).Type()).Underlying().(*types.Slice).Elem())
		default:
			to = append(to, sig.Params().At(i).Type())
		}
	}
	texts := l.list(e.Args, to)
	if o := callee(l.info, ast.Unparen(e.Fun)); o != nil && foreign(o) {
		for i, a := range e.Args {
			plain := texts[i]
			texts[i] = l.worded(a, to[i], plain)
			if texts[i] == plain && o.Pkg().Path() == "fmt" && isAny(to[i]) {
				texts[i] = l.typed(a, plain)
			}
		}
	}
	text := strings.Join(texts, ", ")
	if e.Ellipsis.IsValid() {
		text += "..."
	}
	return joinComma(units, text)
}

func (l *lowering) isTuple(e ast.Expr) bool {
	t, ok := l.info.TypeOf(e).(*types.Tuple)
	return ok && t.Len() > 1
}

// worded wraps a value of a cell's type that has a text of its own, where compiled code takes any value: the text
// would be lost otherwise.
func (l *lowering) worded(e ast.Expr, to types.Type, text string) string {
	from := l.info.TypeOf(e)
	if l.s.plain || from == nil || !isAny(to) || !isCellType(from) || types.IsInterface(from) {
		return text
	}
	if k, ok := l.s.ableIndex[abilityOf(from)]; ok && (has(from, "Error", "string") || has(from, "String", "string")) {
		return fmt.Sprintf("%s(%d, %s)", l.nb("Worded"), k, text)
	}
	return text
}

// typed gives fmt a value together with its static type, which alone knows the names of types and fields as typed.
func (l *lowering) typed(e ast.Expr, text string) string {
	t := l.info.TypeOf(e)
	if l.s.plain || t == nil || l.info.Types[e].Value != nil || !mentionsCell(t, 0) {
		return text
	}
	l.s.shows = append(l.s.shows, shown{typ: t})
	return fmt.Sprintf("%s(%d, %s)", l.nb("Typed"), len(l.s.shows)-1, text)
}

// mentionsCell tells whether a type of a cell occurs in a type.
func mentionsCell(t types.Type, depth int) bool {
	if isCellType(t) || isAny(t) {
		return true
	}
	switch t := types.Unalias(t).(type) {
	case *types.Pointer:
		return depth < 4 && mentionsCell(t.Elem(), depth+1)
	case *types.Slice:
		return depth < 4 && mentionsCell(t.Elem(), depth+1)
	case *types.Array:
		return depth < 4 && mentionsCell(t.Elem(), depth+1)
	case *types.Map:
		return depth < 4 && (mentionsCell(t.Elem(), depth+1) || mentionsCell(t.Key(), depth+1))
	}
	return false
}

// vocabularyCall lowers calls of compiled functions that the notebook treats in its own way.
func (l *lowering) vocabularyCall(e *ast.CallExpr, o types.Object, sig *types.Signature, alone bool) (string, bool) {
	path := o.Pkg().Path()
	if collects(o) {
		return l.collected(e, o), true
	}
	own, _ := o.Type().(*types.Signature) // the type of a selector has no receiver
	method := own != nil && own.Recv() != nil
	switch {
	case path == "fmt" && !method && (o.Name() == "Print" || o.Name() == "Println" || o.Name() == "Printf"):
		return l.nb(o.Name()) + "(" + l.args(e, sig, "") + ")", true
	case path == l.s.voc.Open && o.Name() == "Show" && !method && !e.Ellipsis.IsValid() && alone:
		for _, a := range e.Args {
			l.flush()
			l.showValue(a, false)
		}
		return "", true
	}
	if twin := l.twin(o, own); twin != "" {
		units := "[]string{" + strings.Join(l.unitTexts(e), ", ") + "}"
		if !method {
			return l.pkg(path) + "." + twin + "(" + l.args(e, sig, units) + ")", true
		}
		f := ast.Unparen(e.Fun).(*ast.SelectorExpr)
		if sel := l.info.Selections[f]; sel != nil && sel.Kind() == types.MethodVal {
			return l.called(e, l.receiver(f, sel), sel, sig, twin, units), true
		}
	}
	return "", false
}

// twin finds the form of a function that takes the unit texts of its arguments.
func (l *lowering) twin(o types.Object, sig *types.Signature) string {
	name := o.Name() + twinSuffix
	if sig == nil {
		return ""
	}
	if sig.Recv() == nil {
		if f, ok := o.Pkg().Scope().Lookup(name).(*types.Func); ok {
			return f.Name()
		}
		return ""
	}
	m, _, _ := types.LookupFieldOrMethod(sig.Recv().Type(), true, o.Pkg(), name)
	if f, ok := m.(*types.Func); ok {
		return f.Name()
	}
	return ""
}

func (l *lowering) unitTexts(e *ast.CallExpr) []string {
	var list []string
	for _, a := range e.Args {
		u := "?"
		if !e.Ellipsis.IsValid() || a != e.Args[len(e.Args)-1] {
			u = l.unit(a)
		}
		list = append(list, strconv.Quote(u))
	}
	return list
}

func (l *lowering) conversion(e *ast.CallExpr, to types.Type) string {
	x := e.Args[0]
	if o := l.converted(e); o != nil && l.floats[o] != "" {
		return l.floats[o]
	}
	if compiledInterface(to) {
		return l.convert(x, to)
	}
	text := l.expr(x)
	t := l.typ(to)
	switch to.Underlying().(type) {
	case *types.Interface:
		if _, named := types.Unalias(to).(*types.Named); !named {
			v := l.name("i")
			l.before("var %s %s = %s", v, t, text)
			l.moved++
			return v
		}
	case *types.Pointer, *types.Signature:
		if text == "nil" {
			v := l.name("i")
			l.before("var %s %s", v, t)
			return v
		}
		t = "(" + t + ")"
	}
	return t + "(" + text + ")"
}

func (l *lowering) builtin(e *ast.CallExpr, fun ast.Expr) string {
	name := fun.(*ast.Ident).Name
	if o, ok := l.info.Uses[fun.(*ast.Ident)].(*types.Builtin); ok {
		name = o.Name()
	}
	switch name {
	case "new":
		t := l.info.TypeOf(e.Args[0])
		return "new(" + l.typ(t) + ")"
	case "make":
		text := "make(" + l.typ(l.info.TypeOf(e.Args[0]))
		for _, a := range e.Args[1:] {
			text += ", " + l.sized(a, l.info.TypeOf(e.Args[0]))
		}
		return text + ")"
	case "min", "max":
		return l.extreme(e, name)
	case "append":
		return l.append(e)
	case "panic":
		return l.nb("Panic") + "(" + l.worded(e.Args[0], types.NewInterfaceType(nil, nil), l.expr(e.Args[0])) + ")"
	case "print", "println":
		to := make([]types.Type, len(e.Args))
		return l.nb(map[string]string{"print": "Print", "println": "Println"}[name]) + "(" + strings.Join(l.list(e.Args, to), ", ") + ")"
	}
	to := make([]types.Type, len(e.Args))
	for i, a := range e.Args {
		to[i] = l.info.TypeOf(a)
	}
	if name == "delete" {
		to[1] = to[0].Underlying().(*types.Map).Key()
	}
	return name + "(" + strings.Join(l.list(e.Args, to), ", ") + ")"
}

// sized lowers a size given to make. More memory than there is would end the kernel, not the cell.
func (l *lowering) sized(a ast.Expr, t types.Type) string {
	text := l.expr(a)
	if v := l.info.Types[a].Value; v != nil && constant.BitLen(constant.ToInt(v)) < 20 || l.s.plain {
		return text
	}
	each := int64(8)
	switch u := t.Underlying().(type) {
	case *types.Slice:
		each = max(1, sizes.Sizeof(u.Elem()))
	case *types.Map:
		each = 16
	}
	return fmt.Sprintf("%s(int(%s), %d)", l.nb("Size"), text, each)
}

func (l *lowering) append(e *ast.CallExpr) string {
	to := make([]types.Type, len(e.Args))
	to[0] = l.info.TypeOf(e)
	for i := range e.Args[1:] {
		to[i+1] = to[0].Underlying().(*types.Slice).Elem()
	}
	if e.Ellipsis.IsValid() {
		to[1] = l.info.TypeOf(e.Args[1])
	}
	texts := l.list(e.Args, to)
	if texts[0] == "nil" {
		texts[0] = l.typ(to[0]) + "(nil)"
	}
	text := "append(" + strings.Join(texts, ", ")
	if e.Ellipsis.IsValid() {
		text += "..."
	}
	return text + ")"
}

// extreme lowers min and max to compiled helpers.
func (l *lowering) extreme(e *ast.CallExpr, name string) string {
	t := l.info.TypeOf(e)
	to := make([]types.Type, len(e.Args))
	for i := range to {
		to[i] = t
	}
	texts := l.list(e.Args, to)
	b, ok := t.Underlying().(*types.Basic)
	kind, base := "Float", "float64"
	if ok {
		switch {
		case b.Info()&types.IsString != 0:
			kind, base = "String", "string"
		case b.Info()&types.IsUnsigned != 0:
			kind, base = "Uint", "uint64"
		case b.Info()&types.IsInteger != 0:
			kind, base = "Int", "int64"
		}
	}
	for i := range texts {
		if l.typ(t) != base {
			texts[i] = base + "(" + texts[i] + ")"
		}
	}
	text := l.nb(map[string]string{"min": "Min", "max": "Max"}[name]+kind) + "(" + strings.Join(texts, ", ") + ")"
	if l.typ(t) != base {
		text = l.typ(t) + "(" + text + ")"
	}
	return text
}
