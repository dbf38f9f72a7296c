package page

import (
	"fmt"
	"html"
	"strings"

	"ampturn/kernel/notebook"
)

// document is a notebook on its way to a page.
type document struct {
	nb      *notebook.Notebook
	opt     Options
	title   string
	failed  bool // a cell shows a failure; those without a count after it were not run
	texts   map[*notebook.Cell]*text
	ids     *ids
	toc     []heading
	figures int
	tables  int
	outputs int
}

func newDocument(nb *notebook.Notebook, opt Options) *document {
	d := &document{nb: nb, opt: opt, texts: map[*notebook.Cell]*text{}, ids: newIDs()}
	for _, c := range nb.Cells {
		for _, o := range c.Outputs {
			d.failed = d.failed || o.Kind == notebook.Fault
		}
	}
	return d
}

// body gives the content of the page. All texts are parsed before any is written, because the list of contents and
// the levels of headings need them all.
func (d *document) body() (string, error) {
	var list []*text
	for i, c := range d.nb.Cells {
		if c.Kind == notebook.Markdown {
			t := parseText(c, i+1, d.ids)
			d.texts[c] = t
			list = append(list, t)
		}
	}
	levelHeadings(list)
	for _, t := range list {
		entries, err := t.entries()
		if err != nil {
			return "", err
		}
		d.toc = append(d.toc, entries...)
	}
	first := d.findTitle()
	var b strings.Builder
	b.WriteString("<a class=\"at-skip\" href=\"#at-main\">Skip to the text</a>\n<div class=\"at-page\">\n<main id=\"at-main\">\n")
	if first < 0 {
		fmt.Fprintf(&b, "<h1>%s</h1>\n", html.EscapeString(d.title))
	}
	section := d.firstSection(first)
	for i, c := range d.nb.Cells {
		if i == section {
			d.verdicts(&b)
			d.contents(&b)
		}
		if err := d.cell(&b, c); err != nil {
			return "", err
		}
	}
	if section >= len(d.nb.Cells) {
		d.verdicts(&b)
		d.contents(&b)
	}
	b.WriteString("</main>\n")
	d.foot(&b)
	b.WriteString("</div>\n")
	return b.String(), nil
}

// findTitle sets the title and gives the place of the cell with the heading of level 1; -1: there is none.
func (d *document) findTitle() int {
	d.title = d.opt.Title
	for i, c := range d.nb.Cells {
		t := d.texts[c]
		if t == nil {
			continue
		}
		for _, h := range t.list {
			if h.level == 1 {
				if d.title == "" {
					d.title = h.plain
				}
				return i
			}
		}
	}
	if d.title == "" {
		d.title = "Notebook"
	}
	return -1
}

// firstSection gives the place of the first text behind the title that opens a section: what stands before it, such as
// the verdicts, is read before the list of contents. Where sections begin in the text of the title itself, it is the cell
// behind that.
func (d *document) firstSection(title int) int {
	if title >= 0 && len(d.texts[d.nb.Cells[title]].list) > 1 {
		return title + 1
	}
	for i := title + 1; i < len(d.nb.Cells); i++ {
		if t := d.texts[d.nb.Cells[i]]; t != nil && len(t.list) > 0 {
			return i
		}
	}
	return title + 1
}

// contents writes the list of headings, if there are enough to choose from.
func (d *document) contents(b *strings.Builder) {
	var list []heading
	for _, h := range d.toc {
		if h.level == 2 || h.level == 3 {
			list = append(list, h)
		}
	}
	if len(list) < 3 {
		return
	}
	b.WriteString("<nav class=\"at-contents\" aria-label=\"Contents\">\n<p class=\"at-contents-head\">Contents</p>\n<ol>\n")
	for _, h := range list {
		fmt.Fprintf(b, "<li class=\"at-level%d\"><a href=\"#%s\">%s</a></li>\n", h.level, html.EscapeString(h.id), h.html)
	}
	b.WriteString("</ol>\n</nav>\n")
}

func (d *document) cell(b *strings.Builder, c *notebook.Cell) error {
	switch c.Kind {
	case notebook.Markdown:
		t := d.texts[c]
		out, err := t.render()
		if err != nil {
			return err
		}
		b.WriteString("<div class=\"at-text\">\n" + d.safe(out, "", d.images(c)) + "</div>\n")
	case notebook.Raw:
		b.WriteString("<pre class=\"at-raw\">" + html.EscapeString(visible(c.Source)) + "</pre>\n")
	default:
		if strings.TrimSpace(c.Source) != "" || len(c.Outputs) > 0 {
			d.code(b, c)
		}
	}
	return nil
}

// code writes a code cell: its number, its lines, what it shows.
func (d *document) code(b *strings.Builder, c *notebook.Cell) {
	name, label, class := "", "", "at-cell"
	switch {
	case c.Count > 0:
		name = fmt.Sprintf(" id=\"cell-%d\"", c.Count)
		label = fmt.Sprintf("cell %d", c.Count)
	case d.failed:
		label, class = "not run", "at-cell at-unrun"
	default:
		label = "cell"
	}
	fmt.Fprintf(b, "<section class=\"%s\"%s aria-label=\"%s\">\n", class, name, label)
	open := " open"
	if hidden(c, "source_hidden") {
		open = ""
	}
	fmt.Fprintf(b, "<details class=\"at-code\"%s><summary>%s</summary>", open, label)
	b.WriteString("<pre tabindex=\"0\"><code>" + highlight(c.Source, "go") + "</code></pre></details>\n")
	if hidden(c, "outputs_hidden") {
		b.WriteString("<details class=\"at-folded\"><summary>outputs</summary>\n")
		defer b.WriteString("</details>\n</section>\n")
	} else {
		defer b.WriteString("</section>\n")
	}
	for _, o := range c.Outputs {
		d.output(b, c, o)
	}
}

// hidden reads a flag that front ends keep in the metadata of a cell.
func hidden(c *notebook.Cell, flag string) bool {
	m, _ := c.Metadata["jupyter"].(map[string]any)
	on, _ := m[flag].(bool)
	return on
}

// number counts captions: "Table 2", "Figure 3".
func (d *document) number(element string) string {
	if element == "caption" {
		d.tables++
		return fmt.Sprintf("Table %d", d.tables)
	}
	d.figures++
	return fmt.Sprintf("Figure %d", d.figures)
}
