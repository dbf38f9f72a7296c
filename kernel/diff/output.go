package diff

import (
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"ampturn/kernel/notebook"
)

// Outputs compares what a cell shows: number and kind of outputs, words, numbers, pictures by their twin in words and by
// their drawing. It gives the changes and how many numbers it compared.
func (t Tolerance) Outputs(saved, now []*notebook.Output) (changes []Change, numbers int) {
	saved, now = results(saved), results(now)
	if len(saved) != len(now) {
		return []Change{{Place: "outputs", Old: fmt.Sprint(len(saved)), New: fmt.Sprint(len(now))}}, 0
	}
	for i := range saved {
		c := t.output(saved[i], now[i])
		numbers += c.numbers
		for _, ch := range c.changes {
			if len(saved) > 1 {
				ch.Place = strings.TrimSuffix(fmt.Sprintf("output %d, %s", i+1, ch.Place), ", ")
			}
			changes = append(changes, ch)
		}
	}
	return changes, numbers
}

// results leaves out displays that only told how far a cell was while somebody looked on.
func results(all []*notebook.Output) []*notebook.Output {
	return slices.DeleteFunc(slices.Clone(all), func(o *notebook.Output) bool {
		own, _ := o.Metadata["ampturn"].(map[string]any)
		return own["progress"] == true
	})
}

func (t Tolerance) output(a, b *notebook.Output) compared {
	switch {
	case a.Kind != b.Kind:
		return compared{changes: []Change{{Place: "kind of output", Old: string(a.Kind), New: string(b.Kind)}}}
	case a.Kind == notebook.Stream && a.Name != b.Name:
		return compared{changes: []Change{{Place: "stream", Old: a.Name, New: b.Name}}}
	case a.Kind == notebook.Stream:
		return t.texts(a.Text, b.Text, nil)
	case a.Kind == notebook.Fault:
		return t.texts(a.Fault+": "+a.Text, b.Fault+": "+b.Text, nil)
	}
	return t.bundles(a, b)
}

// bundles compares two MIME bundles: first what carries full values, then the texts, then the drawings.
func (t Tolerance) bundles(a, b *notebook.Output) compared {
	if old, now := strings.Join(slices.Sorted(maps.Keys(a.Data)), ", "), strings.Join(slices.Sorted(maps.Keys(b.Data)), ", "); old != now {
		return compared{changes: []Change{{Place: "forms", Old: quoted(old), New: quoted(now)}}}
	}
	behind := t.behind(a, b)
	page := t.form(a, b, "text/html", t.texts, behind.fulls)
	plain := t.form(a, b, "text/plain", t.texts, append(behind.fulls, page.fulls...))
	all := compared{numbers: page.numbers + behind.numbers + plain.numbers}
	for _, c := range []compared{plain, page, behind} { // the same change is said once, in the form that reads best
		if len(all.changes) == 0 {
			all.changes = c.changes
		}
	}
	for _, kind := range slices.Sorted(maps.Keys(a.Data)) {
		switch kind {
		case "text/html", "text/plain":
			continue
		case "image/svg+xml":
			c := t.form(a, b, kind, t.drawings, nil)
			all.numbers += c.numbers
			if len(all.changes) == 0 {
				all.changes = c.changes
			}
		default:
			all.changes = append(all.changes, exact(kind, a.Data[kind], b.Data[kind])...)
		}
	}
	return all
}

// form compares one form of two bundles, if it is there.
func (t Tolerance) form(a, b *notebook.Output, kind string, by func(x, y string, fulls []float64) compared, fulls []float64) compared {
	x, ok := a.Data[kind].(string)
	y, ok2 := b.Data[kind].(string)
	if !ok || !ok2 {
		return compared{}
	}
	return by(x, y, fulls)
}

func exact(kind string, a, b any) []Change {
	x, err := json.Marshal(a)
	y, err2 := json.Marshal(b)
	if err != nil || err2 != nil || string(x) == string(y) {
		return nil
	}
	return []Change{{Place: kind, Old: fmt.Sprintf("%d bytes", len(x)), New: fmt.Sprintf("%d other bytes", len(y))}}
}

// step is what a coordinate of a drawing is rounded to, with room for one step.
const step = 0.021

