package unit

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"math"
)

// expr gives what is known of an expression, and records it.
func (in *inference) expr(e ast.Expr) value {
	v := in.raw(e)
	if t := in.info.TypeOf(e); t != nil && whole(t) {
		v = number
	}
	in.values[e] = v
	return v
}

// raw gives what is known of an expression by its form.
func (in *inference) raw(e ast.Expr) value {
	switch e := e.(type) {
	case *ast.ParenExpr:
		return in.expr(e.X)
	case *ast.BasicLit:
		return in.literal(e)
	case *ast.Ident:
		return in.ident(e)
	case *ast.BinaryExpr:
		return in.binary(e)
	case *ast.UnaryExpr:
		return in.unary(e)
	case *ast.CallExpr:
		if got := in.call(e); len(got) > 0 {
			return got[0]
		}
		return lost
	case *ast.SelectorExpr:
		return in.selector(e)
	case *ast.IndexExpr:
		return in.indexed(e)
	case *ast.IndexListExpr:
		return in.expr(e.X)
	case *ast.SliceExpr:
		for _, i := range []ast.Expr{e.Low, e.High, e.Max} {
			if i != nil {
				in.expr(i)
			}
		}
		return in.expr(e.X)
	case *ast.StarExpr:
		return in.expr(e.X)
	case *ast.CompositeLit:
		return in.composite(e)
	case *ast.FuncLit:
		return in.funcLit(e)
	case *ast.TypeAssertExpr:
		in.expr(e.X)
		if e.Type != nil {
			if tg := in.written(in.info.TypeOf(e.Type)); tg.kind == tagUnit {
				return inUnit(tg.q)
			}
		}
	}
	return lost
}

// literal gives a bare number; 0 fits everywhere.
func (in *inference) literal(e *ast.BasicLit) value {
	if c := constant.MakeFromLiteral(e.Value, e.Kind, 0); e.Kind != token.STRING && c.Kind() != constant.Unknown && constant.Sign(c) == 0 {
		return fits
	}
	return number
}

// ident gives what is known of a name.
func (in *inference) ident(e *ast.Ident) value {
	obj := in.info.Uses[e]
	if obj == nil {
		obj = in.info.Defs[e]
	}
	return in.object(obj)
}

// object gives what is known of an object that an expression names.
func (in *inference) object(obj types.Object) value {
	switch obj := obj.(type) {
	case *types.Const:
		return in.constant(obj)
	case *types.Var:
		return in.lookup(obj)
	case *types.Func:
		return in.funcValue(obj)
	case *types.Nil:
		return nothing
	}
	return lost
}

// constant gives what is known of a constant: a unit, a number of the compiled packages, or one of the cell.
func (in *inference) constant(obj *types.Const) value {
	if obj.Pkg() == nil { // true, false, iota
		return number
	}
	if !foreign(obj) {
		return in.lookup(obj)
	}
	if c, ok := in.constants[obj.Name()]; ok && (obj.Pkg().Path() != "math") {
		if c.dim == Number && isPi(obj) {
			return turned
		}
		return inUnit(c.quantity)
	}
	if tg := in.written(obj.Type()); tg.kind == tagUnit {
		return inUnit(tg.q)
	}
	switch {
	case isPi(obj):
		return turned
	case obj.Pkg().Path() == "math" && isLimit(obj):
		return fits
	case numeric(obj.Type()):
		return number
	}
	return lost
}

// turned is a number that stands for an angle.
var turned = inUnit(quantity{as: radian})

// isPi tells whether a constant is the number pi.
func isPi(obj *types.Const) bool {
	if v := obj.Val(); v.Kind() == constant.Float {
		f, _ := constant.Float64Val(v)
		return f == math.Pi
	}
	return false
}

// isLimit tells whether a constant is the largest or smallest number of a type, where a search starts.
func isLimit(obj *types.Const) bool {
	switch obj.Name() {
	case "MaxFloat64", "MaxFloat32", "SmallestNonzeroFloat64", "SmallestNonzeroFloat32":
		return true
	}
	return false
}

// funcValue gives what the only result of a function is known to be.
func (in *inference) funcValue(obj *types.Func) value {
	sig := obj.Signature()
	if sig.Results().Len() != 1 {
		return lost
	}
	if tg := in.written(sig.Results().At(0).Type()); tg.kind == tagUnit {
		return inUnit(tg.q)
	}
	if foreign(obj) {
		return lost
	}
	in.note(obj.Origin())
	return in.result(obj.Origin(), 0)
}

