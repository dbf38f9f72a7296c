package randcell

import (
	"fmt"
	"strconv"
	"strings"
)

func (w *writer) commaOK() {
	w.count("comma-ok")
	x, ok := w.fresh("v"), w.fresh("ok")
	switch w.IntN(4) {
	case 0:
		t := pick(w, []*typ{tallyType, tableType})
		m := w.variable(t, false)
		if m == "" {
			m = w.literal(t, 1)
		}
		w.give([]string{x, ok}, []*typ{t.elem, boolType}, x+", "+ok+" := ", m+"["+w.value(t.key, 0)+"]")
	case 1:
		t := pick(w, plainTypes)
		a := w.fresh("a")
		w.top("var " + a + " any = " + w.dynamic(pick(w, plainTypes), 1))
		w.give([]string{x, ok}, []*typ{t, boolType}, "var "+x+", "+ok+" = ", a+".("+t.text()+")")
	case 2:
		all := w.interfaces()
		if len(all) == 0 {
			w.family()
			return
		}
		t := pick(w, all)
		v := w.variable(t, false)
		if v == "" {
			w.set(w.fresh("x"), t, w.literal(t, 1))
			v = w.variable(t, false)
		}
		m := pick(w, t.members)
		star := ""
		if m.methods[0].pointer {
			star = "*"
		}
		w.count("type assertion")
		w.top("if " + x + ", " + ok + " := " + v + ".(" + star + w.typeText(m) + "); " + ok + " {\n\tfmt.Println(" + x + ".a, " + x + ".b)\n} else {\n\tfmt.Println(\"not\", " + ok + ")\n}")
	case 3:
		m := w.variable(tallyType, false)
		if m == "" {
			m = w.literal(tallyType, 1)
			m = "(" + m + ")"
		}
		w.top("if " + x + ", " + ok + " := " + m + "[" + w.word() + "]; !" + ok + " {\n\tfmt.Println(\"none\", " + x + ")\n} else {\n\tfmt.Println(" + x + ")\n}")
	}
}

// constants declares constants, or constants that were there again with other values.
func (w *writer) constants() {
	all := w.redeclarable(func(e *entity) bool { return e.role == constant && !w.usedHere(e.name) })
	if len(all) > 0 && w.chance(60) {
		w.count("constant declared again")
		e := pick(w, all)
		w.constantDraft(e.name, strconv.Itoa(1+w.IntN(30)))
		w.declaration("const " + e.name + " = " + strconv.Itoa(w.names[e.name].value))
		return
	}
	if w.chance(50) {
		w.count("constant")
		k := w.fresh("K")
		w.constantDraft(k, strconv.Itoa(1+w.IntN(30)))
		w.declaration("const " + k + " = " + strconv.Itoa(w.names[k].value))
		return
	}
	w.count("iota")
	a, b, c := w.fresh("K"), w.fresh("K"), w.fresh("K")
	form := pick(w, []string{"iota + 3", "1 << (iota + 2)", "10 * (iota + 1)"})
	w.declaration("const (\n\t" + a + " = " + form + "\n\t" + b + "\n\t" + c + "\n)")
	for i, k := range []string{a, b, c} {
		w.constantDraft(k, strconv.Itoa(map[string]int{"iota + 3": i + 3, "1 << (iota + 2)": 1 << (i + 2), "10 * (iota + 1)": 10 * (i + 1)}[form]))
	}
}

func (w *writer) constantDraft(name, value string) {
	e := &entity{role: constant, name: name, ref: w.meant(name)}
	e.value, _ = strconv.Atoi(value)
	fmt.Fprintf(&w.global, "const %s = %s\n", e.ref, value)
	w.introduce(e, true)
}

func (w *writer) sorting() {
	w.count("sort call")
	t := pick(w, []*typ{intsType, floatsType, wordsType})
	s := w.variable(t, true)
	if s == "" {
		x := w.fresh("list")
		w.set(x, t, w.literal(t, 1))
		s = w.mark(x)
	}
	if w.chance(50) {
		w.top(map[*typ]string{intsType: "sort.Ints", floatsType: "sort.Float64s", wordsType: "sort.Strings"}[t] + "(" + s + ")\nfmt.Println(" + s + ")")
		return
	}
	w.count("closure passed to compiled code")
	w.top("sort.Slice(" + s + ", func(i, j int) bool { return " + s + "[i] " + pick(w, []string{"<", ">"}) + " " + s + "[j] })\nfmt.Println(" + s + ")")
}

