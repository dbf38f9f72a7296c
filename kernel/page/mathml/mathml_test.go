package mathml_test

import (
	"encoding/xml"
	"errors"
	"io"
	"strings"
	"testing"

	"ampturn/kernel/page/mathml"
)

// body converts and gives what stands before the annotation.
func body(tex string, display bool) string {
	m := mathml.Convert(tex, display)
	_, rest, _ := strings.Cut(m, "<semantics>")
	inner, _, _ := strings.Cut(rest, "<annotation")
	return inner
}

// TestConvert compares with MathML written by hand after the MathML Core recommendation (W3C); short names stand for
// elements to keep the rows readable: {i x} is <mi>x</mi>, {o +} an mo, {n 2} an mn.
func TestConvert(t *testing.T) {
	for _, c := range []struct{ tex, want string }{
		{``, `<mrow></mrow>`},
		{`x`, `{i x}`},
		{`a + 2.5b`, `<mrow>{i a}{o +}{n 2.5}{i b}</mrow>`},
		{`a-b`, `<mrow>{i a}{o −}{i b}</mrow>`},
		{`x_1^2`, `<msubsup>{i x}{n 1}{n 2}</msubsup>`},
		{`x^2_1`, `<msubsup>{i x}{n 1}{n 2}</msubsup>`},
		{`x^23`, `<mrow><msup>{i x}{n 2}</msup>{n 3}</mrow>`},
		{`x''`, `<msup>{i x}{o ′′}</msup>`},
		{`x'^2`, `<msup>{i x}<mrow>{o ′}{n 2}</mrow></msup>`},
		{`_a`, `<msub><mrow></mrow>{i a}</msub>`},
		{`\frac12`, `<mfrac>{n 1}{n 2}</mfrac>`},
		{`\frac{a+b}{c}`, `<mfrac><mrow>{i a}{o +}{i b}</mrow>{i c}</mfrac>`},
		{`\sqrt{x}`, `<msqrt>{i x}</msqrt>`},
		{`\sqrt[3]{x}`, `<mroot>{i x}{n 3}</mroot>`},
		{`\binom{n}{k}`, `<mrow><mo form="prefix">(</mo><mfrac linethickness="0">{i n}{i k}</mfrac><mo form="postfix">)</mo></mrow>`},
		{`\mu_0`, `<msub>{i μ}{n 0}</msub>`},
		{`\Omega`, `<mi mathvariant="normal">Ω</mi>`},
		{`\infty`, `<mi mathvariant="normal">∞</mi>`},
		{`\mathrm{mm}`, `<mi mathvariant="normal">mm</mi>`},
		{`\mathrm{\mu H}`, `<mrow><mi mathvariant="normal">μ</mi><mi mathvariant="normal">H</mi></mrow>`},
		{`\mathbf{B}`, `<mi mathvariant="normal">𝐁</mi>`},
		{`\mathcal{R}`, `<mi mathvariant="normal">ℛ</mi>`},
		{`\mathbb{R}`, `<mi mathvariant="normal">ℝ</mi>`},
		{`a \le b`, `<mrow>{i a}{o ≤}{i b}</mrow>`},
		{`a < b`, `<mrow>{i a}{o &lt;}{i b}</mrow>`},
		{`\sin x`, `<mrow>{i sin}<mspace width="0.1667em"></mspace>{i x}</mrow>`},
		{`\sin^2 x`, `<mrow><msup>{i sin}{n 2}</msup><mspace width="0.1667em"></mspace>{i x}</mrow>`},
		{`\sin(x)`, `<mrow>{i sin}<mo form="prefix" stretchy="false">(</mo>{i x}<mo form="postfix" stretchy="false">)</mo></mrow>`},
		{`\int_a^b`, `<msubsup>{o ∫}{i a}{i b}</msubsup>`},
		{`\int\limits_a^b`, `<munderover>{o ∫}{i a}{i b}</munderover>`},
		{`\sum_{i=1}^n`, `<munderover><mo movablelimits="true">∑</mo><mrow>{i i}{o =}{n 1}</mrow>{i n}</munderover>`},
		{`\sum\nolimits_i`, `<msub><mo movablelimits="true">∑</mo>{i i}</msub>`},
		{`\left(x\right.`, `<mrow><mo form="prefix" fence="true" stretchy="true" symmetric="true">(</mo>{i x}</mrow>`},
		{`\left\langle x \middle| y\right\rangle`, `<mrow><mo form="prefix" fence="true" stretchy="true" symmetric="true">⟨</mo>{i x}` +
			`<mo form="infix" fence="true" stretchy="true" symmetric="true">|</mo>{i y}<mo form="postfix" fence="true" stretchy="true" symmetric="true">⟩</mo></mrow>`},
		{`\big(`, `<mo form="infix" stretchy="true" symmetric="true" lspace="0" rspace="0" minsize="1.2em" maxsize="1.2em">(</mo>`},
		{`\Biggr]`, `<mo form="postfix" stretchy="true" symmetric="true" lspace="0" rspace="0" minsize="3em" maxsize="3em">]</mo>`},
		{`\hat{x}`, `<mover accent="true">{i x}<mo stretchy="false">^</mo></mover>`},
		{`\overline{ab}`, `<mrow style="border-top:0.06em solid;padding-top:0.12em"><mrow>{i a}{i b}</mrow></mrow>`},
		{`\underbrace{x}_{n}`, `<munder><munder accentunder="true">{i x}<mo stretchy="true">⏟</mo></munder>{i n}</munder>`},
		{`\text{if } x`, "<mrow><mtext>if\u00a0</mtext>{i x}</mrow>"},
		{`\text{a $b$ c}`, "<mrow><mtext>a\u00a0</mtext>{i b}<mtext>\u00a0c</mtext></mrow>"},
		{`\text{5\,\%}`, `<mtext>5\,%</mtext>`},
		{`a\,b\quad c`, `<mrow>{i a}<mspace width="0.1667em"></mspace>{i b}<mspace width="1em"></mspace>{i c}</mrow>`},
		{`0{,}6`, `<mrow>{n 0}<mo lspace="0" rspace="0">,</mo>{n 6}</mrow>`},
		{`95\,\%`, `<mrow>{n 95}<mspace width="0.1667em"></mspace><mo stretchy="false">%</mo></mrow>`},
		{`95%`, `<mrow>{n 95}{o %}</mrow>`},
		{`\begin{matrix}a&b\\c&d\end{matrix}`, `<mtable><mtr>{c a}{c b}</mtr><mtr>{c c}{c d}</mtr></mtable>`},
		{`\begin{matrix}a\\\end{matrix}`, `<mtable><mtr>{c a}</mtr></mtable>`},
		{`\begin{pmatrix}a\end{pmatrix}`, `<mrow><mo form="prefix" fence="true" stretchy="true" symmetric="true">(</mo>` +
			`<mtable><mtr>{c a}</mtr></mtable><mo form="postfix" fence="true" stretchy="true" symmetric="true">)</mo></mrow>`},
		{`\begin{array}{lr}a&b\end{array}`, `<mtable><mtr><mtd style="text-align:left">{i a}</mtd><mtd style="text-align:right">{i b}</mtd></mtr></mtable>`},
		{`a \\ b`, `<mtable displaystyle="true"><mtr><mtd style="text-align:left">{i a}</mtd></mtr><mtr><mtd style="text-align:left">{i b}</mtd></mtr></mtable>`},
		{`\operatorname{sgn} x`, `<mrow><mi mathvariant="normal">sgn</mi><mspace width="0.1667em"></mspace>{i x}</mrow>`},
		{`\overset{!}{=}`, `<mover>{o =}{o !}</mover>`},
		{`\not= \not\in`, "<mrow>{o ≠}{o ∈\u0338}</mrow>"},
		{`\displaystyle x`, `<mstyle displaystyle="true" scriptlevel="0">{i x}</mstyle>`},
		{`µ`, `{i µ}`},
	} {
		if got, want := body(c.tex, false), expand(c.want); got != want {
			t.Errorf("%s\n got %s\nwant %s", c.tex, got, want)
		}
	}
}

