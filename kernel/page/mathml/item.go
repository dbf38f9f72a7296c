package mathml

import (
	"html"
	"strings"
	"unicode"
)

// item reads one item without scripts.
func (p *parser) item() item {
	if p.isDigit() {
		return item{xml: "<mn>" + p.alphabet.apply(p.number()) + "</mn>"}
	}
	t := p.next()
	if strings.HasPrefix(t, `\`) {
		return p.command(t)
	}
	switch t {
	case "{":
		return item{xml: p.group()}
	case "~":
		return item{xml: space("0.25em")}
	case "-":
		return item{xml: "<mo>−</mo>"}
	case "*":
		return item{xml: "<mo>∗</mo>"}
	case "(", "[":
		return item{xml: fixed(t, "prefix")}
	case ")", "]":
		return item{xml: fixed(t, "postfix")}
	case "|":
		return item{xml: `<mo stretchy="false">|</mo>`}
	case "/":
		return item{xml: `<mo lspace="0" rspace="0">/</mo>`}
	case "&", "}", "^", "_":
		return item{xml: source(t)}
	}
	r := []rune(t)[0]
	switch {
	case unicode.IsLetter(r):
		return item{xml: p.identifier(r)}
	case unicode.IsDigit(r):
		return item{xml: "<mn>" + t + "</mn>"}
	}
	return item{xml: "<mo>" + html.EscapeString(t) + "</mo>"}
}

// fixed is a bracket that does not grow.
func fixed(sign, form string) string {
	return `<mo form="` + form + `" stretchy="false">` + html.EscapeString(sign) + "</mo>"
}

// identifier sets a letter in the alphabet in force: italic unless one was asked for.
func (p *parser) identifier(r rune) string {
	if p.alphabet == plain {
		return "<mi>" + string(r) + "</mi>"
	}
	return `<mi mathvariant="normal">` + html.EscapeString(p.alphabet.apply(string(r))) + "</mi>"
}

// command reads what belongs to a command.
func (p *parser) command(t string) item {
	if s, ok := letters[t]; ok {
		if p.alphabet == plain && !upright[t] {
			return item{xml: "<mi>" + s + "</mi>"}
		}
		return item{xml: `<mi mathvariant="normal">` + p.alphabet.apply(s) + "</mi>"}
	}
	if s, ok := operators[t]; ok {
		return item{xml: "<mo>" + html.EscapeString(s) + "</mo>"}
	}
	if s, ok := large[t]; ok {
		return p.largeOperator(t, s)
	}
	if name, ok := functions[t]; ok {
		return p.function(name)
	}
	if width, ok := spaces[t]; ok {
		return item{xml: space(width)}
	}
	if s, ok := escapes[t]; ok {
		return item{xml: `<mo stretchy="false">` + html.EscapeString(s) + "</mo>"}
	}
	if a, ok := alphabets[t]; ok {
		return item{xml: p.inAlphabet(a)}
	}
	if a, ok := accents[t]; ok {
		return p.accent(a)
	}
	if build, ok := structures[t]; ok {
		return build(p, t)
	}
	return item{xml: source(t + p.rawGroups())}
}

func (p *parser) largeOperator(t, sign string) item {
	limits := !strings.Contains(t, "int")
	if limits {
		return item{xml: `<mo movablelimits="` + boolean(!p.display) + `">` + sign + "</mo>", limits: true}
	}
	return item{xml: "<mo>" + sign + "</mo>"}
}

func boolean(b bool) string {
	if b {
		return "true"
	}
	return "false"
}

// function sets the name of a function upright; names such as lim and max take their condition below.
func (p *parser) function(name string) item {
	if underName[name] {
		return item{xml: `<mo movablelimits="` + boolean(!p.display) + `" lspace="0" rspace="0">` + name + "</mo>", limits: true, name: true}
	}
	return item{xml: "<mi>" + html.EscapeString(name) + "</mi>", name: true}
}

// inAlphabet sets its argument in another alphabet; a word in it becomes one name.
func (p *parser) inAlphabet(a alphabet) string {
	before := p.alphabet
	p.alphabet = a
	defer func() { p.alphabet = before }()
	at := p.at
	if text, ok := p.raw(); ok && isWord(text) {
		return `<mi mathvariant="normal">` + a.apply(text) + "</mi>"
	}
	p.at = at
	return p.arg()
}

func isWord(s string) bool {
	for _, r := range s {
		if !isLetter(r) {
			return false
		}
	}
	return s != ""
}

// accent reads what an accent stands over or under.
func (p *parser) accent(a accentSign) item {
	base := p.arg()
	sign := `<mo stretchy="` + boolean(a.wide) + `">` + a.sign + "</mo>"
	if a.under {
		return item{xml: `<munder accentunder="true">` + base + sign + "</munder>", limits: a.label}
	}
	return item{xml: `<mover accent="true">` + base + sign + "</mover>", limits: a.label}
}
