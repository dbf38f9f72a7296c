package page_test

import (
	"regexp"
	"strings"
	"testing"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// before demands that the texts stand in this order.
func before(t *testing.T, out string, texts ...string) {
	t.Helper()
	at := -1
	for _, s := range texts {
		i := strings.Index(out, s)
		if i < 0 || i < at {
			t.Errorf("%q stands at %d, behind %d", s, i, at)
		}
		at = i
	}
}

func TestResultsBeforeDerivations(t *testing.T) {
	before(t, render(t, sampleNotebook(), sampleOptions()), "<h1", `<td class="pass">PASS</td>`, `class="at-contents"`, ">What is asked</h2>")
}

func TestContentsWhereSectionsBeginInTheTitlesText(t *testing.T) {
	out := render(t, texts("# T\n\n## A\n\n## B\n\n## C", "more"), page.Options{})
	before(t, out, "<h1", ">C</h2>", `class="at-contents"`, "<p>more</p>")
	before(t, render(t, texts("# T\n\n## A\n\n## B\n\n## C"), page.Options{}), "<h1", ">C</h2>", `class="at-contents"`)
}

// recorded is a run notebook with verdicts in its record and these outputs.
func recorded(outputs ...*notebook.Output) *notebook.Notebook {
	nb := texts("# T", "## A", "## B", "## C")
	c := nb.Add(notebook.Code, "x")
	c.Count, c.Outputs = 1, outputs
	value := 9.5e-6
	nb.SetRecord(notebook.Record{Verdicts: []notebook.Verdict{
		{What: "inductance <hot>", Value: &value, Unit: "H", Limit: "at least 8 uH", Where: "L1 at 110 degC", Status: "PASS - margin below uncertainty"},
		{What: "insulation", Status: "OPEN"},
	}})
	return nb
}

func TestRecordedVerdictsAreShownOnce(t *testing.T) {
	out := render(t, recorded(), page.Options{})
	before(t, out, "<h1", "verdicts</caption>", "<td>inductance &lt;hot&gt;</td><td>at least 8\u00a0uH</td><td>L1 at 110\u00a0degC</td>",
		`<td class="pass">PASS - margin below uncertainty</td>`, `<td class="open">OPEN</td>`, `class="at-contents"`)
	if out := render(t, recorded(html(verdictTable)), page.Options{}); strings.Contains(out, "inductance &lt;hot&gt;") {
		t.Error("the verdicts are shown twice")
	}
}

// TestNumbersStayWithTheirUnits: what is bound in running text and in cells, and what is left as it was typed.
func TestNumbersStayWithTheirUnits(t *testing.T) {
	out := render(t, shows(html(`<p>at least 8 uH, -40 degC, N 13 A; 12 mm2, 200 V/s, 3 %, 5 things, L1 at 5 As, 7 Apples</p><pre>8 uH</pre><code>9 uH</code>`)), page.Options{})
	for _, want := range []string{"8\u00a0uH,", "-40\u00a0degC,", "13\u00a0A;", "12\u00a0mm2,", "200\u00a0V/s,", "3\u00a0%,", "5 things", "7 Apples", "<pre>8 uH</pre>", "<code>9 uH</code>"} {
		if !strings.Contains(out, want) {
			t.Errorf("%q is missing", want)
		}
	}
	text := render(t, texts("effective length 46 mm and $l = 46 \\text{ mm}$, `46 mm`"), page.Options{})
	for _, want := range []string{"length 46\u00a0mm and", "<code>46 mm</code>"} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in the text", want)
		}
	}
}

func TestCaptionDoesNotRepeatThePicture(t *testing.T) {
	drawing := func(text string) string {
		return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 9 9"><title>L over  current</title><text x="1" y="1">` + text + `</text></svg>`
	}
	caption := regexp.MustCompile(`(?s)<figcaption>(.*?)</figcaption>`)
	for text, want := range map[string]string{"L over current": `<span class="at-number">Figure 1</span> `, "current": `<span class="at-number">Figure 1</span> L over current`} {
		out := render(t, shows(svg(drawing(text), "falls")), page.Options{})
		if m := caption.FindStringSubmatch(out); m == nil || m[1] != want {
			t.Errorf("picture that says %q: caption %q, want %q", text, m, want)
		}
		if !strings.Contains(out, "<title>L over  current</title>") && !strings.Contains(out, "<title>L over current</title>") {
			t.Error("the drawing lost its title")
		}
	}
}

func TestFootListsWhatTheNumbersRestOn(t *testing.T) {
	out := render(t, sampleNotebook(), page.Options{Provenance: []page.Row{{Name: "program", Value: "p 1"}},
		Rests: func() []page.Row { return []page.Row{{Name: "data file bh.csv", Value: "SHA-256 ab12"}} }})
	before(t, out, "<footer", "<dt>program</dt><dd>p 1</dd>", "<dt>data file bh.csv</dt><dd>SHA-256 ab12</dd>")
}
