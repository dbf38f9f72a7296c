package cell

import (
	"fmt"
	"go/ast"
	"go/types"
	"strings"
)

// shown tells how a value of the cell is written: its static type, which alone knows the names as typed, and its unit.
type shown struct {
	typ  types.Type
	unit string
	top  bool   // the value of an expression statement, not of a call of Show
	text string // the expression as typed
}

func (s *Session) addMark(m mark) int {
	s.marks = append(s.marks, m)
	return len(s.marks) - 1
}

// showValue writes the call that shows a value; top tells that it is that of an expression statement of the cell.
func (l *lowering) showValue(x ast.Expr, top bool) {
	if t, ok := l.info.TypeOf(x).(*types.Tuple); ok {
		names := l.tuple(x)
		l.flush()
		for i := 0; i < t.Len(); i++ {
			l.showText(t.At(i).Type(), "?", names[i], fmt.Sprintf("%s, result %d", l.asTyped(x), i+1), top)
		}
		return
	}
	t := l.info.TypeOf(x)
	text := l.operand(x)
	l.flush()
	l.showText(t, l.unit(x), text, l.asTyped(x), top)
}

// asTyped is an expression as it stands in the cell, on one line.
func (l *lowering) asTyped(x ast.Expr) string {
	return strings.Join(strings.Fields(l.src.quote(x.Pos(), x.End())), " ")
}

func (l *lowering) showText(t types.Type, unit, text, typed string, top bool) {
	l.s.shows = append(l.s.shows, shown{typ: t, unit: strings.TrimSuffix(unit, "#"), top: top, text: typed})
	k := len(l.s.shows) - 1
	if isCellType(t) && !types.IsInterface(t) {
		if has(t, "MIMEBundle", "map[string]any") {
			l.line("%s(%d, %s.%s())", l.nb("ShowBundle"), k, text, l.methodOf(t, "MIMEBundle"))
			return
		}
		for _, m := range []string{"String", "Error"} {
			if has(t, m, "string") {
				l.line("%s(%d, %s.%s())", l.nb("ShowText"), k, text, l.methodOf(t, m))
				return
			}
		}
	}
	if text == "nil" {
		text = "interface{}(nil)"
	}
	l.line("%s(%d, %s)", l.nb("Show"), k, text)
}

// has tells whether values of a type have a method without parameters that gives the named result.
func has(t types.Type, method, result string) bool {
	o, _, _ := types.LookupFieldOrMethod(t, false, nil, method)
	f, ok := o.(*types.Func)
	if !ok {
		return false
	}
	sig := f.Type().(*types.Signature)
	return sig.Params().Len() == 0 && sig.Results().Len() == 1 && types.TypeString(types.Unalias(sig.Results().At(0).Type()), nil) == result
}

// help writes the call that shows the help of a function named without calling it.
func (l *lowering) help(x ast.Expr) bool {
	var o types.Object
	name := ""
	switch f := ast.Unparen(x).(type) {
	case *ast.Ident:
		o, name = l.info.Uses[f], f.Name
	case *ast.SelectorExpr:
		o = l.info.Uses[f.Sel]
		if l.info.Selections[f] != nil {
			name = l.src.quote(f.Pos(), f.End())
		} else if o != nil && o.Pkg() != nil {
			name = o.Pkg().Name() + "." + f.Sel.Name
		}
	}
	if _, ok := o.(*types.Func); !ok {
		return false
	}
	l.showHelp(name)
	return true
}

// showHelp writes the call that shows the help on a name.
func (l *lowering) showHelp(name string) {
	if !l.s.plain {
		l.line("%s(%q)", l.nb("Help"), name)
		return
	}
	if data, ok := l.s.describeText(name, l.r.after); ok {
		text, _ := data["text/plain"].(string)
		l.line("%s(%q)", l.nb("Write"), text+"\n")
	}
}

// methodOf gives the lowered name of a method of a type.
func (l *lowering) methodOf(t types.Type, name string) string {
	m, _, _ := types.LookupFieldOrMethod(t, true, nil, name)
	return l.methodName(m)
}
