// Package mathml turns formulas written in a subset of LaTeX into MathML Core, which browsers draw by themselves.
//
// The subset:
//
//	letters, numbers, operators    a + 2.5 \cdot b \le c      Greek, arrows, relations, \sum \prod \int \oint, \ldots
//	scripts                        x_1^2   x'   \sum_{i=1}^{n}   \lim_{x \to 0}   \int\limits_a^b
//	fractions, roots               \frac \dfrac \tfrac \cfrac \binom   \sqrt{x} \sqrt[3]{x}
//	fences                         \left( ... \middle| ... \right]   \big( \Big \bigg \Bigg with l, r, m
//	tables                         matrix pmatrix bmatrix Bmatrix vmatrix Vmatrix smallmatrix cases array,
//	                               aligned align gather gathered split equation (starred ones too), \substack
//	functions                      \sin \ln \max ... \operatorname{name}
//	accents                        \hat \bar \vec \dot \ddot \tilde \widehat \overline \underline \overbrace ...
//	over and under                 \overset \underset \stackrel \xrightarrow[below]{above}
//	alphabets                      \mathrm \mathbf \mathit \mathsf \mathtt \mathcal \mathbb \mathfrak \boldsymbol
//	text and space                 \text{...} \mbox{...}   \, \: \; \! \quad \qquad \hspace{2em} ~
//	style                          \displaystyle \textstyle \phantom{x} \boxed{x} \not=
//
// A command outside it is shown as its source, with its arguments; nothing is dropped. A per cent sign is itself.
package mathml

import (
	"html"
	"strings"
)

// Convert gives the math element for a formula without its dollar signs. display sets it as a block of its own, with
// limits above and below their sign. The source goes along as an annotation.
func Convert(tex string, display bool) string {
	p := &parser{src: []rune(strings.ToValidUTF8(tex, "\uFFFD")), display: display}
	body := p.formula()
	var b strings.Builder
	b.WriteString(`<math`)
	if display {
		b.WriteString(` display="block"`)
	}
	b.WriteString(`><semantics>`)
	b.WriteString(body)
	b.WriteString(`<annotation encoding="application/x-tex">`)
	b.WriteString(html.EscapeString(strings.TrimSpace(string(p.src))))
	b.WriteString(`</annotation></semantics></math>`)
	return b.String()
}

// parser walks through the source once; each method reads one construct and gives its MathML.
type parser struct {
	src      []rune
	at       int
	depth    int
	display  bool
	alphabet alphabet
}

// item is one piece of a row.
type item struct {
	xml    string
	limits bool // scripts stand above and below it
	name   bool // name of a function: a thin space parts it from its argument
}

// maxDepth bounds nesting; beyond it the rest of a group is shown as its source.
const maxDepth = 100

// formula reads everything; a closing sign that nothing opened is shown as it is.
func (p *parser) formula() string {
	var rows []string
	for p.at < len(p.src) {
		row := p.row()
		if row != "<mrow></mrow>" || len(rows) > 0 {
			rows = append(rows, row)
		}
		if p.at >= len(p.src) {
			break
		}
		switch t := p.next(); t {
		case `\\`, `\cr`:
			rows = append(rows, "\x00")
		default:
			rows = append(rows, source(t+p.braced(t)))
		}
	}
	return breakLines(rows)
}

// braced reads the name that belongs to a stray \end.
func (p *parser) braced(token string) string {
	if token != `\end` {
		return ""
	}
	return p.rawGroups()
}

// breakLines sets the rows of a formula: one below the other where \\ parts them.
func breakLines(rows []string) string {
	var lines [][]string
	line := []string{}
	for _, r := range rows {
		if r == "\x00" {
			lines = append(lines, line)
			line = []string{}
			continue
		}
		line = append(line, r)
	}
	lines = append(lines, line)
	if len(lines) == 1 {
		return wrap(lines[0])
	}
	var b strings.Builder
	b.WriteString(`<mtable displaystyle="true">`)
	for _, l := range lines {
		b.WriteString(`<mtr><mtd style="text-align:left">` + strings.Join(l, "") + `</mtd></mtr>`)
	}
	b.WriteString(`</mtable>`)
	return b.String()
}

func wrap(list []string) string {
	if len(list) == 1 {
		return list[0]
	}
	return "<mrow>" + strings.Join(list, "") + "</mrow>"
}

// row reads items up to the end or to a sign that ends a group, a cell, a line or a fence; that sign stays unread.
func (p *parser) row() string { return wrap(p.items()) }

func (p *parser) items() []string {
	list := []string{}
	for {
		t := p.peek()
		switch t {
		case "", "}", "&", `\\`, `\cr`, `\right`, `\middle`, `\end`:
			return list
		case `\displaystyle`, `\textstyle`, `\scriptstyle`:
			p.next()
			return append(list, p.styled(t))
		}
		list = append(list, p.scripted())
	}
}

