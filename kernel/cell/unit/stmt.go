package unit

import (
	"go/ast"
	"go/token"
	"go/types"
)

// block passes over statements.
func (in *inference) block(list []ast.Stmt) {
	for _, s := range list {
		in.stmt(s)
	}
}

// stmt passes over a statement.
func (in *inference) stmt(s ast.Stmt) {
	switch s := s.(type) {
	case *ast.AssignStmt:
		in.assignment(s)
	case *ast.DeclStmt:
		if d, ok := s.Decl.(*ast.GenDecl); ok {
			in.general(d)
		}
	case *ast.ExprStmt:
		if call, ok := ast.Unparen(s.X).(*ast.CallExpr); ok {
			in.expr(call)
			return
		}
		in.expr(s.X)
	case *ast.ReturnStmt:
		in.returned(s)
	case *ast.RangeStmt:
		in.ranged(s)
	case *ast.IncDecStmt:
		v, _ := sum(in.expr(s.X), number, false)
		in.store(s.X, v, s.X)
	case *ast.IfStmt:
		in.optional(s.Init)
		in.expr(s.Cond)
		in.block(s.Body.List)
		in.optional(s.Else)
	case *ast.ForStmt:
		in.optional(s.Init)
		if s.Cond != nil {
			in.expr(s.Cond)
		}
		in.optional(s.Post)
		in.block(s.Body.List)
	case *ast.SwitchStmt:
		in.switched(s)
	case *ast.TypeSwitchStmt:
		in.optional(s.Init)
		in.optional(s.Assign)
		for _, c := range s.Body.List {
			in.block(c.(*ast.CaseClause).Body)
		}
	default:
		in.rare(s)
	}
}

// rare passes over the statements that hardly occur in cells.
func (in *inference) rare(s ast.Stmt) {
	switch s := s.(type) {
	case *ast.BlockStmt:
		in.block(s.List)
	case *ast.LabeledStmt:
		in.stmt(s.Stmt)
	case *ast.GoStmt:
		in.expr(s.Call)
	case *ast.DeferStmt:
		in.expr(s.Call)
	case *ast.SendStmt:
		in.store(s.Chan, in.expr(s.Value), s.Value)
	case *ast.SelectStmt:
		for _, c := range s.Body.List {
			clause := c.(*ast.CommClause)
			in.optional(clause.Comm)
			in.block(clause.Body)
		}
	}
}

// optional passes over a statement that may be absent.
func (in *inference) optional(s ast.Stmt) {
	if s != nil {
		in.stmt(s)
	}
}

// switched passes over a switch; its cases are compared with its tag.
func (in *inference) switched(s *ast.SwitchStmt) {
	in.optional(s.Init)
	var tag value
	if s.Tag != nil {
		tag = in.expr(s.Tag)
	}
	for _, c := range s.Body.List {
		clause := c.(*ast.CaseClause)
		for _, e := range clause.List {
			v := in.expr(e)
			if s.Tag != nil && !mayCompare(tag, v) {
				in.refuseCompare(e, s.Tag, tag, e, v)
			}
		}
		in.block(clause.Body)
	}
}

// assignment passes over an assignment of any form.
func (in *inference) assignment(s *ast.AssignStmt) {
	if s.Tok != token.ASSIGN && s.Tok != token.DEFINE {
		in.combined(s)
		return
	}
	if s.Tok == token.DEFINE {
		for _, e := range s.Lhs {
			if id, ok := e.(*ast.Ident); ok {
				in.define(id)
			}
		}
	}
	got := in.list(s.Rhs, len(s.Lhs))
	for i, e := range s.Lhs {
		if i < len(got) {
			in.store(e, got[i], at(s.Rhs, i))
		}
	}
}

// combined passes over x += y and the like.
func (in *inference) combined(s *ast.AssignStmt) {
	x, y := in.expr(s.Lhs[0]), in.expr(s.Rhs[0])
	switch s.Tok {
	case token.ADD_ASSIGN, token.SUB_ASSIGN, token.MUL_ASSIGN, token.QUO_ASSIGN:
		if !in.isText(s.Lhs[0]) {
			in.store(s.Lhs[0], in.operate(s.Tok, s.Lhs[0], x, s.Rhs[0], y), s.Rhs[0])
		}
	}
}

