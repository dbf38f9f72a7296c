package doc

import (
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// Column heads a column. A column holds numbers of one unit, or words, or both.
type Column struct {
	Name   string
	Unit   string // SI unit of its numbers; the header shows it with the prefix that fits them all
	Digits int    // significant digits, 0 for four
	Beside string // columns of one word here, and of one unit, are compared and share a prefix
	Mixed  bool   // its numbers differ in unit: each cell carries its own and is printed with it
}

// Cell is a word, or a number in SI with what is printed for it.
type Cell struct {
	Words  string
	Value  float64
	Number bool
	Unit   string // of a number in a Mixed column
	Class  string // of the HTML cell: "pass", "fail", "open", "waived"

	Printed bool // the number is printed as its Words
}

// Text is a cell of words.
func Text(words string) Cell { return Cell{Words: words} }

// Num is a cell with a number in the SI unit of its column.
func Num(value float64) Cell { return Cell{Value: value, Number: true} }

// Quantity is a cell with a number of a unit of its own, for a Mixed column.
func Quantity(value float64, unit string) Cell { return Cell{Value: value, Number: true, Unit: unit} }

// Table is rows under a header.
type Table struct {
	Caption string
	Columns []Column
	Rows    [][]Cell
	Notes   []string // lines below the table
	Folds   []Fold   // rows that unfold, below others
}

// Fold is what belongs to a row and is shown on demand: in HTML it unfolds below that row, in text it stands below
// the table.
type Fold struct {
	After   int // index of the row
	Summary string
	Table   Table // without a caption
}

// Bundle is the table as text and HTML.
func (t Table) Bundle() map[string]any { return Bundle(t.Text(), t.HTML(), "") }

// Metadata gives the numbers in full, for programs that compare two runs.
func (t Table) Metadata() map[string]any {
	rows := make([]any, len(t.Rows))
	for i, row := range t.Rows {
		cells := make([]any, len(row))
		for k, c := range row {
			cells[k] = c.Words
			if c.Number {
				cells[k] = full(c.Value)
			}
		}
		rows[i] = cells
	}
	heads := make([]any, len(t.Columns))
	for k, c := range t.Columns {
		heads[k] = strings.TrimSpace(c.Name + " " + c.Unit)
	}
	return map[string]any{"ampturn": map[string]any{"columns": heads, "rows": rows}}
}

// full is a number that JSON can hold.
func full(x float64) any {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return strconv.FormatFloat(x, 'g', -1, 64)
	}
	return x
}

// Text is the table in a fixed-width font.
func (t Table) Text() string {
	g := t.grid()
	var b strings.Builder
	if t.Caption != "" {
		b.WriteString(t.Caption + "\n")
	}
	g.write(&b)
	for _, f := range t.Folds {
		b.WriteString(f.Summary + "\n")
		for _, line := range strings.Split(f.Table.Text(), "\n") {
			b.WriteString("  " + line + "\n")
		}
	}
	for _, n := range t.Notes {
		b.WriteString("note: " + n + "\n")
	}
	return strings.TrimRight(b.String(), "\n")
}

// grid is the table as it is printed: texts of equal width a column.
type grid struct {
	head  []string
	rows  [][]string
	right []bool // numbers: aligned right
	width []int
}

func (t Table) grid() grid {
	g := grid{head: make([]string, len(t.Columns)), right: make([]bool, len(t.Columns)), width: make([]int, len(t.Columns))}
	g.rows = make([][]string, len(t.Rows))
	for i := range g.rows {
		g.rows[i] = make([]string, len(t.Columns))
	}
	for k := range t.Columns {
		var texts []string
		g.head[k], texts, g.right[k] = t.column(k, ' ', ' ')
		g.width[k] = utf8.RuneCountInString(g.head[k])
		for i, s := range texts {
			g.rows[i][k] = s
			g.width[k] = max(g.width[k], utf8.RuneCountInString(s))
		}
	}
	return g
}

func (g grid) write(b *strings.Builder) {
	line := func(cells []string) {
		var row strings.Builder
		for k, s := range cells {
			if k > 0 {
				row.WriteString("  ")
			}
			pad := strings.Repeat(" ", g.width[k]-utf8.RuneCountInString(s))
			if g.right[k] {
				row.WriteString(pad + s)
			} else {
				row.WriteString(s + pad)
			}
		}
		b.WriteString(strings.TrimRight(row.String(), " ") + "\n")
	}
	line(g.head)
	rule := make([]string, len(g.head))
	for k := range rule {
		rule[k] = strings.Repeat("-", g.width[k])
	}
	line(rule)
	for _, r := range g.rows {
		line(r)
	}
}

// left aligns words in front ends whose own style aligns all cells of a table to the right.
const left = ` style="text-align:left"`

// HTML is the table as HTML: class at, numbers in cells of class num with their full value in data-value.
func (t Table) HTML() string {
	var b strings.Builder
	b.WriteString(`<table class="at">` + "\n")
	if t.Caption != "" {
		b.WriteString("<caption>" + escape(t.Caption) + "</caption>\n")
	}
	heads := make([]string, len(t.Columns))
	texts := make([][]string, len(t.Columns))
	right := make([]bool, len(t.Columns))
	for k := range t.Columns {
		heads[k], texts[k], right[k] = t.column(k, figureSpace, pointSpace)
	}
	b.WriteString("<thead><tr>")
	for k, h := range heads {
		class := left
		if right[k] {
			class = ` class="num"`
		}
		b.WriteString(`<th scope="col"` + class + ">" + escape(h) + "</th>")
	}
	b.WriteString("</tr></thead>\n<tbody>\n")
	for i, row := range t.Rows {
		b.WriteString("<tr>")
		for k := range t.Columns {
			var c Cell
			if k < len(row) {
				c = row[k]
			}
			b.WriteString(c.open(right[k]) + escape(texts[k][i]) + "</td>")
		}
		b.WriteString("</tr>\n")
		for _, f := range t.Folds {
			if f.After == i {
				b.WriteString(f.html(len(t.Columns)))
			}
		}
	}
	b.WriteString("</tbody>\n</table>")
	for _, n := range t.Notes {
		b.WriteString("\n" + `<p class="note">` + escape(n) + "</p>")
	}
	return b.String()
}

// html is the fold as a row of its own.
func (f Fold) html(columns int) string {
	return `<tr class="fold"><td colspan="` + strconv.Itoa(columns) + `"><details><summary>` + escape(f.Summary) + "</summary>\n" + f.Table.HTML() + "</details></td></tr>\n"
}

// open is the opening tag of the cell.
func (c Cell) open(right bool) string {
	class := c.Class
	if right {
		class = strings.TrimSpace("num " + class)
	}
	tag := "<td"
	if class != "" {
		tag += ` class="` + class + `"`
	}
	if !right {
		tag += left
	}
	if c.Number {
		tag += ` data-value="` + strconv.FormatFloat(c.Value, 'g', -1, 64) + `"`
	}
	return tag + ">"
}
