package mathml

import (
	"strings"
	"unicode"
)

// peek gives the next token without reading it: a sign, or a command with its backslash; "" at the end.
func (p *parser) peek() string {
	at := p.at
	t := p.next()
	if t != "" {
		p.at = at
	}
	return t
}

// next reads a token and the blanks before it.
func (p *parser) next() string {
	p.skipBlanks()
	if p.at >= len(p.src) {
		return ""
	}
	start := p.at
	p.at++
	if p.src[start] != '\\' {
		return string(p.src[start])
	}
	if p.at < len(p.src) && !isLetter(p.src[p.at]) {
		p.at++
		return string(p.src[start:p.at])
	}
	for p.at < len(p.src) && isLetter(p.src[p.at]) {
		p.at++
	}
	return string(p.src[start:p.at])
}

func (p *parser) skipBlanks() {
	for p.at < len(p.src) && unicode.IsSpace(p.src[p.at]) {
		p.at++
	}
}

func (p *parser) isDigit() bool {
	p.skipBlanks()
	return p.at < len(p.src) && p.src[p.at] >= '0' && p.src[p.at] <= '9'
}

// number reads digits with at most one point inside.
func (p *parser) number() string {
	start, point := p.at, false
	for ; p.at < len(p.src); p.at++ {
		c := p.src[p.at]
		if c == '.' && !point && p.at+1 < len(p.src) && p.src[p.at+1] >= '0' && p.src[p.at+1] <= '9' {
			point = true
			continue
		}
		if c < '0' || c > '9' {
			break
		}
	}
	return string(p.src[start:p.at])
}

// raw reads the source of a braced argument; ok is false, and nothing read, if there is none.
func (p *parser) raw() (text string, ok bool) {
	if p.peek() != "{" {
		return "", false
	}
	p.next()
	return p.rawToBrace(), true
}

// rawToBrace reads source up to the brace that closes an open one, and that brace.
func (p *parser) rawToBrace() string {
	start, open := p.at, 1
	for ; p.at < len(p.src); p.at++ {
		switch p.src[p.at] {
		case '\\':
			p.at = min(p.at+1, len(p.src)-1)
		case '{':
			open++
		case '}':
			if open--; open == 0 {
				p.at++
				return string(p.src[start : p.at-1])
			}
		}
	}
	return string(p.src[start:])
}

// option reads the source of an argument in square brackets.
func (p *parser) option() (text string, ok bool) {
	if p.peek() != "[" {
		return "", false
	}
	at := p.at
	p.next()
	start, open := p.at, 0
	for ; p.at < len(p.src); p.at++ {
		switch p.src[p.at] {
		case '{':
			open++
		case '}':
			open--
		case ']':
			if open == 0 {
				p.at++
				return string(p.src[start : p.at-1]), true
			}
		}
		if open < 0 {
			break
		}
	}
	p.at = at
	return "", false
}

// rawGroups reads all arguments that follow directly, as their source.
func (p *parser) rawGroups() string {
	var b strings.Builder
	for p.at < len(p.src) {
		switch p.src[p.at] {
		case '{':
			start := p.at
			p.at++
			p.rawToBrace()
			b.WriteString(string(p.src[start:p.at]))
		case '[':
			start := p.at
			if _, ok := p.option(); !ok {
				return b.String()
			}
			b.WriteString(string(p.src[start:p.at]))
		default:
			return b.String()
		}
	}
	return b.String()
}

func isLetter(r rune) bool { return r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' }

// sub converts a piece of source on its own.
func (p *parser) sub(text string) string {
	if p.depth >= maxDepth {
		return source(text)
	}
	q := &parser{src: []rune(text), display: p.display, alphabet: p.alphabet, depth: p.depth + 1}
	return q.formula()
}
