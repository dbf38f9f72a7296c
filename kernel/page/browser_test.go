package page_test

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"

	"ampturn/kernel/kerneltest/browser"
	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// open renders a notebook and opens it.
func open(t *testing.T, ctx context.Context, nb *notebook.Notebook, opt page.Options) *browser.Watched {
	t.Helper()
	out, err := page.Render(nb, opt)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "page.html")
	if err := os.WriteFile(file, out, 0o644); err != nil {
		t.Fatal(err)
	}
	browser.Keep(t, "page.html", out)
	w := browser.Watch(t, ctx, "file://"+file)
	browser.Run(t, ctx, chromedp.Navigate("file://"+file), chromedp.WaitReady(chromedp.CSS("main")))
	return w
}

func TestBrowserLightAndDark(t *testing.T) {
	ctx := browser.Start(t)
	w := open(t, ctx, sampleNotebook(), sampleOptions())
	for _, look := range []string{"light", "dark"} {
		browser.Run(t, ctx, browser.Media("", look))
		for _, width := range []int64{1600, 1200, 800, 390} {
			browser.Run(t, ctx, chromedp.EmulateViewport(width, 1000))
			if list := browser.Ask[[]string](t, ctx, browser.Overflows); len(list) > 0 {
				t.Errorf("%s, %d px: out of the window: %q", look, width, list)
			}
			browser.Shoot(t, ctx, fmt.Sprintf("%s-%d.png", look, width))
		}
		if list := browser.Ask[[]string](t, ctx, browser.Contrasts); len(list) > 0 {
			t.Errorf("%s: contrast below 4.5: %q", look, list)
		}
		if list := browser.Ask[[]string](t, ctx, browser.Drawings); len(list) > 0 {
			t.Errorf("%s: texts out of their picture: %q", look, list)
		}
	}
	browser.Run(t, ctx, browser.Media("", "light"))
	light := browser.Ask[string](t, ctx, browser.Ground)
	browser.Run(t, ctx, browser.Media("", "dark"))
	dark := browser.Ask[string](t, ctx, browser.Ground)
	if light != "rgb(255, 255, 255)" || dark != "rgb(17, 17, 17)" {
		t.Errorf("grounds are %s and %s", light, dark)
	}
	if len(w.List()) > 0 {
		t.Errorf("the page did: %q", w.List())
	}
}

func TestBrowserPrints(t *testing.T) {
	ctx := browser.Start(t)
	open(t, ctx, sampleNotebook(), sampleOptions())
	for _, paper := range browser.Papers {
		browser.Run(t, ctx, browser.Media("", "dark"))
		if sheets := browser.Print(t, ctx, paper); sheets < 3 || sheets > 6 {
			t.Errorf("%s: %d sheets", paper.Name, sheets)
		}
		// On paper nothing scrolls: everything must fit between the margins.
		if list := browser.OnPaper(t, ctx, paper); len(list) > 0 {
			t.Errorf("%s: wider than the sheet: %q", paper.Name, list)
		}
		if ground := browser.Ask[string](t, ctx, browser.Ground); ground != "rgb(255, 255, 255)" {
			t.Errorf("%s: prints on %s", paper.Name, ground)
		}
	}
}