func (w *writer) mapTour() {
	t := pick(w, []*typ{tallyType, tableType})
	m := w.variable(t, true)
	if m == "" {
		x := w.fresh("list")
		w.set(x, t, w.literal(t, 1))
		m = w.mark(x)
	}
	k, v := w.fresh("k"), w.fresh("v")
	switch w.IntN(3) {
	case 0:
		w.count("delete")
		w.top("delete(" + m + ", " + w.value(t.key, 0) + ")\nfmt.Println(len(" + m + "), " + m + ")")
	case 1:
		w.count("clear")
		w.top("clear(" + m + ")\n" + m + "[" + w.value(t.key, 0) + "] = " + w.value(t.elem, 1) + "\nfmt.Println(" + m + ")")
	default:
		w.count("range over map in key order")
		w.top(only("for "+k+", "+v+" := range "+m+" {\n") + ref("for _, "+k+" := range keys("+m+") {\n\t"+v+" := "+m+"["+k+"]\n") +
			"\tfmt.Println(" + k + ", " + v + ")\n}")
	}
}

// action declares a function that changes variables of the notebook, and calls it.
func (w *writer) action() {
	all := w.redeclarable(func(e *entity) bool { return e.role == function && len(e.typ.results) == 0 && !e.pinned })
	if len(all) > 0 && w.chance(75) {
		e := pick(w, all)
		if w.affordable(e.cost) {
			w.count("function that sets variables called")
			w.top(w.mark(e.name) + "(" + w.arguments(e.typ, 1) + ")")
		}
		return
	}
	w.count("function that sets variables")
	name := w.fresh("act")
	t := &typ{kind: funcKind, params: []*typ{pick(w, plainTypes)}}
	params, text := w.parameters(t.params)
	body, deps, cost := w.apart(name, 30, params, func() string {
		s := ""
		for range 2 {
			s += w.simple()
		}
		return "{\n" + indent(s+w.stmt(2)) + "}"
	})
	w.addFunction(&entity{name: name, typ: t, deps: deps, cost: cost, body: "func(" + text + ") " + body}, false)
	w.declaration("func " + name + "(" + text + ") " + body)
	w.top(w.mark(name) + "(" + w.arguments(t, 1) + ")")
}

func (w *writer) parsed() {
	w.count("error value")
	x, err := w.fresh("v"), w.fresh("err")
	text := pick(w, []string{`"12"`, `"x"`, "strconv.Itoa(" + w.value(intType, 1) + ")", w.word()})
	w.top("if " + x + ", " + err + " := strconv.Atoi(" + text + "); " + err + " != nil {\n\tfmt.Println(\"no number:\", " + err + ")\n} else {\n\tfmt.Println(" + x + "+1)\n}")
}

func (w *writer) pointer() {
	w.count("pointer to variable")
	v := w.variable(intType, true)
	if v == "" {
		w.newVariable()
		return
	}
	p := w.fresh("p")
	w.top(p + " := &" + v + "\n*" + p + " = *" + p + " + " + w.value(intType, 1) + "\nfmt.Println(*" + p + ", " + v + ")")
}

// embedded declares a struct that embeds another and uses promoted fields and methods.
func (w *writer) embedded() {
	all := w.structs(func(t *typ) bool { return w.nameable(t) && w.names[t.name].pinned && len(t.methods) > 0 })
	if len(all) == 0 {
		w.family()
		return
	}
	w.count("embedded struct")
	in := pick(w, all)
	name := w.fresh("E")
	ref1 := w.meant(name)
	fmt.Fprintf(&w.global, "type %s struct {\n\t%s\n\textra int\n}\n", ref1, in.ref)
	out := &typ{kind: structKind, name: name, ref: ref1}
	w.introduce(&entity{role: typeName, name: name, ref: ref1, typ: out, pinned: true, deps: map[string]bool{in.name: true}}, false)
	w.declaration("type " + name + " struct {\n\t" + forCell(w.typeText(in)) + "\n\textra int\n}")
	w.names[name].gone = true // no literal of it elsewhere
	v := w.fresh("e")
	w.give([]string{v}, []*typ{out}, v+" := ", only(name)+ref(ref1)+"{"+w.literal(in, 1)+", "+w.value(intType, 0)+"}")
	w.names[v].pinned = true
	x := w.mark(v)
	w.top(x + ".a += " + x + ".extra\nfmt.Println(" + x + ".a, " + x + "." + in.methods[0].name + "(" + w.value(in.methods[0].param, 1) + "))")
}

func (w *writer) array() {
	w.count("array")
	a, b := w.fresh("ar"), w.fresh("ar")
	t := pick(w, []*typ{intType, stringType})
	w.top(a + " := [3]" + t.text() + "{" + w.value(t, 1) + ", " + w.value(t, 0) + "}\n" + b + " := " + a + "\n" + b + "[1] = " + w.value(t, 1) +
		"\nfmt.Println(" + a + ", " + b + ", " + a + " == " + b + ", len(" + a + "))")
}

