package randcell

import (
	"fmt"
	"strconv"
	"strings"
)

// header writes a condition so that a composite literal in it is not taken for a block.
func (w *writer) header() string {
	s := w.boolExpr(2)
	if strings.Contains(s, "{") {
		return "(" + s + ")"
	}
	return s
}

// block writes n statements in a scope of their own.
func (w *writer) block(n, depth int) string {
	outer := len(w.locals)
	var b strings.Builder
	for range n {
		b.WriteString(w.stmt(depth))
	}
	w.locals = w.locals[:outer]
	return indent(b.String())
}

// repeated writes what runs n times.
func (w *writer) repeated(n int, write func() string) string {
	was := w.times
	w.times *= n
	w.loop++
	s := write()
	w.times, w.loop = was, w.loop-1
	return s
}

// stmt writes a statement for any place, with its line end.
func (w *writer) stmt(depth int) string {
	w.spent += w.times
	if depth <= 0 || w.spent > w.budget {
		return w.simple()
	}
	switch w.IntN(16) {
	case 0, 1:
		w.count("if")
		s := "if " + w.header() + " {\n" + w.block(1+w.IntN(2), depth-1) + "}"
		if w.chance(50) {
			s += " else {\n" + w.block(1, depth-1) + "}"
		}
		return s + "\n"
	case 2:
		w.count("if with a statement")
		x := w.fresh("q")
		return w.scoped(func() string {
			init := w.value(intType, 1)
			w.locals = append(w.locals, local{name: x, typ: intType})
			return "if " + x + " := (" + init + "); " + x + " > " + strconv.Itoa(w.IntN(20)) + " {\n" + w.block(1, depth-1) + "} else {\n" + w.block(1, depth-1) + "}\n"
		})
	case 3, 4:
		if w.loop < 2 {
			return w.forStmt(depth)
		}
	case 6:
		return w.switchStmt(depth)
	case 7:
		w.count("shadowing block")
		t := pick(w, plainTypes)
		name := w.fresh("s")
		if v := w.variable(pick(w, plainTypes), false); v != "" {
			name = strings.Trim(v, nameOpen+nameEnd)
		}
		return w.scoped(func() string {
			x := w.value(t, 1)
			w.locals = append(w.locals, local{name: name, typ: t})
			return "{\n\t" + name + " := " + x + "\n" + "\t" + ref("_ = "+name+"\n") + w.block(2, depth-1) + "}\n"
		})
	case 8, 9:
		return w.define()
	case 10:
		w.count("local closure")
		x := w.fresh("f")
		t := pick(w, []*typ{intFunc, floatFunc})
		s := x + " := " + w.literal(t, 1) + "\n"
		w.locals = append(w.locals, local{name: x, typ: t, fixed: true})
		v := w.fresh("l")
		s += v + " := " + x + "(" + w.value(t.params[0], 1) + ")\n" + ref("_ = "+v+"\n")
		w.locals = append(w.locals, local{name: v, typ: t.results[0]})
		return s
	}
	return w.simple()
}

func (w *writer) scoped(write func() string) string {
	n := len(w.locals)
	s := write()
	w.locals = w.locals[:n]
	return s
}

// define declares a local variable.
func (w *writer) define() string {
	t := pick(w, append([]*typ{intsType, floatsType}, plainTypes...))
	if all := w.structs(w.nameable); len(all) > 0 && w.chance(30) {
		t = pick(w, all)
	}
	x := w.fresh("l")
	var s string
	switch {
	case t == floatType && w.chance(30):
		s = "var " + x + " float64 = " + w.intoFloat(t, 1, "W1 declaration")
	case w.chance(15) && t.kind != structKind && t.kind != sliceKind:
		w.count("zero value")
		s = "var " + x + " " + t.text()
	case w.chance(20):
		s = "var " + x + " = " + w.value(t, 1)
	default:
		s = x + " := " + w.value(t, 2)
	}
	w.locals = append(w.locals, local{name: x, typ: t})
	return s + "\n" + ref("_ = "+x+"\n")
}