// result gives what is known of a result of a function of a cell.
func (in *inference) result(of any, i int) value {
	key := result{of, i}
	if v, ok := in.env[key]; ok {
		return v
	}
	if v, ok := in.kept[key]; ok {
		return v
	}
	if obj, ok := of.(types.Object); ok && !in.defined[obj] {
		return lost
	}
	return nothing
}

// binary gives what is known of x op y.
func (in *inference) binary(e *ast.BinaryExpr) value {
	x, y := in.expr(e.X), in.expr(e.Y)
	switch e.Op {
	case token.EQL, token.NEQ, token.LSS, token.LEQ, token.GTR, token.GEQ:
		if !mayCompare(x, y) && !in.isText(e.X) {
			in.refuseCompare(e, e.X, x, e.Y, y)
		}
		return number
	}
	if in.isText(e) {
		return lost
	}
	return in.operate(e.Op, e.X, x, e.Y, y)
}

// operate gives what is known of x op y for arithmetic.
func (in *inference) operate(op token.Token, ex ast.Expr, x value, ey ast.Expr, y value) value {
	switch op {
	case token.ADD, token.SUB, token.ADD_ASSIGN, token.SUB_ASSIGN:
		v, ok := sum(x, y, op == token.SUB || op == token.SUB_ASSIGN)
		if !ok {
			in.refuseSum(op, ex, x, ey, y)
		}
		in.bareTerm(ex, x, y)
		in.bareTerm(ey, y, x)
		return v
	case token.MUL, token.MUL_ASSIGN:
		if in.isPoint(ey) && (x.plain() || x.kind == zero) {
			return y
		}
		if in.isPoint(ex) && (y.plain() || y.kind == zero) {
			return x
		}
		return product(x, y, 1)
	case token.QUO, token.QUO_ASSIGN:
		return product(x, y, -1)
	}
	return number
}

// isPoint tells whether an expression is the unit constant of a temperature scale: 20*degC is a point on it, while twice
// a temperature is nothing.
func (in *inference) isPoint(e ast.Expr) bool {
	id, ok := ast.Unparen(e).(*ast.Ident)
	if !ok {
		return false
	}
	c, ok := in.info.Uses[id].(*types.Const)
	return ok && foreign(c) && in.constants[c.Name()].dim.Point
}

// isText tells whether an expression is a text.
func (in *inference) isText(e ast.Expr) bool {
	t := in.info.TypeOf(e)
	if t == nil {
		return false
	}
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsString != 0
}

// unary gives what is known of op x. A variable whose address is taken may be written to unseen.
func (in *inference) unary(e *ast.UnaryExpr) value {
	v := in.expr(e.X)
	switch e.Op {
	case token.ADD, token.SUB:
		v.table = false
		return v
	case token.AND:
		if t := in.info.TypeOf(e.X); t != nil && numeric(t) {
			if obj, _ := in.root(e.X); obj != nil {
				if _, ok := in.fixed(obj); !ok && !foreign(obj) {
					in.assign(obj, lost)
				}
			}
		}
		return v
	case token.ARROW:
		return v.element()
	}
	return number
}

// selector gives what is known of x.name: a name of a package, a field, a method value.
func (in *inference) selector(e *ast.SelectorExpr) value {
	sel := in.info.Selections[e]
	if sel == nil {
		return in.object(in.info.Uses[e.Sel])
	}
	x := in.expr(e.X)
	switch obj := sel.Obj().(type) {
	case *types.Var:
		if foreign(obj) && in.written(obj.Type()).kind == tagValue {
			return x.element()
		}
		return in.lookup(obj)
	case *types.Func:
		if sel.Kind() != types.MethodVal {
			return in.funcValue(obj)
		}
		if sig := obj.Signature(); sig.Results().Len() == 1 && in.written(sig.Results().At(0).Type()).kind == tagValue {
			return x.element()
		}
		return in.funcValue(obj)
	}
	return lost
}

// indexed gives what is known of x[i], or of a generic function with its type arguments.
func (in *inference) indexed(e *ast.IndexExpr) value {
	v := in.expr(e.X)
	if tv, ok := in.info.Types[e.Index]; ok && tv.IsType() {
		return v
	}
	in.index(e)
	return v.element()
}

// index passes over an index; the key of a map may be declared with a unit.
func (in *inference) index(e *ast.IndexExpr) {
	v := in.expr(e.Index)
	if t := in.info.TypeOf(e.X); t != nil {
		if m, ok := t.Underlying().(*types.Map); ok {
			if tg := in.written(m.Key()); tg.kind == tagUnit {
				in.door(v, tg.q, place{what: "key of " + in.source(e.X)}, e.Index)
			}
		}
	}
}
