package mathml

import (
	"html"
	"regexp"
	"strings"
)

// structures are the commands that take arguments. The table is filled at start because its functions use it.
var structures map[string]func(p *parser, command string) item

func init() {
	structures = map[string]func(p *parser, command string) item{
		`\sqrt`: (*parser).root, `\left`: (*parser).fence, `\begin`: (*parser).environment,
		`\overset`: (*parser).stack, `\underset`: (*parser).stack, `\stackrel`: (*parser).stack,
		`\xrightarrow`: (*parser).arrow, `\xleftarrow`: (*parser).arrow,
		`\operatorname`: (*parser).operatorName, `\substack`: (*parser).substack,
		`\hspace`: (*parser).hspace, `\not`: (*parser).not,
		`\overline`: (*parser).lined, `\underline`: (*parser).lined,
		`\phantom`: (*parser).enclosed, `\boxed`: (*parser).enclosed, `\pmod`: (*parser).modulus, `\bmod`: (*parser).modulus,
	}
	for _, name := range []string{`\frac`, `\dfrac`, `\tfrac`, `\cfrac`, `\binom`} {
		structures[name] = (*parser).fraction
	}
	for _, name := range []string{`\text`, `\textrm`, `\mbox`, `\textit`, `\textbf`, `\textsf`, `\texttt`, `\textnormal`} {
		structures[name] = (*parser).text
	}
	for size := range bigSizes {
		for _, side := range []string{"", "l", "r", "m"} {
			structures[size+side] = (*parser).big
		}
	}
}

var bigSizes = map[string]string{`\big`: "1.2em", `\Big`: "1.8em", `\bigg`: "2.4em", `\Bigg`: "3em"}

func (p *parser) fraction(command string) item {
	over, under := p.arg(), p.arg()
	switch command {
	case `\binom`:
		return item{xml: "<mrow>" + `<mo form="prefix">(</mo><mfrac linethickness="0">` + over + under + `</mfrac><mo form="postfix">)</mo>` + "</mrow>"}
	case `\dfrac`, `\cfrac`:
		return item{xml: `<mstyle displaystyle="true" scriptlevel="0"><mfrac>` + over + under + `</mfrac></mstyle>`}
	case `\tfrac`:
		return item{xml: `<mstyle displaystyle="false" scriptlevel="0"><mfrac>` + over + under + `</mfrac></mstyle>`}
	}
	return item{xml: elem("mfrac", over+under)}
}

func (p *parser) root(string) item {
	if index, ok := p.option(); ok {
		degree := p.sub(index)
		return item{xml: elem("mroot", p.arg()+degree)}
	}
	return item{xml: elem("msqrt", p.arg())}
}

// fence reads \left ... \right with the \middle signs between.
func (p *parser) fence(string) item {
	if p.depth >= maxDepth {
		return item{xml: source(`\left`)}
	}
	p.depth++
	defer func() { p.depth-- }()
	var b strings.Builder
	b.WriteString("<mrow>" + p.delimiter("prefix"))
	for {
		b.WriteString(strings.Join(p.items(), ""))
		switch t := p.peek(); t {
		case `\middle`:
			p.next()
			b.WriteString(p.delimiter("infix"))
		case `\right`:
			p.next()
			b.WriteString(p.delimiter("postfix") + "</mrow>")
			return item{xml: b.String()}
		case `\\`, "&":
			p.next()
			b.WriteString(source(t))
		default: // nothing closes it
			b.WriteString("</mrow>")
			return item{xml: b.String()}
		}
	}
}

// delimiter reads a sign that grows with what stands beside it; a point is none.
func (p *parser) delimiter(form string) string {
	t := p.peek()
	if t == "" || t == "}" {
		return ""
	}
	p.next()
	if t == "." {
		return ""
	}
	return `<mo form="` + form + `" fence="true" stretchy="true" symmetric="true">` + html.EscapeString(delimiterSign(t)) + "</mo>"
}

func delimiterSign(t string) string {
	for _, table := range []map[string]string{escapes, operators} {
		if s, ok := table[t]; ok {
			return s
		}
	}
	if s, ok := fences[t]; ok {
		return s
	}
	return t
}

