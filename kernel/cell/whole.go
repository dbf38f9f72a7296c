package cell

import (
	"go/ast"
	"go/token"
	"go/types"

	"golang.org/x/tools/go/ast/astutil"
)

// Whole numbers beside quantities. An int variable counts as float64 where Go would refuse it beside one, and beside a
// unit or a number written with a point or an exponent. The conversions are written into the tree; the cell is then
// checked again.

// widen writes the conversions that are due into the cell; it tells whether there were any.
func (c *checking) widen() bool {
	w := &widening{c: c}
	for _, d := range c.p.decls {
		w.walk(d)
	}
	w.walk(c.p.body)
	return w.n > 0
}

type widening struct {
	c       *checking
	n       int
	results []*types.Signature
}

func (w *widening) walk(n ast.Node) {
	astutil.Apply(n, func(cur *astutil.Cursor) bool {
		switch n := cur.Node().(type) {
		case *ast.FuncDecl:
			sig := &types.Signature{}
			if f, ok := w.c.info.Defs[n.Name].(*types.Func); ok {
				sig = f.Type().(*types.Signature)
			}
			w.results = append(w.results, sig)
		case *ast.FuncLit:
			w.results = append(w.results, w.signature(n.Type))
		}
		return true
	}, func(cur *astutil.Cursor) bool {
		switch n := cur.Node().(type) {
		case *ast.FuncDecl, *ast.FuncLit:
			w.results = w.results[:len(w.results)-1]
		case *ast.BinaryExpr:
			w.binary(n)
		case *ast.CallExpr:
			w.call(n)
		case *ast.CompositeLit:
			w.composite(n)
		case *ast.AssignStmt:
			w.assign(n)
		case *ast.ValueSpec:
			if n.Type != nil && w.isFloatType(n.Type) {
				for i := range n.Values {
					w.fix(&n.Values[i])
				}
			}
		case *ast.ReturnStmt:
			w.returns(n)
		}
		return true
	})
}

func (w *widening) signature(t *ast.FuncType) *types.Signature {
	sig := &types.Signature{}
	if tv, ok := w.c.info.Types[t]; ok {
		if s, ok := tv.Type.(*types.Signature); ok {
			return s
		}
	}
	return sig
}

// fix writes float64(..) around a whole-number variable or an expression of such.
func (w *widening) fix(e *ast.Expr) {
	if !w.isInt(*e) {
		return
	}
	x := *e
	*e = &ast.CallExpr{
		Fun: &ast.Ident{NamePos: x.Pos(), Name: "float64"}, Lparen: x.Pos(), Args: []ast.Expr{x}, Rparen: x.End() - 1,
	}
	w.n++
}

// isInt tells whether an expression is a whole number that is no constant.
func (w *widening) isInt(e ast.Expr) bool {
	tv, ok := w.c.info.Types[e]
	if !ok || tv.Value != nil || tv.Type == nil || !tv.IsValue() {
		return false
	}
	b, ok := types.Unalias(tv.Type).(*types.Basic)
	return ok && b.Info()&types.IsInteger != 0 && b.Info()&types.IsUntyped == 0
}

// isFloat tells whether an expression is a float64 that is no constant, as far as it can be told where checks failed.
func (w *widening) isFloat(e ast.Expr) bool {
	if tv, ok := w.c.info.Types[e]; ok && tv.Type != nil && tv.Type != types.Typ[types.Invalid] {
		return tv.Value == nil && tv.IsValue() && isFloat64(tv.Type)
	}
	switch e := ast.Unparen(e).(type) {
	case *ast.BinaryExpr:
		switch e.Op {
		case token.ADD, token.SUB, token.MUL, token.QUO:
			return w.isFloat(e.X) || w.isFloat(e.Y)
		}
	case *ast.UnaryExpr:
		return w.isFloat(e.X)
	case *ast.CallExpr:
		if id, ok := e.Fun.(*ast.Ident); ok && id.Name == "float64" {
			return true
		}
		if sig, ok := w.typ(e.Fun).(*types.Signature); ok && sig.Results().Len() == 1 {
			return isFloat64(sig.Results().At(0).Type())
		}
	}
	return false
}

func isFloat64(t types.Type) bool {
	b, ok := types.Unalias(t).(*types.Basic)
	return ok && b.Kind() == types.Float64
}

// isPointed tells whether a constant expression counts as a real number by the way it is written: with a point, an
// exponent or a unit.
func (w *widening) isPointed(e ast.Expr) bool {
	switch e := ast.Unparen(e).(type) {
	case *ast.BasicLit:
		return e.Kind == token.FLOAT
	case *ast.Ident:
		o, ok := w.c.info.Uses[e].(*types.Const)
		return ok && isRealConst(o.Type())
	case *ast.SelectorExpr:
		o, ok := w.c.info.Uses[e.Sel].(*types.Const)
		return ok && isRealConst(o.Type())
	case *ast.UnaryExpr:
		return w.isPointed(e.X)
	case *ast.BinaryExpr:
		switch e.Op {
		case token.ADD, token.SUB, token.MUL, token.QUO:
			return w.isConst(e.X) && w.isConst(e.Y) && (w.isPointed(e.X) || w.isPointed(e.Y))
		}
	}
	return false
}

