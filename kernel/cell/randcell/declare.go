package randcell

import (
	"fmt"
	"strings"
)

// top writes a statement at the top level of the cell.
func (w *writer) top(draft string) {
	if !strings.HasSuffix(draft, "\n") {
		draft += "\n"
	}
	w.cell.WriteString(forCell(draft))
	w.body.WriteString(w.forReference(draft))
}

// declaration writes what stands in the cell alone: its meaning in the reference is written elsewhere.
func (w *writer) declaration(draft string) { w.cell.WriteString(forCell(draft) + "\n") }

// storage makes a name stand for a variable of a type: the one it stands for if the type is the same.
func (w *writer) storage(name string, t *typ) {
	if old := w.names[name]; old != nil && !old.gone && old.role == variable && same(old.typ, t) {
		w.touched[name] = true
		return
	}
	e := &entity{role: variable, name: name, ref: w.meant(name), typ: t}
	fmt.Fprintf(&w.global, "var %s %s\n", e.ref, t.refText())
	w.introduce(e, false)
}

// set declares a variable at the top level of the cell.
func (w *writer) set(name string, t *typ, value string) {
	forms := []string{name + " := ", "var " + name + " = ", "var " + name + " " + t.text() + " = "}
	form := pick(w, []string{forms[0], forms[0], forms[1], forms[2]})
	if t.kind == interfaceKind || t.kind == anyKind {
		form = forms[2]
	}
	if strings.HasPrefix(value, refOpen) && t == floatType {
		form = forms[2] // a whole number becomes a float64 where the type says so
	}
	w.give([]string{name}, []*typ{t}, form, value)
}

// give writes a declaration of several names with what stands before the value in the cell.
func (w *writer) give(names []string, types []*typ, form, value string) {
	right := w.forReference(value)
	for i, n := range names {
		w.storage(n, types[i])
	}
	var left []string
	for _, n := range names {
		left = append(left, w.names[n].ref)
	}
	w.cell.WriteString(forCell(form) + forCell(value) + "\n")
	w.body.WriteString(strings.Join(left, ", ") + " = " + right + "\n")
}

// apart writes a function's text: with its own locals, costs and uses.
func (w *writer) apart(name string, budget int, params []local, write func() string) (draft string, deps map[string]bool, cost int) {
	locals, times, spent, limit, loop, callee, shun := w.locals, w.times, w.spent, w.budget, w.loop, w.callee, w.shun
	w.locals, w.times, w.spent, w.budget, w.loop, w.callee, w.shun = params, 1, 0, budget, 0, true, name
	deps = map[string]bool{}
	w.deps = append(w.deps, deps)
	draft = write()
	w.deps = w.deps[:len(w.deps)-1]
	cost = w.spent + 1
	w.locals, w.times, w.spent, w.budget, w.loop, w.callee, w.shun = locals, times, spent, limit, loop, callee, shun
	return draft, deps, cost
}

// parameters makes parameters and their text.
func (w *writer) parameters(types []*typ) (params []local, text string) {
	var parts []string
	for _, t := range types {
		l := local{name: w.fresh("p"), typ: t}
		params = append(params, l)
		parts = append(parts, l.name+" "+t.text())
	}
	return params, strings.Join(parts, ", ")
}

// body writes statements that end with a return of values of the types.
func (w *writer) returning(results []*typ) string {
	s := ""
	for range w.IntN(3) {
		s += w.stmt(2)
	}
	if w.chance(30) {
		s += "if " + w.header() + " {\n\treturn " + w.resultList(results) + "\n}\n"
	}
	return "{\n" + indent(s+"return "+w.resultList(results)+"\n") + "}"
}

func (w *writer) resultList(results []*typ) string {
	var parts []string
	for _, r := range results {
		parts = append(parts, w.intoFloat(r, 2, "W1 return"))
	}
	return strings.Join(parts, ", ")
}

func (w *writer) signature() *typ {
	t := &typ{kind: funcKind}
	kinds := plainTypes
	if all := w.structs(w.nameable); len(all) > 0 && w.chance(40) {
		kinds = append([]*typ{pick(w, all), pick(w, all)}, plainTypes...)
	}
	for range w.IntN(3) + 1 {
		t.params = append(t.params, pick(w, kinds))
	}
	t.results = []*typ{pick(w, kinds)}
	return t
}

// function declares a function that computes one value; again tells that its text replaces an earlier one of the same
// type.
func (w *writer) function(name string, t *typ, again bool) {
	budget := 60
	if again {
		budget = w.names[name].cost
	}
	w.touched[name] = true
	params, text := w.parameters(t.params)
	w.pure++
	body, deps, cost := w.apart(name, budget, params, func() string {
		for _, p := range append(append([]*typ(nil), t.params...), t.results...) {
			w.typeText(p)
		}
		return w.returning(t.results)
	})
	w.pure--
	head := "(" + text + ") " + t.results[0].text() + " "
	if again {
		cost = max(cost, budget)
	}
	w.addFunction(&entity{name: name, typ: t, deps: deps, cost: cost, body: "func" + head + body}, again)
	w.declaration("func " + name + head + body)
}