// big is a bracket of a given height.
func (p *parser) big(command string) item {
	side := strings.TrimLeft(strings.TrimPrefix(command, `\`), "biBgG")
	size := bigSizes[strings.TrimSuffix(command, side)]
	form := map[string]string{"l": "prefix", "r": "postfix"}[side]
	if form == "" {
		form = "infix"
	}
	t := p.next()
	if t == "" || t == "}" {
		p.at -= len([]rune(t))
		return item{xml: source(command)}
	}
	return item{xml: `<mo form="` + form + `" stretchy="true" symmetric="true" lspace="0" rspace="0" minsize="` + size + `" maxsize="` + size + `">` + html.EscapeString(delimiterSign(t)) + "</mo>"}
}

// text sets words; a formula between dollar signs inside them is one again.
func (p *parser) text(command string) item {
	text, ok := p.raw()
	if !ok {
		return item{xml: source(command)}
	}
	var parts []string
	for i, piece := range strings.Split(text, "$") {
		switch {
		case i%2 == 1:
			parts = append(parts, p.sub(piece))
		case piece != "":
			parts = append(parts, "<mtext>"+html.EscapeString(textAlphabets[command].apply(words(piece)))+"</mtext>")
		}
	}
	return item{xml: wrap(parts)}
}

var textAlphabets = map[string]alphabet{`\textbf`: bold, `\textit`: italic, `\textsf`: sans, `\texttt`: mono}

// words undoes the escapes of text and keeps the blanks at its ends, which MathML would drop.
func words(s string) string {
	s = strings.NewReplacer(`\%`, "%", `\_`, "_", `\&`, "&", `\#`, "#", `\{`, "{", `\}`, "}", `\ `, " ", "~", "\u00a0").Replace(s)
	if strings.HasPrefix(s, " ") {
		s = "\u00a0" + strings.TrimLeft(s, " ")
	}
	if strings.HasSuffix(s, " ") {
		s = strings.TrimRight(s, " ") + "\u00a0"
	}
	return s
}

func (p *parser) stack(command string) item {
	top, base := p.arg(), p.arg()
	if command == `\underset` {
		return item{xml: elem("munder", base+top)}
	}
	return item{xml: elem("mover", base+top)}
}

func (p *parser) arrow(command string) item {
	sign := `<mo stretchy="true">→</mo>`
	if command == `\xleftarrow` {
		sign = `<mo stretchy="true">←</mo>`
	}
	below, ok := p.option()
	if !ok {
		return item{xml: elem("mover", sign+p.arg())}
	}
	under := p.sub(below)
	return item{xml: elem("munderover", sign+under+p.arg())}
}

func (p *parser) operatorName(string) item {
	if p.peek() == "*" {
		p.next()
	}
	text, ok := p.raw()
	if !ok {
		return item{xml: source(`\operatorname`)}
	}
	return item{xml: `<mi mathvariant="normal">` + html.EscapeString(strings.ReplaceAll(text, `\,`, "\u2009")) + "</mi>", name: true}
}

func (p *parser) substack(string) item {
	text, ok := p.raw()
	if !ok {
		return item{xml: source(`\substack`)}
	}
	q := &parser{src: []rune(text), display: p.display, alphabet: p.alphabet, depth: p.depth + 1}
	if q.depth > maxDepth {
		return item{xml: source(text)}
	}
	return item{xml: q.table(tableForm{rows: "center", gap: "0"}, "")}
}

var length = regexp.MustCompile(`^\s*(-?\d*\.?\d+)\s*(em|ex|pt|mm|cm|px)\s*$`)

func (p *parser) hspace(command string) item {
	text, ok := p.raw()
	if m := length.FindStringSubmatch(text); ok && m != nil {
		return item{xml: space(m[1] + m[2])}
	}
	return item{xml: source(command + "{" + text + "}")}
}

// not strikes through the sign after it.
func (p *parser) not(string) item {
	t := p.peek()
	sign, ok := operators[t]
	switch {
	case ok:
	case t == "=" || t == "<" || t == ">":
		sign = t
	default:
		return item{xml: source(`\not`)}
	}
	p.next()
	if sign == "=" {
		return item{xml: "<mo>≠</mo>"}
	}
	return item{xml: "<mo>" + html.EscapeString(sign) + "\u0338</mo>"}
}

func (p *parser) enclosed(command string) item {
	if command == `\phantom` {
		return item{xml: elem("mphantom", p.arg())}
	}
	return item{xml: `<mrow class="boxed">` + p.arg() + "</mrow>"}
}

// lined draws a line over or under its argument, as a border: few fonts have a line that grows.
func (p *parser) lined(command string) item {
	side := map[string]string{`\overline`: "top", `\underline`: "bottom"}[command]
	return item{xml: `<mrow style="border-` + side + `:0.06em solid;padding-` + side + `:0.12em">` + p.arg() + "</mrow>"}
}

func (p *parser) modulus(command string) item {
	if command == `\bmod` {
		return item{xml: `<mo lspace="0.2222em" rspace="0.2222em">mod</mo>`}
	}
	return item{xml: "<mrow>" + space("1em") + fixed("(", "prefix") + "<mi>mod</mi>" + space("0.3333em") + p.arg() + fixed(")", "postfix") + "</mrow>"}
}
