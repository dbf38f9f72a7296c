package cell

import (
	"go/doc/comment"
	"html"
	"regexp"
	"strings"
)

var docLink = regexp.MustCompile(`\[([A-Z][\w.]*)\]`)

// bundle writes a heading, a note under it and a doc comment for all front ends.
func bundle(head, note, doc string) map[string]any {
	doc = strings.TrimSpace(doc)
	words := docLink.ReplaceAllString(doc, "$1")
	plain := head
	for _, part := range []string{note, words} {
		if part != "" {
			plain += "\n\n" + part
		}
	}
	p := comment.Parser{LookupSym: func(recv, name string) bool { return true }} // [Name] is shown as Name
	parsed := p.Parse(doc)
	print := comment.Printer{HeadingLevel: 4, DocLinkURL: func(*comment.DocLink) string { return "" }}
	marked := "```go\n" + head + "\n```\n"
	page := "<pre>" + html.EscapeString(head) + "</pre>\n"
	if note != "" {
		marked += "\n*" + note + "*\n"
		page += "<p><em>" + html.EscapeString(note) + "</em></p>\n"
	}
	return map[string]any{
		"text/plain":    plain,
		"text/markdown": strings.TrimSpace(marked + "\n" + string(print.Markdown(parsed))),
		"text/html":     strings.TrimSpace(page + string(print.HTML(parsed))),
	}
}
