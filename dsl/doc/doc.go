// Package doc lays tables out as text and as HTML: numbers aligned at the decimal point, the unit in the header, the
// conditions in the caption, four significant digits, the full values beside them as metadata. It knows columns and
// units, and nothing of what they stand for.
//
//	t := doc.Table{
//		Caption: "T1 at 25 degC, main 3.2 A",
//		Columns: []doc.Column{{Name: "path"}, {Name: "flux", Unit: "Wb"}},
//		Rows:    [][]doc.Cell{{doc.Text("centre"), doc.Num(48e-6)}},
//	}
//	t.Bundle() // text/plain and text/html
package doc

import (
	"html"
	"strings"
)

// Bundle is the MIME bundle of a text and its HTML and SVG forms; empty forms are left out.
func Bundle(text, htmlText, svg string) map[string]any {
	b := map[string]any{"text/plain": text}
	if htmlText != "" {
		b["text/html"] = htmlText
	}
	if svg != "" {
		b["image/svg+xml"] = svg
	}
	return b
}

// Join puts several tables below each other in one bundle.
func Join(tables ...Table) map[string]any {
	var text, page []string
	for i := range tables {
		text = append(text, tables[i].Text())
		page = append(page, tables[i].HTML())
	}
	return Bundle(strings.Join(text, "\n\n"), strings.Join(page, "\n"), "")
}

// escape makes text safe inside HTML.
func escape(s string) string { return html.EscapeString(s) }
