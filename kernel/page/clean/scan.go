package clean

import (
	"html"
	"regexp"
	"strings"
)

type tokenKind int

const (
	textToken tokenKind = iota
	startToken
	endToken
)

// token is a piece of HTML. Names are lower case, values and text without character references.
type token struct {
	kind   tokenKind
	name   string
	text   string
	attrs  []attribute
	closed bool // <name/>
}

type attribute struct{ name, value string }

func (t *token) attr(name string) string {
	for _, a := range t.attrs {
		if a.name == name {
			return a.value
		}
	}
	return ""
}

func (t *token) has(name string) bool {
	for _, a := range t.attrs {
		if a.name == name {
			return true
		}
	}
	return false
}

func (t *token) set(name, value string) {
	for i, a := range t.attrs {
		if a.name == name {
			t.attrs[i].value = value
			return
		}
	}
	t.attrs = append(t.attrs, attribute{name, value})
}

// scanner cuts a text into tokens. Comments, doctypes and processing instructions give none.
type scanner struct {
	src string
	at  int
}

func (s *scanner) next() (token, bool) {
	for s.at < len(s.src) {
		rest := s.src[s.at:]
		switch {
		case rest[0] != '<':
			end := strings.IndexByte(rest, '<')
			if end < 0 {
				end = len(rest)
			}
			s.at += end
			return token{kind: textToken, text: decode(rest[:end])}, true
		case strings.HasPrefix(rest, "<!--"):
			s.skipPast("-->", 4)
		case strings.HasPrefix(rest, "<![CDATA["):
			start := s.at + len("<![CDATA[")
			s.skipPast("]]>", len("<![CDATA["))
			return token{kind: textToken, text: clear(strings.TrimSuffix(s.src[start:s.at], "]]>"))}, true
		case strings.HasPrefix(rest, "<!"), strings.HasPrefix(rest, "<?"):
			s.skipPast(">", 2)
		case len(rest) > 2 && rest[1] == '/' && isLetter(rest[2]):
			s.at += 2
			t := token{kind: endToken, name: s.name()}
			s.skipPast(">", 0)
			return t, true
		case len(rest) > 1 && isLetter(rest[1]):
			s.at++
			return s.startTag(), true
		default:
			s.at++
			return token{kind: textToken, text: "<"}, true
		}
	}
	return token{}, false
}

func (s *scanner) startTag() token {
	t := token{kind: startToken, name: s.name()}
	for {
		s.skip(" \t\r\n\f")
		if s.at >= len(s.src) {
			return t
		}
		switch s.src[s.at] {
		case '>':
			s.at++
			return t
		case '/':
			s.at++
			t.closed = s.at < len(s.src) && s.src[s.at] == '>'
			continue
		}
		name := strings.ToLower(s.until(" \t\r\n\f/>=", 1))
		s.skip(" \t\r\n\f")
		value := ""
		if s.at < len(s.src) && s.src[s.at] == '=' {
			s.at++
			s.skip(" \t\r\n\f")
			value = s.value()
		}
		if !t.has(name) { // of two, browsers take the first
			t.attrs = append(t.attrs, attribute{name, decode(value)})
		}
	}
}

func (s *scanner) value() string {
	if s.at >= len(s.src) {
		return ""
	}
	quote := s.src[s.at]
	if quote != '"' && quote != '\'' {
		return s.until(" \t\r\n\f>", 0)
	}
	s.at++
	v := s.until(string(quote), 0)
	s.at = min(s.at+1, len(s.src))
	return v
}

// name reads the name of an element.
func (s *scanner) name() string { return strings.ToLower(s.until(" \t\r\n\f/>", 0)) }

// until reads up to one of the signs, at least n bytes.
func (s *scanner) until(signs string, n int) string {
	start := s.at
	n = min(n, len(s.src)-start)
	end := strings.IndexAny(s.src[start+n:], signs)
	if end < 0 {
		s.at = len(s.src)
	} else {
		s.at = start + n + end
	}
	return s.src[start:s.at]
}

func (s *scanner) skip(signs string) {
	for s.at < len(s.src) && strings.IndexByte(signs, s.src[s.at]) >= 0 {
		s.at++
	}
}

// skipPast goes behind the next mark, looked for from ahead on, or to the end.
func (s *scanner) skipPast(mark string, ahead int) {
	from := min(s.at+ahead, len(s.src))
	if i := strings.Index(s.src[from:], mark); i >= 0 {
		s.at = from + i + len(mark)
		return
	}
	s.at = len(s.src)
}

// rawTo gives the source up to the end tag of that name and goes behind it.
func (s *scanner) rawTo(name string) string {
	start := s.at
	end := regexp.MustCompile(`(?i)</` + regexp.QuoteMeta(name)).FindStringIndex(s.src[start:])
	if end == nil {
		s.at = len(s.src)
		return s.src[start:]
	}
	s.at = start + end[1]
	s.skipPast(">", 0)
	return s.src[start : start+end[0]]
}

// skipElement goes behind the end of an element that was just started.
func (s *scanner) skipElement(t token) {
	if !t.closed && !void[t.name] {
		s.rawTo(t.name)
	}
}

func isLetter(c byte) bool { return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' }

func decode(s string) string { return clear(html.UnescapeString(s)) }

// clear takes out what no HTML text may hold: control signs and bytes that are not UTF-8.
func clear(s string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' && r != '\n' && r != '\t' && r != '\r' || r == 0x7f {
			return -1
		}
		return r
	}, strings.ToValidUTF8(s, "\uFFFD"))
}