func (w *widening) isConst(e ast.Expr) bool {
	if tv, ok := w.c.info.Types[e]; ok && tv.Value != nil {
		return true
	}
	return w.isPointed(e) || isIntLit(e)
}

func isIntLit(e ast.Expr) bool {
	b, ok := ast.Unparen(e).(*ast.BasicLit)
	return ok && b.Kind == token.INT
}

func isRealConst(t types.Type) bool {
	b, ok := types.Unalias(t).(*types.Basic)
	return ok && (b.Kind() == types.UntypedFloat || b.Kind() == types.Float64)
}

func (w *widening) binary(n *ast.BinaryExpr) {
	switch n.Op {
	case token.ADD, token.SUB, token.MUL, token.QUO, token.LSS, token.LEQ, token.GTR, token.GEQ, token.EQL, token.NEQ:
	default:
		return
	}
	if w.isFloat(n.Y) || w.isPointed(n.Y) {
		w.fix(&n.X)
	}
	if w.isFloat(n.X) || w.isPointed(n.X) {
		w.fix(&n.Y)
	}
}

func (w *widening) typ(e ast.Expr) types.Type {
	if tv, ok := w.c.info.Types[e]; ok && tv.Type != nil {
		return tv.Type.Underlying()
	}
	return nil
}

func (w *widening) isFloatType(e ast.Expr) bool {
	tv, ok := w.c.info.Types[e]
	return ok && tv.IsType() && isFloat64(tv.Type)
}

func (w *widening) call(n *ast.CallExpr) {
	if id, ok := ast.Unparen(n.Fun).(*ast.Ident); ok {
		if b, ok := w.c.info.Uses[id].(*types.Builtin); ok {
			w.builtin(b.Name(), n)
			return
		}
	}
	sig, ok := w.typ(n.Fun).(*types.Signature)
	if !ok || n.Ellipsis.IsValid() {
		return
	}
	params := sig.Params()
	for i := range n.Args {
		var t types.Type
		switch {
		case sig.Variadic() && i >= params.Len()-1:
			t = params.At(params.Len() - 1).Type().(*types.Slice).Elem()
		case i < params.Len():
			t = params.At(i).Type()
		}
		if t != nil && isFloat64(t) {
			w.fix(&n.Args[i])
		}
	}
}

func (w *widening) builtin(name string, n *ast.CallExpr) {
	switch name {
	case "append":
		if len(n.Args) == 0 || n.Ellipsis.IsValid() {
			return
		}
		if s, ok := w.typ(n.Args[0]).(*types.Slice); ok && isFloat64(s.Elem()) {
			for i := range n.Args[1:] {
				w.fix(&n.Args[i+1])
			}
		}
	case "min", "max":
		real := false
		for _, a := range n.Args {
			real = real || w.isFloat(a) || w.isPointed(a)
		}
		for i := range n.Args {
			if real {
				w.fix(&n.Args[i])
			}
		}
	}
}

func (w *widening) composite(n *ast.CompositeLit) {
	switch t := w.typ(n).(type) {
	case *types.Slice:
		w.elements(n, t.Elem())
	case *types.Array:
		w.elements(n, t.Elem())
	case *types.Map:
		w.elements(n, t.Elem())
	case *types.Struct:
		for i, e := range n.Elts {
			if kv, ok := e.(*ast.KeyValueExpr); ok {
				id, _ := kv.Key.(*ast.Ident)
				for j := 0; id != nil && j < t.NumFields(); j++ {
					if t.Field(j).Name() == id.Name && isFloat64(t.Field(j).Type()) {
						w.fix(&kv.Value)
					}
				}
			} else if i < t.NumFields() && isFloat64(t.Field(i).Type()) {
				w.fix(&n.Elts[i])
			}
		}
	}
}

func (w *widening) elements(n *ast.CompositeLit, elem types.Type) {
	if !isFloat64(elem) {
		return
	}
	for i, e := range n.Elts {
		if kv, ok := e.(*ast.KeyValueExpr); ok {
			w.fix(&kv.Value)
		} else {
			w.fix(&n.Elts[i])
		}
	}
}

func (w *widening) assign(n *ast.AssignStmt) {
	if n.Tok == token.DEFINE || len(n.Lhs) != len(n.Rhs) {
		return
	}
	for i, l := range n.Lhs {
		if w.isFloat(l) {
			w.fix(&n.Rhs[i])
		}
	}
}

func (w *widening) returns(n *ast.ReturnStmt) {
	if len(w.results) == 0 {
		return
	}
	sig := w.results[len(w.results)-1]
	if sig.Results() == nil || sig.Results().Len() != len(n.Results) {
		return
	}
	for i := range n.Results {
		if isFloat64(sig.Results().At(i).Type()) {
			w.fix(&n.Results[i])
		}
	}
}
