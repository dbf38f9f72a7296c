// Package page turns a notebook that has run into one self-contained HTML file.
//
//	html, err := page.Render(nb, page.Options{Provenance: []page.Row{{"cells", nb.Hash()}}})
//
// The file needs nothing beside it and holds no script; its content policy forbids both. Text is Markdown with tables,
// footnotes and formulas ($...$ and $$...$$ become MathML), code is coloured, pictures and tables get numbers, headings
// a list of contents. It has a light and a dark look and prints on A4 and letter.
//
// HTML that stands in the notebook, in texts or outputs, passes package clean first. Of an output with several
// forms the first of these is shown: HTML, SVG, PNG, JPEG, LaTeX, Markdown, JSON, plain text. A picture's plain text
// goes along as its twin in words.
//
// Results stand before derivations: the list of contents follows what comes before the first section. A notebook whose
// record has verdicts, and that shows no table of them, gets one there.
//
// HTML outputs may use these classes: table.at with td.num for numbers and td.pass, .fail, .open, .waived for status
// words; p.verdict with one of the same four; p.note, p.cite, p.revision; ul.assumptions; .at-verdict with data-status="PASS" and so on for a status word
// in running text; .at-note and .at-caution for paragraphs that stand out.
package page

import (
	_ "embed"
	"html"
	"io/fs"
	"strings"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page/clean"
)

// Row is one line of the page's foot.
type Row struct{ Name, Value string }

// Options of [Render]; the zero value is fine.
type Options struct {
	Title      string // name of the document; empty: the first heading of level 1
	Lang       string // language of the text; empty: "en"
	Provenance []Row  // where the numbers come from: program, libraries, hashes, seeds
	Files      fs.FS  // folder of the notebook, for pictures that its text names; nil: none

	// Rests gives more rows for the foot: what is known only when all texts and the pictures that they name have been
	// read. It is called once, after that. Nil: none.
	Rests func() []Row
}

//go:embed style.css
var style string

// Render gives the page. The same notebook and options give the same bytes.
func Render(nb *notebook.Notebook, opt Options) ([]byte, error) {
	d := newDocument(nb, opt)
	body, err := d.body()
	if err != nil {
		return nil, err
	}
	var b strings.Builder
	b.WriteString("<!DOCTYPE html>\n<html lang=\"" + html.EscapeString(d.lang()) + "\">\n<head>\n<meta charset=\"utf-8\">\n")
	b.WriteString(`<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:; form-action 'none'; base-uri 'none'">` + "\n")
	b.WriteString(`<meta name="viewport" content="width=device-width, initial-scale=1">` + "\n")
	b.WriteString(`<meta name="color-scheme" content="light dark">` + "\n")
	b.WriteString("<title>" + html.EscapeString(d.title) + "</title>\n")
	b.WriteString("<style>\n" + style + pageFoot(d.title) + "</style>\n</head>\n<body>\n")
	b.WriteString(body)
	b.WriteString("</body>\n</html>\n")
	return []byte(b.String()), nil
}

func (d *document) lang() string {
	if d.opt.Lang == "" {
		return "en"
	}
	return d.opt.Lang
}

// pageFoot is the rule that prints the title and the number of each sheet.
func pageFoot(title string) string {
	return "@page {\n\t@bottom-left { content: " + cssText(title) + " }\n}\n"
}

// cssText writes a text as CSS holds it, every sign that is not plain as its number.
func cssText(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, r := range s {
		if r == ' ' || r >= '0' && r <= '9' || r >= 'A' && r <= 'Z' || r >= 'a' && r <= 'z' {
			b.WriteRune(r)
			continue
		}
		b.WriteString(`\` + strings.ToUpper(hex(r)) + " ")
	}
	b.WriteByte('"')
	return b.String()
}

func hex(r rune) string {
	const digits = "0123456789abcdef"
	var s string
	for ; r > 0 || s == ""; r >>= 4 {
		s = string(digits[r&15]) + s
	}
	return s
}

// foot writes where the numbers come from.
func (d *document) foot(b *strings.Builder) {
	rows := d.opt.Provenance
	if d.opt.Rests != nil {
		rows = append(rows[:len(rows):len(rows)], d.opt.Rests()...)
	}
	if len(rows) == 0 {
		return
	}
	b.WriteString("<footer class=\"at-foot\">\n<h2 class=\"at-foot-head\">Provenance</h2>\n<dl>\n")
	for _, r := range rows {
		b.WriteString("<div><dt>" + html.EscapeString(r.Name) + "</dt><dd>" + html.EscapeString(r.Value) + "</dd></div>\n")
	}
	b.WriteString("</dl>\n</footer>\n")
}

// safe cleans HTML of a cell; prefix keeps its ids apart from those of other cells.
func (d *document) safe(src, prefix string, image func(string) (string, bool)) string {
	return bind(clean.HTML(src, clean.Options{Prefix: prefix, Image: image, Caption: d.number}))
}