func expand(s string) string {
	for _, name := range []string{"i", "o", "n"} {
		for {
			before, rest, ok := strings.Cut(s, "{"+name+" ")
			if !ok {
				break
			}
			inner, after, _ := strings.Cut(rest, "}")
			s = before + "<m" + name + ">" + inner + "</m" + name + ">" + after
		}
	}
	for {
		before, rest, ok := strings.Cut(s, "{c ")
		if !ok {
			return s
		}
		inner, after, _ := strings.Cut(rest, "}")
		s = before + `<mtd style="text-align:center"><mi>` + inner + "</mi></mtd>" + after
	}
}

// TestWhatItDoesNotKnowIsShown demands the source of each of these in what a reader sees.
func TestWhatItDoesNotKnowIsShown(t *testing.T) {
	for _, c := range []struct{ tex, shown string }{
		{`a + \mystery b`, `\mystery`},
		{`\SI{3.2}{\ampere}`, `\SI{3.2}{\ampere}`},
		{`\tag[x]{1}`, `\tag[x]{1}`},
		{`\begin{tikzpicture}x\end{tikzpicture}`, `\begin{tikzpicture}`},
		{`\begin{tikzpicture}x\end{tikzpicture}`, `\end{tikzpicture}`},
		{`\begin{matrix}a\end{pmatrix}`, `\end{pmatrix}`},
		{`a \right) b`, `\right`},
		{`a } b`, `}`},
		{`a & b`, `&`},
		{`\left( \frac{a & b}{c}`, `&`},
		{`\text`, `\text`},
		{`\hspace{wide}`, `\hspace{wide}`},
		{`{a \end{x}}`, `\end{x}`},
		{`\not x`, `\not`},
		{`x^^2`, `^`},
	} {
		if got := text(t, body(c.tex, false)); !strings.Contains(got, c.shown) {
			t.Errorf("%s: %s is not shown in %q", c.tex, c.shown, got)
		}
	}
}