// drawings compares two SVG drawings: the same elements, attributes and words in the same order, coordinates to their
// last place.
func (t Tolerance) drawings(a, b string, _ []float64) compared {
	old, now := pieces(a, false), pieces(b, false)
	if !alike(old, now) {
		return compared{changes: []Change{{Place: "picture", Old: fmt.Sprintf("%d elements", strings.Count(a, "<")), New: fmt.Sprintf("%d, or other ones", strings.Count(b, "<"))}}}
	}
	c := compared{}
	for i, p := range old {
		if !p.number {
			continue
		}
		c.numbers++
		if q := now[i]; !t.same(p.value, q.value, 0) && math.Abs(p.value-q.value) > step {
			c.changes = append(c.changes, Change{Place: "picture, a coordinate", Old: p.text, New: q.text})
			break
		}
	}
	return c
}

// behind compares the numbers that the metadata carry in full. Metadata that were not saved say nothing.
func (t Tolerance) behind(a, b *notebook.Output) compared {
	x, ok := a.Metadata["ampturn"]
	y, ok2 := b.Metadata["ampturn"]
	if !ok || !ok2 {
		return compared{}
	}
	var c compared
	t.values(&c, "", plainValue(x), plainValue(y), fullNoise)
	return c
}

// noiseOf is the magnitude that counts as zero for a number in full: of one without a unit more, for it is of the order
// of one or a residual.
func noiseOf(unit string) float64 {
	if unit == "" || unit == "percent" {
		return printedNoise
	}
	return fullNoise
}

// rows compares the rows of two tables of equal size, each number by the unit of its column. It tells whether they are
// such tables.
func (t Tolerance) rows(c *compared, a, b map[string]any) bool {
	heads, ok := a["columns"].([]any)
	old, ok2 := a["rows"].([]any)
	now, ok3 := b["rows"].([]any)
	if !ok || !ok2 || !ok3 || len(old) != len(now) {
		return false
	}
	for i := range old {
		x, _ := old[i].([]any)
		y, _ := now[i].([]any)
		if len(x) != len(y) || len(x) > len(heads) {
			return false
		}
	}
	for i := range old {
		x, _ := old[i].([]any)
		y, _ := now[i].([]any)
		for k := range x {
			head, _ := heads[k].(string)
			_, unit := cutUnit(head)
			t.values(c, fmt.Sprintf("row %d, %s", i+1, head), x[k], y[k], noiseOf(unit))
		}
	}
	return true
}

// values compares two JSON values; noise is the magnitude that counts as zero.
func (t Tolerance) values(c *compared, place string, a, b any, noise float64) {
	switch x := a.(type) {
	case map[string]any:
		y, _ := b.(map[string]any)
		unit, ok := x["unit"].(string)
		for _, key := range slices.Sorted(maps.Keys(x)) {
			if key == "value" && ok {
				noise = noiseOf(unit)
			}
			if key == "rows" && t.rows(c, x, y) {
				continue
			}
			t.values(c, strings.TrimPrefix(place+" "+key, " "), x[key], y[key], noise)
		}
	case []any:
		y, _ := b.([]any)
		if len(x) != len(y) {
			c.changes = append(c.changes, Change{Place: place, Old: fmt.Sprintf("%d values", len(x)), New: fmt.Sprintf("%d values", len(y))})
			return
		}
		for i := range x {
			t.values(c, place, x[i], y[i], noise)
		}
	case float64:
		c.numbers++
		if y, ok := b.(float64); !ok || !t.same(x, y, noise) {
			c.changes = append(c.changes, Change{Place: place + " in full", Old: fmt.Sprint(a), New: fmt.Sprint(b)})
			return
		}
		c.fulls = append(c.fulls, x)
	case string:
		if y, ok := b.(string); !ok || len(t.texts(x, y, nil).changes) > 0 {
			c.changes = append(c.changes, Change{Place: place, Old: quoted(x), New: quoted(fmt.Sprint(b))})
		}
	}
}

// plainValue gives a JSON value with numbers as float64.
func plainValue(v any) any {
	text, err := json.Marshal(v)
	if err != nil {
		return nil
	}
	var out any
	if json.Unmarshal(text, &out) != nil {
		return nil
	}
	return out
}
