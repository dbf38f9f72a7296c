package review

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc/phys"
)

// row is one line of the table of verdicts.
type row struct {
	what, value, limit, margin, where, flips, words string
	status                                          Status
	exact                                           float64    // the value in full, NaN where there is none
	order                                           [3]float64 // the worst comes first: status, thin or not, margin
	more                                            []row      // the other conditions under the same name
}

// every lists all verdicts of the notebook in the order of their cells; the checks of a requirement stand where it does.
func every() []row {
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
	if len(all) > 0 {
		for _, p := range insulation() {
			all = append(all, p.row())
		}
	}
	return all
}

// rows gives one row a name, with its worst condition: a verdict that fails before one that passes, then the least margin
// relative to its limit. The others are folded into it.
func rows() []row {
	var names []string
	of := map[string][]row{}
	for _, r := range every() {
		if of[r.what] == nil {
			names = append(names, r.what)
		}
		of[r.what] = append(of[r.what], r)
	}
	all := make([]row, len(names))
	for i, name := range names {
		group := of[name]
		worst := 0
		for k := range group {
			if slices.Compare(group[k].order[:], group[worst].order[:]) < 0 {
				worst = k
			}
		}
		all[i] = group[worst]
		all[i].more = append(slices.Clone(group[:worst]), group[worst+1:]...)
	}
	return all
}

// rank orders outcomes, the worst first.
var rank = map[Status]float64{Fail: 0, Open: 1, Waived: 2, Pass: 3}

func (v *Verdict) row(what string) row {
	r := row{what: what, value: phys.Format(v.Value, known(v.unit())), limit: v.Rule.String(), margin: v.marginWords(),
		where: v.Where(), flips: v.flipWords(), words: v.StatusWords(), status: v.Status(), exact: v.Value}
	r.order = [3]float64{rank[r.status], 1, v.Rule.MarginShare(v.Value)}
	if v.Thin() || v.Unknown != "" {
		r.order[1] = 0
	}
	if math.IsNaN(r.order[2]) {
		r.order[2] = v.Rule.Margin(v.Value)
	}
	if v.Uncertainty > 0 {
		r.value += " +-" + phys.FormatDigits(v.Uncertainty, "percent", 2)
	}
	return r
}

func (r *Requirement) row() row {
	words := "OPEN"
	if r.waived != nil {
		words = r.waived.words()
	}
	return row{what: r.What, value: "not checked", limit: r.Rule.String(), words: words, status: r.Status(), exact: math.NaN(), order: [3]float64{rank[r.Status()]}}
}

func (p *OpenPoint) row() row {
	words := "OPEN"
	if p.waived != nil {
		words = p.waived.words()
	}
	return row{what: p.What, where: "for " + p.Owner, words: words, status: p.Status(), exact: math.NaN(), order: [3]float64{rank[p.Status()]}}
}

// cells are a row's cells from the value on.
func (r row) cells() []doc.Cell {
	value := doc.Cell{Words: r.value}
	if !math.IsNaN(r.exact) {
		value = doc.Cell{Words: r.value, Value: r.exact, Number: true, Printed: true}
	}
	verdict := doc.Cell{Words: r.words, Class: strings.ToLower(r.status.String())}
	where := r.where
	if r.flips != "" {
		where += ". Flips at: " + r.flips
	}
	return []doc.Cell{value, doc.Text(r.limit), doc.Text(strings.TrimPrefix(r.margin, "margin ")), doc.Text(strings.TrimPrefix(where, ". ")), verdict}
}

// Table is the table of all verdicts of the notebook: one row a name with its worst condition, the others folded.
func Table() doc.Table {
	all := rows()
	t := doc.Table{Caption: "verdicts: " + Count().String(), Columns: append([]doc.Column{{Name: "what"}}, columns("worst value")...)}
	if !ledger.finished {
		t.Caption = "verdicts so far: " + Count().String()
	}
	for i, r := range all {
		t.Rows = append(t.Rows, append([]doc.Cell{doc.Text(r.what)}, r.cells()...))
		if len(r.more) > 0 {
			t.Folds = append(t.Folds, fold(i, r))
		}
	}
	for _, e := range ledger.cells {
		for _, w := range e.waives {
			if isInsulation(w.what) {
				t.Notes = append(t.Notes, "the waiver of \""+w.what+"\" by "+w.who+" has no effect: insulation stays OPEN until a qualified person has checked the standard that applies")
			} else if !waives(all, w) {
				t.Notes = append(t.Notes, "the waiver of \""+w.what+"\" by "+w.who+" has nothing to waive")
			}
		}
	}
	if len(all) > 0 && !listed() {
		for _, c := range Cautions() {
			t.Notes = append(t.Notes, "caution: "+c)
		}
	}
	return t
}

func columns(value string) []doc.Column {
	return []doc.Column{{Name: value, Mixed: true}, {Name: "limit"}, {Name: "margin"}, {Name: "corner, conditions, what flips it"}, {Name: "verdict"}}
}

// fold is the other conditions of a row, the worst of them first.
func fold(after int, r row) doc.Fold {
	more := slices.Clone(r.more)
	slices.SortStableFunc(more, func(a, b row) int { return slices.CompareFunc(a.order[:], b.order[:], cmp.Compare[float64]) })
	f := doc.Fold{After: after, Summary: fmt.Sprintf("%s: %d more conditions, all with more margin", r.what, len(more))}
	if len(more) == 1 {
		f.Summary = r.what + ": 1 more condition, with more margin"
	}
	if slices.ContainsFunc(more, func(m row) bool { return m.order[2] <= r.order[2] }) { // equal, or the row is an OPEN or a thin one
		f.Summary = fmt.Sprintf("%s: %d more conditions, none of them worse", r.what, len(more))
		if len(more) == 1 {
			f.Summary = r.what + ": 1 more condition, not worse"
		}
	}
	f.Table.Columns = columns("value")
	for _, m := range more {
		f.Table.Rows = append(f.Table.Rows, m.cells())
	}
	return f
}

// waives says whether a waiver stands in the table.
func waives(all []row, w *waiver) bool {
	for _, r := range all {
		for _, one := range append([]row{r}, r.more...) {
			if one.status == Waived && one.what == w.what {
				return true
			}
		}
	}
	return false
}

// listed says whether the document has a place for assumptions and cautions.
func listed() bool {
	for _, e := range ledger.cells {
		if e.lists > 0 {
			return true
		}
	}
	return false
}
