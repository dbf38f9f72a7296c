package unit

import (
	"go/ast"
	"go/constant"
	"go/types"
	"math"
)

// rule gives what is known of the results of a call of a function that the package knows.
type rule func(in *inference, e *ast.CallExpr) []value

// rules are the functions of math and its like by "package.Name", and the powers that the table lists.
func rules(powers map[string]float64) map[string]rule {
	known := map[string]rule{}
	set := func(r rule, names ...string) {
		for _, n := range names {
			known[n] = r
		}
	}
	set(keep, "math.Abs", "math.Floor", "math.Ceil", "math.Round", "math.RoundToEven", "math.Trunc", "math.Copysign",
		"math.Frexp", "math.Ldexp", "cmplx.Abs", "cmplx.Conj", "cmplx.Rect")
	set(both, "math.Modf")
	set(alikeRule, "math.Max", "math.Min", "math.Hypot", "math.Dim", "math.Mod", "math.Remainder")
	set(pure, "math.Sin", "math.Cos", "math.Tan", "math.Asin", "math.Acos", "math.Atan", "math.Sinh", "math.Cosh",
		"math.Tanh", "math.Asinh", "math.Acosh", "math.Atanh", "math.Exp", "math.Exp2", "math.Expm1", "math.Erf",
		"math.Erfc", "math.Gamma", "math.J0", "math.J1", "math.Y0", "math.Y1", "cmplx.Exp", "cmplx.Sin", "cmplx.Cos",
		"cmplx.Tan", "cmplx.Sinh", "cmplx.Cosh", "cmplx.Tanh")
	set(logarithm, "math.Log", "math.Log2", "math.Log10", "math.Log1p", "cmplx.Log", "cmplx.Log10")
	set(quotient, "math.Atan2")
	set(phase, "cmplx.Phase")
	set(polar, "cmplx.Polar")
	set(sincos, "math.Sincos")
	set(raise, "math.Pow", "cmplx.Pow")
	set(endless, "math.Inf", "math.NaN", "cmplx.Inf", "cmplx.NaN")
	set(chance, "rand.Float64", "rand.Float32", "rand.NormFloat64", "rand.ExpFloat64")
	set(fixedPower(0.5), "math.Sqrt", "cmplx.Sqrt")
	set(fixedPower(1.0/3), "math.Cbrt")
	for name, p := range powers {
		known[name] = fixedPower(p)
	}
	return known
}

// operands gives what is known of the arguments.
func (in *inference) operands(e *ast.CallExpr) []value {
	out := make([]value, 0, 2)
	for _, a := range e.Args {
		out = append(out, in.expr(a))
	}
	for len(out) < 2 {
		out = append(out, lost)
	}
	return out
}

// keep: the result is in the unit of the first argument.
func keep(in *inference, e *ast.CallExpr) []value { return []value{in.operands(e)[0], number} }

// both: two results are.
func both(in *inference, e *ast.CallExpr) []value {
	v := in.operands(e)[0]
	return []value{v, v}
}

// alikeRule: all arguments and the result are in one unit.
func alikeRule(in *inference, e *ast.CallExpr) []value {
	return []value{in.together(e, in.operands(e))}
}

// together gives the one unit of several arguments, refusing those that differ.
func (in *inference) together(e *ast.CallExpr, args []value) value {
	v := nothing
	for i, a := range e.Args {
		if i >= len(args) {
			break
		}
		if !mayCompare(v, args[i]) {
			in.refuseCompare(e, e.Args[0], v, a, args[i])
			return lost
		}
		if v = join(v, args[i]).element(); v.kind == untraced {
			return lost
		}
	}
	return v
}

// pure: the argument and the result are plain numbers.
func pure(in *inference, e *ast.CallExpr) []value {
	args := in.operands(e)
	for i, a := range e.Args {
		if args[i].dimensional() {
			in.refuse(a, in.source(e.Fun)+" wants a plain number; "+in.source(a)+" is in "+
				in.word(args[i].quantity)+": divide it by a quantity in "+in.word(args[i].quantity))
		}
	}
	return []value{number}
}

