package page_test

import (
	"bytes"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

func render(t *testing.T, nb *notebook.Notebook, opt page.Options) string {
	t.Helper()
	out, err := page.Render(nb, opt)
	if err != nil {
		t.Fatal(err)
	}
	return string(out)
}

// texts builds a notebook of Markdown cells.
func texts(list ...string) *notebook.Notebook {
	nb := notebook.New()
	for _, s := range list {
		nb.Add(notebook.Markdown, s)
	}
	return nb
}

// shows builds a notebook of one code cell with these outputs.
func shows(outputs ...*notebook.Output) *notebook.Notebook {
	nb := notebook.New()
	c := nb.Add(notebook.Code, "x")
	c.Count, c.Outputs = 1, outputs
	return nb
}

func TestSameNotebookSameBytes(t *testing.T) {
	first := render(t, sampleNotebook(), sampleOptions())
	for range 5 {
		if render(t, sampleNotebook(), sampleOptions()) != first {
			t.Fatal("two pages of the same notebook differ")
		}
	}
}

func TestPageNeedsNothingElse(t *testing.T) {
	out := render(t, sampleNotebook(), sampleOptions())
	if m := regexp.MustCompile(`(?i)<(script|link|iframe|object|embed|base)\b|\son\w+\s*=|url\((?:[^#"]|"[^#])|@import|src="(?:[^d]|d[^a])`).FindString(out); m != "" {
		t.Errorf("the page holds %q", m)
	}
	if !strings.Contains(out, `content="default-src 'none';`) {
		t.Error("no content policy")
	}
}

func TestContains(t *testing.T) {
	for _, c := range []struct {
		name string
		nb   *notebook.Notebook
		want []string
	}{
		{"formula", texts("a $x_1$ b"), []string{`<math><semantics><msub><mi>x</mi><mn>1</mn></msub>`}},
		{"formula block", texts("a\n$$\nx\n- y\n$$\nb"), []string{`<math display="block">`, `<mrow><mi>x</mi><mo>−</mo><mi>y</mi></mrow>`, "<p>b</p>"}},
		{"formula block on one line", texts("$$x$$.\n\nb"), []string{`<mrow><mi>x</mi><mo>.</mo></mrow>`}},
		{"formula block in a line", texts("a $$x$$ b"), []string{`<math display="block"><semantics><mi>x</mi>`}},
		{"formula that never ends", texts("$$\nx\n\n- y"), []string{"<li>y</li>"}},
		{"bare environment", texts("\\begin{align}\na &= b\n\\end{align}"), []string{`<mtable displaystyle="true">`}},
		{"brackets", texts(`\(x\) and \[y\]`), []string{`<math><semantics><mi>x</mi>`, `<math display="block"><semantics><mi>y</mi>`}},
		{"money", texts("costs $5 and $6, or \\$7"), []string{"costs $5 and $6, or $7"}},
		{"formula in code", texts("`$x$`"), []string{"<code>$x$</code>"}},
		{"emphasis in a formula", texts("$a_b c_d$ *e*"), []string{"<msub>", "<em>e</em>"}},
		{"table", texts("|a|b|\n|-|-:|\n|1|2|"), []string{`<div class="at-scroll"`, `<td style="text-align:right">2</td>`}},
		{"raw HTML", texts("a<br>b<sub>c</sub><u onclick=x>d</u>"), []string{"a<br>b<sub>c</sub><u>d</u>"}},
		{"fenced code", texts("```go\nfunc f() {} // c\n```"), []string{`<span class="k">func</span>`, `<span class="c">// c</span>`}},
		{"code in no language", texts("```\n<a>\n```"), []string{`<span class="l">&lt;a&gt;</span>`}},
		{"title", texts("# A & *b*"), []string{"<title>A &amp; b</title>", "<h1 id=\"A--b\">"}},
		{"no title", texts("text"), []string{"<title>Notebook</title>", "<h1>Notebook</h1>"}},
		{"stream", shows(stream("stdout", "10 %\r100 %\n\x1b[31mred\x1b[0m ab\bc")), []string{">100 %\nred ac</pre>"}},
		{"fault", shows(&notebook.Output{Kind: notebook.Fault, Fault: "BadValue", Text: "one", Traceback: []string{"cell 1, line 1: <no>", "    x", "    ^"}}),
			[]string{"STOPPED</strong> <span>BadValue", "cell 1, line 1: &lt;no&gt;\n    x\n    ^"}},
		{"fault without traceback", shows(&notebook.Output{Kind: notebook.Fault, Fault: "BadValue", Text: "one"}), []string{"<pre>one</pre>"}},
		{"HTML before text", shows(html("<b>h</b>")), []string{"<b>h</b>"}},
		{"PNG", shows(&notebook.Output{Kind: notebook.Display, Data: map[string]any{"image/png": "AA\nAA", "text/plain": "a curve\nmore"}}),
			[]string{`<img src="data:image/png;base64,AAAA" alt="a curve">`, "Figure 1"}},
		{"LaTeX", shows(latex("x^2")), []string{`<math display="block"><semantics><msup>`}},
		{"LaTeX in words", shows(latex("so $x$ and $$y$$")), []string{`so <math><semantics><mi>x`, `<math display="block"><semantics><mi>y`}},
		{"Markdown output", shows(&notebook.Output{Kind: notebook.Display, Data: map[string]any{"text/markdown": "# big\n\n*x*"}}), []string{"<h4", "<em>x</em>"}},
		{"JSON", shows(&notebook.Output{Kind: notebook.Display, Data: map[string]any{"application/json": map[string]any{"b": 1, "a": "<"}}}), []string{"&#34;b&#34;: 1"}},
		{"unknown", shows(&notebook.Output{Kind: notebook.Display, Data: map[string]any{"application/x-thing": "x"}}), []string{"an output of type application/x-thing"}},
		{"drawing", shows(svg(`<svg viewBox="0 0 640 400"><title>T &amp; U</title><desc>D</desc></svg>`, "in words")),
			[]string{`<figure class="at-figure">`, `role="img" aria-label="T &amp; U. D"`, `<span class="at-number">Figure 1</span> T &amp; U</figcaption>`, "<pre>in words</pre>"}},
		{"wide drawing", shows(svg(`<svg viewBox="0 0 900 200"></svg>`, "")), []string{`<figure class="at-figure at-wide">`}},
		{"caption", shows(html("<table><caption>C</caption></table>")), []string{`<caption><span class="at-number">Table 1</span> C</caption>`}},
	} {
		t.Run(c.name, func(t *testing.T) {
			out := render(t, c.nb, page.Options{})
			_, body, _ := strings.Cut(out, "<body>")
			if strings.Contains(c.want[0], "<title>") {
				body = out
			}
			for _, want := range c.want {
				if !strings.Contains(body, want) {
					t.Errorf("no %s in\n%s", want, body)
				}
			}
		})
	}
}

// outline lists the headings of a page as "level id".
func outline(out string) []string {
	var list []string
	for _, m := range regexp.MustCompile(`<h([1-6])(?: id="([^"]*)")?`).FindAllStringSubmatch(out, -1) {
		list = append(list, m[1]+" "+m[2])
	}
	return list
}

func TestHeadingsAreOneTree(t *testing.T) {
	for _, c := range []struct {
		name  string
		cells []string
		want  []string
	}{
		{"as written", []string{"# A", "## B\n\n### C", "## B"}, []string{"1 A", "2 B", "3 C", "2 B-2"}},
		{"levels left out", []string{"# A", "### B\n\n#### C", "## D"}, []string{"1 A", "2 B", "3 C", "2 D"}},
		{"several of level 1", []string{"# A", "# B\n\n## C", "# D"}, []string{"1 A", "2 B", "3 C", "2 D"}},
		{"none of level 1", []string{"## A", "### B"}, []string{"1 ", "2 A", "3 B"}},
		{"level 1 comes late", []string{"## A", "# B", "## C"}, []string{"2 A", "1 B", "2 C"}},
		{"names of this page's own", []string{"# cell-1", "## at-main", "## o1-x", "## *"}, []string{"1 section-cell-1", "2 section-at-main", "2 section-o1-x", "2 section-"}},
		{"words", []string{"# The gap: 0.6 mm (Ä)"}, []string{"1 The-gap-0.6-mm-Ä"}},
	} {
		if got := outline(render(t, texts(c.cells...), page.Options{})); !slices.Equal(got, c.want) {
			t.Errorf("%s: got %q, want %q", c.name, got, c.want)
		}
	}
}

func TestContents(t *testing.T) {
	out := render(t, texts("# T", "## A [link](x) $x$", "## B", "### C", "#### D"), page.Options{})
	_, nav, ok := strings.Cut(out, "<nav")
	nav, _, _ = strings.Cut(nav, "</nav>")
	if !ok || strings.Count(nav, "<li") != 3 || strings.Count(nav, "<a ") != 3 || !strings.Contains(nav, "<math>") || !strings.Contains(nav, `class="at-level3"><a href="#C">C</a>`) {
		t.Errorf("contents: %s", nav)
	}
	if out := render(t, texts("# T", "## A", "## B"), page.Options{}); strings.Contains(out, "<nav") {
		t.Error("a list of two contents")
	}
}

func TestIDsAreUnique(t *testing.T) {
	nb := sampleNotebook()
	nb.Cells = append(nb.Cells, sampleNotebook().Cells...)
	for i, c := range nb.Cells {
		if c.Count > 0 {
			c.Count = i + 1
		}
	}
	out := render(t, nb, sampleOptions())
	seen := map[string]bool{}
	for _, m := range regexp.MustCompile(`\sid="([^"]*)"`).FindAllStringSubmatch(out, -1) {
		if seen[m[1]] {
			t.Errorf("the id %q comes twice", m[1])
		}
		seen[m[1]] = true
	}
	for _, m := range regexp.MustCompile(`(?:href="|url\()#([^")]*)`).FindAllStringSubmatch(out, -1) {
		if !seen[m[1]] {
			t.Errorf("a reference to %q, which is not there", m[1])
		}
	}
	if len(seen) < 20 {
		t.Errorf("only %d ids", len(seen))
	}
}

func TestNumbersRunThroughThePage(t *testing.T) {
	out := render(t, sampleNotebook(), sampleOptions())
	var got []string
	for _, m := range regexp.MustCompile(`class="at-number">([^<]*)<`).FindAllStringSubmatch(out, -1) {
		got = append(got, m[1])
	}
	if want := []string{"Table 1", "Figure 1", "Figure 2", "Table 2"}; !slices.Equal(got, want) {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestCodeCells(t *testing.T) {
	nb := notebook.New()
	ran := nb.Add(notebook.Code, "a := \"<\" // µ\n\tb\r\nc")
	ran.Count = 3
	ran.Outputs = []*notebook.Output{{Kind: notebook.Fault, Fault: "X", Text: "x"}}
	hidden := nb.Add(notebook.Code, "hidden")
	hidden.Metadata["jupyter"] = map[string]any{"source_hidden": true, "outputs_hidden": true}
	nb.Add(notebook.Code, " \n")
	nb.Add(notebook.Raw, "<raw>")
	out := render(t, nb, page.Options{})
	for _, want := range []string{
		`<section class="at-cell" id="cell-3" aria-label="cell 3">`, `<details class="at-code" open><summary>cell 3</summary>`,
		"<span class=\"l\">\t" + `b</span>`, `<section class="at-cell at-unrun" aria-label="not run">`,
		`<details class="at-code"><summary>not run</summary>`, `<details class="at-folded">`, `<pre class="at-raw">&lt;raw&gt;</pre>`,
	} {
		if !strings.Contains(out, want) {
			t.Errorf("no %s in\n%s", want, out[strings.Index(out, "<body>"):])
		}
	}
	if n := strings.Count(out, "<section"); n != 2 {
		t.Errorf("%d code cells, want 2: a blank one shows nothing", n)
	}
}

func TestPicturesOfTexts(t *testing.T) {
	nb := texts("![a](attachment:p%20q.png) ![b](pic.png) ![c](../pic.png) ![d](none.png) ![e](https://example.invalid/e.png) ![f](dir/g.svg)")
	nb.Cells[0].Attachments = map[string]any{"p q.png": map[string]any{"image/png": "AAAA"}}
	png := "\x89PNG\r\n\x1a\nrest"
	files := fstest.MapFS{"pic.png": {Data: []byte(png)}, "dir/g.svg": {Data: []byte("<svg/>")}}
	out := render(t, nb, page.Options{Files: files})
	for _, want := range []string{`src="data:image/png;base64,AAAA" alt="a"`, `src="data:image/png;base64,iVBORw0KGgpyZXN0" alt="b"`, "page: c]", "page: d]", "page: e]", `src="data:image/svg+xml;base64,PHN2Zy8+" alt="f"`} {
		if !strings.Contains(out, want) {
			t.Errorf("no %s in\n%s", want, out[strings.Index(out, "<body>"):])
		}
	}
}

func TestFrame(t *testing.T) {
	out := render(t, texts("# H"), page.Options{Title: "T\"</style>\\ é", Lang: "de", Provenance: []page.Row{{Name: "n<", Value: "v&"}}})
	for _, want := range []string{`<html lang="de">`, "<title>T&#34;&lt;/style&gt;\\ é</title>", `content: "T\22 \3C \2F style\3E \5C  \E9 "`,
		"<dt>n&lt;</dt><dd>v&amp;</dd>", "</html>\n"} {
		if !strings.Contains(out, want) {
			t.Errorf("no %s in the page", want)
		}
	}
}

// FuzzRender demands that no text and no output makes a page that can run or load anything.
func FuzzRender(f *testing.F) {
	for _, s := range hostile {
		f.Add(s, s)
	}
	for _, c := range sampleNotebook().Cells {
		f.Add(c.Source, fmt.Sprint(c.Outputs))
	}
	f.Add("$$\nx\n> $$\n- [^1]\n\n[^1]: \\begin{a}\n\\end{a}", lineChart)
	bad := regexp.MustCompile(`(?i)<(script|iframe|object|embed|form|input|link|base|foreignobject)\b|<[a-z]+(?: [\w:-]+="[^"]*")* on\w+=`)
	f.Fuzz(func(t *testing.T, text, output string) {
		nb := texts(text)
		c := nb.Add(notebook.Code, text)
		c.Count = 1
		c.Outputs = []*notebook.Output{html(output), svg(output, text), latex(output), result(output), stream("stderr", output),
			{Kind: notebook.Display, Data: map[string]any{"text/markdown": output}}}
		first, err := page.Render(nb, page.Options{Title: text, Lang: output})
		if err != nil {
			t.Fatal(err)
		}
		if m := bad.Find(first); m != nil {
			t.Errorf("the page holds %q\ntext %q\noutput %q", m, text, output)
		}
		again, err := page.Render(nb, page.Options{Title: text, Lang: output})
		if err != nil || !bytes.Equal(first, again) {
			t.Errorf("two pages differ (%v)", err)
		}
	})
}

func BenchmarkRender(b *testing.B) {
	nb := sampleNotebook()
	for b.Loop() {
		if _, err := page.Render(nb, sampleOptions()); err != nil {
			b.Fatal(err)
		}
	}
}
