package randcell

import (
	"fmt"
	"strconv"
	"strings"
)

// generic declares a generic function, or one that was there again, and calls it with types found from its arguments.
func (w *writer) generic() {
	forms := []struct{ name, head, body string }{
		{"Apply", "[T, U any](s []T, f func(T) U) []U", "{\n\tvar out []U\n\tfor _, x := range s {\n\t\tout = append(out, f(x))\n\t}\n\treturn out\n}"},
		{"Total", "[T int | float64 | string](s ...T) T", "{\n\tvar sum T\n\tfor _, x := range s {\n\t\tsum += x\n\t}\n\treturn sum\n}"},
		{"Best", "[T int | float64 | string](s []T) (T, int)", "{\n\tbest, at := s[0], 0\n\tfor i, x := range s {\n\t\tif x > best {\n\t\t\tbest, at = x, i\n\t\t}\n\t}\n\treturn best, at\n}"},
		{"Find", "[T comparable](s []T, x T) int", "{\n\tfor i, y := range s {\n\t\tif x == y {\n\t\t\treturn i\n\t\t}\n\t}\n\treturn -1\n}"},
		{"Pick", "[T any](b bool, x, y T) T", "{\n\tif b {\n\t\treturn x\n\t}\n\treturn y\n}"},
	}
	f := pick(w, forms)
	e := w.names[f.name]
	if e == nil || e.gone || w.chance(20) && !w.touched[f.name] && !w.usedHere(f.name) {
		w.count("generic function")
		e = &entity{role: genericFunc, name: f.name, ref: w.meant(f.name), pinned: true}
		fmt.Fprintf(&w.global, "func %s%s %s\n", e.ref, f.head, f.body)
		w.introduce(e, true)
		w.declaration("func " + f.name + f.head + " " + f.body)
	}
	w.count("generic call")
	g := w.mark(f.name)
	t := pick(w, []*typ{intType, floatType, stringType})
	list := sliceOf(t)
	x := w.fresh("g")
	switch f.name {
	case "Apply":
		u := pick(w, plainTypes)
		w.give([]string{x}, []*typ{sliceOf(u)}, x+" := ", g+"("+w.literal(list, 1)+", "+w.funcLiteral(&typ{kind: funcKind, params: []*typ{t}, results: []*typ{u}}, 1)+")")
	case "Total":
		args := w.dynamic(t, 1) + ", " + w.dynamic(t, 1)
		if w.chance(40) {
			args = w.dynamic(list, 1) + "..."
		} else if w.chance(40) {
			g += "[" + t.text() + "]"
		}
		w.give([]string{x}, []*typ{t}, x+" := ", g+"("+args+")")
	case "Best":
		at := w.fresh("g")
		w.give([]string{x, at}, []*typ{t, intType}, x+", "+at+" := ", g+"("+w.dynamic(list, 1)+")")
	case "Find":
		w.give([]string{x}, []*typ{intType}, x+" := ", g+"("+w.dynamic(list, 1)+", "+w.dynamic(t, 1)+")")
	case "Pick":
		w.give([]string{x}, []*typ{t}, x+" := ", g+"("+w.value(boolType, 1)+", "+w.dynamic(t, 1)+", "+w.dynamic(t, 1)+")")
	}
}

// genericType declares a generic type with methods and uses it.
func (w *writer) genericType() {
	const draft = "[T any] struct {\n\titems []T\n\tname string\n}\n"
	e := w.names["Stack"]
	if e == nil || e.gone {
		e = &entity{role: genericType, name: "Stack", ref: w.meant("Stack"), pinned: true}
		w.names["Stack"] = e
		w.touched["Stack"] = true
		w.count("generic type")
		w.once = true
		for _, d := range []string{
			"type " + nameOpen + "Stack" + nameEnd + draft,
			"func (s *" + nameOpen + "Stack" + nameEnd + "[T]) Push(x T) int {\n\ts.items = append(s.items, x)\n\treturn len(s.items)\n}\n",
			"func (s *" + nameOpen + "Stack" + nameEnd + "[T]) Pop() (T, bool) {\n\tvar zero T\n\tif len(s.items) == 0 {\n\t\treturn zero, false\n\t}\n\tx := s.items[len(s.items)-1]\n\ts.items = s.items[:len(s.items)-1]\n\treturn x, true\n}\n",
			"func (s " + nameOpen + "Stack" + nameEnd + "[T]) Len() int { return len(s.items) }\n",
		} {
			w.global.WriteString(w.forReference(d))
			w.declaration(strings.TrimRight(d, "\n"))
		}
	}
	t := pick(w, []*typ{intType, floatType, stringType})
	w.count("generic type used")
	s := w.fresh("st")
	of := &typ{kind: structKind, name: "Stack[" + t.text() + "]", ref: e.ref + "[" + t.text() + "]"}
	w.touched["Stack"] = true
	w.give([]string{s}, []*typ{of}, s+" := ", w.mark("Stack")+"["+t.text()+`]{name: `+w.word()+`}`)
	w.names[s].pinned = true
	push := w.mark(s) + ".Push(" + w.value(t, 1) + ")"
	w.top(only(push) + ref("show("+push+")") + "\nfmt.Println(" + w.mark(s) + ".Push(" + w.value(t, 1) + "), " + w.mark(s) + ".Len(), " + w.mark(s) + ".name)")
	x, ok := w.fresh("g"), w.fresh("ok")
	w.give([]string{x, ok}, []*typ{t, boolType}, x+", "+ok+" := ", w.mark(s)+".Pop()")
}

