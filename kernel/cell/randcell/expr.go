package randcell

import (
	"strconv"
	"strings"
)

// value writes an expression of a type; depth bounds its size.
func (w *writer) value(t *typ, depth int) string {
	s, _ := w.expr(t, depth)
	return s
}

// expr writes an expression and tells whether it is constant.
func (w *writer) expr(t *typ, depth int) (string, bool) {
	if depth > 0 && w.chance(22) {
		if s := w.call(t, depth-1); s != "" {
			return s, false
		}
	}
	switch t.kind {
	case intKind:
		return w.intExpr(depth)
	case floatKind:
		return w.floatExpr(depth)
	case stringKind:
		return w.stringExpr(depth)
	case boolKind:
		return w.boolExpr(depth), false
	}
	if v := w.variable(t, false); v != "" && w.chance(30) && t.kind != sliceKind && t.kind != mapKind {
		return v, false
	}
	return w.literal(t, depth), false
}

// dynamic writes an expression that is no constant.
func (w *writer) dynamic(t *typ, depth int) string {
	for range 4 {
		if s, c := w.expr(t, depth); !c {
			return s
		}
	}
	if v := w.variable(t, false); v != "" {
		return v
	}
	lit := w.value(t, 0)
	return "[]" + t.text() + "{" + lit + "}[0]"
}

func (w *writer) leaf(t *typ, lit func() string) (string, bool) {
	if w.chance(75) {
		if v := w.variable(t, false); v != "" {
			return v, false
		}
	}
	if t.kind == intKind && w.chance(30) {
		if k := w.constant(); k != "" {
			return k, true
		}
	}
	return lit(), true
}

func (w *writer) constant() string {
	if w.sealed > 0 {
		return ""
	}
	var all []string
	for _, e := range w.sorted() {
		if e.role == constant && !w.hidden(e.name) {
			all = append(all, e.name)
		}
	}
	if len(all) == 0 {
		return ""
	}
	return w.mark(pick(w, all))
}

func (w *writer) intExpr(depth int) (string, bool) {
	if depth <= 0 {
		return w.leaf(intType, func() string { return strconv.Itoa(w.IntN(20)) })
	}
	switch w.IntN(14) {
	case 0, 1, 2:
		a, ca := w.intExpr(depth - 1)
		b, cb := w.intExpr(depth - 1)
		return "(" + a + " " + pick(w, []string{"+", "-", "*"}) + " " + b + ")", ca && cb
	case 3:
		w.count("int division")
		return "(" + w.dynamic(intType, depth-1) + pick(w, []string{"/", "%"}) + strconv.Itoa(2+w.IntN(9)) + ")", false
	case 4:
		w.count("bit operation")
		a, ca := w.intExpr(depth - 1)
		b, cb := w.intExpr(depth - 1)
		return "(" + a + " " + pick(w, []string{"&", "|", "^", "&^"}) + " " + b + ")", ca && cb
	case 5:
		w.count("shift")
		return "(" + w.dynamic(intType, depth-1) + pick(w, []string{"<<", ">>"}) + strconv.Itoa(1+w.IntN(4)) + ")", false
	case 6:
		w.count("len")
		return "len(" + w.dynamic(pick(w, []*typ{intsType, floatsType, wordsType, stringType, tallyType}), depth-1) + ")", false
	case 7:
		if s := w.element(intsType); s != "" {
			return s, false
		}
	case 8:
		if m := w.variable(tallyType, false); m != "" {
			w.count("map read")
			return m + "[" + w.value(stringType, 0) + "]", false
		}
	case 9:
		w.count("min max")
		return pick(w, []string{"min", "max"}) + "(" + w.dynamic(intType, depth-1) + ", " + w.value(intType, depth-1) + ")", false
	case 10:
		w.count("strings call")
		s := w.value(stringType, depth-1)
		return pick(w, []string{`strings.Count(` + s + `, "a")`, `strings.Index(` + s + `, "b")`, `strings.LastIndex(` + s + `, "c")`}), false
	case 11:
		w.count("conversion of whole numbers")
		return "int(" + pick(w, []string{"uint8", "int8", "int16", "uint16", "int32"}) + "(" + w.dynamic(intType, depth-1) + "))", false
	case 12:
		w.count("function literal called")
		p := w.fresh("p")
		body := w.inner([]local{{name: p, typ: intType}}, func() string { return w.value(intType, depth-1) })
		return "func(" + p + " int) int { return " + p + " + " + body + " }(" + w.value(intType, depth-1) + ")", false
	}
	return w.leaf(intType, func() string { return strconv.Itoa(w.IntN(20)) })
}

