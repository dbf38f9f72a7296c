package randcell

import (
	"fmt"
	"strings"
)

// past is a cell that ran and can run again with the same meaning: with what the names in it stood for.
type past struct {
	number    int
	cell      Cell
	refs      map[string]string
	functions map[string]entity
}

// remember keeps the cell that has just run, unless it gave names another meaning.
func (w *writer) remember(c Cell) {
	if w.once {
		return
	}
	p := past{number: len(w.book.Cells), cell: c, refs: map[string]string{}, functions: map[string]entity{}}
	for name := range w.touched {
		e := w.names[name]
		if e == nil {
			return
		}
		p.refs[name] = e.ref
		if e.role == function && w.changed[e.ref] {
			p.functions[name] = *e
		}
	}
	w.past = append(w.past, p)
}

// oncemore runs an earlier cell again; it tells whether there was one.
func (w *writer) oncemore(run *strings.Builder) bool {
	p := pick(w, w.past)
	for _, name := range sortedRefs(p.refs) {
		if e := w.names[name]; e == nil || e.gone || e.ref != p.refs[name] {
			return false
		}
	}
	before := w.snapshot()
	for name, e := range p.functions {
		w.names[name] = &e
	}
	for name, e := range p.functions { // an older function must not come to call itself
		for d := range e.deps {
			if other := w.names[d]; other != nil && other.role == function && d != name && w.dependsOn(other, name) {
				w.names = before
				return false
			}
		}
	}
	w.count("cell run again")
	w.book.Cells = append(w.book.Cells, p.cell)
	fmt.Fprintf(run, "\tcell(%d, %scell%d)\n", len(w.book.Cells), w.prefix, p.number)
	return true
}

func sortedRefs(m map[string]string) []string {
	set := map[string]bool{}
	for n := range m {
		set[n] = true
	}
	return sortedNames(set)
}
