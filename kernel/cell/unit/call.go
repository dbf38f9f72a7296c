package unit

import (
	"go/ast"
	"go/types"
	"path"
)

// call gives what is known of the results of a call or conversion.
func (in *inference) call(e *ast.CallExpr) []value {
	if tv, ok := in.info.Types[e.Fun]; ok {
		if tv.IsType() {
			return []value{in.conversion(e, tv.Type)}
		}
		if tv.IsBuiltin() {
			return []value{in.builtin(e)}
		}
	}
	fn := in.callee(e.Fun)
	if fn != nil && foreign(fn) && fn.Signature().Recv() == nil {
		if rule, ok := in.known[in.canonical(fn)]; ok {
			return rule(in, e)
		}
	}
	return in.ordinary(e, fn)
}

// callee gives the declared function or method that is called, if there is one.
func (in *inference) callee(fun ast.Expr) *types.Func {
	switch f := ast.Unparen(fun).(type) {
	case *ast.Ident:
		fn, _ := in.info.Uses[f].(*types.Func)
		return fn
	case *ast.SelectorExpr:
		fn, _ := in.info.Uses[f.Sel].(*types.Func)
		return fn
	case *ast.IndexExpr:
		return in.callee(f.X)
	case *ast.IndexListExpr:
		return in.callee(f.X)
	}
	return nil
}

// canonical names a function: "math.Sqrt" for its further names too.
func (in *inference) canonical(fn *types.Func) string {
	if name, ok := in.Functions[fn.Name()]; ok && fn.Pkg().Scope().Lookup(fn.Name()) == nil {
		return name
	}
	return path.Base(fn.Pkg().Path()) + "." + fn.Name()
}

// conversion gives T(x). A conversion to an alias with a unit says that a number is in it.
func (in *inference) conversion(e *ast.CallExpr, t types.Type) value {
	if len(e.Args) != 1 {
		return lost
	}
	v := in.expr(e.Args[0])
	if tg := in.written(t); tg.kind == tagUnit {
		if !v.plain() {
			in.door(v, tg.q, place{what: in.source(e.Fun)}, e.Args[0])
		}
		return inUnit(tg.q)
	}
	if from := in.info.TypeOf(e.Args[0]); from != nil && !numeric(from) && numeric(t) {
		return lost
	}
	return v
}

// argument is an argument of a call: what is known of it and the expression it comes from.
type argument struct {
	value
	expr ast.Expr
}

// arguments gives the arguments of a call; one call may give several.
func (in *inference) arguments(e *ast.CallExpr, n int) []argument {
	if len(e.Args) == 1 && n != 1 {
		if _, ok := in.info.TypeOf(e.Args[0]).(*types.Tuple); ok {
			var out []argument
			for _, v := range in.several(e.Args[0], n) {
				out = append(out, argument{v, e.Args[0]})
			}
			return out
		}
	}
	out := make([]argument, len(e.Args))
	for i, a := range e.Args {
		out[i] = argument{in.expr(a), a}
	}
	return out
}

// ordinary gives the results of a call of a function with a signature: arguments pass through its doors, and what
// shares the unit of the call is brought together.
func (in *inference) ordinary(e *ast.CallExpr, fn *types.Func) []value {
	callee := in.expr(e.Fun)
	sig := in.signature(e, fn)
	if sig == nil || in.isMethodExpr(e.Fun) {
		in.arguments(e, len(e.Args))
		return []value{lost}
	}
	name := in.calleeName(e, fn)
	shared := &common{}
	if recv := in.receiver(e, fn); recv != nil {
		shared.add(*recv, place{}, true)
	}
	params := map[*types.TypeParam]value{}
	apart := in.columns(sig) > 1
	args := in.arguments(e, sig.Params().Len())
	for i, a := range args {
		p, t := parameter(sig, i, e.Ellipsis.IsValid())
		if p == nil {
			break
		}
		if apart && in.isColumn(p.Type()) {
			continue
		}
		in.through(a, p, t, i, name, shared, params)
	}
	in.agree(shared)
	return in.outcomes(sig, fn, callee, shared, params)
}

// columns counts the parameters that are lists of numbers in the unit of the call. Where there are several, as x and y of
// a curve, each has a unit of its own.
func (in *inference) columns(sig *types.Signature) int {
	n := 0
	for p := range sig.Params().Variables() {
		if in.isColumn(p.Type()) {
			n++
		}
	}
	return n
}

// isColumn tells whether a type is a list of numbers in the unit of the call.
func (in *inference) isColumn(t types.Type) bool {
	s, ok := t.(*types.Slice)
	return ok && in.isValue(s.Elem())
}

// signature gives the signature of what is called, as it was declared: of a generic function, not the instance.
func (in *inference) signature(e *ast.CallExpr, fn *types.Func) *types.Signature {
	if fn != nil {
		return fn.Origin().Signature()
	}
	t := in.info.TypeOf(e.Fun)
	if t == nil {
		return nil
	}
	sig, _ := t.Underlying().(*types.Signature)
	return sig
}

