package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

// function lowers a function or a method of the notebook.
func (l *lowering) function(f *fnUnit) string {
	l.src = f.src
	defer func() { l.src = l.r.src }()
	if f.recv != "" {
		return l.method(f)
	}
	sig := f.live.obj.Type().(*types.Signature)
	head := "func " + f.live.lowered
	if tp := sig.TypeParams(); tp.Len() > 0 {
		head += l.typeParams(tp)
	}
	body := l.funcBody(&frame{name: f.name, sig: sig, guarded: l.guard(f)}, f.decl.Type, nil, f.decl.Body)
	return head + body
}

// method lowers a method. One that uses names of the notebook is called through a variable, so that it can be made
// again when they change.
func (l *lowering) method(f *fnUnit) string {
	decl := f.decl
	recv := decl.Recv.List[0]
	named := l.r.after.names[f.recv]
	fr := &frame{name: f.recv + "." + f.name, guarded: l.guard(f), values: true}
	if o, ok := l.info.Defs[decl.Name].(*types.Func); ok {
		fr.sig = o.Type().(*types.Signature)
	} else {
		fr.sig = l.methodSig(named, f.name)
	}
	rt := fr.sig.Recv().Type()
	if genericRecv(decl) {
		name := "r__"
		if len(recv.Names) > 0 && recv.Names[0].Name != "_" {
			name = l.local(l.info.Defs[recv.Names[0]])
		}
		m, _, _ := types.LookupFieldOrMethod(rt, true, named.obj.Pkg(), f.name)
		return "func (" + name + " " + l.typ(rt) + ") " + l.methodName(m) + l.funcBody(fr, decl.Type, nil, decl.Body)
	}
	if f.own && !l.usesNotebook(decl.Body) {
		name := "r__"
		if len(recv.Names) > 0 && recv.Names[0].Name != "_" {
			name = l.local(l.info.Defs[recv.Names[0]])
		}
		l.s.pendingMethods = append(l.s.pendingMethods, &method{function: f.function, typ: f.recv, name: f.name})
		return "func (" + name + " " + l.typ(rt) + ") " + f.name + l.funcBody(fr, decl.Type, nil, decl.Body)
	}
	body := l.s.version(f.recv+"__"+f.name, false)
	text := "func " + body + l.funcBody(fr, decl.Type, recv, decl.Body)
	if !f.own {
		l.prolog = append(l.prolog, f.meth.impl+" = "+body)
		l.undo = append(l.undo, f.meth.impl+" = "+f.meth.body)
		l.s.pendingMethods = append(l.s.pendingMethods, &method{function: f.function, typ: f.recv, name: f.name, body: body, impl: f.meth.impl})
		return text
	}
	impl := body + "__impl"
	l.globals = append(l.globals, "var "+impl+" func("+joinComma(l.typ(rt), l.params(fr.sig, nil))+")"+l.results(fr.sig.Results(), nil))
	l.prolog = append(l.prolog, impl+" = "+body)
	l.s.pendingMethods = append(l.s.pendingMethods, &method{function: f.function, typ: f.recv, name: f.name, body: body, impl: impl})
	params, args := l.forward(fr.sig)
	call := impl + "(" + joinComma("r__", args) + ")"
	if fr.sig.Results().Len() > 0 {
		call = "return " + call
	}
	return text + "func (r__ " + l.typ(rt) + ") " + f.name + "(" + params + ")" + l.results(fr.sig.Results(), nil) + " { " + call + " }\n"
}

func (l *lowering) methodSig(named *live, name string) *types.Signature {
	o, _, _ := types.LookupFieldOrMethod(pointerTo(named.obj.Type()), true, named.obj.Pkg(), name)
	return o.Type().(*types.Signature)
}

func joinComma(a, b string) string {
	if b == "" {
		return a
	}
	if a == "" {
		return b
	}
	return a + ", " + b
}

// forward gives parameters with made-up names and the arguments that pass them on.
func (l *lowering) forward(sig *types.Signature) (params, args string) {
	var names []string
	i := 0
	params = l.params(sig, func(*types.Var) string {
		i++
		names = append(names, "a"+itoa(i)+"__")
		return names[len(names)-1]
	})
	args = strings.Join(names, ", ")
	if sig.Variadic() {
		args += "..."
	}
	return params, args
}

// usesNotebook tells whether a body names variables, functions or constants of the notebook.
func (l *lowering) usesNotebook(body *ast.BlockStmt) bool {
	found := false
	ast.Inspect(body, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			if v := l.r.lives[l.info.Uses[id]]; v != nil {
				if _, isType := v.obj.(*types.TypeName); !isType {
					found = true
				}
			}
		}
		return !found
	})
	return found
}