// outliving makes closures in a loop and calls them afterwards.
func (w *writer) outliving() {
	w.count("closures that outlive a loop")
	fs := w.fresh("fs")
	w.give([]string{fs}, []*typ{sliceOf(intFunc)}, "var "+fs+" []func(int) int", only("")+ref("nil"))
	w.names[fs].pinned = true
	i, p, d := w.fresh("i"), w.fresh("p"), w.fresh("d")
	n := 2 + w.IntN(3)
	body := w.inner([]local{{i, intType, true}, {p, intType, false}, {d, intType, true}}, func() string { return w.value(intType, 2) })
	lit := "func(" + p + " int) int { return " + p + "*" + i + " + " + d + " + " + body + " }"
	head := pick(w, []string{"for " + i + " := range " + strconv.Itoa(n), fmt.Sprintf("for %s := 0; %s < %d; %s++", i, i, n, i), "for " + i + ", _ := range " + w.literal(intsType, 1)})
	m := w.mark(fs)
	w.top(head + " {\n\t" + d + " := " + i + " * 3\n\t" + m + " = append(" + m + ", " + lit + ")\n}")
	f := w.fresh("f")
	w.top("for _, " + f + " := range " + m + " {\n\tfmt.Println(" + f + "(" + w.value(intType, 1) + "))\n}")
}

// counter makes closures with a state of their own.
func (w *writer) counter() {
	all := w.redeclarable(func(e *entity) bool { return e.role == variable && e.typ == intMaker })
	if len(all) == 0 || w.chance(25) {
		w.count("counter")
		name, n := w.fresh("mk"), w.fresh("n")
		c := w.fresh("c")
		step := w.inner(nil, func() string { return w.value(intType, 1) })
		if w.chance(50) {
			w.give([]string{c}, []*typ{intMaker}, c+" := ", "func() func() int {\n\t"+n+" := "+w.value(intType, 0)+"\n\treturn func() int {\n\t\t"+n+" += "+step+"\n\t\treturn "+n+"\n\t}\n}()")
			return
		}
		draft := "(" + n + " int) func() int {\n\treturn func() int {\n\t\t" + n + "++\n\t\treturn " + n + " * 2\n\t}\n}"
		w.addFunction(&entity{name: name, typ: &typ{kind: funcKind, params: []*typ{intType}, results: []*typ{intMaker}}, body: "func" + draft, cost: 2, pinned: true}, false)
		w.declaration("func " + name + draft)
		w.give([]string{c}, []*typ{intMaker}, c+" := ", w.mark(name)+"("+w.value(intType, 1)+")")
		return
	}
	w.count("counter called")
	c := w.mark(pick(w, all).name)
	w.top("fmt.Println(" + c + "(), " + c + "())")
}

func (w *writer) functionVariable() {
	w.count("function variable")
	t := pick(w, []*typ{intFunc, floatFunc})
	if all := w.redeclarable(func(e *entity) bool { return e.role == variable && same(e.typ, t) }); len(all) > 0 && w.chance(50) {
		w.set(pick(w, all).name, t, w.literal(t, 2))
		return
	}
	w.set(w.fresh("h"), t, w.literal(t, 2))
}

// wrapped replaces a function value by one that calls it.
func (w *writer) wrapped() {
	all := w.redeclarable(func(e *entity) bool { return e.role == variable && e.typ == intFunc })
	if len(all) == 0 {
		w.functionVariable()
		return
	}
	w.count("function value wrapped")
	w.once = true // run again, the older value would be the newer one
	h, old := w.mark(pick(w, all).name), w.fresh("old")
	w.top(old + " := " + h + "\n" + h + " = func(x int) int { return " + old + "(x) + " + w.value(intType, 0) + " }")
	w.top("fmt.Println(" + h + "(" + w.value(intType, 1) + "))")
}