// hostile are pieces of HTML that would run, load or leave their place if they stood in a page as they are.
var hostile = []string{
	`<script>alert(1)</script>`, `<img src=x onerror=alert(1)>`, `<svg onload=alert(1)><script>alert(1)</script></svg>`,
	`<svg><style><img src=x onerror=alert(1)></style></svg>`, `<math><mtext><table><mglyph><style><!--</style><img title="--&gt;&lt;img src=1 onerror=alert(1)&gt;">`,
	`<iframe srcdoc="<script>parent.alert(1)</script>"></iframe>`, `<a href="javascript:alert(1)" id=click>x</a>`,
	`<link rel=stylesheet href="https://example.invalid/x.css"><style>@import "https://example.invalid/y.css";</style>`,
	`<div style="background:url(https://example.invalid/z.png)">x</div>`, `<base href="https://example.invalid/">`,
	`<meta http-equiv=refresh content="0;url=https://example.invalid/">`, `<object data="https://example.invalid/o"></object>`,
	`<svg><image href="https://example.invalid/i.png"/><use href="https://example.invalid/u.svg#a"/><set attributeName=onmouseover to=alert(1) /></svg>`,
	`<noscript><p title="</noscript><img src=x onerror=alert(1)>"></noscript>`, `</main></body><script>alert(1)</script>`,
	`<form action="https://example.invalid/"><input autofocus onfocus=alert(1)></form>`, `<details open ontoggle=alert(1)>x</details>`,
	`<svg><title><style><a id="</style><img src=1 onerror=alert(1)>"></svg>`, `<img src="data:text/html,<script>alert(1)</script>">`,
	`<video src="https://example.invalid/v" onloadstart=alert(1)></video>`, "<![CDATA[<script>alert(1)</script>]]>", `<!--><script>alert(1)</script>-->`,
	`<template><script>alert(1)</script></template>`, `<p><svg><foreignObject><p><img src=x onerror=alert(1)></foreignObject></svg>`,
}

func TestBrowserRunsNothingOfTheNotebook(t *testing.T) {
	ctx := browser.Start(t)
	nb := notebook.New()
	nb.Add(notebook.Markdown, "# Hostile <script>alert(1)</script>\n\n[a](javascript:alert(1)) <https://example.invalid/> ![p](https://example.invalid/p.png)\n\n`$x$` $\\text{<script>alert(1)</script>}$")
	for _, s := range hostile {
		nb.Add(notebook.Markdown, s)
		nb.Add(notebook.Markdown, "in text "+s+" and on")
		c := nb.Add(notebook.Code, s)
		c.Count, c.Outputs = 1, []*notebook.Output{html(s), svg(s, s), svg("<svg viewBox='0 0 9 9'>"+s+"</svg>", s), latex(s), result(s), stream("stdout", s),
			{Kind: notebook.Fault, Fault: s, Text: s, Traceback: []string{s}}, {Kind: notebook.Display, Data: map[string]any{"text/markdown": s}},
			{Kind: notebook.Display, Data: map[string]any{"image/png": s}}, {Kind: notebook.Display, Data: map[string]any{s: s}}}
	}
	w := open(t, ctx, nb, page.Options{Title: "</title><script>alert(1)</script>", Lang: `"><script>alert(1)</script>`,
		Provenance: []page.Row{{Name: "<script>alert(1)</script>", Value: "</style><script>alert(1)</script>"}}})
	browser.Run(t, ctx, chromedp.Sleep(500*time.Millisecond))
	found := browser.Ask[[]string](t, ctx, `[...document.querySelectorAll("script, iframe, object, embed, form, input, link, base, video, foreignObject, template, noscript")].map(e => e.outerHTML)
		.concat([...document.querySelectorAll("*")].flatMap(e => [...e.attributes].filter(a => /^on/i.test(a.name) || /^\s*javascript:/i.test(a.value)).map(a => e.tagName + " " + a.name + "=" + a.value)))
		.concat([...document.querySelectorAll("style")].slice(1).filter(e => !e.closest("svg")).map(e => e.outerHTML))
		.concat(document.querySelectorAll("main").length == 1 && document.body.lastElementChild.contains(document.querySelector("main")) ? [] : ["the frame of the page is broken"])`)
	if len(found) > 0 {
		t.Errorf("in the page: %q", found)
	}
	if len(w.List()) > 0 {
		t.Errorf("the page did: %q", w.List())
	}
}