// sincos is pure with two results.
func sincos(in *inference, e *ast.CallExpr) []value { return append(pure(in, e), number) }

// logarithm: of a plain number a plain number; of a quantity, as empirical formulas have it, untraced.
func logarithm(in *inference, e *ast.CallExpr) []value {
	if in.operands(e)[0].plain() {
		return []value{number}
	}
	return []value{lost}
}

// quotient: two arguments in one unit give a plain number.
func quotient(in *inference, e *ast.CallExpr) []value {
	in.together(e, in.operands(e))
	return []value{turned}
}

// phase: a plain number of anything.
func phase(in *inference, e *ast.CallExpr) []value {
	in.operands(e)
	return []value{turned}
}

// polar: magnitude in the unit of the argument, and an angle.
func polar(in *inference, e *ast.CallExpr) []value { return []value{in.operands(e)[0], turned} }

// endless: what is beyond all numbers fits every unit.
func endless(in *inference, e *ast.CallExpr) []value {
	in.operands(e)
	return []value{fits}
}

// chance: random numbers.
func chance(in *inference, e *ast.CallExpr) []value { return []value{number} }

// fixedPower: the argument to a power.
func fixedPower(p float64) rule {
	return func(in *inference, e *ast.CallExpr) []value { return []value{power(in.operands(e)[0].element(), p)} }
}

// raise: a quantity has a power with a constant exponent only.
func raise(in *inference, e *ast.CallExpr) []value {
	args := in.operands(e)
	if len(e.Args) != 2 {
		return []value{lost}
	}
	if args[1].dimensional() {
		in.refuse(e.Args[1], "the exponent of "+in.source(e.Fun)+" is a plain number; "+in.source(e.Args[1])+" is in "+in.word(args[1].quantity))
		return []value{lost}
	}
	if !args[0].dimensional() {
		return []value{args[0]}
	}
	tv := in.info.Types[e.Args[1]]
	if tv.Value == nil {
		return []value{lost}
	}
	p, _ := constant.Float64Val(constant.ToFloat(tv.Value))
	if math.IsInf(p, 0) {
		return []value{lost}
	}
	return []value{power(args[0].element(), p)}
}

// builtin gives what is known of a call of a built-in function.
func (in *inference) builtin(e *ast.CallExpr) value {
	id, ok := ast.Unparen(e.Fun).(*ast.Ident)
	if !ok {
		return lost
	}
	switch id.Name {
	case "make", "new":
		return in.made(e, id.Name)
	case "append":
		return in.appended(e)
	case "copy":
		args := in.operands(e)
		in.store(e.Args[0], args[1], e.Args[1])
		return number
	case "min", "max", "complex":
		return in.together(e, in.operands(e))
	case "real", "imag":
		return in.operands(e)[0]
	default:
		in.operands(e)
		return number
	}
}

// made gives what is known of a new container: its elements are 0.
func (in *inference) made(e *ast.CallExpr, name string) value {
	for _, a := range e.Args[1:] {
		in.expr(a)
	}
	t := in.info.TypeOf(e.Args[0])
	if tg := in.written(t); tg.kind == tagUnit {
		return inUnit(tg.q)
	}
	if name == "new" {
		return initial(t)
	}
	if s, ok := t.Underlying().(*types.Slice); ok && len(e.Args) > 1 {
		return initial(s.Elem())
	}
	return nothing
}

// appended gives what is known of append(list, elements...).
func (in *inference) appended(e *ast.CallExpr) value {
	v := in.expr(e.Args[0])
	declared := in.listed(e.Args[0])
	for _, a := range e.Args[1:] {
		x := in.expr(a)
		if declared {
			in.door(x, v.quantity, place{what: "element of " + in.source(e.Args[0])}, a)
			continue
		}
		x.table = x.plain()
		v = join(v, x)
	}
	return v
}

// listed tells whether a list was declared with a unit.
func (in *inference) listed(e ast.Expr) bool {
	obj, _ := in.root(e)
	if obj == nil {
		return false
	}
	v, ok := in.fixed(obj)
	return ok && v.kind == known
}
