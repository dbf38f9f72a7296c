package page

import (
	"bytes"
	"html"
	"strings"

	"github.com/gohugoio/hugo-goldmark-extensions/passthrough"
	"github.com/yuin/goldmark/ast"
	"github.com/yuin/goldmark/parser"
	"github.com/yuin/goldmark/renderer"
	mdtext "github.com/yuin/goldmark/text"
	"github.com/yuin/goldmark/util"

	"ampturn/kernel/page/mathml"
)

// formula is a formula that stands on lines of its own. It is a block from the start, so that a line of it that begins
// with a minus sign does not become a list.
type formula struct {
	ast.BaseBlock
	close string
	done  bool
}

var kindFormula = ast.NewNodeKind("Formula")

func (*formula) Kind() ast.NodeKind { return kindFormula }

// Dump shows the node, as goldmark asks.
func (f *formula) Dump(source []byte, level int) { ast.DumpHelper(f, source, level, nil, nil) }

// formulaParser finds formulas on lines of their own: $$ ... $$, \[ ... \] and bare environments.
type formulaParser struct{}

func (formulaParser) Trigger() []byte { return []byte{'$', '\\'} }

func (formulaParser) Open(_ ast.Node, reader mdtext.Reader, pc parser.Context) (ast.Node, parser.State) {
	line, segment := reader.PeekLine()
	if pc.BlockOffset() < 0 {
		return nil, parser.NoChildren
	}
	start := strings.TrimSpace(string(line))
	f := &formula{close: closing(start)}
	if f.close == "" || !f.closedBelow(start, reader.Source()[segment.Stop:]) {
		return nil, parser.NoChildren
	}
	f.Lines().Append(segment)
	return f, parser.NoChildren
}

// closing gives the end of what a line opens; "" if it opens no formula.
func closing(line string) string {
	switch {
	case strings.HasPrefix(line, "$$"):
		return "$$"
	case strings.HasPrefix(line, `\[`):
		return `\]`
	case strings.HasPrefix(line, `\begin{`):
		if name, _, ok := strings.Cut(line[len(`\begin{`):], "}"); ok {
			return `\end{` + name + "}"
		}
	}
	return ""
}

// closedBelow tells whether the formula ends at the end of a line before the next blank one.
func (f *formula) closedBelow(start string, below []byte) bool {
	if len(start) > len(f.close) && strings.Contains(start[2:], f.close) {
		f.done = f.endsWith(start[2:])
		return f.done
	}
	for line := range bytes.Lines(below) {
		text := strings.TrimSpace(string(line))
		if text == "" {
			return false
		}
		if strings.Contains(text, f.close) {
			return f.endsWith(text)
		}
	}
	return false
}

func (f *formula) endsWith(line string) bool {
	return strings.HasSuffix(strings.TrimRight(strings.TrimSpace(line), ".,;"), f.close)
}

func (formulaParser) Continue(node ast.Node, reader mdtext.Reader, _ parser.Context) parser.State {
	f, _ := node.(*formula)
	if f == nil || f.done {
		return parser.Close
	}
	line, segment := reader.PeekLine()
	if len(bytes.TrimSpace(line)) == 0 {
		return parser.Close
	}
	f.Lines().Append(segment)
	f.done = f.endsWith(string(line))
	reader.AdvanceToEOL()
	return parser.Continue | parser.NoChildren
}

func (formulaParser) Close(ast.Node, mdtext.Reader, parser.Context) {}

// CanInterruptParagraph lets a formula follow a line of text directly.
func (formulaParser) CanInterruptParagraph() bool { return true }

// CanAcceptIndentedLine leaves lines indented by four blanks to code.
func (formulaParser) CanAcceptIndentedLine() bool { return false }

// nodes writes code and formulas in this page's own way.
type nodes struct{}

func (nodes) RegisterFuncs(r renderer.NodeRendererFuncRegisterer) {
	r.Register(kindFormula, writeBlock)
	r.Register(passthrough.KindPassthroughBlock, writeBlock)
	r.Register(passthrough.KindPassthroughInline, writeInline)
	r.Register(ast.KindFencedCodeBlock, writeCode)
	r.Register(ast.KindCodeBlock, writeCode)
}

func writeBlock(w util.BufWriter, source []byte, n ast.Node, entering bool) (ast.WalkStatus, error) {
	if !entering {
		return ast.WalkContinue, nil
	}
	_, err := w.WriteString(`<div class="at-formula">` + mathml.Convert(formulaSource(string(n.Lines().Value(source))), true) + "</div>\n")
	return ast.WalkSkipChildren, err
}

// formulaSource takes the delimiters from a formula; a point or comma behind them goes into it.
func formulaSource(s string) string {
	s = strings.TrimSpace(s)
	for _, pair := range [][2]string{{"$$", "$$"}, {`\[`, `\]`}, {"$", "$"}, {`\(`, `\)`}} {
		inner, ok := strings.CutPrefix(s, pair[0])
		if end := strings.LastIndex(inner, pair[1]); ok && end >= 0 {
			return strings.TrimSpace(inner[:end]) + inner[end+len(pair[1]):]
		}
	}
	return s
}

// writeInline writes a formula in running text. A dollar sign with a blank before the one that would close it, and none
// behind it, is money: "$5 and $6".
func writeInline(w util.BufWriter, source []byte, n ast.Node, entering bool) (ast.WalkStatus, error) {
	p, ok := n.(*passthrough.PassthroughInline)
	if !entering || !ok {
		return ast.WalkContinue, nil
	}
	text := string(p.Segment.Value(source))
	inner := strings.TrimSuffix(strings.TrimPrefix(text, p.Delimiters.Open), p.Delimiters.Close)
	out := mathml.Convert(inner, p.Delimiters.Open == "$$" || p.Delimiters.Open == `\[`)
	if p.Delimiters.Open == "$" && strings.TrimRight(inner, " ") != inner && strings.TrimLeft(inner, " ") == inner {
		out = html.EscapeString(text)
	}
	_, err := w.WriteString(out)
	return ast.WalkSkipChildren, err
}

func writeCode(w util.BufWriter, source []byte, n ast.Node, entering bool) (ast.WalkStatus, error) {
	if !entering {
		return ast.WalkContinue, nil
	}
	language := ""
	if f, ok := n.(*ast.FencedCodeBlock); ok {
		language = string(f.Language(source))
	}
	_, err := w.WriteString(`<pre class="at-block"><code>` + highlight(string(n.Lines().Value(source)), language) + "</code></pre>\n")
	return ast.WalkSkipChildren, err
}
