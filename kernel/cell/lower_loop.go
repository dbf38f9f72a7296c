package cell

import (
	"go/ast"
	"go/token"
	"go/types"
)

// held finds the variables among objs that a function literal or a pointer holds on to, or that are set, in a tree.
func (l *lowering) held(objs map[types.Object]bool, n ast.Node) (held, set bool) {
	is := func(e ast.Expr) bool {
		for {
			switch x := ast.Unparen(e).(type) {
			case *ast.Ident:
				return objs[l.info.ObjectOf(x)]
			case *ast.SelectorExpr:
				e = x.X
			case *ast.IndexExpr:
				e = x.X
			case *ast.SliceExpr:
				e = x.X
			default:
				return false
			}
		}
	}
	ast.Inspect(n, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.FuncLit:
			ast.Inspect(n.Body, func(m ast.Node) bool {
				if id, ok := m.(*ast.Ident); ok && objs[l.info.Uses[id]] {
					held = true
				}
				return true
			})
		case *ast.UnaryExpr:
			held = held || n.Op == token.AND && is(n.X)
		case *ast.SliceExpr:
			if _, ok := l.info.TypeOf(n.X).Underlying().(*types.Array); ok {
				held = held || is(n.X)
			}
		case *ast.SelectorExpr:
			if s := l.info.Selections[n]; s != nil && s.Kind() == types.MethodVal && is(n.X) {
				if sig, ok := s.Obj().Type().(*types.Signature); ok && sig.Recv() != nil {
					_, ptr := sig.Recv().Type().(*types.Pointer)
					held = held || ptr
				}
			}
		case *ast.AssignStmt:
			for _, x := range n.Lhs {
				set = set || is(x)
			}
		case *ast.IncDecStmt:
			set = set || is(n.X)
		case *ast.RangeStmt:
			set = set || n.Tok == token.ASSIGN && (n.Key != nil && is(n.Key) || n.Value != nil && is(n.Value))
		}
		return true
	})
	return held, set
}

// loopBody writes the body of a loop between its stop check and what is due before the next pass.
func (l *lowering) loopBody(label string, first, next []string, body []ast.Stmt) {
	if l.fn.top && len(l.fn.loops) == 0 && l.s.hooks.Pass != nil && l.passes(body) {
		next = append(next, l.nb("Pass")+"()")
	}
	l.fn.loops = append(l.fn.loops, &loop{label: label, next: next})
	l.ind++
	l.stopCheck()
	for _, t := range first {
		l.line("%s", t)
	}
	l.block(body)
	for _, t := range next {
		l.line("%s", t)
	}
	l.ind--
	l.line("}")
	l.fn.loops = l.fn.loops[:len(l.fn.loops)-1]
}

// forStmt lowers a loop with a condition. Each pass has its own copy of the loop's variables if anything holds on to
// them.
func (l *lowering) forStmt(s *ast.ForStmt, label string) {
	vars := map[types.Object]bool{}
	var order []types.Object
	if as, ok := s.Init.(*ast.AssignStmt); ok && as.Tok == token.DEFINE {
		for _, x := range as.Lhs {
			if id, ok := x.(*ast.Ident); ok && l.info.Defs[id] != nil && id.Name != "_" {
				vars[l.info.Defs[id]] = true
				order = append(order, l.info.Defs[id])
			}
		}
	}
	own, _ := l.held(vars, s)
	if s.Init != nil {
		l.line("{")
		l.ind++
		defer func() {
			l.ind--
			l.line("}")
		}()
		l.stmt(s.Init)
	}
	if !own && l.plainPost(s.Post) && (s.Cond == nil || !l.needsPre(s.Cond)) {
		if s.Cond != nil && l.fallible(s.Cond) || s.Post != nil && l.fallible(s.Post) {
			l.at(s)
		}
		cond, post := "", ""
		if s.Cond != nil {
			cond = l.expr(s.Cond)
		}
		if s.Post != nil {
			post = l.postText(s.Post)
		}
		l.flush()
		c := l.countFor(s)
		l.label(label)
		if post == "" {
			l.line("for %s {", cond)
		} else {
			l.line("for ; %s; %s {", cond, post)
		}
		l.loopBody(label, nil, c.step(), s.Body.List)
		l.done(c)
		return
	}
	begun := l.name("begun")
	l.line("%s := false", begun)
	var copies, back []string
	if own {
		for _, o := range order {
			outer := l.locals[o]
			inner := l.name(o.Name())
			l.locals[o] = inner
			copies = append(copies, inner+" := "+outer)
			back = append(back, outer+" = "+inner)
		}
	}
	l.label(label)
	l.line("for {")
	l.ind++
	for _, t := range copies {
		l.line("%s", t)
	}
	if s.Post != nil {
		l.line("if %s {", begun)
		l.ind++
		l.stmt(s.Post)
		l.ind--
		l.line("}")
		l.line("%s = true", begun)
	}
	if s.Cond != nil {
		if l.fallible(s.Cond) {
			l.at(s.Cond)
		}
		l.line("if !(%s) { break }", l.flushed(l.expr(s.Cond)))
	}
	l.ind--
	l.loopBody(label, nil, back, s.Body.List)
}

