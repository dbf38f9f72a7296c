package cell

import (
	"fmt"
	"go/constant"
	"go/types"
	"math"
	"strconv"
	"strings"
)

// typ writes a type.
func (l *lowering) typ(t types.Type) string {
	switch t := t.(type) {
	case *types.Alias:
		if n, ok := types.Unalias(t).(*types.Named); ok && n.Obj().Pkg() != nil && !l.known(n.Obj()) && foreign(t.Obj()) {
			return l.pkg(t.Obj().Pkg().Path()) + "." + t.Obj().Name()
		}
		return l.typ(types.Unalias(t))
	case *types.Basic:
		switch t.Kind() {
		case types.UntypedBool, types.UntypedInt, types.UntypedFloat, types.UntypedComplex, types.UntypedString, types.UntypedRune:
			return types.Default(t).String()
		}
		return types.Typ[t.Kind()].Name()
	case *types.Named:
		return l.named(t)
	case *types.TypeParam:
		return paramName(t)
	case *types.Pointer:
		return "*" + l.typ(t.Elem())
	case *types.Slice:
		return "[]" + l.typ(t.Elem())
	case *types.Array:
		return fmt.Sprintf("[%d]%s", t.Len(), l.typ(t.Elem()))
	case *types.Map:
		return "map[" + l.typ(t.Key()) + "]" + l.typ(t.Elem())
	case *types.Signature:
		return "func" + l.signature(t, nil)
	case *types.Struct:
		return l.structText(t, "")
	case *types.Interface:
		return l.interfaceText(t)
	case *types.Tuple:
		return l.results(t, nil)
	}
	panic(fmt.Sprintf("type %s has no lowered form", t))
}

// known tells whether the interpreter has the package of a type.
func (l *lowering) known(o *types.TypeName) bool {
	return !foreign(o) || l.s.machine.has(o.Pkg().Path(), o.Name())
}

func (l *lowering) named(t *types.Named) string {
	o := t.Obj()
	text := ""
	switch {
	case o.Pkg() == nil:
		return o.Name() // error, comparable
	case foreign(o):
		if !l.known(o) {
			if a := l.s.base.aliasOf(t); a != nil {
				return l.pkg(a.Pkg().Path()) + "." + a.Name()
			}
		}
		text = l.pkg(o.Pkg().Path()) + "." + o.Name()
	default:
		text = l.typeName(t.Origin().Obj())
	}
	if args := t.TypeArgs(); args.Len() > 0 {
		var list []string
		for i := 0; i < args.Len(); i++ {
			list = append(list, l.typ(args.At(i)))
		}
		text += "[" + strings.Join(list, ", ") + "]"
	}
	return text
}

// aliasOf finds the name under which the open package shows a type of another package.
func (b *base) aliasOf(t *types.Named) *types.TypeName {
	if b.open == nil {
		return nil
	}
	for _, n := range b.open.Scope().Names() {
		if o, ok := b.open.Scope().Lookup(n).(*types.TypeName); ok && o.IsAlias() && types.Identical(o.Type(), t) {
			return o
		}
	}
	return nil
}

// typeName gives the lowered name of a type of a cell; types declared within functions move to the top.
func (l *lowering) typeName(o *types.TypeName) string {
	if n := l.s.typeNames[o]; n != "" {
		return n
	}
	name := l.s.version(o.Name(), true)
	l.s.typeNames[o] = name
	l.typeDecl(o, name)
	return name
}

// typeDecl writes the declaration of a type of a cell.
func (l *lowering) typeDecl(o *types.TypeName, name string) {
	if o.IsAlias() {
		return
	}
	n := o.Type().(*types.Named)
	params := ""
	if tp := n.TypeParams(); tp.Len() > 0 {
		params = l.typeParams(tp)
	}
	under := ""
	if st, ok := n.Underlying().(*types.Struct); ok {
		under = l.structText(st, o.Name())
	} else {
		under = l.typ(n.Underlying())
	}
	l.types = append(l.types, "type "+name+params+" "+under)
}

func (l *lowering) typeParams(tp *types.TypeParamList) string {
	var list []string
	for i := 0; i < tp.Len(); i++ {
		list = append(list, paramName(tp.At(i))+" "+l.constraint(tp.At(i).Constraint()))
	}
	return "[" + strings.Join(list, ", ") + "]"
}

// paramName gives the lowered name of a type parameter, which no type has: the interpreter mixes the two up.
func paramName(p *types.TypeParam) string { return p.Obj().Name() + "__p" }

func (l *lowering) constraint(t types.Type) string {
	if i, ok := t.(*types.Interface); ok && i.IsImplicit() && i.NumEmbeddeds() == 1 {
		return l.union(i.EmbeddedType(0))
	}
	return l.typ(t)
}

func (l *lowering) union(t types.Type) string {
	u, ok := t.(*types.Union)
	if !ok {
		return l.typ(t)
	}
	var list []string
	for i := 0; i < u.Len(); i++ {
		text := l.typ(u.Term(i).Type())
		if u.Term(i).Tilde() {
			text = "~" + text
		}
		list = append(list, text)
	}
	return strings.Join(list, " | ")
}

// structText writes a struct. The fields of a named type carry its name in their tags, so that two types with equal
// fields stay different ones at run time, and compiled code can tell the names as typed.
func (l *lowering) structText(t *types.Struct, owner string) string {
	var b strings.Builder
	b.WriteString("struct {")
	for i := 0; i < t.NumFields(); i++ {
		f := t.Field(i)
		if i > 0 {
			b.WriteString(";")
		}
		b.WriteString(" ")
		if !f.Embedded() {
			b.WriteString(l.fieldName(f) + " ")
		}
		b.WriteString(l.typ(f.Type()))
		if owner != "" {
			b.WriteString(" `cell:\"" + owner + "." + f.Name() + "\"`")
		}
	}
	b.WriteString(" }")
	return b.String()
}

