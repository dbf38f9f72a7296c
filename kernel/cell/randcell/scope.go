package randcell

import (
	"fmt"
	"math/rand/v2"
	"sort"
	"strings"
)

// what a name of the notebook stands for.
type role int

const (
	variable role = iota
	function      // func with a draft of its own
	constant
	typeName
	genericFunc
	genericType
)

type entity struct {
	role   role
	name   string
	ref    string // in the reference
	typ    *typ
	deps   map[string]bool // names in its body
	body   string          // draft of a function literal, for functions and methods
	cost   int             // about how many statements a call runs
	gone   bool            // withdrawn, or not known to be there
	pinned bool            // never declared again
	value  int             // of a constant
}

// local is a variable inside a block, a function or a loop.
type local struct {
	name  string
	typ   *typ
	fixed bool // not to be assigned: loop counters
}

// writer makes one notebook.
type writer struct {
	*rand.Rand
	opt    Options
	book   *Notebook
	prefix string

	names   map[string]*entity
	numbers map[string]int // how many meanings a name has had in the reference
	locals  []local
	serial  int

	global  strings.Builder // declarations of the reference
	cell    strings.Builder // source of the cell
	body    strings.Builder // its statements in the reference
	prolog  strings.Builder // what its declarations set in the reference
	deps    []map[string]bool
	touched map[string]bool // names that the cell has used or declared
	changed map[string]bool // function variables of the reference that the cell sets
	once    bool            // the cell gives something another meaning: run again it is another cell
	past    []past

	times  int    // how often the text being written will run
	spent  int    // statements run by it
	budget int    // limit for spent
	pure   int    // >0: no assignment to names of the notebook
	sealed int    // >0: names of the notebook are out of sight, types excepted
	loop   int    // depth of loops
	callee bool   // inside a function: no output, no calls of function values
	shun   string // name of the function that is being written
}

func (w *writer) count(construct string) { w.book.Uses[construct]++ }

func (w *writer) chance(percent int) bool { return w.IntN(100) < percent }

func pick[T any](w *writer, from []T) T { return from[w.IntN(len(from))] }

// fresh gives a name that was not used before.
func (w *writer) fresh(stem string) string {
	w.serial++
	return fmt.Sprintf("%s%d", stem, w.serial)
}

// mark writes a name of the notebook and notes its use.
func (w *writer) mark(name string) string {
	for _, d := range w.deps {
		d[name] = true
	}
	if !strings.Contains(name, ".") {
		w.touched[name] = true
	}
	return nameOpen + name + nameEnd
}

func (w *writer) meaning(name string) string {
	if e := w.names[name]; e != nil {
		return e.ref
	}
	panic("randcell: nothing is called " + name)
}

func (w *writer) forReference(draft string) string { return forReference(draft, w.meaning) }

// sorted lists the names that stand for something, in order.
func (w *writer) sorted() []*entity {
	var out []*entity
	for _, e := range w.names {
		if !e.gone {
			out = append(out, e)
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].name < out[j].name })
	return out
}

func (w *writer) hidden(name string) bool {
	for _, l := range w.locals {
		if l.name == name {
			return true
		}
	}
	return false
}

// nameable tells whether the names in a type still stand for it here.
func (w *writer) nameable(t *typ) bool {
	for _, n := range t.names() {
		e := w.names[n.name]
		if e == nil || e.gone || e.ref != n.ref || w.hidden(n.name) {
			return false
		}
	}
	return true
}

// typeText writes a type and notes the names in it.
func (w *writer) typeText(t *typ) string {
	for _, n := range t.names() {
		w.mark(n.name)
	}
	return t.text()
}

// variables finds what holds a value of a type: locals and names of the notebook.
func (w *writer) variables(t *typ, settable bool) (out []string) {
	for i, l := range w.locals {
		over := false
		for _, inner := range w.locals[i+1:] {
			over = over || inner.name == l.name
		}
		if !over && same(l.typ, t) && !(settable && l.fixed) {
			out = append(out, l.name)
		}
	}
	if settable && w.pure > 0 || w.sealed > 0 {
		return out
	}
	for _, e := range w.sorted() {
		if e.role == variable && same(e.typ, t) && !w.hidden(e.name) && e.name != w.shun && !(e.typ.kind == funcKind && w.callee) {
			out = append(out, nameOpen+e.name+nameEnd)
		}
	}
	return out
}

// variable picks one of them; "" if there is none.
func (w *writer) variable(t *typ, settable bool) string {
	all := w.variables(t, settable)
	if len(all) == 0 {
		return ""
	}
	v := pick(w, all)
	if strings.HasPrefix(v, nameOpen) {
		w.mark(strings.Trim(v, nameOpen+nameEnd))
	}
	return v
}

// dependsOn tells whether a function, a method or a type uses a name, directly or through others.
func (w *writer) dependsOn(e *entity, name string) bool {
	seen := map[string]bool{}
	var reach func(e *entity) bool
	reach = func(e *entity) bool {
		if e.deps[name] {
			return true
		}
		for _, d := range sortedNames(e.deps) {
			if next := w.names[d]; next != nil && !seen[d] {
				seen[d] = true
				if reach(next) {
					return true
				}
			}
		}
		return false
	}
	return e.name == name || reach(e)
}

func sortedNames(m map[string]bool) []string {
	var out []string
	for n := range m {
		out = append(out, n)
	}
	sort.Strings(out)
	return out
}

// meant gives a new name in the reference for what a name stands for from now on.
func (w *writer) meant(name string) string {
	w.numbers[name]++
	return fmt.Sprintf("%s%s_%d", w.prefix, strings.ReplaceAll(name, ".", "_"), w.numbers[name])
}

// introduce lets a name stand for e. Functions that used it otherwise are not called any more, except where their
// text holds for the new meaning as well (again).
func (w *writer) introduce(e *entity, again bool) {
	old := w.names[e.name]
	w.names[e.name] = e
	w.touched[e.name] = true
	w.once = w.once || e.role > function || old != nil && e.role == variable
	if old == nil {
		return
	}
	for _, d := range w.sorted() {
		if d == e || d.role == variable || !w.dependsOn(d, e.name) {
			continue
		}
		if !again {
			d.gone = true
			continue
		}
		if d.role == function {
			w.count("dependent function made again")
			w.once = true
			w.setFunction(d)
		}
		if d.role == genericFunc {
			d.gone = true
		}
	}
	for _, d := range w.sorted() {
		if d.typ != nil && d.role == typeName {
			for _, m := range d.typ.methods {
				if b := w.names[d.name+"."+m.name]; b != nil && b.gone {
					d.gone = true
				}
			}
		}
	}
}

// setFunction writes the value of a function for the reference, in the meaning that names have now.
func (w *writer) setFunction(e *entity) {
	w.changed[e.ref] = true
	fmt.Fprintf(&w.prolog, "%s = %s\n", e.ref, w.forReference(e.body))
}

// redeclarable lists names that can be declared again in this cell.
func (w *writer) redeclarable(want func(*entity) bool) (out []*entity) {
	for _, e := range w.sorted() {
		if !w.touched[e.name] && !e.pinned && !strings.Contains(e.name, ".") && want(e) {
			out = append(out, e)
		}
	}
	return out
}