// store assigns to a variable, a field or an element. The value comes from an expression, which a refusal points at.
func (in *inference) store(to ast.Expr, v value, from ast.Expr) {
	to = ast.Unparen(to)
	if id, ok := to.(*ast.Ident); ok && id.Name == "_" {
		return
	}
	obj, elem := in.root(to)
	if obj == nil {
		in.storeElement(to, v, from)
		return
	}
	if want, ok := in.fixed(obj); ok {
		if want.kind == known {
			what := obj.Name()
			if elem {
				what = "element of " + what
			}
			if f, ok := obj.(*types.Var); ok && f.IsField() {
				what = "field " + what
			}
			in.door(v, want.quantity, place{what: what}, from)
		}
		return
	}
	if foreign(obj) {
		return
	}
	if v2, ok := obj.(*types.Var); ok && v2.IsField() {
		obj = v2.Origin()
	}
	in.assign(obj, v)
}

// storeElement assigns to an element of what has no name: the result of a call.
func (in *inference) storeElement(to ast.Expr, v value, from ast.Expr) {
	if want := in.expr(to); want.dimensional() {
		in.door(v, want.quantity, place{what: in.source(to)}, from)
	}
}

// fixed gives what an object was declared as. The unit of a container's elements stands in its type, however the
// variable came to it: only types of numbers are derived by the type checker.
func (in *inference) fixed(obj types.Object) (value, bool) {
	if v, ok := obj.(*types.Var); ok && v.IsField() {
		tg := in.written(v.Origin().Type())
		if tg.kind == tagUnit {
			return inUnit(tg.q), true
		}
		return lost, tg.kind != tagNone
	}
	if v, ok := in.declared[obj]; ok {
		return v, true
	}
	if v, ok := in.kept[declaredKey{obj}]; ok {
		return v, true
	}
	if container(obj.Type()) {
		if tg := in.written(obj.Type()); tg.kind == tagUnit {
			return inUnit(tg.q), true
		}
	}
	return lost, false
}

// container tells whether a type is that of a list or a map.
func container(t types.Type) bool {
	switch t.Underlying().(type) {
	case *types.Slice, *types.Array, *types.Map:
		return true
	}
	return false
}

// root finds the variable or field in which an assignment ends: that of x, x.f, x[i], *x. elem tells that an element of
// it is meant. Indices on the way are passed over.
func (in *inference) root(e ast.Expr) (obj types.Object, elem bool) {
	for {
		switch x := ast.Unparen(e).(type) {
		case *ast.Ident:
			if x.Name == "_" {
				return nil, elem
			}
			if o := in.info.Defs[x]; o != nil {
				return o, elem
			}
			if o, ok := in.info.Uses[x].(*types.Var); ok {
				return o, elem
			}
			return nil, elem
		case *ast.SelectorExpr:
			in.expr(x.X)
			if sel := in.info.Selections[x]; sel != nil && sel.Kind() == types.FieldVal {
				return sel.Obj(), elem
			}
			return nil, elem
		case *ast.IndexExpr:
			in.index(x)
			e, elem = x.X, true
		case *ast.SliceExpr:
			e = x.X
		case *ast.StarExpr:
			e = x.X
		default:
			return nil, elem
		}
	}
}

// returned passes over a return statement.
func (in *inference) returned(s *ast.ReturnStmt) {
	if len(in.funcs) == 0 {
		in.list(s.Results, len(s.Results))
		return
	}
	f := in.funcs[len(in.funcs)-1]
	if len(s.Results) == 0 {
		for i, obj := range f.named {
			if obj != nil && f.results[i].kind == tagNone {
				in.assign(result{f.of, i}, in.lookup(obj))
			}
		}
		return
	}
	got := in.list(s.Results, len(f.results))
	for i, tg := range f.results {
		if i >= len(got) {
			break
		}
		switch tg.kind {
		case tagUnit:
			what := "result of " + f.name
			if f.inner {
				what = "result of the function"
			}
			in.door(got[i], tg.q, place{what: what}, at(s.Results, i))
		case tagNone, tagValue:
			in.assign(result{f.of, i}, got[i])
		}
	}
}

// ranged passes over a range statement.
func (in *inference) ranged(s *ast.RangeStmt) {
	x := in.expr(s.X)
	if s.Tok == token.DEFINE {
		for _, e := range []ast.Expr{s.Key, s.Value} {
			if id, ok := e.(*ast.Ident); ok {
				in.define(id)
			}
		}
	}
	key, val := number, x.element()
	switch t := in.info.TypeOf(s.X).Underlying().(type) {
	case *types.Map:
		key = lost
		if tg := in.written(t.Key()); tg.kind == tagUnit {
			key = inUnit(tg.q)
		}
	case *types.Chan:
		key = x.element()
	case *types.Signature:
		key, val = lost, lost
	}
	if s.Key != nil {
		in.store(s.Key, key, s.Key)
	}
	if s.Value != nil {
		in.store(s.Value, val, s.Value)
	}
	in.block(s.Body.List)
}