// plainPost tells whether what follows each pass stays one line.
func (l *lowering) plainPost(s ast.Stmt) bool {
	switch s := s.(type) {
	case nil:
		return true
	case *ast.IncDecStmt:
		_, ok := s.X.(*ast.Ident)
		return ok
	case *ast.AssignStmt:
		_, ok := s.Lhs[0].(*ast.Ident)
		return ok && s.Tok != token.DEFINE && len(s.Lhs) == 1 && !l.needsPre(s.Rhs[0])
	}
	return false
}

func (l *lowering) postText(s ast.Stmt) string {
	switch s := s.(type) {
	case *ast.IncDecStmt:
		return l.expr(s.X) + s.Tok.String()
	case *ast.AssignStmt:
		x := l.expr(s.Lhs[0])
		if s.Tok == token.ASSIGN {
			return x + " = " + l.convert(s.Rhs[0], l.info.TypeOf(s.Lhs[0]))
		}
		return x + " " + s.Tok.String() + " " + l.expr(s.Rhs[0])
	}
	return ""
}

// needsPre tells whether an expression is lowered with lines before it. It is tried out and taken back.
func (l *lowering) needsPre(e ast.Expr) bool {
	pre, n, moved := l.pre, l.n, l.moved
	l.pre = nil
	l.expr(e)
	needs := len(l.pre) > 0
	l.pre, l.n, l.moved = pre, n, moved
	return needs
}

// rangeStmt lowers loops over whole numbers, slices, arrays, texts and maps, these in the order of their keys.
func (l *lowering) rangeStmt(s *ast.RangeStmt, label string) {
	l.at(s)
	l.line("{")
	l.ind++
	defer func() {
		l.ind--
		l.line("}")
	}()
	t := l.info.TypeOf(s.X)
	switch u := t.Underlying().(type) {
	case *types.Basic:
		if u.Info()&types.IsInteger != 0 {
			l.rangeInt(s, label)
			return
		}
		l.rangeText(s, label)
		return
	case *types.Map:
		l.rangeMap(s, label, u)
		return
	}
	x := l.hold(l.expr(s.X))
	l.flush()
	l.rangeList(s, label, x)
}

// bind gives the name that a loop sets in each pass, and the lines that bring it to the variable as typed.
func (l *lowering) bind(e ast.Expr, tok token.Token, body ast.Node) (name string, first []string) {
	if e == nil {
		return "_", nil
	}
	id, ok := e.(*ast.Ident)
	if ok && id.Name == "_" {
		return "_", nil
	}
	name = l.name("it")
	if tok == token.DEFINE {
		o := l.info.Defs[id]
		held, set := l.held(map[types.Object]bool{o: true}, body)
		if !held && !set {
			return l.local(o), nil
		}
		return name, []string{l.local(o) + " := " + name}
	}
	place := l.place(e)
	first = append(first, l.pre...)
	l.pre = nil
	return name, append(first, place+" = "+name)
}