func (w *writer) recursion() {
	w.count("recursion")
	name, n := w.fresh("rec"), w.fresh("n")
	k := w.closed(intType)
	draft := "(" + n + " int) int {\n\tif " + n + " <= 0 {\n\t\treturn " + k + "\n\t}\n\treturn " + n + " + " + nameOpen + name + nameEnd + "(" + n + "-1)*2\n}"
	w.addFunction(&entity{name: name, typ: intFunc, body: "func" + draft, pinned: true}, false)
	w.names[name].body = "" // called with small numbers only
	w.declaration("func " + name + draft)
	w.top("fmt.Println(" + w.mark(name) + "(" + strconv.Itoa(w.IntN(8)) + "))")
}

// mutual declares two functions that call each other, in either order.
func (w *writer) mutual() {
	w.count("mutual recursion")
	a, b, n := w.fresh("even"), w.fresh("odd"), w.fresh("n")
	t := &typ{kind: funcKind, params: []*typ{intType}, results: []*typ{boolType}}
	draft := func(other, end string) string {
		return "(" + n + " int) bool {\n\tif " + n + " == 0 {\n\t\treturn " + end + "\n\t}\n\treturn " + nameOpen + other + nameEnd + "(" + n + " - 1)\n}"
	}
	for i, name := range []string{a, b} {
		e := &entity{role: function, name: name, ref: w.meant(name), typ: t, pinned: true}
		fmt.Fprintf(&w.global, "var %s %s\n", e.ref, t.refText())
		w.introduce(e, false)
		e.body = "func" + draft([]string{b, a}[i], []string{"true", "false"}[i])
		w.declaration("func " + name + draft([]string{b, a}[i], []string{"true", "false"}[i]))
	}
	w.setFunction(w.names[a])
	w.setFunction(w.names[b])
	x := w.mark(a) + "(" + strconv.Itoa(w.IntN(7)) + ")"
	w.names[a].body, w.names[b].body = "", "" // called with small numbers only
	w.top("fmt.Println(" + x + ", " + w.mark(b) + "(" + strconv.Itoa(w.IntN(7)) + "))")
}

func (w *writer) copies() {
	w.count("copy and append")
	s := w.variable(intsType, false)
	if s == "" {
		s = w.literal(intsType, 1)
	}
	c, d := w.fresh("cp"), w.fresh("cp")
	w.top(c + " := append([]int{}, " + s + "...)\n" + c + "[0] = " + w.value(intType, 1) + "\n" + d + " := make([]int, len(" + c + ")+1)\n" +
		"fmt.Println(copy(" + d + ", " + c + "[:]), " + d + "[1:], " + c + ")")
}

// roleChange lets the name of a variable stand for a function.
func (w *writer) roleChange() {
	all := w.redeclarable(func(e *entity) bool {
		return e.role == variable && e.typ.kind <= boolKind && !w.inMethod(e.name) && !w.usedHere(e.name)
	})
	if len(all) == 0 {
		return
	}
	w.count("variable becomes a function")
	w.function(pick(w, all).name, w.signature(), false)
}

// ending writes what keeps a cell from its end.
func (w *writer) ending(o Outcome) {
	switch o {
	case Refused:
		w.cell.WriteString(pick(w, []string{"nowhere + 1\n", "var bad int = \"text\"\n", "defer fmt.Println(1)\n", "if 3 {\n}\n", "x := )\n", "func(\n", "fmt.Println(7/2)\n"}))
	case Interrupted:
		w.top("fmt.Println(" + strconv.Quote(Spinning) + ")")
		w.top(pick(w, []string{only("for {\n}\n"), only("for spin := 0; ; spin++ {\n\tif spin < 0 {\n\t\tbreak\n\t}\n}\n"), only("func() {\n\tfor {\n\t\t_ = math.Sqrt(2)\n\t}\n}()\n")}) +
			ref("stop(\"an endless loop\")"))
	case Fails:
		w.failure()
	}
}

func (w *writer) failure() {
	x := w.fresh("z")
	forms := []string{
		`panic("stopped here")`,
		`panic(fmt.Sprintf("no %d", ` + w.value(intType, 1) + "))",
		x + " := []int{1, 2}\nfmt.Println(" + x + "[len(" + x + ")+3])",
		x + " := 0\nfmt.Println(5 / " + x + ")",
		"var " + x + " map[string]int\n" + x + `["a"] = 1`,
		"var " + x + " any = 3\nfmt.Println(" + x + ".(string))",
		"for " + x + " := range 4 {\n\tfmt.Println(" + x + ")\n\tif " + x + " == 2 {\n\t\tpanic(" + x + ")\n\t}\n}",
		"func() {\n\tfunc() { panic(errors.New(\"deep\")) }()\n}()",
	}
	for _, s := range w.opt.Snippets {
		if s.Fails {
			forms = append(forms, "fmt.Println("+w.fill(s.Text, 0)+")")
		}
	}
	f := pick(w, forms)
	if strings.HasPrefix(f, "panic(") {
		f = ref("if true {\n") + f + ref("\n}")
	}
	w.top(f)
}

var constructs = strings.Split(strings.TrimSpace(constructList), "\n")
