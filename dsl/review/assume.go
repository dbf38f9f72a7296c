package review

import (
	"fmt"
	"html"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
)

// Ground is the kind of thing that a result of the notebook rests on.
type Ground int

// The grounds, in the order in which the document lists them.
const (
	Assumed      Ground = iota // a default that nobody chose
	Extrapolated               // data or a law used beyond its range
	OutOfRange                 // a formula used outside its validity
	Override                   // a computed value replaced by the author
)

// heading is what stands above the list of a ground.
func (g Ground) heading() string {
	return [...]string{"assumed, for nobody chose it", "extrapolated beyond the data", "formulas outside their range", "overrides by the author"}[g]
}

// Assumption is one thing that results rest on, with the line that would change it.
type Assumption struct {
	Ground Ground
	Text   string
	Change string // "L1.At(100*degC)"; "" where nothing in the notebook does
}

// Assume records what a result of the running cell rests on, once.
func Assume(text string, ground Ground, change string) {
	e := here()
	for _, a := range e.assumed {
		if a.Ground == ground && a.Text == text {
			return
		}
	}
	e.assumed = append(e.assumed, Assumption{ground, text, change})
}

// Assumptions lists what the results of the notebook rest on: ground by ground, each once, in the order of the cells.
func Assumptions() []Assumption {
	var all []Assumption
	seen := map[string]bool{}
	for g := Assumed; g <= Override; g++ {
		for _, e := range ledger.cells {
			for _, a := range e.assumed {
				key := fmt.Sprint(a.Ground, a.Text)
				if a.Ground == g && !seen[key] {
					seen[key] = true
					all = append(all, a)
				}
			}
		}
	}
	return all
}

// Caution records what a reader must be warned of, in the running cell, once.
func Caution(text string) {
	e := here()
	for _, c := range e.cautions {
		if c == text {
			return
		}
	}
	e.cautions = append(e.cautions, text)
}

// Cautions lists the cautions of the notebook, each once, in the order of the cells.
func Cautions() []string {
	var all []string
	seen := map[string]bool{}
	for _, e := range ledger.cells {
		for _, c := range e.cautions {
			if !seen[c] {
				seen[c] = true
				all = append(all, c)
			}
		}
	}
	return all
}

// PlaceAssumptions shows the list of assumptions and cautions here, filled again whenever it changes.
func PlaceAssumptions() {
	e := here()
	e.lists++
	session.Place(listID(e.key, e.lists), assumptions())
}

func listID(key string, n int) string { return fmt.Sprintf("assumptions-%s-%d", key, n) }

// grounds gives a table for each ground that something rests on.
func grounds() []doc.Table {
	var tables []doc.Table
	for _, a := range Assumptions() {
		if n := len(tables); n == 0 || tables[n-1].Caption != a.Ground.heading() {
			tables = append(tables, doc.Table{Caption: a.Ground.heading(), Columns: []doc.Column{{Name: "what"}, {Name: "the line that would change it"}}})
		}
		last := &tables[len(tables)-1]
		last.Rows = append(last.Rows, []doc.Cell{doc.Text(a.Text), doc.Text(a.Change)})
	}
	return tables
}

func assumptions() map[string]any {
	tables := grounds()
	if len(tables) == 0 && len(Cautions()) == 0 {
		return doc.Bundle("assumptions: none so far", doc.Line("note", "assumptions: none so far"), "")
	}
	b := doc.Join(tables...)
	text, page := b["text/plain"].(string), ""
	if h, ok := b["text/html"].(string); ok {
		page = h
	}
	words, list := cautionList()
	return doc.Bundle(strings.TrimSpace(text+"\n\n"+words), page+"\n"+list, "")
}

// cautionList gives the cautions as text and as HTML.
func cautionList() (text, page string) {
	all := Cautions()
	if len(all) == 0 {
		return "", ""
	}
	var b strings.Builder
	b.WriteString(`<p class="caution"><strong>cautions</strong></p>` + "\n<ul class=\"cautions\">\n")
	for _, c := range all {
		b.WriteString("<li>" + html.EscapeString(c) + "</li>\n")
	}
	b.WriteString("</ul>")
	return "cautions:\n- " + strings.Join(all, "\n- "), b.String()
}