// addFunction makes a name stand for a function.
func (w *writer) addFunction(e *entity, again bool) {
	e.role = function
	if again {
		e.ref = w.names[e.name].ref
	} else {
		e.ref = w.meant(e.name)
		fmt.Fprintf(&w.global, "var %s %s\n", e.ref, e.typ.refText())
	}
	w.introduce(e, again)
	w.setFunction(e)
}

// structType declares a struct type with methods, all in this cell.
func (w *writer) structType(name string, fields []field, methods []method, sealed bool) *typ {
	t := &typ{kind: structKind, name: name, ref: w.meant(name), fields: fields, comparable: true}
	deps := map[string]bool{}
	w.deps = append(w.deps, deps)
	var text strings.Builder
	for _, f := range fields {
		fmt.Fprintf(&text, "\t%s %s\n", f.name, w.typeText(f.typ))
		t.comparable = t.comparable && f.typ.comparable
	}
	w.deps = w.deps[:len(w.deps)-1]
	draft := "struct {\n" + text.String() + "}\n"
	fmt.Fprintf(&w.global, "type %s %s", t.ref, w.forReference(draft))
	w.introduce(&entity{role: typeName, name: name, ref: t.ref, typ: t, deps: deps}, false)
	for _, e := range w.sorted() { // methods of an earlier type of this name
		if strings.HasPrefix(e.name, name+".") {
			delete(w.names, e.name)
		}
	}
	w.declaration("type " + name + " " + draft)
	for _, m := range methods {
		w.method(t, m, sealed)
	}
	return t
}

// method declares a method; in the reference its body stands in a variable, like that of a function.
func (w *writer) method(t *typ, m method, sealed bool) {
	recv := local{name: w.fresh("r"), typ: t}
	star := ""
	if m.pointer {
		star = "*"
	}
	params, text := w.parameters([]*typ{m.param})
	full := t.name + "." + m.name
	if sealed {
		w.sealed++
	}
	w.pure++
	body, deps, cost := w.apart(full, 25, append([]local{recv}, params...), func() string {
		w.mark(t.name)
		if m.changes {
			s := ""
			for _, f := range t.fields {
				if f.typ == intType || f.typ == floatType || f.typ == stringType {
					s += recv.name + "." + f.name + " = " + w.intoFloat(f.typ, 1, "W1 assignment") + "\n"
					if f.typ == stringType {
						s += "if len(" + recv.name + "." + f.name + ") > 40 {\n\t" + recv.name + "." + f.name + ` = "cut"` + "\n}\n"
					}
				}
			}
			return "{\n" + indent(s+"return "+w.resultList([]*typ{m.result})) + "}"
		}
		return w.returning([]*typ{m.result})
	})
	w.pure--
	if sealed {
		w.sealed--
	}
	w.count(map[bool]string{false: "value method", true: "pointer method"}[m.pointer])
	head := " " + m.result.text() + " "
	rt := star + t.text()
	e := &entity{name: full, typ: &typ{kind: funcKind, params: []*typ{receiver(t, m), m.param}, results: []*typ{m.result}}, deps: deps, cost: cost,
		body: "func(" + recv.name + " " + rt + ", " + text + ")" + head + body}
	w.addFunction(e, false)
	fmt.Fprintf(&w.global, "func (r %s%s) %s(p %s) %s { return %s(r, p) }\n", star, t.ref, m.name, m.param.refText(), m.result.refText(), e.ref)
	w.declaration("func (" + recv.name + " " + rt + ") " + m.name + "(" + text + ")" + head + body)
	t.methods = append(t.methods, m)
}

func receiver(t *typ, m method) *typ {
	if m.pointer {
		return pointerTo(t)
	}
	return t
}

// someFields makes fields for a struct type of a name.
func (w *writer) someFields(name string) []field {
	var fields []field
	for i := range 1 + w.IntN(4) {
		t := pick(w, plainTypes)
		if all := w.structs(func(t *typ) bool { return w.nameable(t) && len(t.fields) < 4 && !w.dependsOn(w.names[t.name], name) }); len(all) > 0 && w.chance(15) {
			w.count("struct in struct")
			t = pick(w, all)
		}
		fields = append(fields, field{string("abcd"[i]), t})
	}
	return fields
}

func (w *writer) someMethods() []method {
	var methods []method
	for i := range 1 + w.IntN(3) {
		m := method{name: []string{"Get", "Put", "Mix"}[i], param: pick(w, plainTypes), result: pick(w, plainTypes), pointer: w.chance(50)}
		m.changes = m.pointer && w.chance(60)
		methods = append(methods, m)
	}
	return methods
}