// fieldName gives the lowered name of a field; an embedded type of a cell is called by its lowered name.
func (l *lowering) fieldName(f *types.Var) string {
	if f.Embedded() {
		if n, ok := types.Unalias(deref(f.Type())).(*types.Named); ok && !foreign(n.Obj()) && n.Obj().Pkg() != nil {
			return l.typeName(n.Origin().Obj())
		}
	}
	if f.Name() == "_" {
		return "_"
	}
	return f.Name()
}

func (l *lowering) interfaceText(t *types.Interface) string {
	if t.NumMethods() == 0 && t.NumEmbeddeds() == 0 {
		return "interface{}"
	}
	var list []string
	for i := 0; i < t.NumEmbeddeds(); i++ {
		list = append(list, l.union(t.EmbeddedType(i)))
	}
	for i := 0; i < t.NumExplicitMethods(); i++ {
		m := t.ExplicitMethod(i)
		list = append(list, m.Name()+l.signature(m.Type().(*types.Signature), nil))
	}
	return "interface { " + strings.Join(list, "; ") + " }"
}

// signature writes parameters and results; name gives the names of parameters, nil leaves them out.
func (l *lowering) signature(t *types.Signature, name func(v *types.Var) string) string {
	return "(" + l.params(t, name) + ")" + l.results(t.Results(), name)
}

func (l *lowering) params(t *types.Signature, name func(v *types.Var) string) string {
	var list []string
	for i := 0; i < t.Params().Len(); i++ {
		p := t.Params().At(i)
		text := ""
		if t.Variadic() && i == t.Params().Len()-1 {
			text = "..." + l.typ(types.Unalias(p.Type()).(*types.Slice).Elem())
		} else {
			text = l.typ(p.Type())
		}
		if name != nil {
			text = name(p) + " " + text
		}
		list = append(list, text)
	}
	return strings.Join(list, ", ")
}

func (l *lowering) results(t *types.Tuple, name func(v *types.Var) string) string {
	switch t.Len() {
	case 0:
		return ""
	case 1:
		if name == nil || t.At(0).Name() == "" {
			return " " + l.typ(t.At(0).Type())
		}
	}
	var list []string
	for i := 0; i < t.Len(); i++ {
		text := l.typ(t.At(i).Type())
		if name != nil && t.At(i).Name() != "" {
			text = name(t.At(i)) + " " + text
		}
		list = append(list, text)
	}
	return " (" + strings.Join(list, ", ") + ")"
}

// literal writes a constant as a literal of its type.
func (l *lowering) literal(v constant.Value, t types.Type) string {
	if p, ok := types.Unalias(t).(*types.TypeParam); ok {
		text := v.ExactString()
		if v.Kind() == constant.Float {
			text = floatText(v, false)
		}
		return paramName(p) + "(" + text + ")"
	}
	under, ok := t.Underlying().(*types.Basic)
	if !ok { // a type parameter or an interface
		if types.IsInterface(t) {
			return l.literal(v, defaultOf(v))
		}
		return v.ExactString()
	}
	if under.Info()&types.IsUntyped != 0 {
		return l.literal(v, types.Default(under))
	}
	name := l.typ(t)
	switch {
	case under.Info()&types.IsBoolean != 0:
		text := strconv.FormatBool(constant.BoolVal(v))
		if name == "bool" {
			return text
		}
		return name + "(" + text + ")"
	case under.Info()&types.IsString != 0:
		text := strconv.Quote(constant.StringVal(v))
		if name == "string" {
			return text
		}
		return name + "(" + text + ")"
	case under.Info()&types.IsInteger != 0:
		return name + "(" + constant.ToInt(v).ExactString() + ")"
	case under.Info()&types.IsFloat != 0:
		return name + "(" + floatText(constant.ToFloat(v), under.Kind() == types.Float32) + ")"
	case under.Info()&types.IsComplex != 0:
		v = constant.ToComplex(v)
		return name + "(complex(float64(" + floatText(constant.Real(v), false) + "), float64(" + floatText(constant.Imag(v), false) + ")))"
	}
	return v.ExactString()
}

func floatText(v constant.Value, single bool) string {
	x, _ := constant.Float64Val(v)
	bits := 64
	if single {
		f, _ := constant.Float32Val(v)
		x, bits = float64(f), 32
	}
	text := strconv.FormatFloat(x, 'g', -1, bits)
	if x == math.Trunc(x) && !strings.ContainsAny(text, ".e") {
		text += ".0"
	}
	return text
}

func defaultOf(v constant.Value) types.Type {
	switch v.Kind() {
	case constant.Bool:
		return types.Typ[types.Bool]
	case constant.String:
		return types.Typ[types.String]
	case constant.Int:
		return types.Typ[types.Int]
	case constant.Complex:
		return types.Typ[types.Complex128]
	}
	return types.Typ[types.Float64]
}

// zero writes the zero value of a type.
func (l *lowering) zero(t types.Type) string {
	switch u := t.Underlying().(type) {
	case *types.Basic:
		switch {
		case u.Info()&types.IsBoolean != 0:
			return l.literal(constant.MakeBool(false), t)
		case u.Info()&types.IsString != 0:
			return l.literal(constant.MakeString(""), t)
		case u.Info()&types.IsNumeric != 0:
			return l.literal(constant.MakeInt64(0), t)
		}
	case *types.Struct, *types.Array:
		return l.typ(t) + "{}"
	}
	return "nil"
}
