package randcell

import "strings"

// affordable tells whether something of a cost can run here, and accounts for it.
func (w *writer) affordable(cost int) bool {
	if w.spent+cost*w.times > w.budget {
		return false
	}
	w.spent += cost * w.times
	return true
}

// call writes a call that gives a value of type t and changes nothing; "" if there is none.
func (w *writer) call(t *typ, depth int) string {
	if w.sealed > 0 {
		return ""
	}
	type option struct {
		cost  int
		write func() string
	}
	var all []option
	for _, e := range w.sorted() {
		if e.role != function || e.typ == nil || len(e.typ.results) != 1 || !same(e.typ.results[0], t) || w.hidden(e.name) ||
			strings.Contains(e.name, ".") || w.shunned(e) || e.body == "" {
			continue
		}
		all = append(all, option{e.cost, func() string {
			w.count("function call")
			return w.mark(e.name) + "(" + w.arguments(e.typ, depth) + ")"
		}})
	}
	all = append(all, option{1, func() string { return w.methodCall(t, depth) }}, option{1, func() string { return w.methodCall(t, depth) }},
		option{1, func() string { return w.fieldRead(t) }})
	if !w.callee && (t == intType || t == floatType) {
		f := map[*typ]*typ{intType: intFunc, floatType: floatFunc}[t]
		all = append(all, option{30, func() string {
			if v := w.variable(f, false); v != "" {
				w.count("closure call")
				return v + "(" + w.value(t, depth) + ")"
			}
			return ""
		}})
	}
	o := pick(w, all)
	if !w.affordable(o.cost) {
		return ""
	}
	return o.write()
}

// shunned tells whether calling e would call what is being written.
func (w *writer) shunned(e *entity) bool { return w.shun != "" && w.dependsOn(e, w.shun) }

func (w *writer) arguments(f *typ, depth int) string {
	var args []string
	for _, p := range f.params {
		args = append(args, w.intoFloat(p, depth, "W1 argument"))
	}
	return strings.Join(args, ", ")
}

// structs lists types that can be named here.
func (w *writer) structs(want func(*typ) bool) (out []*typ) {
	for _, e := range w.sorted() {
		if e.role == typeName && e.typ.kind == structKind && !w.hidden(e.name) && want(e.typ) {
			out = append(out, e.typ)
		}
	}
	return out
}

// methodCall calls a method that changes nothing, of a variable or of a literal.
func (w *writer) methodCall(t *typ, depth int) string {
	type choice struct {
		recv string
		m    method
		of   *typ
	}
	var all []choice
	for _, s := range w.structs(func(*typ) bool { return true }) {
		for _, m := range s.methods {
			e := w.names[s.name+"."+m.name]
			if m.changes || !same(m.result, t) || e == nil || e.gone || w.shunned(e) {
				continue
			}
			for _, v := range w.variables(s, false) {
				all = append(all, choice{v, m, s})
			}
			for _, v := range w.variables(pointerTo(s), false) {
				all = append(all, choice{v, m, s})
			}
			if !m.pointer {
				all = append(all, choice{"", m, s})
			}
		}
	}
	for _, e := range w.sorted() {
		if e.role == typeName && w.sealed == 0 && e.typ.kind == interfaceKind && !w.hidden(e.name) {
			for _, m := range e.typ.methods {
				for _, v := range w.variables(e.typ, false) {
					if same(m.result, t) {
						all = append(all, choice{v, m, e.typ})
					}
				}
			}
		}
	}
	if len(all) == 0 {
		return ""
	}
	c := pick(w, all)
	if c.recv == "" {
		c.recv = w.literal(c.of, depth)
	} else {
		w.note(c.recv)
	}
	w.mark(c.of.name)
	if c.of.kind == interfaceKind {
		w.count("interface call")
	} else {
		w.mark(c.of.name + "." + c.m.name)
		w.count("method call")
	}
	return c.recv + "." + c.m.name + "(" + w.intoFloat(c.m.param, depth, "W1 argument") + ")"
}

func (w *writer) note(v string) {
	if strings.HasPrefix(v, nameOpen) {
		w.mark(strings.Trim(v, nameOpen+nameEnd))
	}
}

// fieldRead reads a field of a struct that is held by a variable, of types with an older meaning too.
func (w *writer) fieldRead(t *typ) string {
	var all []string
	add := func(name string, of *typ) {
		if of.kind == pointerKind {
			of = of.elem
		}
		if of.kind != structKind {
			return
		}
		for _, f := range of.fields {
			if same(f.typ, t) {
				all = append(all, name+"."+f.name)
			}
		}
	}
	for i, l := range w.locals {
		over := false
		for _, inner := range w.locals[i+1:] {
			over = over || inner.name == l.name
		}
		if !over {
			add(l.name, l.typ)
		}
	}
	for _, e := range w.sorted() {
		if e.role == variable && !w.hidden(e.name) && e.name != w.shun && w.sealed == 0 {
			add(nameOpen+e.name+nameEnd, e.typ)
		}
	}
	if len(all) == 0 {
		return ""
	}
	v := pick(w, all)
	w.note(strings.SplitAfter(v, nameEnd)[0])
	w.count("field read")
	return v
}