// simple writes an assignment, or a print where nothing can be assigned.
func (w *writer) simple() string {
	switch w.IntN(12) {
	case 0, 1:
		if v := w.variable(intType, true); v != "" {
			w.count("op assignment")
			return v + pick(w, []string{" += ", " -= ", " *= ", " |= ", " ^= "}) + w.value(intType, 1) + "\n"
		}
	case 2:
		if v := w.variable(intType, true); v != "" {
			w.count("increment")
			return v + pick(w, []string{"++", "--"}) + "\n"
		}
	case 3:
		if v := w.variable(floatType, true); v != "" {
			w.count("op assignment")
			if w.chance(40) {
				w.count("W1 op assignment")
				return v + pick(w, []string{" += ", " -= ", " *= "}) + float(w.dynamic(intType, 1)) + "\n"
			}
			return v + pick(w, []string{" += ", " -= ", " /= 2.5 + 0*"}) + w.pointed() + "\n"
		}
	case 4:
		if s := w.variable(pick(w, []*typ{intsType, floatsType, wordsType}), true); s != "" && w.loop < 2 {
			for _, t := range []*typ{intsType, floatsType, wordsType} {
				if w.holds(s, t) {
					w.count("append")
					return s + " = append(" + s + ", " + w.intoFloat(t.elem, 1, "W1 append") + ")\n"
				}
			}
		}
	case 5:
		for _, t := range []*typ{intsType, floatsType} {
			if s := w.variable(t, true); s != "" {
				w.count("slice store")
				return w.elementOf(s) + " = " + w.intoFloat(t.elem, 1, "W1 assignment") + "\n"
			}
		}
	case 6:
		for _, t := range []*typ{tallyType, tableType} {
			if m := w.variable(t, true); m != "" {
				w.count("map store")
				if t == tallyType && w.chance(50) {
					return m + "[" + w.value(stringType, 0) + "]++\n"
				}
				return m + "[" + w.value(t.key, 0) + "] = " + w.intoFloat(t.elem, 1, "W1 assignment") + "\n"
			}
		}
	case 7:
		if a, b := w.variable(intType, true), w.variable(intType, true); a != "" && a != b {
			w.count("parallel assignment")
			return a + ", " + b + " = " + b + ", " + w.value(intType, 1) + "\n"
		}
	case 8:
		return w.fieldStore()
	}
	for range 3 {
		t := pick(w, plainTypes)
		if v := w.variable(t, true); v != "" {
			w.count("assignment")
			s := v + " = " + w.intoFloat(t, 2, "W1 assignment") + "\n"
			if t == stringType {
				s += "if len(" + v + ") > 40 {\n\t" + v + " = " + v + "[:10]\n}\n"
			}
			return s
		}
	}
	if w.callee {
		return w.define()
	}
	return w.print()
}

func (w *writer) holds(v string, t *typ) bool {
	for _, c := range w.variables(t, false) {
		if c == v {
			return true
		}
	}
	return false
}

func (w *writer) elementOf(s string) string {
	return s + "[" + pick(w, []string{"0", "len(" + s + ")-1"}) + "]"
}

func (w *writer) fieldStore() string {
	for _, t := range w.structs(w.nameable) {
		v := w.variable(t, true)
		if v == "" {
			continue
		}
		for _, f := range t.fields {
			if f.typ == intType || f.typ == floatType {
				w.count("field store")
				if w.chance(30) && f.typ == intType {
					return v + "." + f.name + "++\n"
				}
				return v + "." + f.name + " = " + w.intoFloat(f.typ, 1, "W1 assignment") + "\n"
			}
		}
	}
	if w.callee {
		return w.define()
	}
	return w.print()
}

// print writes a line of output with a few values.
func (w *writer) print() string {
	w.count("Println")
	var args []string
	for range 1 + w.IntN(3) {
		args = append(args, w.value(pick(w, plainTypes), 2))
	}
	return "fmt.Println(" + strings.Join(args, ", ") + ")\n"
}