// guard tells whether a function may come to call itself.
func (l *lowering) guard(f *fnUnit) bool {
	if l.dynamicCalls(f.decl.Body) {
		return true
	}
	seen := map[string]bool{}
	var reach func(uses map[string]bool) bool
	reach = func(uses map[string]bool) bool {
		for n := range uses {
			if n == f.name && f.recv == "" {
				return true
			}
			v := l.r.after.names[n]
			if v == nil || v.fn == nil || seen[n] {
				continue
			}
			seen[n] = true
			if l.hasDynamic(v.fn) || reach(v.fn.uses) {
				return true
			}
		}
		return false
	}
	return reach(namesIn(f.decl.Body))
}

// hasDynamic tells by syntax whether a function of another cell may call what is not known by name. Unknown counts as
// yes.
func (l *lowering) hasDynamic(f *function) bool {
	return l.dynamicCalls(f.decl.Body)
}

// dynamicCalls tells whether a body calls function values or methods of cell types.
func (l *lowering) dynamicCalls(body ast.Node) bool {
	found := false
	ast.Inspect(body, func(n ast.Node) bool {
		c, ok := n.(*ast.CallExpr)
		if !ok || found {
			return !found
		}
		switch f := ast.Unparen(c.Fun).(type) {
		case *ast.Ident:
			_, found = l.info.Uses[f].(*types.Var)
		case *ast.SelectorExpr:
			if s := l.info.Selections[f]; s != nil {
				found = s.Kind() == types.FieldVal || !foreign(s.Obj())
			}
		case *ast.FuncLit:
		case *ast.IndexExpr, *ast.CallExpr:
			found = !l.info.Types[f].IsType()
		}
		return !found
	})
	return found
}

// funcBody writes parameters, results and body; a receiver becomes the first parameter.
func (l *lowering) funcBody(fr *frame, t *ast.FuncType, recv *ast.Field, body *ast.BlockStmt) string {
	saved, ind, pre, outer := l.out, l.ind, l.pre, l.fn
	l.out, l.ind, l.pre = strings.Builder{}, 1, nil
	fr.parent = outer
	if outer != nil && outer.top {
		fr.parent = nil
	}
	l.fn = fr
	var params []string
	fields := t.Params.List
	if recv != nil {
		fields = append([]*ast.Field{recv}, fields...)
	}
	for _, f := range fields {
		text := ""
		if e, ok := f.Type.(*ast.Ellipsis); ok {
			text = "..." + l.typ(l.info.TypeOf(e.Elt))
		} else {
			text = l.typ(l.info.TypeOf(f.Type))
		}
		for _, n := range paramNames(f) {
			name := l.name("p")
			if n != nil && n.Name != "_" {
				name = l.local(l.info.Defs[n])
			}
			params = append(params, name+" "+text)
		}
	}
	var results, named []string
	if t.Results != nil {
		for _, f := range t.Results.List {
			text := l.typ(l.info.TypeOf(f.Type))
			for _, n := range paramNames(f) {
				results = append(results, text)
				if n == nil {
					continue
				}
				name := l.name("r")
				if n.Name != "_" {
					name = l.local(l.info.Defs[n])
				}
				fr.named = append(fr.named, name)
				named = append(named, "var "+name+" "+text)
			}
		}
	}
	res := ""
	if len(results) > 0 {
		res = " (" + strings.Join(results, ", ") + ")"
	}
	l.stopCheck()
	if fr.guarded {
		l.enter()
	}
	for _, v := range named { // named results are plain variables: the interpreter mistakes them in expressions
		l.line("%s", v)
	}
	l.block(body.List)
	if fr.guarded && len(results) == 0 {
		l.leave()
	}
	text := "(" + strings.Join(params, ", ") + ")" + res + " {\n" + l.out.String() + "}\n"
	l.out, l.ind, l.pre, l.fn = saved, ind, pre, outer
	return text
}

func paramNames(f *ast.Field) []*ast.Ident {
	if len(f.Names) == 0 {
		return []*ast.Ident{nil}
	}
	return f.Names
}

// funcLit lowers a function literal.
func (l *lowering) funcLit(n *ast.FuncLit) string {
	sig, _ := l.info.TypeOf(n).(*types.Signature)
	fr := &frame{sig: sig, guarded: l.dynamicCalls(n.Body) || l.callsNotebook(n.Body), values: true}
	return "func" + strings.TrimSuffix(l.funcBody(fr, n.Type, nil, n.Body), "\n")
}

func (l *lowering) callsNotebook(body ast.Node) bool {
	found := false
	ast.Inspect(body, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			if v := l.r.lives[l.info.Uses[id]]; v != nil && v.fn != nil {
				found = true
			}
		}
		return !found
	})
	return found
}
