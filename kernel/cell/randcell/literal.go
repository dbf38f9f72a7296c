package randcell

import (
	"fmt"
	"strconv"
	"strings"
)

// literal writes a composite or function literal.
func (w *writer) literal(t *typ, depth int) string {
	switch t.kind {
	case sliceKind:
		w.count("slice literal")
		var parts []string
		for range 1 + w.IntN(4) {
			parts = append(parts, w.intoFloat(t.elem, depth-1, "W1 element"))
		}
		return w.typeText(t) + "{" + strings.Join(parts, ", ") + "}"
	case mapKind:
		w.count("map literal")
		var parts []string
		for i := range 1 + w.IntN(4) {
			k := strconv.Itoa((i*7 + 5) % 4)
			if t.key.kind == stringKind {
				k = strconv.Quote(string("dbca"[i]))
			}
			parts = append(parts, k+": "+w.intoFloat(t.elem, depth-1, "W1 element"))
		}
		return w.typeText(t) + "{" + strings.Join(parts, ", ") + "}"
	case structKind:
		w.count("struct literal")
		var parts []string
		keyed := w.chance(60)
		for _, f := range t.fields {
			v := w.intoFloat(f.typ, depth-1, "W1 field")
			if keyed {
				v = f.name + ": " + v
			}
			parts = append(parts, v)
		}
		return w.typeText(t) + "{" + strings.Join(parts, ", ") + "}"
	case pointerKind:
		return "&" + w.literal(t.elem, depth)
	case interfaceKind:
		of := pick(w, t.members)
		if of.methods[0].pointer {
			return "&" + w.literal(of, depth)
		}
		return w.literal(of, depth)
	case funcKind:
		return w.funcLiteral(t, depth)
	}
	panic(fmt.Sprintf("randcell: no literal of %s", t.refText()))
}

// intoFloat writes a value for a place of a type; a whole number now and then where a float64 is due.
func (w *writer) intoFloat(t *typ, depth int, construct string) string {
	if t.kind == floatKind && w.chance(25) {
		if v := w.variable(intType, false); v != "" {
			w.count(construct)
			return float(v)
		}
	}
	return w.value(t, max(depth, 0))
}

func (w *writer) funcLiteral(t *typ, depth int) string {
	var params []string
	var more []local
	for _, p := range t.params {
		l := local{name: w.fresh("p"), typ: p}
		more = append(more, l)
		params = append(params, l.name+" "+w.typeText(p))
	}
	w.count("function literal")
	body := w.inner(more, func() string {
		if w.chance(40) && len(t.params) > 0 {
			return "if " + w.boolExpr(1) + " { return " + w.value(t.results[0], 0) + " }; return " + w.value(t.results[0], depth)
		}
		return "return " + w.value(t.results[0], depth)
	})
	return "func(" + strings.Join(params, ", ") + ") " + w.typeText(t.results[0]) + " { " + body + " }"
}
