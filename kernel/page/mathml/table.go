package mathml

import (
	"strings"
)

// tableForm says how a table of an environment looks.
type tableForm struct {
	left, right string // fences; empty: none
	rows        string // alignment of the columns in turn: "right left", "center"
	gap         string // space beside each cell; empty: that of MathML
	display     bool   // cells in display style
}

var environments = map[string]tableForm{
	"matrix": {rows: "center"}, "smallmatrix": {rows: "center", gap: "0.2em"}, "array": {rows: "center"},
	"pmatrix": {left: "(", right: ")", rows: "center"}, "bmatrix": {left: "[", right: "]", rows: "center"},
	"Bmatrix": {left: "{", right: "}", rows: "center"}, "vmatrix": {left: "|", right: "|", rows: "center"},
	"Vmatrix": {left: "‖", right: "‖", rows: "center"}, "cases": {left: "{", rows: "left"},
	"aligned": {rows: "right left", gap: "0", display: true}, "align": {rows: "right left", gap: "0", display: true},
	"split": {rows: "right left", gap: "0", display: true}, "eqnarray": {rows: "right center left", gap: "0.2em", display: true},
	"gathered": {rows: "center", gap: "0", display: true}, "gather": {rows: "center", gap: "0", display: true},
	"equation": {rows: "center", gap: "0", display: true}, "multline": {rows: "center", gap: "0", display: true},
}

// environment reads \begin{name} ... \end{name}. Of a name that is not known the frame is shown as its source.
func (p *parser) environment(string) item {
	name, ok := p.raw()
	form, known := environments[strings.TrimSuffix(name, "*")]
	switch {
	case !ok:
		return item{xml: source(`\begin`)}
	case !known || p.depth >= maxDepth:
		return item{xml: source(`\begin{` + name + `}` + p.rawGroups())}
	}
	if name == "array" {
		if spec, ok := p.raw(); ok {
			form.rows = columns(spec)
		}
	}
	p.depth++
	defer func() { p.depth-- }()
	table := p.table(form, name)
	if form.left == "" && form.right == "" {
		return item{xml: table}
	}
	return item{xml: "<mrow>" + tableFence(form.left, "prefix") + table + tableFence(form.right, "postfix") + "</mrow>"}
}

func tableFence(sign, form string) string {
	if sign == "" {
		return ""
	}
	return `<mo form="` + form + `" fence="true" stretchy="true" symmetric="true">` + sign + "</mo>"
}

// columns turns the column letters of an array into words.
func columns(spec string) string {
	var list []string
	for _, c := range spec {
		switch c {
		case 'l':
			list = append(list, "left")
		case 'c':
			list = append(list, "center")
		case 'r':
			list = append(list, "right")
		}
	}
	if len(list) == 0 {
		return "center"
	}
	return strings.Join(list, " ")
}

// table reads rows and cells up to \end{name}, or to the end.
func (p *parser) table(form tableForm, name string) string {
	before := p.display
	p.display = form.display
	defer func() { p.display = before }()
	var b strings.Builder
	if b.WriteString("<mtable"); form.display {
		b.WriteString(` displaystyle="true"`)
	}
	b.WriteString("><mtr>")
	align := strings.Fields(form.rows)
	for column := 0; ; column++ {
		parts := p.items()
		sign := p.next()
		if sign == `\end` {
			if got, _ := p.raw(); got != name {
				parts = append(parts, source(`\end{`+got+`}`))
			}
		} else if sign == "}" || sign == `\right` || sign == `\middle` {
			parts = append(parts, source(sign))
		}
		if last := sign == `\end` || sign == ""; !last || column > 0 || len(parts) > 0 {
			b.WriteString(cell(align[column%len(align)], form.gap, column > 0 && column%2 == 0 && form.rows == "right left", parts))
		}
		switch sign {
		case `\\`, `\cr`:
			p.option() // extra space below the row
			b.WriteString("</mtr><mtr>")
			column = -1
		case `\end`, "":
			b.WriteString("</mtr></mtable>")
			return strings.Replace(b.String(), "<mtr></mtr></mtable>", "</mtable>", 1)
		}
	}
}

// cell writes a cell; apart sets it off from the equation to its left.
func cell(align, gap string, apart bool, parts []string) string {
	style := "text-align:" + align
	switch {
	case apart:
		style += ";padding-left:2em;padding-right:" + gap
	case gap != "":
		style += ";padding-left:" + gap + ";padding-right:" + gap
	}
	return `<mtd style="` + style + `">` + strings.Join(parts, "") + "</mtd>"
}
