package unit

import (
	"go/ast"
	"go/constant"
	"go/printer"
	"go/token"
	"math"
	"strings"
)

// place names in messages what a value goes into: "length of Gap", "field Peak of Case".
type place struct{ what string }

// door checks a value that goes where a unit is due. What is untraced passes, and 0, and a bare number or a table of
// bare numbers where the unit has no symbol of its own or data are given.
func (in *inference) door(v value, want quantity, where place, from ast.Expr) {
	switch {
	case v.kind != known:
	case v.dim == want.dim:
		in.angle(v, want, where, from)
	case v.dim == Number && (in.bare[want.dim] || v.table):
	case v.dim == Number:
		in.refuse(from, where.what+" wants "+in.word(want)+"; "+in.bareHint(from, want))
	default:
		in.refuse(from, where.what+" wants "+in.word(want)+"; "+in.source(from)+" is in "+in.word(v.quantity)+in.pointHint(v.dim, want.dim))
	}
}

// angle refuses a bare number of more than a full turn where an angle is due: degrees were meant.
func (in *inference) angle(v value, want quantity, where place, from ast.Expr) {
	if want.as != radian || v.as == radian || !isLiteral(from) || len(in.units[Number]) == 0 {
		return
	}
	tv := in.info.Types[from]
	if tv.Value == nil {
		return
	}
	if x, _ := constant.Float64Val(constant.ToFloat(tv.Value)); math.Abs(x) > 2*math.Pi {
		in.refuse(from, where.what+" wants an angle; "+in.source(from)+" alone is in radian: write "+in.times(from, in.units[Number][0]))
	}
}

// bareHint says what to write in place of a number without unit.
func (in *inference) bareHint(from ast.Expr, want quantity) string {
	s := in.source(from) + " has no unit"
	units := in.units[want.dim]
	if t := in.info.TypeOf(from); len(units) == 0 || t == nil || !numeric(t) {
		return s
	}
	if base := in.base[want.dim]; base != "" && isLiteral(from) && strings.ContainsAny(in.source(from), "eE") {
		return s + ": write " + in.times(from, base) + " if it is in SI" // a power of ten is seldom meant in millimetres
	}
	s += ": write " + in.times(from, units[0])
	if more := units[1:min(len(units), maxUnits)]; len(more) > 0 {
		s += " (or " + strings.Join(more, ", ") + ")"
	}
	return s
}

// maxUnits bounds the units that a hint names.
const maxUnits = 4

// times writes an expression times a unit.
func (in *inference) times(e ast.Expr, unit string) string {
	s := in.source(e)
	if b, ok := ast.Unparen(e).(*ast.BinaryExpr); ok && e == ast.Expr(b) && (b.Op == token.ADD || b.Op == token.SUB) {
		s = "(" + s + ")"
	}
	return s + "*" + unit
}

// pointHint tells temperatures and their differences apart.
func (r *table) pointHint(got, want Dim) string {
	switch {
	case got.Point && got.difference() == want:
		return ", a temperature; a difference is written with " + r.unitFor(want)
	case want.Point && want.difference() == got:
		return ", a difference; a temperature is written with " + r.unitFor(want)
	}
	return ""
}

// unitFor names the constant that a number in a dimension is written with.
func (r *table) unitFor(d Dim) string {
	if u := r.units[d]; len(u) > 0 {
		return u[0]
	}
	return r.text(d)
}

// refuseSum refuses x+y or x-y.
func (in *inference) refuseSum(op token.Token, ex ast.Expr, x value, ey ast.Expr, y value) {
	text, minus := "adds ", op == token.SUB || op == token.SUB_ASSIGN
	if minus {
		text = "subtracts "
	}
	sx, sy := in.source(ex), in.source(ey)
	if x.dim.Point && y.dim.Point {
		in.refuseSpan(ex.Pos(), ey.End(), sx+" and "+sy+" are both temperatures, whose sum means nothing; a difference is written with "+in.unitFor(x.dim.difference()))
		return
	}
	first, second := x, y
	link := " and "
	if minus {
		first, second, link = y, x, " from "
	}
	in.refuseSpan(ex.Pos(), ey.End(), sx+" "+op.String()+" "+sy+" "+text+in.word(first.quantity)+link+in.word(second.quantity)+sumHint(x.dim, y.dim))
}

// bareTerm refuses a bare literal as a term beside a quantity that is written with a unit: 5*mm + 1. Temperatures are
// left out, for empirical formulas are written in their numbers, and so is a quantity without a unit of its own.
func (in *inference) bareTerm(e ast.Expr, v, other value) {
	bare := isLiteral(e) && v.kind == known && v.dim == Number
	if !bare || other.kind != known || other.dim == Number || other.dim.Point || in.bare[other.dim] || len(in.units[other.dim]) == 0 {
		return
	}
	if in.text(other.dim) == "K" {
		return
	}
	in.refuse(e, "a term beside "+in.word(other.quantity)+"; "+in.bareHint(e, other.quantity))
}

// sumHint tells temperatures and their differences apart in a sum.
func sumHint(x, y Dim) string {
	if x.Point != y.Point && x.difference() == y.difference() {
		return "; a temperature less a difference is a temperature, not the reverse"
	}
	return ""
}

// refuseCompare refuses to compare x and y.
func (in *inference) refuseCompare(at, ex ast.Expr, x value, ey ast.Expr, y value) {
	text := in.source(at) + " compares " + in.word(x.quantity) + " with " + in.word(y.quantity)
	if x.dim.Point != y.dim.Point && x.dim.difference() == y.dim.difference() {
		point, step := x.dim, y.dim
		if y.dim.Point {
			point, step = y.dim, x.dim
		}
		text += "; " + in.unitFor(point) + " is a temperature, " + in.unitFor(step) + " a difference"
	}
	in.refuse(at, text)
}

// refuse notes a refusal at an expression, in the last pass.
func (in *inference) refuse(e ast.Expr, text string) { in.refuseSpan(e.Pos(), e.End(), text) }

func (in *inference) refuseSpan(pos, end token.Pos, text string) {
	if in.final {
		in.refused = append(in.refused, Diagnostic{pos, end, text})
	}
}

// source gives an expression as it was typed.
func (in *inference) source(e ast.Expr) string {
	if in.quote != nil {
		if s := in.quote(e.Pos(), e.End()); s != "" && !strings.Contains(s, "\n") {
			return s
		}
	}
	var b strings.Builder
	if err := (&printer.Config{Mode: printer.RawFormat}).Fprint(&b, token.NewFileSet(), e); err != nil {
		return "this"
	}
	s, _, more := strings.Cut(b.String(), "\n")
	if more {
		s += " ..."
	}
	return s
}

// isLiteral tells whether an expression is typed in numbers alone.
func isLiteral(e ast.Expr) bool {
	switch e := e.(type) {
	case *ast.BasicLit:
		return e.Kind == token.INT || e.Kind == token.FLOAT
	case *ast.ParenExpr:
		return isLiteral(e.X)
	case *ast.UnaryExpr:
		return isLiteral(e.X)
	case *ast.BinaryExpr:
		return isLiteral(e.X) && isLiteral(e.Y)
	}
	return false
}