func TestDisplayAndAnnotation(t *testing.T) {
	got := mathml.Convert(` \sum_i a<b `, true)
	want := `<math display="block"><semantics><mrow><munder><mo movablelimits="false">∑</mo><mi>i</mi></munder><mi>a</mi><mo>&lt;</mo><mi>b</mi></mrow>` +
		`<annotation encoding="application/x-tex">\sum_i a&lt;b</annotation></semantics></math>`
	if got != want {
		t.Errorf("\n got %s\nwant %s", got, want)
	}
}

func TestDeepNestingEnds(t *testing.T) {
	for _, piece := range []string{"{", `\sqrt{`, `\left(`, `\begin{matrix}`, `x^{`, `\text{$`, `\substack{`, `\mathrm{a `, `\frac`} {
		text(t, mathml.Convert(strings.Repeat(piece, 2000), false))
	}
}

// text gives the character data of well-formed XML.
func text(t *testing.T, doc string) string {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader("<x>" + doc + "</x>"))
	var b strings.Builder
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return b.String()
		}
		if err != nil {
			t.Fatalf("%v in %s", err, doc)
		}
		if data, ok := token.(xml.CharData); ok {
			b.Write(data)
		}
	}
}

// FuzzConvert demands well-formed MathML for any source, with the source whole in its annotation.
func FuzzConvert(f *testing.F) {
	for _, s := range []string{`\frac{\mu_0 N^2 A}{l_g}`, `\left[\begin{array}{cc}a&b\\c&d\end{array}\right]`, `\sqrt[3]{x'_1}^2`,
		`\text{a $b$ \%}`, `\mathbf{\alpha x}`, `\overbrace{a}^{b}`, `\not\in \big\| \hspace{1em}`, `}\right\middle\end{x}&\\`, `\unknown[a]{b}`, `\xrightarrow[a]{b}`, `\substack{a\\b}`} {
		f.Add(s, true)
	}
	f.Fuzz(func(t *testing.T, tex string, display bool) {
		if strings.ContainsFunc(tex, func(r rune) bool { return r < ' ' || r == 0xFFFE || r == 0xFFFF }) {
			_ = mathml.Convert(tex, display)
			return
		}
		got := text(t, mathml.Convert(tex, display))
		if !strings.Contains(got, strings.TrimSpace(strings.ToValidUTF8(tex, "\uFFFD"))) {
			t.Errorf("the annotation of %q is not its source: %q", tex, got)
		}
	})
}