// inner writes with more locals in sight and no output.
func (w *writer) inner(more []local, write func() string) string {
	n, callee := len(w.locals), w.callee
	w.locals = append(w.locals, more...)
	w.callee = true
	s := write()
	w.locals, w.callee = w.locals[:n], callee
	return s
}

// shadowed tells whether a later local has the name of local i.
func (w *writer) shadowed(i int) bool {
	for _, l := range w.locals[i+1:] {
		if l.name == w.locals[i].name {
			return true
		}
	}
	return false
}

// element reads a slice, which is never empty.
func (w *writer) element(t *typ) string {
	s := w.variable(t, false)
	if s == "" {
		return ""
	}
	w.count("slice element")
	index := pick(w, []string{"0", "len(" + s + ")-1", "len(" + s + ")/2"})
	for i, l := range w.locals {
		if l.fixed && l.typ == intType && w.chance(50) && !w.shadowed(i) {
			index = l.name + "%len(" + s + ")"
		}
	}
	return s + "[" + index + "]"
}

func (w *writer) pointed() string {
	return pick(w, []string{"0.5", "2.5", "1e2", "0.125", "3.0", "7.25", "1.5e-1", "10.0", "0.1", "0.7"})
}

func product(a string, ca bool, b string, cb bool) string {
	if ca && cb {
		return "(" + a + " * " + b + ")"
	}
	return float("(" + a + " * " + b + ")") // a product is rounded before anything is added to it
}

func (w *writer) floatExpr(depth int) (string, bool) {
	if depth <= 0 {
		return w.leaf(floatType, w.pointed)
	}
	switch w.IntN(13) {
	case 0, 1:
		a, ca := w.floatExpr(depth - 1)
		b, cb := w.floatExpr(depth - 1)
		if ca && cb {
			b, cb = w.dynamic(floatType, depth-1), false
		}
		if w.chance(35) {
			return product(a, ca, b, cb), false
		}
		return "(" + a + pick(w, []string{" + ", " - "}) + b + ")", false
	case 2:
		return "(" + w.dynamic(floatType, depth-1) + " / " + w.pointed() + ")", false
	case 3, 4:
		return w.widened(depth)
	case 5, 6:
		w.count("math call")
		x := w.dynamic(floatType, depth-1)
		if w.chance(30) {
			w.count("W1 argument")
			x = float(w.dynamic(intType, depth-1))
		}
		return pick(w, []string{"math.Sqrt(math.Abs(" + x + "))", "math.Floor(" + x + ")", "math.Mod(" + x + ", 7.5)", "math.Sin(" + x + ")",
			"math.Atan2(" + x + ", 2)", "math.Max(" + x + ", 1.5)", "math.Round(" + x + ")", "math.Hypot(" + x + ", 3)"}), false
	case 7:
		if s := w.element(floatsType); s != "" {
			return s, false
		}
	case 8:
		if m := w.variable(tableType, false); m != "" {
			w.count("map read")
			return m + "[" + w.value(intType, 0) + "]", false
		}
	case 9:
		w.count("min max")
		x := w.dynamic(floatType, depth-1)
		y, _ := w.floatExpr(depth - 1)
		if w.chance(30) {
			w.count("W1 min max")
			y = float(w.dynamic(intType, depth-1))
		}
		return pick(w, []string{"min", "max"}) + "(" + x + ", " + y + ")", false
	case 10, 11:
		if s := w.snippet(depth); s != "" {
			return s, false
		}
	}
	return w.leaf(floatType, w.pointed)
}

// widened writes a whole number beside a real one.
func (w *writer) widened(depth int) (string, bool) {
	n := float(w.dynamic(intType, depth-1))
	if len(w.opt.Units) >= 2 && w.chance(25) {
		w.count("W2 unit")
		a, b := pick(w, w.opt.Units), pick(w, w.opt.Units)
		return float(n+"*"+a) + "/" + b, false
	}
	if w.chance(50) {
		w.count("W2 literal")
		switch op := pick(w, []string{" + ", " - ", " / ", " * "}); op {
		case " * ":
			return product(n, false, w.pointed(), true), false
		default:
			return "(" + n + op + w.pointed() + ")", false
		}
	}
	w.count("W1 operator")
	x := w.dynamic(floatType, depth-1)
	if w.chance(50) {
		n, x = x, n
	}
	if w.chance(40) {
		return product(n, false, x, false), false
	}
	return "(" + n + pick(w, []string{" + ", " - "}) + x + ")", false
}

func (w *writer) numberText() string { return strconv.Itoa(1 + w.IntN(10)) }

