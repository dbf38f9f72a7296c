package page

import (
	"html"
	"strings"

	"github.com/alecthomas/chroma/v2"
	"github.com/alecthomas/chroma/v2/lexers"
)

// highlight gives code as lines of spans whose classes name the sort of word; a language that is not known gives
// plain lines.
func highlight(source, language string) string {
	source = strings.TrimRight(visible(source), "\n")
	var lexer chroma.Lexer
	if language != "" {
		lexer = lexers.Get(language)
	}
	if lexer == nil {
		lexer = lexers.Fallback
	}
	tokens, err := chroma.Tokenise(chroma.Coalesce(lexer), nil, source)
	if err != nil || joined(tokens) != source {
		tokens = []chroma.Token{{Type: chroma.Text, Value: source}}
	}
	var b strings.Builder
	for i, line := range chroma.SplitTokensIntoLines(tokens) {
		if i > 0 {
			b.WriteByte('\n')
		}
		b.WriteString(`<span class="l">`)
		for _, t := range line {
			writeToken(&b, t)
		}
		b.WriteString("</span>")
	}
	return b.String()
}

// joined gives the text of the tokens, without the line break that the lexers add.
func joined(tokens []chroma.Token) string {
	var b strings.Builder
	for i, t := range tokens {
		if i == len(tokens)-1 {
			t.Value = strings.TrimRight(t.Value, "\n")
			tokens[i] = t
		}
		b.WriteString(t.Value)
	}
	return b.String()
}

func writeToken(b *strings.Builder, t chroma.Token) {
	text := html.EscapeString(strings.TrimSuffix(t.Value, "\n"))
	class := sort(t.Type)
	if class == "" || strings.TrimSpace(text) == "" {
		b.WriteString(text)
		return
	}
	b.WriteString(`<span class="` + class + `">` + text + "</span>")
}

// sort gives the class of a word: k keyword, t type, s text, n number, c comment, f function; "" for all else.
func sort(t chroma.TokenType) string {
	switch {
	case t == chroma.KeywordType:
		return "t"
	case t.InCategory(chroma.Keyword):
		return "k"
	case t.InSubCategory(chroma.LiteralString):
		return "s"
	case t.InSubCategory(chroma.LiteralNumber):
		return "n"
	case t.InCategory(chroma.Comment):
		return "c"
	case t == chroma.NameFunction, t == chroma.NameBuiltin:
		return "f"
	}
	return ""
}
