package review

import (
	"fmt"
	"html"
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
)

// Assume records what a result of the running cell assumes or extrapolates, once.
func Assume(text string) {
	e := here()
	if !slices.Contains(e.assumed, text) {
		e.assumed = append(e.assumed, text)
	}
}

// Assumed lists what the results of the notebook assume or extrapolate, each once, in the order of the cells.
func Assumed() []string {
	var all []string
	for _, e := range ledger.cells {
		for _, text := range e.assumed {
			if !slices.Contains(all, text) {
				all = append(all, text)
			}
		}
	}
	return all
}

// PlaceAssumptions shows the list of assumptions here, filled again whenever it changes.
func PlaceAssumptions() {
	e := here()
	e.lists++
	session.Place(listID(e.key, e.lists), assumptions())
}

func listID(key string, n int) string { return fmt.Sprintf("assumptions-%s-%d", key, n) }

func assumptions() map[string]any {
	all := Assumed()
	if len(all) == 0 {
		return doc.Bundle("assumptions: none so far", doc.Line("note", "assumptions: none so far"), "")
	}
	var b strings.Builder
	b.WriteString("<ul class=\"assumptions\">\n")
	for _, text := range all {
		b.WriteString("<li>" + html.EscapeString(text) + "</li>\n")
	}
	b.WriteString("</ul>")
	return doc.Bundle("assumptions:\n- "+strings.Join(all, "\n- "), b.String(), "")
}
