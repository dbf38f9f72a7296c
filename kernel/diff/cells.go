package diff

import (
	"fmt"
	"strings"

	"ampturn/kernel/notebook"
)

// Numbered is a code cell with its place among those that have something to run: "cell 4" in messages.
type Numbered struct {
	*notebook.Cell
	Number int
}

// Runnable lists the code cells that have something to run.
func Runnable(nb *notebook.Notebook) []Numbered {
	var list []Numbered
	for _, c := range nb.Cells {
		if c.Kind == notebook.Code && strings.TrimSpace(c.Source) != "" {
			list = append(list, Numbered{c, len(list) + 1})
		}
	}
	return list
}

// Stale tells, by the number of a cell, why its saved outputs cannot be those of the notebook as it stands: it was not
// run, cells ran in another order, the cell was changed after the run that left them.
func Stale(nb *notebook.Notebook) map[int][]string {
	reasons := map[int][]string{}
	marks := map[string]notebook.CellMark{}
	if r := nb.Record(); r != nil {
		for _, m := range r.Cells {
			marks[m.ID] = m
		}
	}
	last, at := 0, 0
	for _, c := range Runnable(nb) {
		say := func(format string, args ...any) {
			reasons[c.Number] = append(reasons[c.Number], fmt.Sprintf(format, args...))
		}
		switch {
		case c.Count == 0 && len(c.Outputs) == 0:
			say("was not run when the notebook was saved")
		case c.Count == 0:
			say("stale: its outputs carry no execution count")
		case c.Count <= last:
			say("stale: it ran as [%d], before cell %d, which ran as [%d]; the saved order is not the order of the run", c.Count, at, last)
		}
		for _, o := range c.Outputs {
			if o.Kind == notebook.Result && c.Count > 0 && o.Count > 0 && o.Count != c.Count {
				say("stale: its result is of run [%d], the cell last ran as [%d]", o.Count, c.Count)
				break
			}
		}
		if m, ok := marks[c.ID]; ok {
			if now := c.Mark(); now.Source != m.Source && now.Outputs == m.Outputs {
				say("stale: the cell was changed after the run that left its outputs")
			}
		}
		if c.Count > last {
			last, at = c.Count, c.Number
		}
	}
	return reasons
}

// pair is a cell in two revisions; nil: it is not in that one.
type pair struct{ old, now *notebook.Cell }

// align pairs the cells of two revisions: by their id, then by their source, and what is left between two pairs in
// order.
func align(a, b *notebook.Notebook) []pair {
	byID := map[string]*notebook.Cell{}
	for _, c := range a.Cells {
		byID[c.ID] = c
	}
	of, taken := map[*notebook.Cell]*notebook.Cell{}, map[*notebook.Cell]bool{}
	join := func(now, old *notebook.Cell) { of[now], taken[old] = old, true }
	for _, c := range b.Cells {
		if old := byID[c.ID]; old != nil && old.Kind == c.Kind {
			join(c, old)
		}
	}
	for _, c := range b.Cells {
		if of[c] != nil {
			continue
		}
		for _, old := range a.Cells {
			if !taken[old] && old.Kind == c.Kind && old.Source == c.Source {
				join(c, old)
				break
			}
		}
	}
	place := map[*notebook.Cell]int{}
	for i, c := range a.Cells {
		place[c] = i
	}
	next := 0 // in a, behind the pair before
	for _, c := range b.Cells {
		if old := of[c]; old != nil {
			next = place[old] + 1
			continue
		}
		if next < len(a.Cells) && !taken[a.Cells[next]] && a.Cells[next].Kind == c.Kind {
			join(c, a.Cells[next])
			next++
		}
	}
	var list []pair
	at := 0
	for _, c := range b.Cells {
		old := of[c]
		if old != nil {
			for ; at < place[old]; at++ { // what was left out before it
				if !taken[a.Cells[at]] {
					list = append(list, pair{a.Cells[at], nil})
				}
			}
			at = max(at, place[old]+1)
		}
		list = append(list, pair{old, c})
	}
	for ; at < len(a.Cells); at++ {
		if !taken[a.Cells[at]] {
			list = append(list, pair{a.Cells[at], nil})
		}
	}
	return list
}