// styled sets the rest of the row in another size.
func (p *parser) styled(command string) string {
	before := p.display
	p.display = command == `\displaystyle`
	defer func() { p.display = before }()
	attrs := ` displaystyle="false" scriptlevel="0"`
	switch command {
	case `\displaystyle`:
		attrs = ` displaystyle="true" scriptlevel="0"`
	case `\scriptstyle`:
		attrs = ` displaystyle="false" scriptlevel="1"`
	}
	return "<mstyle" + attrs + ">" + strings.Join(p.items(), "") + "</mstyle>"
}

// scripted reads an item with its scripts and primes.
func (p *parser) scripted() string {
	var base item
	if t := p.peek(); t == "^" || t == "_" || t == "'" {
		base.xml = "<mrow></mrow>"
	} else {
		base = p.item()
	}
	for {
		p.modifiers(&base)
		sub, sup := p.scripts()
		if sub == "" && sup == "" {
			break
		}
		base.xml = attach(base, sub, sup)
		base.limits = false
	}
	if base.name && p.startsArgument() {
		return base.xml + space("0.1667em")
	}
	return base.xml
}

// modifiers reads \limits and \nolimits.
func (p *parser) modifiers(base *item) {
	for {
		switch p.peek() {
		case `\limits`:
			base.limits = true
		case `\nolimits`:
			base.limits = false
		default:
			return
		}
		p.next()
	}
}

// scripts reads at most one lower and one upper script; primes count as upper.
func (p *parser) scripts() (sub, sup string) {
	for {
		switch t := p.peek(); {
		case t == "_" && sub == "":
			p.next()
			sub = p.arg()
		case t == "^" && (sup == "" || strings.HasSuffix(sup, "′</mo>")):
			p.next()
			above := p.arg()
			if sup != "" {
				above = "<mrow>" + sup + above + "</mrow>"
			}
			sup = above
		case t == "'" && sup == "":
			n := 0
			for ; p.peek() == "'"; n++ {
				p.next()
			}
			sup = "<mo>" + strings.Repeat("′", n) + "</mo>"
		default:
			return sub, sup
		}
	}
}

// attach puts scripts to a base.
func attach(base item, sub, sup string) string {
	element := map[bool][3]string{false: {"msub", "msup", "msubsup"}, true: {"munder", "mover", "munderover"}}[base.limits]
	switch {
	case sup == "":
		return elem(element[0], base.xml+sub)
	case sub == "":
		return elem(element[1], base.xml+sup)
	}
	return elem(element[2], base.xml+sub+sup)
}

// startsArgument tells whether what follows is the argument of a function named without brackets.
func (p *parser) startsArgument() bool {
	switch t := p.peek(); t {
	case "", "}", "&", "(", "[", "=", "+", "-", "<", ">", ",", ".", ")", "]", "|", "/", ":", ";":
		return false
	default:
		_, operator := operators[t]
		return !operator && !closesRow[t] && t != `\left` && t != `\!` && spaces[t] == ""
	}
}

var closesRow = map[string]bool{`\\`: true, `\cr`: true, `\right`: true, `\middle`: true, `\end`: true}

// arg reads an argument: a group or a single item.
func (p *parser) arg() string {
	switch p.peek() {
	case "", "}", "&", `\\`, `\right`, `\end`:
		return "<mrow></mrow>"
	case "^", "_", "'":
		return source(p.next())
	}
	if p.peek() != "{" && p.isDigit() {
		return "<mn>" + p.next() + "</mn>"
	}
	return p.item().xml
}

// group reads the content of braces, the opening one being read.
func (p *parser) group() string {
	if p.depth >= maxDepth {
		return source("{" + p.rawToBrace() + "}")
	}
	if strings.HasPrefix(string(p.src[p.at:min(p.at+2, len(p.src))]), ",}") { // a decimal comma
		p.at += 2
		return `<mo lspace="0" rspace="0">,</mo>`
	}
	p.depth++
	before := p.alphabet
	defer func() { p.depth--; p.alphabet = before }()
	var parts []string
	for {
		parts = append(parts, p.items()...)
		switch t := p.next(); t {
		case "}", "":
			return wrap(parts)
		default:
			parts = append(parts, source(t+p.braced(t)))
		}
	}
}

func elem(name, content string) string { return "<" + name + ">" + content + "</" + name + ">" }

func space(width string) string { return `<mspace width="` + width + `"></mspace>` }

// source shows a piece of the formula as it was written.
func source(s string) string {
	return `<mtext class="tex">` + html.EscapeString(s) + "</mtext>"
}
