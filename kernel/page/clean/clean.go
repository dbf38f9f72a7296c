// Package clean makes HTML and SVG of unknown origin safe to stand in a page.
//
// It does not repair its input: it reads it as tokens and writes a new text, in which only elements and attributes of
// its lists occur, every element is closed, and every piece of text is escaped. So nothing in the result can run a
// script, load anything from a network, send a form or leave its place in the page.
//
//	kept      text, lists, tables, figures, details, links, pictures held in the page, SVG drawings, MathML
//	unwrapped other elements: their content stays, they go
//	dropped   with their content: script, style of HTML, frames, objects, form texts, foreignObject, ...
//
// A style element inside SVG stays if it holds plain rules; they are limited to that drawing.
package clean

import (
	"html"
	"regexp"
	"strings"
)

// Options of [HTML]; the zero value leaves ids alone and takes pictures only from data: addresses.
type Options struct {
	Prefix  string                                  // put before every id and every reference to one in the same text
	Image   func(src string) (data string, ok bool) // gives the data: address of a picture that the text names
	Caption func(element string) string             // text to open a "caption" or "figcaption" with: "Table 2"
}

// HTML gives the safe text.
func HTML(src string, opt Options) string {
	c := &cleaner{opt: opt, ids: idsOf(src), scan: scanner{src: src}}
	for {
		t, ok := c.scan.next()
		if !ok {
			break
		}
		switch t.kind {
		case textToken:
			c.text(t.text)
		case startToken:
			c.start(t)
		case endToken:
			c.end(t.name)
		}
	}
	c.closeTo(0)
	return c.out.String()
}

// Text gives the text of the first element of that name, without tags and with single blanks; "" if there is none.
func Text(src, element string) string {
	s := scanner{src: src}
	var b strings.Builder
	for inside := false; ; {
		t, ok := s.next()
		switch {
		case !ok || inside && t.kind == endToken && t.name == element:
			return strings.Join(strings.Fields(b.String()), " ")
		case t.kind == startToken && t.name == element:
			inside = true
		case t.kind == textToken && inside:
			b.WriteString(t.text)
		}
	}
}

var idPattern = regexp.MustCompile(`(?i)\sid\s*=\s*["']?([^\s"'>]+)`)

func idsOf(src string) map[string]bool {
	ids := map[string]bool{}
	for _, m := range idPattern.FindAllStringSubmatch(src, -1) {
		ids[html.UnescapeString(m[1])] = true
	}
	return ids
}

// space is the vocabulary that an element belongs to.
type space int

const (
	inHTML space = iota
	inSVG
	inMath
)

// open is an element that is not closed yet.
type open struct {
	name  string // as the scanner gives it
	as    string // as it is written
	space space
	after string // written behind its end tag
}

type cleaner struct {
	opt   Options
	ids   map[string]bool
	scan  scanner
	out   strings.Builder
	stack []open
	svgID string // id of the drawing being read, for its rules
}

const maxDepth = 250

func (c *cleaner) top() open {
	if len(c.stack) == 0 {
		return open{}
	}
	return c.stack[len(c.stack)-1]
}

func (c *cleaner) text(s string) { c.out.WriteString(html.EscapeString(s)) }

// start writes a start tag if the element may stand here.
func (c *cleaner) start(t token) {
	here := c.top()
	if textOnly[here.name] && here.space != inHTML {
		return
	}
	switch {
	case here.space == inSVG && t.name == "style":
		if !t.closed {
			c.rules()
		}
		return
	case dropped[t.name] || t.name == "title" && here.space == inHTML:
		c.scan.skipElement(t)
		return
	}
	as, in := element(t.name, here.space)
	if as == "" || len(c.stack) >= maxDepth {
		return
	}
	if t.name == "img" && in == inHTML {
		c.image(t)
		return
	}
	after := c.before(t, in)
	c.out.WriteString("<" + as)
	c.attributes(t, in)
	if in == inSVG && t.closed {
		c.out.WriteString("/>" + after)
		return
	}
	c.out.WriteString(">")
	if void[t.name] {
		return
	}
	c.stack = append(c.stack, open{t.name, as, in, after})
	c.opening(t.name, in)
	if in == inMath && t.closed {
		c.end(t.name)
	}
}

// element gives the written name and vocabulary of an element that may stand in that vocabulary; "" if it may not.
func element(name string, here space) (as string, in space) {
	switch {
	case here == inSVG:
		return svgElements[name], inSVG
	case here == inMath && mathElements[name]:
		return name, inMath
	case here == inMath:
		return "", inMath
	case name == "svg":
		return "svg", inSVG
	case name == "math":
		return "math", inMath
	case htmlElements[name]:
		return name, inHTML
	}
	return "", here
}

// before writes what stands around an element and gives what belongs behind it: a table may be wider than the text.
func (c *cleaner) before(t token, in space) (after string) {
	if in != inHTML || t.name != "table" {
		return ""
	}
	for _, o := range c.stack {
		if o.name == "table" {
			return ""
		}
	}
	c.out.WriteString(`<div class="at-scroll" role="group" tabindex="0" aria-label="table">`)
	return "</div>"
}

// opening writes what stands first in an element: the number in a caption.
func (c *cleaner) opening(name string, in space) {
	if in == inHTML && (name == "caption" || name == "figcaption") && c.opt.Caption != nil {
		if number := c.opt.Caption(name); number != "" {
			c.out.WriteString(`<span class="at-number">` + html.EscapeString(number) + `</span> `)
		}
	}
}

// end closes an element and all that is open inside it; an end without a start is dropped.
func (c *cleaner) end(name string) {
	for i := len(c.stack) - 1; i >= 0; i-- {
		if c.stack[i].name == name {
			c.closeTo(i)
			return
		}
		if c.stack[i].name == "svg" || c.stack[i].name == "math" {
			return // an end tag does not reach out of a drawing or a formula
		}
	}
}

func (c *cleaner) closeTo(depth int) {
	for len(c.stack) > depth {
		o := c.top()
		c.stack = c.stack[:len(c.stack)-1]
		c.out.WriteString("</" + o.as + ">" + o.after)
	}
}

// image writes a picture that the page can hold, or says which one is missing.
func (c *cleaner) image(t token) {
	src := strings.TrimSpace(t.attr("src"))
	ok := dataImage(src)
	if !ok && c.opt.Image != nil {
		src, ok = c.opt.Image(src)
		ok = ok && dataImage(src)
	}
	if !ok {
		name := t.attr("alt")
		if name == "" {
			name = t.attr("src")
		}
		c.out.WriteString(`<span class="at-missing">[picture not in this page: ` + html.EscapeString(name) + `]</span>`)
		return
	}
	c.out.WriteString("<img")
	t.set("src", src)
	if !t.has("alt") {
		t.set("alt", "")
	}
	c.attributes(t, inHTML)
	c.out.WriteString(">")
}

var dataPattern = regexp.MustCompile(`^data:image/(?:png|jpeg|gif|webp|svg\+xml);base64,[A-Za-z0-9+/=\s]*$`)

func dataImage(src string) bool { return dataPattern.MatchString(src) }

// rules writes a style element of a drawing, nested below the drawing's id so that it reaches nothing else.
func (c *cleaner) rules() {
	css, ok := plainRules(c.scan.rawTo("style"))
	if ok && c.svgID != "" {
		c.out.WriteString("<style>#" + c.svgID + "{" + css + "}</style>")
	}
}
