package diff

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"ampturn/kernel/notebook"
)

// Moved is one thing that two revisions have differently. Old is empty for what is new, New for what is gone.
type Moved struct {
	Name     string // "height [overload, hot]", "cell 4: L1.GapFor(...)"
	Old, New string
	Note     string   // what belongs to it: margins, a limit that changed too
	Lines    []string // inputs: the lines that changed, "- " and "+ " in front
}

// Revisions is what moved between two run notebooks.
type Revisions struct {
	Verdicts, Values, Inputs []Moved
}

// None tells that nothing moved.
func (r Revisions) None() bool { return len(r.Verdicts)+len(r.Values)+len(r.Inputs) == 0 }

// Format writes a number with its SI unit.
type Format func(x float64, unit string) string

// Plain writes a number with six digits and its unit as it is.
func Plain(x float64, unit string) string {
	return strings.TrimSpace(strconv.FormatFloat(x, 'g', 6, 64) + " " + unit)
}

// Revisions compares two run notebooks: their verdicts, the values that their cells show, their cells and data files.
func (t Tolerance) Revisions(old, now *notebook.Notebook, format Format) Revisions {
	if format == nil {
		format = Plain
	}
	a, b := old.Record(), now.Record()
	if a == nil {
		a = &notebook.Record{}
	}
	if b == nil {
		b = &notebook.Record{}
	}
	r := Revisions{Verdicts: t.verdicts(a.Verdicts, b.Verdicts, format)}
	pairs := align(old, now)
	number, before := numbers(now), numbers(old)
	for _, p := range pairs {
		r.Values = append(r.Values, t.shown(p, number, before, format)...)
		r.Inputs = append(r.Inputs, input(p, number, before)...)
	}
	r.Inputs = append(r.Inputs, named("data file", a.Files, b.Files)...)
	r.Inputs = append(r.Inputs, named("", a.Provenance, b.Provenance)...)
	return r
}

// numbers gives the code cells of a notebook their numbers.
func numbers(nb *notebook.Notebook) map[*notebook.Cell]int {
	m := map[*notebook.Cell]int{}
	for _, c := range Runnable(nb) {
		m[c.Cell] = c.Number
	}
	return m
}

// cellName names the cell of a pair by its place in the newer revision, or in the older one if it is gone.
func (p pair) name(number, before map[*notebook.Cell]int) string {
	c, n := p.now, number[p.now]
	if c == nil {
		c, n = p.old, before[p.old]
	}
	if c.Kind == notebook.Code {
		return fmt.Sprintf("cell %d", n)
	}
	return "text " + quoted(strings.TrimLeft(c.FirstLine(), "# "))
}

// key is what a verdict is known by across revisions: its name, its corner, its place among equals.
type key struct {
	what, corner string
	n            int
}

func keyed(list []notebook.Verdict) (keys []key, by map[key]notebook.Verdict) {
	by, count := map[key]notebook.Verdict{}, map[key]int{}
	for _, v := range list {
		k := key{v.What, v.Corner, 0}
		k.n = count[k]
		count[key{v.What, v.Corner, 0}]++
		keys = append(keys, k)
		by[k] = v
	}
	return keys, by
}

// verdicts compares two lists of verdicts.
func (t Tolerance) verdicts(old, now []notebook.Verdict, format Format) []Moved {
	var moved []Moved
	oldKeys, before := keyed(old)
	newKeys, after := keyed(now)
	for _, k := range newKeys {
		v, was := after[k], before[k]
		if _, ok := before[k]; !ok {
			moved = append(moved, Moved{Name: title(v), New: outcome(v, format), Note: v.Where})
			continue
		}
		if m, ok := t.verdict(was, v, format); ok {
			moved = append(moved, m)
		}
	}
	for _, k := range oldKeys {
		if _, ok := after[k]; !ok {
			moved = append(moved, Moved{Name: title(before[k]), Old: outcome(before[k], format)})
		}
	}
	return moved
}

// verdict compares one verdict.
func (t Tolerance) verdict(was, v notebook.Verdict, format Format) (Moved, bool) {
	limit := len(t.texts(was.Limit, v.Limit, nil).changes) > 0
	where := len(t.texts(was.Where, v.Where, nil).changes) > 0
	value := !t.numbers(was.Value, v.Value)
	if was.Status == v.Status && !limit && !where && !value {
		return Moved{}, false
	}
	m := Moved{Name: title(v), Old: outcome(was, format), New: outcome(v, format)}
	var notes []string
	if limit {
		notes = append(notes, "limit "+was.Limit+" -> "+v.Limit)
	} else if v.Limit != "" && v.Value != nil {
		notes = append(notes, v.Limit)
	}
	if was.Margin != nil && v.Margin != nil && !t.numbers(was.Margin, v.Margin) {
		unit := difference(v.Unit)
		notes = append(notes, "margin "+format(*was.Margin, unit)+" -> "+format(*v.Margin, unit))
	}
	if where {
		notes = append(notes, "conditions "+was.Where+" -> "+v.Where)
	}
	m.Note = strings.Join(notes, "; ")
	return m, true
}

// difference is the unit of a difference of two values.
func difference(unit string) string {
	if unit == "degC" {
		return "K"
	}
	return unit
}

func (t Tolerance) numbers(a, b *float64) bool {
	if a == nil || b == nil {
		return a == b
	}
	return t.same(*a, *b, fullNoise)
}

func title(v notebook.Verdict) string {
	if v.Corner != "" {
		return v.What + " [" + v.Corner + "]"
	}
	return v.What
}

func outcome(v notebook.Verdict, format Format) string {
	if v.Value == nil {
		return v.Status
	}
	return format(*v.Value, v.Unit) + " " + v.Status
}

// named compares two lists of named values, such as data files with their hashes.
func named(kind string, old, now []notebook.Named) []Moved {
	var moved []Moved
	in := func(list []notebook.Named, n notebook.Named) (same bool, others []string) {
		for _, x := range list {
			if x == n {
				return true, nil
			}
			if x.Name == n.Name {
				others = append(others, brief(x.Value))
			}
		}
		return false, others
	}
	for _, n := range now {
		if same, was := in(old, n); !same {
			moved = append(moved, Moved{Name: strings.TrimSpace(kind + " " + n.Name), Old: strings.Join(was, ", "), New: brief(n.Value)})
		}
	}
	for _, n := range old {
		if same, others := in(now, n); !same && len(others) == 0 {
			moved = append(moved, Moved{Name: strings.TrimSpace(kind + " " + n.Name), Old: brief(n.Value)})
		}
	}
	return moved
}

// brief shortens a hash.
func brief(s string) string {
	if len(s) == 64 {
		return s[:12]
	}
	return s
}

// share is how far a number moved, in words; "" where that says nothing.
func share(a, b float64) string {
	if a == 0 || math.IsInf(b/a, 0) {
		return ""
	}
	return fmt.Sprintf("%+.2g %%", (b/a-1)*100)
}