// snippet writes a call of the vocabulary with numbers that it takes.
func (w *writer) snippet(depth int) string {
	var all []Snippet
	for _, s := range w.opt.Snippets {
		if !s.Fails {
			all = append(all, s)
		}
	}
	if len(all) == 0 || w.times > 4 {
		return ""
	}
	s := pick(w, all)
	w.count(s.Name)
	w.count("vocabulary call")
	w.spent += 20 * w.times
	return w.fill(s.Text, depth)
}

func (w *writer) fill(text string, depth int) string {
	for _, p := range []string{"$1", "$2", "$3"} {
		for strings.Contains(text, p) {
			x := w.numberText()
			if depth > 0 && w.chance(40) {
				x = "(1 + math.Mod(math.Abs(" + w.dynamic(floatType, 0) + "), 9.0))"
				if w.chance(40) {
					x = "(1 + math.Mod(math.Abs(" + float(w.dynamic(intType, 0)) + "), 9.0))"
				}
			}
			text = strings.ReplaceAll(text, p, x)
		}
	}
	return strings.ReplaceAll(text, "@", ref(w.opt.Package+"."))
}

func (w *writer) word() string {
	return strconv.Quote(pick(w, []string{"a", "b", "ab", "cab", "", "x y", "gap", "core"}))
}

func (w *writer) stringExpr(depth int) (string, bool) {
	if depth <= 0 {
		return w.leaf(stringType, w.word)
	}
	switch w.IntN(11) {
	case 0, 1:
		a, ca := w.stringExpr(depth - 1)
		b, cb := w.stringExpr(depth - 1)
		return "(" + a + " + " + b + ")", ca && cb
	case 2, 3:
		w.count("strings call")
		s := w.value(stringType, depth-1)
		return pick(w, []string{"strings.ToUpper(" + s + ")", "strings.TrimSpace(" + s + ")", "strings.Repeat(" + s + ", 2)",
			`strings.ReplaceAll(` + s + `, "a", "o")`, `strings.TrimPrefix(` + s + `, "a")`}), false
	case 4:
		w.count("strconv call")
		if w.chance(40) {
			return "strconv.FormatFloat(" + w.dynamic(floatType, depth-1) + ", 'g', 6, 64)", false
		}
		return pick(w, []string{"strconv.Itoa(" + w.value(intType, depth-1) + ")", "strconv.Quote(" + w.value(stringType, depth-1) + ")",
			"strconv.FormatInt(int64(" + w.dynamic(intType, depth-1) + "), 16)"}), false
	case 5, 6:
		w.count("Sprintf")
		switch w.IntN(3) {
		case 0:
			return `fmt.Sprintf("%d/%v", ` + w.value(intType, depth-1) + ", " + w.value(boolType, depth-1) + ")", false
		case 1:
			return `fmt.Sprintf("%.4g %q", ` + w.dynamic(floatType, depth-1) + ", " + w.value(stringType, depth-1) + ")", false
		}
		return `fmt.Sprint(` + w.dynamic(pick(w, []*typ{intsType, floatsType, wordsType, tallyType}), depth-1) + ")", false
	case 7:
		if s := w.element(wordsType); s != "" {
			return s, false
		}
	case 8:
		w.count("Join")
		return `strings.Join(` + w.dynamic(wordsType, depth-1) + `, "+")`, false
	}
	return w.leaf(stringType, w.word)
}

func (w *writer) boolExpr(depth int) string {
	if depth <= 0 {
		if v := w.variable(boolType, false); v != "" && w.chance(60) {
			return v
		}
		return pick(w, []string{"true", "false"})
	}
	compare := func(t *typ) string {
		return "(" + w.dynamic(t, depth-1) + pick(w, []string{" < ", " == ", " >= ", " != "}) + w.value(t, depth-1) + ")"
	}
	switch w.IntN(7) {
	case 0, 1:
		return compare(intType)
	case 2:
		if w.chance(30) {
			w.count("W1 comparison")
			return "(" + w.dynamic(floatType, depth-1) + pick(w, []string{" < ", " > "}) + float(w.dynamic(intType, depth-1)) + ")"
		}
		return compare(floatType)
	case 3:
		return compare(stringType)
	case 4:
		return "(" + w.boolExpr(depth-1) + pick(w, []string{" && ", " || "}) + w.boolExpr(depth-1) + ")"
	case 5:
		return "!" + w.boolExpr(depth-1)
	}
	return pick(w, []string{"strings.HasPrefix", "strings.Contains"}) + "(" + w.value(stringType, depth-1) + ", " + w.word() + ")"
}
