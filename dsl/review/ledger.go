package review

import (
	"fmt"
	"slices"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
)

// entries is what one cell has stated, in order.
type entries struct {
	key    string
	items  []any // *Verdict of a Limit, *Requirement, *OpenPoint
	checks []check
	waives []*waiver
	places int // tables of verdicts placed by this cell

	assumed   []Assumption // what its results rest on
	cautions  []string
	insulated []string // parts with windings that it computed
	lists     int      // lists of assumptions placed by this cell
}

// check is a verdict on a requirement, which may have been stated in another cell.
type check struct {
	of      *Requirement
	verdict *Verdict
}

// ledger is the one of the notebook: its cells in the order in which they first stated something.
var ledger struct {
	cells    []*entries
	corner   string
	changed  bool
	finished bool
}

func init() {
	session.OnReset(Clear)
	session.OnBegin(func(key string) { drop(key); ledger.corner, ledger.finished = "", false })
	session.OnPass(func() { ledger.corner = "" })
	session.OnEnd(func(key string, failed bool) {
		ledger.corner = ""
		if failed {
			drop(key)
		}
		if ledger.changed {
			ledger.changed = false
			fill()
		}
	})
	session.OnFinish(func() { ledger.finished = true; fill() })
}

// Clear forgets everything.
func Clear() { ledger.cells, ledger.corner, ledger.changed, ledger.finished = nil, "", false, false }

// drop forgets what a cell has stated; its place among the cells stays.
func drop(key string) {
	for _, e := range ledger.cells {
		if e.key == key && (len(e.items)+len(e.checks)+len(e.waives)+len(e.assumed)+len(e.cautions)+len(e.insulated)+e.places+e.lists > 0) {
			*e = entries{key: key}
			ledger.changed = true
		}
	}
	settle()
}

// here is the entry of the running cell.
func here() *entries {
	key, _ := session.Cell()
	i := slices.IndexFunc(ledger.cells, func(e *entries) bool { return e.key == key })
	if i < 0 {
		ledger.cells = append(ledger.cells, &entries{key: key})
		i = len(ledger.cells) - 1
	}
	ledger.changed = true
	return ledger.cells[i]
}

// State records a verdict of a limit.
func State(v *Verdict) {
	v.Corner = ledger.corner
	e := here()
	e.items = append(e.items, v)
	settle()
}

// Demand records a requirement.
func Demand(r *Requirement) {
	e := here()
	e.items = append(e.items, r)
	settle()
}

// Answer records a verdict on a requirement.
func (r *Requirement) Answer(v *Verdict) {
	v.Corner = ledger.corner
	e := here()
	e.checks = append(e.checks, check{r, v})
	settle()
}

// Leave records an open point.
func Leave(p *OpenPoint) {
	e := here()
	e.items = append(e.items, p)
	settle()
}

// Waive records that somebody answers for what does not pass under a name.
func Waive(what, reason, who string) {
	e := here()
	e.waives = append(e.waives, &waiver{what: what, reason: reason, who: who})
	settle()
}

// Corner names the case that the verdicts which follow belong to, up to the end of the pass of a loop or of the cell;
// "" for none.
func Corner(name string) { ledger.corner = name }

// settle links checks to their requirements and waivers to what they waive.
func settle() {
	waivers := map[string]*waiver{}
	for _, e := range ledger.cells {
		for _, w := range e.waives {
			waivers[w.what] = w
		}
		for _, item := range e.items {
			if r, ok := item.(*Requirement); ok {
				r.checks = nil
			}
		}
	}
	for _, e := range ledger.cells {
		for _, c := range e.checks {
			c.of.checks = append(c.of.checks, c.verdict)
			c.verdict.waived = waivers[c.of.What]
		}
		for _, item := range e.items {
			switch item := item.(type) {
			case *Verdict:
				item.waived = waivers[item.What]
			case *Requirement:
				item.waived = waivers[item.What]
			case *OpenPoint:
				if !isInsulation(item.What) {
					item.waived = waivers[item.What]
				}
			}
		}
	}
}

// Summary counts the verdicts of the notebook, one for each row of their table.
type Summary struct {
	Pass, Fail, Open, Waived int
}

// Count gives the summary: names are counted, each with its worst condition.
func Count() Summary {
	var s Summary
	for _, r := range rows() {
		switch r.status {
		case Pass:
			s.Pass++
		case Fail:
			s.Fail++
		case Open:
			s.Open++
		case Waived:
			s.Waived++
		}
	}
	return s
}

// String counts in words: "5 PASS, 1 FAIL, 2 OPEN".
func (s Summary) String() string {
	text := ""
	for _, part := range []struct {
		n    int
		word Status
	}{{s.Pass, Pass}, {s.Fail, Fail}, {s.Open, Open}, {s.Waived, Waived}} {
		if part.n > 0 {
			if text != "" {
				text += ", "
			}
			text += fmt.Sprintf("%d %s", part.n, part.word)
		}
	}
	if text == "" {
		return "no verdicts"
	}
	return text
}

// Place shows the table of all verdicts here, filled again whenever it changes and when the notebook has run.
func Place() {
	e := here()
	e.places++
	session.Place(placeID(e.key, e.places), bundle())
}

func placeID(key string, n int) string { return fmt.Sprintf("verdicts-%s-%d", key, n) }

// fill brings all places up to date.
func fill() {
	for _, e := range ledger.cells {
		for n := 1; n <= e.places; n++ {
			session.Update(placeID(e.key, n), bundle())
		}
		for n := 1; n <= e.lists; n++ {
			session.Update(listID(e.key, n), assumptions())
		}
	}
}

func bundle() map[string]any {
	t := Table()
	if !ledger.finished && len(t.Rows) == 0 {
		text := "verdicts: none yet; the finished run fills this place"
		return doc.Bundle(text, "<p>"+text+"</p>", "")
	}
	return t.Bundle()
}
