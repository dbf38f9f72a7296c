package page

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"io/fs"
	"net/http"
	"net/url"
	"path"
	"regexp"
	"strings"
	"unicode"

	"github.com/gohugoio/hugo-goldmark-extensions/passthrough"
	"github.com/yuin/goldmark"
	"github.com/yuin/goldmark/ast"
	"github.com/yuin/goldmark/extension"
	"github.com/yuin/goldmark/parser"
	"github.com/yuin/goldmark/renderer"
	"github.com/yuin/goldmark/renderer/html"
	mdtext "github.com/yuin/goldmark/text"
	"github.com/yuin/goldmark/util"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page/clean"
)

// text is a Markdown text that is parsed and not yet written.
type text struct {
	source []byte
	md     goldmark.Markdown
	root   ast.Node
	list   []heading
}

// heading is a heading of a text.
type heading struct {
	node  *ast.Heading
	level int
	id    string
	plain string // its words
	html  string // its content without links, for the list of contents
}

// markdown builds the reader of texts; place keeps the footnotes of different cells apart.
func markdown(place int) goldmark.Markdown {
	return goldmark.New(
		goldmark.WithExtensions(
			extension.Table, extension.Strikethrough, extension.DefinitionList,
			extension.NewFootnote(extension.WithFootnoteIDPrefix(fmt.Appendf(nil, "c%d-", place))),
			passthrough.New(passthrough.Config{
				InlineDelimiters: []passthrough.Delimiters{{Open: "$", Close: "$"}, {Open: `\(`, Close: `\)`}},
				BlockDelimiters:  []passthrough.Delimiters{{Open: "$$", Close: "$$"}, {Open: `\[`, Close: `\]`}},
			}),
		),
		goldmark.WithParserOptions(
			parser.WithAutoHeadingID(),
			parser.WithBlockParsers(util.Prioritized(formulaParser{}, 650)),
		),
		goldmark.WithRendererOptions(
			html.WithUnsafe(), // package clean is the judge of raw HTML
			renderer.WithNodeRenderers(util.Prioritized(nodes{}, 50)),
		),
	)
}

func parseText(c *notebook.Cell, place int, ids parser.IDs) *text {
	t := &text{source: []byte(visible(c.Source)), md: markdown(place)}
	t.root = t.md.Parser().Parse(mdtext.NewReader(t.source), parser.WithContext(parser.NewContext(parser.WithIDs(ids))))
	_ = ast.Walk(t.root, func(n ast.Node, entering bool) (ast.WalkStatus, error) { // the function gives no error
		if h, ok := n.(*ast.Heading); ok && entering {
			t.list = append(t.list, heading{node: h, level: h.Level})
		}
		return ast.WalkContinue, nil
	})
	return t
}

// levelHeadings makes the outline of all texts one tree: one heading of level 1 only, and no level left out on the
// way down.
func levelHeadings(list []*text) {
	tops := 0
	for _, t := range list {
		for _, h := range t.list {
			if h.level == 1 {
				tops++
			}
		}
	}
	first, last := true, 1
	for _, t := range list {
		for i := range t.list {
			h := &t.list[i]
			switch {
			case first && h.level == 1:
				first = false
			case tops > 1:
				h.level++
			case h.level == 1:
				h.level = 2
			}
			h.level = min(h.level, last+1, 6)
			last = h.level
			h.node.Level = h.level
		}
	}
}

var anchor = regexp.MustCompile(`</?a(?: [^>]*)?>| id="[^"]*"`)

// entries gives the headings with their words and ids.
func (t *text) entries() ([]heading, error) {
	for i := range t.list {
		h := &t.list[i]
		var b bytes.Buffer
		for n := h.node.FirstChild(); n != nil; n = n.NextSibling() {
			if err := t.md.Renderer().Render(&b, t.source, n); err != nil {
				return nil, err
			}
		}
		inner := clean.HTML(b.String(), clean.Options{})
		h.html = anchor.ReplaceAllString(inner, "")
		h.plain = clean.Text("<h>"+withoutSource.ReplaceAllString(inner, "")+"</h>", "h")
		if id, ok := h.node.AttributeString("id"); ok {
			if b, ok := id.([]byte); ok {
				h.id = string(b)
			}
		}
	}
	return t.list, nil
}

var withoutSource = regexp.MustCompile(`(?s)<annotation.*?</annotation>`)

func (t *text) render() (string, error) {
	var b bytes.Buffer
	err := t.md.Renderer().Render(&b, t.source, t.root)
	return b.String(), err
}

// ids gives headings their ids: their words, blanks as hyphens, as links inside notebooks are written.
type ids struct{ taken map[string]bool }

func newIDs() *ids { return &ids{taken: map[string]bool{}} }

var reserved = regexp.MustCompile(`^(at-|cell-\d|o\d+-|c\d+-)`)

// Generate gives an id that no heading of the page has yet.
func (s *ids) Generate(value []byte, _ ast.NodeKind) []byte {
	id := strings.Map(func(r rune) rune {
		switch {
		case unicode.IsLetter(r), unicode.IsDigit(r), strings.ContainsRune("-_.", r):
			return r
		case unicode.IsSpace(r):
			return '-'
		}
		return -1
	}, strings.TrimSpace(string(value)))
	if id == "" || reserved.MatchString(id) {
		id = "section-" + id
	}
	name := id
	for n := 2; s.taken[name]; n++ {
		name = fmt.Sprintf("%s-%d", id, n)
	}
	s.taken[name] = true
	return []byte(name)
}

// Put notes an id that a text brings along.
func (s *ids) Put(value []byte) { s.taken[string(value)] = true }

// images finds the pictures that a text names: attachments of its cell, files beside the notebook.
func (d *document) images(c *notebook.Cell) func(src string) (string, bool) {
	return func(src string) (string, bool) {
		if name, ok := strings.CutPrefix(src, "attachment:"); ok {
			if n, err := url.PathUnescape(name); err == nil {
				name = n
			}
			return attachment(c.Attachments[name])
		}
		name, err := url.PathUnescape(src)
		if err != nil || d.opt.Files == nil || !fs.ValidPath(path.Clean(name)) {
			return "", false
		}
		data, err := fs.ReadFile(d.opt.Files, path.Clean(name))
		if err != nil {
			return "", false
		}
		kind := http.DetectContentType(data)
		if strings.EqualFold(path.Ext(name), ".svg") {
			kind = "image/svg+xml"
		}
		return "data:" + kind + ";base64," + base64.StdEncoding.EncodeToString(data), true
	}
}

func attachment(bundle any) (string, bool) {
	b, _ := bundle.(map[string]any)
	for _, kind := range []string{"image/png", "image/jpeg", "image/gif", "image/webp"} {
		if data, ok := b[kind].(string); ok {
			return "data:" + kind + ";base64," + strings.Join(strings.Fields(data), ""), true
		}
	}
	return "", false
}
