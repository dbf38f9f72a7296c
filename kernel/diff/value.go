package diff

import (
	"fmt"
	"regexp"
	"strings"

	"ampturn/kernel/notebook"
)

// shownValue is one thing that a cell shows, under the name that two revisions have in common.
type shownValue struct {
	name   string // the expression as typed, or the row and the column of a table
	value  float64
	unit   string
	number bool
	text   string // of what is no number: its words

	picture bool // the words are the twin of a picture
}

// shown compares what a cell shows in two revisions.
func (t Tolerance) shown(p pair, number, before map[*notebook.Cell]int, format Format) []Moved {
	if (p.now != nil && p.now.Kind != notebook.Code) || (p.old != nil && p.old.Kind != notebook.Code) {
		return nil
	}
	cell := p.name(number, before)
	named := func(v shownValue) string { return cell + ": " + shortened(v.name) }
	old, now := valuesOf(p.old), valuesOf(p.now)
	was := map[string]shownValue{}
	for _, v := range old {
		was[v.name] = v
	}
	is := map[string]bool{}
	var moved []Moved
	for _, v := range now {
		is[v.name] = true
		o, ok := was[v.name]
		if !ok {
			moved = append(moved, Moved{Name: named(v), New: v.print(format)})
			continue
		}
		moved = append(moved, t.value(named(v), o, v, format)...)
	}
	for _, o := range old {
		if !is[o.name] {
			moved = append(moved, Moved{Name: named(o), Old: o.print(format)})
		}
	}
	return moved
}

// value compares one value.
func (t Tolerance) value(name string, o, v shownValue, format Format) []Moved {
	switch {
	case o.number && v.number:
		if o.unit == v.unit && t.same(o.value, v.value, fullNoise) {
			return nil
		}
		return []Moved{{Name: name, Old: o.print(format), New: v.print(format), Note: share(o.value, v.value)}}
	case o.number != v.number:
		return []Moved{{Name: name, Old: o.print(format), New: v.print(format)}}
	}
	moved := t.lines(name, o.text, v.text)
	if v.picture && len(moved) > 0 {
		more := "picture"
		if n := len(moved) - 1; n > 0 {
			more = fmt.Sprintf("picture, with %d more of its lines", n)
		}
		moved[0].Note = more
		return moved[:1]
	}
	return moved
}

// shortened cuts the middle of a long expression.
func shortened(name string) string {
	const most, end = 80, 25
	r := []rune(name)
	if len(r) <= most {
		return name
	}
	return string(r[:most-end]) + " .. " + string(r[len(r)-end:])
}

// lines compares texts line by line.
func (t Tolerance) lines(name, a, b string) []Moved {
	if len(t.texts(a, b, nil).changes) == 0 {
		return nil
	}
	var moved []Moved
	out, in := changed(strings.Split(a, "\n"), strings.Split(b, "\n"), func(x, y string) bool { return len(t.texts(x, y, nil).changes) == 0 })
	for i := range max(len(out), len(in)) {
		m := Moved{Name: name}
		if i < len(out) {
			m.Old = strings.TrimSpace(out[i])
		}
		if i < len(in) {
			m.New = strings.TrimSpace(in[i])
		}
		moved = append(moved, m)
	}
	return moved
}

func (v shownValue) print(format Format) string {
	if v.number {
		return format(v.value, v.unit)
	}
	first, _, more := strings.Cut(v.text, "\n")
	if more {
		first += " ..."
	}
	return first
}

// verdictForm finds outputs whose content is compared elsewhere: lines of a verdict and tables with status words are in
// the list of verdicts, revisions and sources in the cells that state them.
var verdictForm = regexp.MustCompile(`<p class="(?:verdict|revision|cite)|<td class="(?:pass|fail|open|waived)`)

// valuesOf lists what a cell shows, each with a name that is unique in it.
func valuesOf(c *notebook.Cell) []shownValue {
	if c == nil {
		return nil
	}
	var list []shownValue
	seen := map[string]int{}
	add := func(v shownValue) {
		seen[v.name]++
		if n := seen[v.name]; n > 1 {
			v.name = fmt.Sprintf("%s (%d)", v.name, n)
		}
		list = append(list, v)
	}
	for _, o := range c.Outputs {
		switch o.Kind {
		case notebook.Stream:
			add(shownValue{name: "printed", text: strings.TrimRight(o.Text, "\n")})
			continue
		case notebook.Fault:
			add(shownValue{name: "stopped", text: o.Text})
			continue
		}
		if page, _ := o.Data["text/html"].(string); verdictForm.MatchString(page) {
			continue
		}
		meta, _ := plainValue(o.Metadata["ampturn"]).(map[string]any)
		name, _ := meta["expression"].(string)
		if name == "" {
			name = "shown"
		}
		text, _ := o.Data["text/plain"].(string)
		_, drawing := o.Data["image/svg+xml"]
		_, bitmap := o.Data["image/png"]
		for _, v := range inFull(name, meta, text) {
			v.picture = drawing || bitmap
			add(v)
		}
	}
	return list
}

// inFull gives the numbers that the metadata of an output carry in full, or its text if they carry none.
func inFull(name string, meta map[string]any, text string) []shownValue {
	if x, ok := meta["value"].(float64); ok {
		unit, _ := meta["unit"].(string)
		return []shownValue{{name: name, value: x, unit: unit, number: true}}
	}
	var list []shownValue
	tables, ok := meta["tables"].([]any)
	if !ok {
		tables = []any{meta}
	}
	for _, one := range tables {
		m, _ := one.(map[string]any)
		list = append(list, cells(name, m)...)
	}
	if len(list) == 0 {
		return []shownValue{{name: name, text: text}}
	}
	return list
}

// cells gives the cells of a table: its first column names the row, its header the column and, behind a blank, the unit.
func cells(name string, table map[string]any) []shownValue {
	heads, _ := table["columns"].([]any)
	rows, _ := table["rows"].([]any)
	var list []shownValue
	for i, r := range rows {
		row, _ := r.([]any)
		if len(row) == 0 {
			continue
		}
		who, ok := row[0].(string)
		first := 1
		if !ok || who == "" {
			who, first = fmt.Sprintf("row %d", i+1), 0
		}
		for k := first; k < len(row) && k < len(heads); k++ {
			head, _ := heads[k].(string)
			v := shownValue{name: name + ", " + who + ", " + head}
			switch x := row[k].(type) {
			case float64:
				v.value, v.number = x, true
				v.name, v.unit = cutUnit(v.name)
			case string:
				v.text = x
			}
			list = append(list, v)
		}
	}
	return list
}

// cutUnit takes the unit from the end of a table's header: its last word, if that reads as one.
func cutUnit(name string) (words, unit string) {
	i := strings.LastIndexByte(name, ' ')
	if i < 0 || !unitWord.MatchString(name[i+1:]) {
		return name, ""
	}
	return name[:i], name[i+1:]
}

var unitWord = regexp.MustCompile(`^(?:1/)?(?:m[23]?|s|A|V|H|T|Wb|W|J|K|N|F|C|Hz|ohm|degC|kg|rad|VA|percent)(?:/(?:m[23]?|s|A|V|H|K|W|kg))?$`)
