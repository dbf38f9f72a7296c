package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
)

// divisions refuses constant divisions of whole numbers with a remainder and notes the other divisions of whole
// numbers, except where a whole number is meant: as an index, a size, in int() and make().
func (c *checking) divisions(r *checked) (bad []problem) {
	var walk func(n ast.Node, meant bool)
	visit := func(n ast.Node, meant bool) {
		ast.Inspect(n, func(m ast.Node) bool {
			if m == nil || m == n {
				return true
			}
			walk(m, meant)
			return false
		})
	}
	walk = func(n ast.Node, meant bool) {
		switch n := n.(type) {
		case *ast.IndexExpr:
			walk(n.X, meant)
			walk(n.Index, true)
			return
		case *ast.SliceExpr, *ast.ArrayType:
			visit(n, true)
			return
		case *ast.CallExpr:
			if meantWhole(c.info, n) {
				visit(n, true)
				return
			}
			visit(n, false)
			return
		case *ast.BinaryExpr:
			if n.Op == token.QUO && !meant {
				bad = append(bad, c.division(r, n)...)
			}
			if n.Op == token.XOR && isIntLit(n.Y) {
				c.noteCaret(r, n)
			}
		case *ast.AssignStmt:
			if n.Tok == token.QUO_ASSIGN && (&widening{c: c}).isInt(n.Lhs[0]) {
				c.noteDivision(r, n.Pos(), n.Lhs[0], n.Rhs[0])
			}
		}
		visit(n, meant)
	}
	for _, d := range c.p.decls {
		walk(d, false)
	}
	walk(c.p.body, false)
	return bad
}

func meantWhole(info *types.Info, n *ast.CallExpr) bool {
	tv, ok := info.Types[n.Fun]
	if !ok {
		return false
	}
	if tv.IsType() {
		b, ok := tv.Type.Underlying().(*types.Basic)
		return ok && b.Info()&types.IsInteger != 0
	}
	id, ok := n.Fun.(*ast.Ident)
	return ok && tv.IsBuiltin() && id.Name == "make"
}

func (c *checking) division(r *checked, n *ast.BinaryExpr) []problem {
	w := &widening{c: c}
	x, y := c.info.Types[n.X], c.info.Types[n.Y]
	if wholeConst(c.info, n.X) && wholeConst(c.info, n.Y) && x.Value != nil && y.Value != nil {
		a, b := constant.ToInt(x.Value), constant.ToInt(y.Value)
		if a.Kind() != constant.Int || b.Kind() != constant.Int || constant.Sign(b) == 0 ||
			constant.Sign(constant.BinaryOp(a, token.REM, b)) == 0 {
			return nil
		}
		q := constant.BinaryOp(a, token.QUO_ASSIGN, b)
		off, _ := r.src.offset(n.Pos())
		end, _ := r.src.offset(n.End())
		left, right := r.src.quote(n.X.Pos(), n.X.End()), r.src.quote(n.Y.Pos(), n.Y.End())
		return []problem{{src: r.src, off: off, end: end, text: left + "/" + right +
			" divides whole numbers and gives " + q.ExactString() + "; write " + pointed(n.X, left) + "/" + right}}
	}
	if w.isInt(n) {
		c.noteDivision(r, n.Pos(), n.X, n.Y)
	}
	return nil
}

func pointed(e ast.Expr, text string) string {
	if isIntLit(e) {
		return text + ".0"
	}
	return "float64(" + text + ")"
}

func (c *checking) noteDivision(r *checked, pos token.Pos, x, y ast.Expr) {
	off, ok := r.src.offset(pos)
	if !ok {
		return
	}
	line, _ := r.src.place(off)
	left, right := r.src.quote(x.Pos(), x.End()), r.src.quote(y.Pos(), y.End())
	r.notes = append(r.notes, "note: line "+itoa(line)+": "+left+"/"+right+
		" divides whole numbers and drops the remainder; for the ratio write float64("+left+")/"+right)
}

// noteCaret notes that x^2 flips bits: it is valid Go, and seldom what is meant.
func (c *checking) noteCaret(r *checked, n *ast.BinaryExpr) {
	off, ok := r.src.offset(n.Pos())
	if !ok {
		return
	}
	line, _ := r.src.place(off)
	x, y := nearestFactor(n)
	r.notes = append(r.notes, "note: line "+itoa(line)+": "+c.quote(n)+" flips the bits of whole numbers; a power is math.Pow("+c.quote(x)+", "+c.quote(y)+")")
}

// nearestFactor gives what the author of x^y meant as base and exponent: ^ binds like + in Go, so that a*b^2*c is
// (a*b)^(2*c).
func nearestFactor(n *ast.BinaryExpr) (base, exponent ast.Expr) {
	base, exponent = n.X, n.Y
	for {
		b, ok := base.(*ast.BinaryExpr)
		if !ok {
			break
		}
		base = b.Y
	}
	for {
		b, ok := exponent.(*ast.BinaryExpr)
		if !ok {
			break
		}
		exponent = b.X
	}
	return base, exponent
}

// wholeConst tells whether a constant is a whole number by the way it is written.
func wholeConst(info *types.Info, e ast.Expr) bool {
	switch e := ast.Unparen(e).(type) {
	case *ast.BasicLit:
		return e.Kind == token.INT
	case *ast.UnaryExpr:
		return wholeConst(info, e.X)
	case *ast.BinaryExpr:
		return wholeConst(info, e.X) && wholeConst(info, e.Y)
	case *ast.Ident:
		return wholeObject(info.Uses[e])
	case *ast.SelectorExpr:
		return wholeObject(info.Uses[e.Sel])
	case *ast.CallExpr:
		if tv, ok := info.Types[e]; ok && tv.Value != nil {
			b, ok := tv.Type.Underlying().(*types.Basic)
			return ok && b.Info()&types.IsInteger != 0
		}
	}
	return false
}

func wholeObject(o types.Object) bool {
	k, ok := o.(*types.Const)
	if !ok {
		return false
	}
	b, ok := k.Type().Underlying().(*types.Basic)
	return ok && b.Info()&types.IsInteger != 0
}