// isMethodExpr tells whether a call goes through a method expression, whose first argument is the receiver.
func (in *inference) isMethodExpr(fun ast.Expr) bool {
	sel, ok := ast.Unparen(fun).(*ast.SelectorExpr)
	return ok && in.info.Selections[sel] != nil && in.info.Selections[sel].Kind() == types.MethodExpr
}

// calleeName names what is called in messages.
func (in *inference) calleeName(e *ast.CallExpr, fn *types.Func) string {
	if fn == nil {
		return in.source(e.Fun)
	}
	if sel, ok := ast.Unparen(e.Fun).(*ast.SelectorExpr); ok && in.info.Selections[sel] == nil {
		return in.source(sel)
	}
	return fn.Name()
}

// receiver gives the argument that a method is called on, if its type carries the unit of the call.
func (in *inference) receiver(e *ast.CallExpr, fn *types.Func) *argument {
	sel, ok := ast.Unparen(e.Fun).(*ast.SelectorExpr)
	if !ok || fn == nil || in.info.Selections[sel] == nil || in.info.Selections[sel].Kind() != types.MethodVal {
		return nil
	}
	v := in.values[sel.X]
	if v.kind != known {
		return nil
	}
	return &argument{v, sel.X}
}

// parameter gives the i-th parameter and the type of its argument.
func parameter(sig *types.Signature, i int, ellipsis bool) (*types.Var, types.Type) {
	n := sig.Params().Len()
	if n == 0 {
		return nil, nil
	}
	if !sig.Variadic() || i < n-1 || ellipsis {
		if i >= n {
			return nil, nil
		}
		return sig.Params().At(i), sig.Params().At(i).Type()
	}
	p := sig.Params().At(n - 1)
	if s, ok := p.Type().Underlying().(*types.Slice); ok {
		return p, s.Elem()
	}
	return p, p.Type()
}

// through passes one argument through its door.
func (in *inference) through(a argument, p *types.Var, t types.Type, i int, name string, shared *common, params map[*types.TypeParam]value) {
	where := place{what: paramName(p, i) + " of " + name}
	switch tg := in.written(t); tg.kind {
	case tagUnit:
		in.door(a.value, tg.q, where, a.expr)
	case tagValue:
		shared.add(a, where, false)
	case tagParam:
		params[tg.param] = join(params[tg.param], a.value)
	}
	if want, ok := t.Underlying().(*types.Signature); ok {
		in.callback(a, want, where, shared)
	}
}

// paramName names a parameter in messages.
func paramName(p *types.Var, i int) string {
	if p.Name() == "" || p.Name() == "_" {
		return "argument " + string(rune('1'+min(i, 8)))
	}
	return p.Name()
}

// callback compares the parameters of a function that is passed with those that it will be called with.
func (in *inference) callback(a argument, want *types.Signature, where place, shared *common) {
	t := in.info.TypeOf(a.expr)
	if t == nil {
		return
	}
	have, ok := t.Underlying().(*types.Signature)
	if !ok {
		return
	}
	for i := range min(want.Params().Len(), have.Params().Len()) {
		h := in.written(have.Params().At(i).Type())
		if h.kind != tagUnit {
			continue
		}
		own := place{what: paramName(have.Params().At(i), i) + " of " + where.what}
		switch w := in.written(want.Params().At(i).Type()); w.kind {
		case tagUnit:
			if w.q.dim != h.q.dim {
				in.refuse(a.expr, own.what+" is called with "+in.word(w.q)+"; it was declared in "+in.word(h.q))
			}
		case tagValue:
			shared.add(argument{inUnit(h.q), a.expr}, own, false)
		}
	}
}

// outcomes gives what is known of the results of a call.
func (in *inference) outcomes(sig *types.Signature, fn *types.Func, callee value, shared *common, params map[*types.TypeParam]value) []value {
	n := sig.Results().Len()
	out := make([]value, n)
	for i := range n {
		switch tg := in.written(sig.Results().At(i).Type()); tg.kind {
		case tagUnit:
			out[i] = inUnit(tg.q)
		case tagValue:
			out[i] = shared.result()
			if fn != nil && fn.Signature().Recv() != nil && !shared.led() && !in.isValue(sig.Results().At(i).Type()) {
				out[i] = lost // what a method of an untraced carrier makes is as untraced as the carrier
			}
			if fn == nil && out[i].kind == untraced {
				out[i] = callee.element()
			} else if fn != nil && !foreign(fn) {
				out[i] = in.result(fn.Origin(), i)
			}
		case tagParam:
			if out[i] = params[tg.param].element(); out[i].kind == unset {
				out[i] = lost
			}
		default:
			switch {
			case fn != nil && !foreign(fn):
				out[i] = in.result(fn.Origin(), i)
			case fn == nil && n == 1:
				out[i] = callee.element()
			default:
				out[i] = lost
			}
		}
	}
	return out
}