// methodValue binds a method to a copy of its receiver.
func (w *writer) methodValue() {
	t, m, ok := w.methodWhere(func(m method) bool { return !m.changes })
	if !ok {
		w.newStruct()
		return
	}
	v, f := w.held(t), w.fresh("mv")
	if w.chance(40) && !m.pointer {
		w.count("method expression")
		w.top(f + " := " + t.text() + "." + m.name + "\nfmt.Println(" + f + "(" + v + ", " + w.value(m.param, 1) + "))")
		return
	}
	w.count("method value")
	s := f + " := " + v + "." + m.name + "\n"
	for _, x := range t.fields {
		if x.typ == intType {
			s += v + "." + x.name + " += 7\n"
		}
	}
	w.top(s + "fmt.Println(" + f + "(" + w.value(m.param, 1) + "))")
}

// several declares a function of several results and takes them.
func (w *writer) several() {
	w.count("several results")
	results := []*typ{pick(w, plainTypes), pick(w, plainTypes)}
	name := w.fresh("two")
	params, text := w.parameters([]*typ{pick(w, plainTypes)})
	var draft string
	w.pure++
	named := w.chance(50)
	body, deps, cost := w.apart(name, 20, params, func() string {
		if !named {
			return w.returning(results)
		}
		w.count("named results")
		x, y := w.fresh("x"), w.fresh("y")
		draft = "(" + x + " " + results[0].text() + ", " + y + " " + results[1].text() + ")"
		w.locals = append(w.locals, local{name: x, typ: results[0]}, local{name: y, typ: results[1]})
		s := ""
		for range 2 {
			s += w.stmt(1)
		}
		s += x + " = " + w.intoFloat(results[0], 1, "W1 assignment") + "\n"
		if w.chance(40) {
			s += "if " + w.header() + " {\n\treturn " + w.resultList(results) + "\n}\n"
		}
		return "{\n" + indent(s+"return\n") + "}"
	})
	w.pure--
	if !named {
		draft = "(" + results[0].text() + ", " + results[1].text() + ")"
	}
	head := "(" + text + ") " + draft + " "
	w.addFunction(&entity{name: name, typ: &typ{kind: funcKind, params: []*typ{params[0].typ}, results: results}, deps: deps, cost: cost, body: "func" + head + body}, false)
	w.declaration("func " + name + head + body)
	a, b := w.fresh("v"), w.fresh("v")
	w.give([]string{a, b}, results, a+", "+b+" := ", w.mark(name)+"("+w.value(params[0].typ, 1)+")")
}

// closed writes a value in which no name of the notebook stands.
func (w *writer) closed(t *typ) string {
	w.sealed++
	defer func() { w.sealed-- }()
	s, _, _ := w.apart("", 10, nil, func() string { return w.value(t, 0) })
	return s
}

func (w *writer) variadic() {
	w.count("variadic function")
	t := pick(w, []*typ{intType, floatType, stringType})
	name, xs, x, sum := w.fresh("all"), w.fresh("xs"), w.fresh("x"), w.fresh("sum")
	lead := w.closed(t)
	draft := "(" + xs + " ..." + t.text() + ") " + t.text() + " {\n\tvar " + sum + " " + t.text() + " = " + lead + "\n\tfor _, " + x + " := range " + xs + " {\n\t\t" + sum + " += " + x + "\n\t}\n\treturn " + sum + "\n}"
	w.addVariadic(name, t, draft)
	v := w.fresh("v")
	args := ""
	switch w.IntN(3) {
	case 0:
		args = w.value(sliceOf(t), 1) + "..."
	case 1:
		args = w.intoFloat(t, 1, "W1 argument") + ", " + w.intoFloat(t, 1, "W1 argument")
	}
	w.give([]string{v}, []*typ{t}, v+" := ", w.mark(name)+"("+args+")")
}

func (w *writer) addVariadic(name string, t *typ, draft string) {
	e := &entity{role: function, name: name, ref: w.meant(name), typ: &typ{kind: funcKind}, cost: 5, pinned: true, body: "func" + draft}
	fmt.Fprintf(&w.global, "var %s func(...%s) %s\n", e.ref, t.refText(), t.refText())
	w.introduce(e, false)
	w.setFunction(e)
	w.declaration("func " + name + draft)
}
