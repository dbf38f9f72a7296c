package cell

import (
	"go/doc/comment"
	"html"
	"strings"
)

// bundle writes a heading, a note under it and a doc comment for all front ends.
func bundle(head, note, doc string) map[string]any {
	doc = strings.TrimSpace(doc)
	plain := head
	for _, part := range []string{note, doc} {
		if part != "" {
			plain += "\n\n" + part
		}
	}
	var p comment.Parser
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
