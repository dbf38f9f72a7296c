package cell

import (
	"fmt"
	"go/ast"
	"go/types"
)

// abilities writes how the methods of a type are found that compiled code asks for.
func (l *lowering) abilities(o *types.TypeName, name string) {
	n, ok := o.Type().(*types.Named)
	if !ok || o.IsAlias() || n.TypeParams().Len() > 0 || l.s.plain {
		return
	}
	zero := l.zero(n)
	if types.IsInterface(n) {
		return
	}
	if _, basic := n.Underlying().(*types.Basic); !basic && zero == "nil" {
		zero = "interface{}(nil)"
	}
	l.able(n, name, zero)
	l.able(types.NewPointer(n), "*"+name, "(*"+name+")(nil)")
}

func (l *lowering) able(t types.Type, name, zero string) {
	text := ""
	for _, m := range []string{"String", "Error"} {
		if has(t, m, "string") {
			text = m
		}
	}
	if text == "" {
		return
	}
	k := len(l.s.ableIndex)
	l.s.ableIndex[abilityOf(t)] = k
	write := func(helper, params, result, call string) {
		f := l.name("f")
		l.prolog = append(l.prolog, fmt.Sprintf("%s := func(x interface{}%s) %s { return x.(%s).%s }", f, params, result, name, call),
			fmt.Sprintf("%s(%d, %s, %s)", l.nb(helper), k, zero, f))
	}
	write("Text", "", "string", text+"()")
	if has(t, "Unwrap", "error") {
		write("Unwrap", "", "error", "Unwrap()")
	}
	if m, _, _ := types.LookupFieldOrMethod(t, false, nil, "Is"); m != nil && types.TypeString(m.Type(), nil) == "func(target error) bool" {
		write("Is", ", e error", "bool", "Is(e)")
	}
}

// fault turns a value of a cell's type into an error.
func (l *lowering) fault(from types.Type, text string) string {
	t := l.name("i")
	k, ok := l.s.ableIndex[abilityOf(from)]
	switch {
	case ok && !types.IsInterface(from):
		l.before("var %s error = %s(%d, %s)", t, l.nb("Fault"), k, text)
	default:
		l.before("var %s error = %s", t, text)
	}
	l.moved++
	return t
}

// asserted gives the text of what is asserted to be of a type: an error of a cell's type comes with its methods, which
// are taken off.
func (l *lowering) asserted(x ast.Expr, to types.Type, text string) string {
	if !l.s.plain && isCellType(to) && !types.IsInterface(to) && isError(l.info.TypeOf(x)) {
		return l.nb("Bare") + "(" + text + ")"
	}
	return text
}

func isError(t types.Type) bool {
	return types.Identical(t, types.Universe.Lookup("error").Type())
}