// forStmt writes a loop of a few passes.
func (w *writer) forStmt(depth int) string {
	n := 2 + w.IntN(3)
	i := w.fresh("i")
	label, open := "", ""
	if w.chance(20) {
		w.count("labelled loop")
		label = w.fresh("loop")
		open = label + ":\n"
	}
	body := func(with ...local) string {
		return w.scoped(func() string {
			w.locals = append(w.locals, with...)
			return w.repeated(n, func() string {
				s := w.block(1+w.IntN(2), depth-1)
				if label != "" {
					j := w.fresh("j")
					s += "\tfor " + j + " := 0; " + j + " < 3; " + j + "++ {\n\t\tif " + j + " == " + strconv.Itoa(w.IntN(3)) + " {\n\t\t\t" +
						pick(w, []string{"continue ", "break "}) + label + "\n\t\t}\n" + indent(w.block(1, 0)) + "\t}\n"
				} else if w.chance(25) {
					w.count("break or continue")
					s += "\tif " + w.header() + " {\n\t\t" + pick(w, []string{"break", "continue"}) + "\n\t}\n" + w.block(1, 0)
				}
				return s
			})
		})
	}
	switch w.IntN(6) {
	case 0:
		w.count("range over int")
		return open + "for " + i + " := range " + strconv.Itoa(n) + " {\n\t" + ref("_ = "+i+"\n") + body(local{i, intType, true}) + "}\n"
	case 1:
		t := pick(w, []*typ{intsType, floatsType, wordsType})
		w.count("range over slice")
		x := w.fresh("v")
		return open + "for " + i + ", " + x + " := range " + w.literal(t, 1) + " {\n\t" + ref("_, _ = "+i+", "+x+"\n") +
			body(local{i, intType, true}, local{x, t.elem, false}) + "}\n"
	case 2:
		w.count("range over map in key order")
		t := pick(w, []*typ{tallyType, tableType})
		m, x := w.variable(t, false), w.fresh("v")
		if m == "" {
			m = w.literal(t, 0)
		}
		w.pure++ // nothing is put into a map that is ranged over
		defer func() { w.pure-- }()
		key := local{i, t.key, false}
		return open + only("for "+i+", "+x+" := range "+m+" {\n") +
			ref("for _, "+i+" := range keys("+m+") {\n\t"+x+" := "+m+"["+i+"]\n\t_, _ = "+i+", "+x+"\n") + body(key, local{x, t.elem, false}) + "}\n"
	case 3:
		w.count("range over string")
		x := w.fresh("v")
		return open + "for " + i + ", " + x + " := range " + strconv.Quote(pick(w, []string{"abc", "aé", "x"})) + " {\n\t" +
			x + "n := int(" + x + ")\n\t" + ref("_, _ = "+i+", "+x+"n\n") + body(local{i, intType, true}, local{x + "n", intType, false}) + "}\n"
	case 4:
		w.count("while loop")
		return open0(i) + open + fmt.Sprintf("for %s < %d {\n\t%s++\n", i, n, i) + body(local{i, intType, true}) + "}\n"
	}
	w.count("counted loop")
	return open + fmt.Sprintf("for %s := 0; %s < %d; %s++ {\n", i, i, n, i) + body(local{i, intType, true}) + "}\n"
}

func open0(i string) string { return i + " := 0\n" }

func (w *writer) switchStmt(depth int) string {
	var b strings.Builder
	if w.chance(40) {
		w.count("switch without a value")
		b.WriteString("switch {\n")
		for range 2 {
			b.WriteString("case " + w.boolExpr(1) + ":\n" + w.block(1, depth-1))
		}
	} else {
		w.count("switch")
		b.WriteString("switch (" + w.dynamic(intType, 1) + ") % 4 {\n")
		b.WriteString("case 0, 2:\n" + w.block(1, depth-1))
		if w.chance(40) {
			w.count("fallthrough")
			b.WriteString("\tfallthrough\n")
		}
		b.WriteString("case 1:\n" + w.block(1, depth-1))
	}
	b.WriteString("default:\n" + w.block(1, depth-1) + "}\n")
	return b.String()
}
