package review

import (
	"math"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc/phys"
)

// row is one line of the table of verdicts.
type row struct {
	what, value, limit, margin, where, words string
	status                                   Status
	exact                                    float64 // the value in full, NaN where there is none
}

// rows lists all verdicts of the notebook in the order of their cells; the checks of a requirement stand where it does.
func rows() []row {
	var all []row
	for _, e := range ledger.cells {
		for _, item := range e.items {
			switch item := item.(type) {
			case *Verdict:
				all = append(all, item.row(item.What))
			case *Requirement:
				if len(item.checks) == 0 {
					all = append(all, item.row())
				}
				for _, v := range item.checks {
					all = append(all, v.row(item.What))
				}
			case *OpenPoint:
				all = append(all, item.row())
			}
		}
	}
	return all
}

func (v *Verdict) row(what string) row {
	return row{what: what, value: phys.Format(v.Value, known(v.unit())), limit: v.Rule.String(), margin: strings.TrimPrefix(v.marginWords(), "margin "),
		where: v.Where(), words: v.StatusWords(), status: v.Status(), exact: v.Value}
}

func (r *Requirement) row() row {
	words := "OPEN"
	if r.waived != nil {
		words = r.waived.words()
	}
	return row{what: r.What, value: "not checked", limit: r.Rule.String(), words: words, status: r.Status(), exact: math.NaN()}
}

func (p *OpenPoint) row() row {
	words := "OPEN"
	if p.waived != nil {
		words = p.waived.words()
	}
	return row{what: p.What, where: "for " + p.Owner, words: words, status: p.Status(), exact: math.NaN()}
}

// Table is the table of all verdicts of the notebook.
func Table() doc.Table {
	t := doc.Table{Caption: "verdicts: " + Count().String(), Columns: []doc.Column{{Name: "what"}, {Name: "value", Mixed: true}, {Name: "limit"},
		{Name: "margin"}, {Name: "corner and conditions"}, {Name: "verdict"}}}
	if !ledger.finished {
		t.Caption = "verdicts so far: " + Count().String()
	}
	for _, r := range rows() {
		value := doc.Cell{Words: r.value}
		if !math.IsNaN(r.exact) {
			value = doc.Cell{Words: r.value, Value: r.exact, Number: true, Printed: true}
		}
		verdict := doc.Cell{Words: r.words, Class: strings.ToLower(r.status.String())}
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(r.what), value, doc.Text(r.limit), doc.Text(r.margin), doc.Text(r.where), verdict})
	}
	for _, e := range ledger.cells {
		for _, w := range e.waives {
			if !waives(w) {
				t.Notes = append(t.Notes, "the waiver of \""+w.what+"\" by "+w.who+" has nothing to waive")
			}
		}
	}
	return t
}

// waives says whether a waiver stands in the table.
func waives(w *waiver) bool {
	for _, r := range rows() {
		if r.status == Waived && r.what == w.what {
			return true
		}
	}
	return false
}