func (l *lowering) rangeList(s *ast.RangeStmt, label, x string) {
	k, first := l.bind(s.Key, s.Tok, s.Body)
	v, more := l.bind(s.Value, s.Tok, s.Body)
	c := l.countKey(s)
	l.label(label)
	switch {
	case k == "_" && v == "_":
		k = l.name("k")
		l.line("for %s := range %s {", k, x)
	case v == "_":
		l.line("for %s := range %s {", k, x)
	default:
		l.line("for %s, %s := range %s {", k, v, x)
	}
	l.loopBody(label, append(first, more...), c.step(), s.Body.List)
	l.done(c)
}

// countKey prepares the float64 of a loop over whole numbers or a list.
func (l *lowering) countKey(s *ast.RangeStmt) *counter {
	id, ok := s.Key.(*ast.Ident)
	if !ok || s.Tok != token.DEFINE || id.Name == "_" || l.info.Defs[id] == nil {
		return nil
	}
	return l.count(l.info.Defs[id], "0", s.Body)
}

func (l *lowering) rangeInt(s *ast.RangeStmt, label string) {
	t := l.info.TypeOf(s.X)
	if s.Key != nil {
		if id, ok := s.Key.(*ast.Ident); !ok || id.Name != "_" {
			t = l.info.TypeOf(s.Key)
			if ok && l.info.Defs[id] != nil {
				t = l.info.Defs[id].Type()
			}
		}
	}
	typ := l.typ(t)
	end := ""
	if v := l.info.Types[s.X].Value; v != nil {
		end = l.bare(v, types.Default(t), l.literal(v, types.Default(t)))
	} else {
		end = l.hold(l.expr(s.X))
	}
	k, first := l.bind(s.Key, s.Tok, s.Body)
	if k == "_" {
		k = l.name("k")
	}
	l.flush()
	c := l.countKey(s)
	l.label(label)
	l.line("for %s := %s(0); %s < %s; %s++ {", k, typ, k, end, k)
	l.loopBody(label, first, c.step(), s.Body.List)
	l.done(c)
}

// rangeText lowers a loop over the letters of a text: the interpreter counts letters where Go counts bytes.
func (l *lowering) rangeText(s *ast.RangeStmt, label string) {
	x := l.hold(l.expr(s.X))
	l.flush()
	at, letters, n := l.name("at"), l.name("letters"), l.name("n")
	k, first := l.bind(s.Key, s.Tok, s.Body)
	v, more := l.bind(s.Value, s.Tok, s.Body)
	l.line("%s, %s := %s(string(%s))", at, letters, l.nb("Letters"), x)
	l.label(label)
	l.line("for %s := range %s {", n, at)
	head := []string{"_ = " + letters + "[" + n + "]"}
	if k != "_" {
		head = append(head, k+" := "+at+"["+n+"]")
	}
	if v != "_" {
		head = append(head, v+" := "+letters+"["+n+"]")
	}
	l.loopBody(label, append(append(head, first...), more...), nil, s.Body.List)
}

func (l *lowering) rangeMap(s *ast.RangeStmt, label string, m *types.Map) {
	x := l.hold(l.expr(s.X))
	l.flush()
	key, keys, val, ok := l.name("key"), l.name("keys"), l.name("val"), l.name("ok")
	k, first := l.bind(s.Key, s.Tok, s.Body)
	v, more := l.bind(s.Value, s.Tok, s.Body)
	l.line("%s := make([]%s, 0, len(%s))", keys, l.typ(m.Key()), x)
	l.line("for %s := range %s { %s = append(%s, %s) }", key, x, keys, keys, key)
	l.line("%s(%s)", l.nb("Sort"), keys)
	l.label(label)
	if k == "_" {
		k = l.name("k")
	}
	l.line("for _, %s := range %s {", k, keys)
	head := []string{}
	if v == "_" {
		head = append(head, "_, "+ok+" := "+x+"["+k+"]", "if !"+ok+" { continue }")
	} else {
		head = append(head, val+", "+ok+" := "+x+"["+k+"]", "if !"+ok+" { continue }", v+" := "+val)
	}
	l.loopBody(label, append(append(head, first...), more...), nil, s.Body.List)
}