// TestBrowserSetsFormulas measures that the browser lays formulas out as MathML means them.
func TestBrowserSetsFormulas(t *testing.T) {
	ctx := browser.Start(t)
	nb := notebook.New()
	nb.Add(notebook.Markdown, "# Formulas\n\n$$\\frac{a}{b} + \\sqrt{x} + \\sum_{i=1}^{n} x_i^2 + \\begin{pmatrix}a&b\\\\c&d\\end{pmatrix} + \\left(\\frac{\\frac{a}{b}}{c}\\right) + \\hat{x} + \\overline{AB}$$")
	w := open(t, ctx, nb, page.Options{})
	browser.Shoot(t, ctx, "formulas.png")
	bad := browser.Ask[[]string](t, ctx, `(() => { const bad = [], q = s => document.querySelector("math " + s), r = e => e.getBoundingClientRect();
		const above = (a, b, what) => { if (!(r(a).bottom <= r(b).top + 1)) bad.push(what + ": " + r(a).bottom + " is not above " + r(b).top) };
		above(q("mfrac").children[0], q("mfrac").children[1], "numerator");
		const s = q("munderover"); above(s.children[2], s.children[0], "upper limit"); above(s.children[0], s.children[1], "lower limit");
		const x = q("msubsup"); if (!(r(x.children[1]).left >= r(x.children[0]).right - 1 && r(x.children[2]).top < r(x.children[1]).top)) bad.push("scripts");
		const rows = document.querySelectorAll("math mtr"); above(rows[0], rows[1], "rows"); if (rows.length != 2) bad.push("rows " + rows.length);
		const fences = [...document.querySelectorAll("math mo[fence]")]; if (fences.length != 4) bad.push("fences " + fences.length);
		for (const f of fences) if (r(f).height < 25) bad.push("a fence does not grow: " + r(f).height);
		const m = q("mover"); if (!(r(m.children[1]).top < r(m.children[0]).top)) bad.push("accent");
		if (r(q("msqrt")).width < r(q("msqrt").children[0]).width + 4) bad.push("no root sign");
		if (r(q("annotation")).width > 0) bad.push("the annotation is seen");
		return bad })()`)
	if len(bad) > 0 {
		t.Errorf("%q", bad)
	}
	if len(w.List()) > 0 {
		t.Errorf("the page did: %q", w.List())
	}
}

// TestBrowserKeepsNumbersWithUnits measures, in a narrow table, that no line ends between a number and its unit, and that
// on paper the folded rows of a table are open.
func TestBrowserKeepsNumbersWithUnits(t *testing.T) {
	ctx := browser.Start(t)
	row := `<tr><td>at least 8 uH and at most 12 mm2 or 110 degC</td><td>margin 231.9 nH (2.9 %)</td></tr>`
	open(t, ctx, shows(html(`<table class="at" style="width:9rem"><tbody>`+strings.Repeat(row, 3)+`</tbody></table><details><summary>2 more</summary><p id="folded">13 A</p></details>`)), page.Options{})
	for _, width := range []int64{1200, 390, 200} {
		browser.Run(t, ctx, chromedp.EmulateViewport(width, 1000))
		torn := browser.Ask[[]string](t, ctx, `[...document.querySelectorAll("td")].flatMap(td => { const bad = [], n = td.firstChild, text = n.data;
			for (const m of text.matchAll(/\d\u00a0\S+/g)) { const r = document.createRange(); r.setStart(n, m.index); r.setEnd(n, m.index + m[0].length);
				if (new Set([...r.getClientRects()].map(b => Math.round(b.top))).size > 1) bad.push(m[0]) }
			return /\d\u00a0/.test(text) ? bad : [text] })`)
		if len(torn) > 0 {
			t.Errorf("%d px: torn from their units: %q", width, torn)
		}
	}
	const seen = `document.querySelector("details p").checkVisibility()`
	if browser.Ask[bool](t, ctx, seen) {
		t.Error("on the screen the folded rows are open")
	}
	browser.Run(t, ctx, browser.Media("print", "light"))
	if !browser.Ask[bool](t, ctx, seen) {
		t.Error("on paper the folded rows are hidden")
	}
}
