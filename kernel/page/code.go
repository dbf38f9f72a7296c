package page

import (
	"go/scanner"
	"go/token"
	"go/types"
	"html"
	"strings"
)

// highlight gives code as lines of spans whose classes name the sort of word. Go is known; other languages give plain
// lines.
func highlight(source, language string) string {
	source = strings.TrimRight(visible(source), "\n")
	var lines codeLines
	at := 0
	if isGo(language) {
		for _, w := range words(source) {
			lines.write("", source[at:w.from])
			lines.write(w.class, source[w.from:w.to])
			at = w.to
		}
	}
	lines.write("", source[at:])
	return `<span class="l">` + lines.String() + "</span>"
}

func isGo(language string) bool {
	switch strings.ToLower(language) {
	case "go", "golang":
		return true
	}
	return false
}

// codeLines writes pieces of code; a line break ends the span of a line.
type codeLines struct{ strings.Builder }

func (b *codeLines) write(class, text string) {
	for i, part := range strings.Split(text, "\n") {
		if i > 0 {
			b.WriteString("</span>\n" + `<span class="l">`)
		}
		switch part = html.EscapeString(part); {
		case class == "" || strings.TrimSpace(part) == "":
			b.WriteString(part)
		default:
			b.WriteString(`<span class="` + class + `">` + part + "</span>")
		}
	}
}

// word is a piece of code with its class: k keyword, t type, s text, n number, c comment, f function.
type word struct {
	from, to int
	class    string
}

// words scans Go code. What cannot be scanned has no class.
func words(source string) []word {
	file := token.NewFileSet().AddFile("", -1, len(source))
	var s scanner.Scanner
	broken := false
	s.Init(file, []byte(source), func(token.Position, string) { broken = true }, scanner.ScanComments)
	var all []word
	for {
		pos, tok, lit := s.Scan()
		if tok == token.EOF || broken {
			return all
		}
		from := file.Offset(pos)
		if tok == token.LPAREN && len(all) > 0 && all[len(all)-1].class == "" && strings.TrimSpace(source[all[len(all)-1].to:from]) == "" {
			all[len(all)-1].class = "f"
		}
		if w := (word{from, from + len(lit), sort(tok, lit)}); lit != "" && w.to <= len(source) && source[from:w.to] == lit && tok != token.SEMICOLON {
			all = append(all, w)
		}
	}
}

// sort gives the class of a token; "" for all else.
func sort(tok token.Token, lit string) string {
	switch {
	case tok.IsKeyword():
		return "k"
	case tok == token.STRING, tok == token.CHAR:
		return "s"
	case tok == token.INT, tok == token.FLOAT, tok == token.IMAG:
		return "n"
	case tok == token.COMMENT:
		return "c"
	case tok == token.IDENT:
		switch types.Universe.Lookup(lit).(type) {
		case *types.TypeName:
			return "t"
		case *types.Builtin:
			return "f"
		case *types.Const, *types.Nil:
			return "k"
		}
	}
	return ""
}
