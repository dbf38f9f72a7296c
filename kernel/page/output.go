package page

import (
	"encoding/json"
	"fmt"
	"html"
	"regexp"
	"strconv"
	"strings"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page/clean"
	"ampturn/kernel/page/mathml"
)

// output writes one thing that a cell has shown.
func (d *document) output(b *strings.Builder, c *notebook.Cell, o *notebook.Output) {
	d.outputs++
	switch o.Kind {
	case notebook.Stream:
		class, words := "at-stream", "printed"
		if o.Name == "stderr" {
			class, words = "at-stream at-stderr", "printed as a message"
		}
		fmt.Fprintf(b, "<pre class=\"%s\" role=\"group\" aria-label=\"%s\">%s</pre>\n", class, words, html.EscapeString(terminal(o.Text)))
	case notebook.Fault:
		d.fault(b, o)
	default:
		d.bundle(b, c, o.Data)
	}
}

// fault writes what stopped a cell.
func (d *document) fault(b *strings.Builder, o *notebook.Output) {
	text := strings.Join(o.Traceback, "\n")
	if strings.TrimSpace(text) == "" {
		text = o.Text
	}
	fmt.Fprintf(b, "<div class=\"at-fault\">\n<p class=\"at-fault-head\"><strong>STOPPED</strong> <span>%s</span></p>\n<pre>%s</pre>\n</div>\n",
		html.EscapeString(visible(o.Fault)), html.EscapeString(terminal(text)))
}

// bundle writes the best form of a MIME bundle.
func (d *document) bundle(b *strings.Builder, c *notebook.Cell, data map[string]any) {
	plain, _ := data["text/plain"].(string)
	prefix := fmt.Sprintf("o%d-", d.outputs)
	for _, kind := range []string{"text/html", "image/svg+xml", "image/png", "image/jpeg", "image/gif", "text/latex", "text/markdown"} {
		content, ok := data[kind].(string)
		if !ok || strings.TrimSpace(content) == "" {
			continue
		}
		switch kind {
		case "text/html":
			b.WriteString("<div class=\"at-html\">\n" + d.safe(content, prefix, d.images(c)) + "\n</div>\n")
		case "image/svg+xml":
			d.figure(b, d.safe(content, prefix, nil), clean.Text(content, "title"), wide(content), plain)
		case "text/latex":
			b.WriteString("<div class=\"at-html at-latex\">" + latex(content) + "</div>\n")
		case "text/markdown":
			d.markdownOutput(b, c, content)
		default:
			d.bitmap(b, kind, content, plain)
		}
		return
	}
	if value, ok := data["application/json"]; ok && plain == "" {
		if text, err := json.MarshalIndent(value, "", "  "); err == nil {
			plain = string(text)
		}
	}
	if plain != "" {
		b.WriteString("<pre class=\"at-plain\">" + html.EscapeString(terminal(plain)) + "</pre>\n")
		return
	}
	for _, kind := range kinds(data) {
		b.WriteString("<p class=\"at-missing\">[an output of type " + html.EscapeString(kind) + " that a page cannot show]</p>\n")
	}
}

// figure writes a drawing with its number, its title and its twin in words.
func (d *document) figure(b *strings.Builder, picture, title string, wide bool, plain string) {
	if title != "" && inPicture(picture, title) {
		title = "" // the picture says it itself
	}
	class := "at-figure"
	if wide {
		class = "at-figure at-wide"
	}
	fmt.Fprintf(b, "<figure class=\"%s\">\n%s\n<figcaption><span class=\"at-number\">%s</span> %s</figcaption>\n",
		class, picture, d.number("figcaption"), html.EscapeString(title))
	if strings.TrimSpace(plain) != "" {
		b.WriteString("<details class=\"at-twin\"><summary>in words</summary><pre>" + html.EscapeString(terminal(plain)) + "</pre></details>\n")
	}
	b.WriteString("</figure>\n")
}

var pictureText = regexp.MustCompile(`(?s)<text\b[^>]*>(.*?)</text>`)

// inPicture tells whether a drawing carries its title as a text that readers see.
func inPicture(picture, title string) bool {
	for _, m := range pictureText.FindAllStringSubmatch(picture, -1) {
		if clean.Text("<h>"+m[1]+"</h>", "h") == title {
			return true
		}
	}
	return false
}

func (d *document) bitmap(b *strings.Builder, kind, content, plain string) {
	alt, _, _ := strings.Cut(strings.TrimSpace(plain), "\n")
	if alt == "" {
		alt = "picture without description"
	}
	src := "data:" + kind + ";base64," + strings.Join(strings.Fields(content), "")
	picture := clean.HTML(`<img src="`+html.EscapeString(src)+`" alt="`+html.EscapeString(alt)+`">`, clean.Options{})
	d.figure(b, picture, "", false, plain)
}

var viewBox = regexp.MustCompile(`(?i)\sviewBox\s*=\s*["']\s*[-\d.eE]+[\s,]+[-\d.eE]+[\s,]+([\d.eE+]+)`)

// textWidth is the width of the text column, px.
const textWidth = 736

// wide tells whether a drawing is wider than the text.
func wide(svg string) bool {
	m := viewBox.FindStringSubmatch(svg)
	if m == nil {
		return false
	}
	w, err := strconv.ParseFloat(m[1], 64)
	return err == nil && w > textWidth
}

var inlineFormula = regexp.MustCompile(`(?s)\$\$.+?\$\$|\$[^$]+\$|\\\[.+?\\\]|\\\(.+?\\\)`)

// latex writes a LaTeX output: formulas between delimiters in running text, or one formula as a whole.
func latex(s string) string {
	s = strings.TrimSpace(visible(s))
	places := inlineFormula.FindAllStringIndex(s, -1)
	if len(places) == 0 {
		return mathml.Convert(s, true)
	}
	var b strings.Builder
	at := 0
	for _, p := range places {
		b.WriteString(html.EscapeString(s[at:p[0]]))
		piece := s[p[0]:p[1]]
		display := strings.HasPrefix(piece, "$$") || strings.HasPrefix(piece, `\[`) || len(places) == 1 && len(piece) == len(s)
		b.WriteString(mathml.Convert(formulaSource(piece), display))
		at = p[1]
	}
	b.WriteString(html.EscapeString(s[at:]))
	return b.String()
}

// markdownOutput writes a text that a cell has shown. Its headings are not part of the outline.
func (d *document) markdownOutput(b *strings.Builder, c *notebook.Cell, content string) {
	t := parseText(&notebook.Cell{Source: content}, len(d.nb.Cells)+d.outputs, d.ids)
	for _, h := range t.list {
		h.node.Level = min(max(h.node.Level, 4), 6)
	}
	out, err := t.render()
	if err != nil {
		out = html.EscapeString(content)
	}
	b.WriteString("<div class=\"at-html at-text\">\n" + d.safe(out, "", d.images(c)) + "</div>\n")
}
