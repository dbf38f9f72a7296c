package page_test

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	cdppage "github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// Where AMPTURN_LOOK names a folder, the tests leave there what they saw: pictures and sheets to look at.

// browser starts a headless Chromium: the one that AMPTURN_CHROMIUM names, or one in PATH.
func browser(t *testing.T) context.Context {
	t.Helper()
	exe := os.Getenv("AMPTURN_CHROMIUM")
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if exe == "" {
			exe, _ = exec.LookPath(name) // not found: the next name
		}
	}
	if exe == "" {
		t.Skip("no Chromium: AMPTURN_CHROMIUM is not set and PATH has none")
	}
	opts := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.ExecPath(exe), chromedp.NoSandbox, chromedp.DisableGPU,
		chromedp.UserDataDir(t.TempDir()), chromedp.Flag("disable-quic", true), chromedp.Flag("disable-component-update", true),
		chromedp.Flag("hide-scrollbars", true), chromedp.WSURLReadTimeout(time.Minute))
	ctx, stop := chromedp.NewExecAllocator(t.Context(), opts...)
	t.Cleanup(stop)
	ctx, stop = chromedp.NewContext(ctx)
	t.Cleanup(stop)
	if err := chromedp.Do(ctx); err != nil {
		t.Fatalf("%s does not start: %v", exe, err)
	}
	ctx, stop = context.WithTimeout(ctx, 2*time.Minute)
	t.Cleanup(stop)
	return ctx
}

// watched collects what a page must not do.
type watched struct {
	mu   sync.Mutex
	list []string
}

func (w *watched) add(format string, args ...any) {
	w.mu.Lock()
	defer w.mu.Unlock()
	w.list = append(w.list, fmt.Sprintf(format, args...))
}

// watch notes each request, script error, message and dialog of the pages to come; own is the page's own address.
func watch(t *testing.T, ctx context.Context, own string) *watched {
	t.Helper()
	w := &watched{}
	err := chromedp.Listen(ctx, func(event any) {
		switch e := event.(type) {
		case *network.EventRequestWillBeSent:
			if u := e.Request.URL; u != own && !strings.HasPrefix(u, "data:image/") && u != "about:blank" {
				w.add("request %s", u)
			}
		case *runtime.EventExceptionThrown:
			w.add("script error %s", e.ExceptionDetails.Text)
		case *runtime.EventConsoleAPICalled:
			w.add("console %s", e.Type)
		case *log.EventEntryAdded:
			w.add("log %s: %s", e.Entry.Level, e.Entry.Text)
		case *cdppage.EventJavascriptDialogOpening:
			w.add("dialog %s", e.Message)
			go func() { // the dialog is the failure; closing it only lets the test go on
				_, _ = chromedp.Call(ctx, cdppage.HandleJavaScriptDialog, cdppage.HandleJavaScriptDialogParams{Accept: true})
			}()
		}
	})
	for _, enable := range []step{
		command(network.Enable, network.EnableParams{}), command(log.Enable, cdp.Empty{}), command(cdppage.Enable, cdppage.EnableParams{}),
	} {
		run(t, ctx, enable)
	}
	if err != nil {
		t.Fatal(err)
	}
	return w
}

// open renders a notebook and opens it.
func open(t *testing.T, ctx context.Context, nb *notebook.Notebook, opt page.Options) *watched {
	t.Helper()
	out, err := page.Render(nb, opt)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "page.html")
	if err := os.WriteFile(file, out, 0o644); err != nil {
		t.Fatal(err)
	}
	keep(t, "page.html", out)
	w := watch(t, ctx, "file://"+file)
	run(t, ctx, chromedp.Navigate("file://"+file), chromedp.WaitReady(chromedp.CSS("main")))
	return w
}

type step = chromedp.Action[chromedp.Void]

func run(t *testing.T, ctx context.Context, steps ...step) {
	t.Helper()
	if err := chromedp.Do(ctx, steps...); err != nil {
		t.Fatal(err)
	}
}

// command is a step that sends one command of the browser's protocol.
func command[P, R any](c cdp.Command[P, R], params P) step {
	return chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
		_, err := cdp.Call(ctx, target, c, params)
		return err
	})
}

// ask evaluates an expression in the page.
func ask[T any](t *testing.T, ctx context.Context, js string) T {
	t.Helper()
	v, err := chromedp.Run(ctx, chromedp.Evaluate[T](js))
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func keep(t *testing.T, name string, data []byte) {
	t.Helper()
	if dir := os.Getenv("AMPTURN_LOOK"); dir != "" {
		name = strings.ReplaceAll(t.Name(), "/", "-") + "-" + name
		if err := os.WriteFile(filepath.Join(dir, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func shoot(t *testing.T, ctx context.Context, name string) {
	t.Helper()
	if os.Getenv("AMPTURN_LOOK") == "" {
		return
	}
	png, err := chromedp.Run(ctx, chromedp.FullScreenshot(100))
	if err != nil {
		t.Fatal(err)
	}
	keep(t, name, png)
}

// media sets the medium ("" for screen, or "print") and the colours that the reader prefers.
func media(medium, colours string) step {
	return command(emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Media: medium,
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: colours}}})
}

// contrasts lists the texts of the page whose contrast with the ground behind them is below 4.5 (WCAG 2.2, success
// criterion 1.4.3 and its definitions of contrast ratio and relative luminance). Drawings have colours of their own.
const contrasts = `(() => {
	const lum = c => { const [r, g, b] = c.map(v => { v /= 255; return v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4 });
		return 0.2126 * r + 0.7152 * g + 0.0722 * b };
	const rgb = s => s.match(/[\d.]+/g).map(Number);
	const ground = e => { for (; e; e = e.parentElement) { const c = rgb(getComputedStyle(e).backgroundColor); if (c.length < 4 || c[3] > 0) return c.slice(0, 3) }
		return [255, 255, 255] };
	const bad = new Set();
	const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
	let n, seen = 0;
	while (n = walk.nextNode()) {
		const e = n.parentElement;
		if (!n.textContent.trim() || e.closest("svg") || !e.getClientRects().length) continue;
		seen++;
		const a = lum(rgb(getComputedStyle(e).color).slice(0, 3)), b = lum(ground(e));
		const ratio = (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
		if (ratio < 4.5) bad.add(ratio.toFixed(2) + " " + e.tagName + "." + e.className + " " + n.textContent.trim().slice(0, 30));
	}
	if (seen < 50) bad.add("only " + seen + " texts seen");
	return [...bad];
})()`

// overflows lists what stands out of the window to the right without scrolling by itself.
const overflows = `(() => document.documentElement.scrollWidth <= document.documentElement.clientWidth ? [] :
	[...document.querySelectorAll("main *, footer *")].filter(e => e.getBoundingClientRect().right > document.documentElement.clientWidth + 0.5
		&& !e.parentElement.closest(".at-scroll, pre, .at-formula")).map(e => e.tagName + "." + e.getAttribute("class")))()`

// pictures lists the texts of drawings that leave their picture.
const pictures = `[...document.querySelectorAll("svg")].flatMap(svg => { const v = svg.viewBox.baseVal, box = svg.getBoundingClientRect();
	return [...svg.querySelectorAll("text")].filter(t => { const b = t.getBoundingClientRect();
		return b.left < box.left - 0.5 || b.right > box.right + 0.5 || b.top < box.top - 0.5 || b.bottom > box.bottom + 0.5 || !v.width }).map(t => t.textContent) })`

const ground = `getComputedStyle(document.documentElement).backgroundColor`

func TestBrowserLightAndDark(t *testing.T) {
	ctx := browser(t)
	w := open(t, ctx, sampleNotebook(), sampleOptions())
	for _, look := range []string{"light", "dark"} {
		run(t, ctx, media("", look))
		for _, width := range []int64{1600, 1200, 800, 390} {
			run(t, ctx, chromedp.EmulateViewport(width, 1000))
			if list := ask[[]string](t, ctx, overflows); len(list) > 0 {
				t.Errorf("%s, %d px: out of the window: %q", look, width, list)
			}
			shoot(t, ctx, fmt.Sprintf("%s-%d.png", look, width))
		}
		if list := ask[[]string](t, ctx, contrasts); len(list) > 0 {
			t.Errorf("%s: contrast below 4.5: %q", look, list)
		}
		if list := ask[[]string](t, ctx, pictures); len(list) > 0 {
			t.Errorf("%s: texts out of their picture: %q", look, list)
		}
	}
	run(t, ctx, media("", "light"))
	light := ask[string](t, ctx, ground)
	run(t, ctx, media("", "dark"))
	dark := ask[string](t, ctx, ground)
	if light != "rgb(255, 255, 255)" || dark != "rgb(17, 17, 17)" {
		t.Errorf("grounds are %s and %s", light, dark)
	}
	if len(w.list) > 0 {
		t.Errorf("the page did: %q", w.list)
	}
}

func TestBrowserPrints(t *testing.T) {
	ctx := browser(t)
	open(t, ctx, sampleNotebook(), sampleOptions())
	for _, paper := range []struct {
		name          string
		width, height float64 // inch
		box           string  // as a PDF states it, points
	}{
		{"A4", 8.27, 11.69, `/MediaBox \[0 0 59[45][.\d]* 84[12][.\d]*\]`},
		{"letter", 8.5, 11, `/MediaBox \[0 0 612[.\d]* 792[.\d]*\]`},
	} {
		run(t, ctx, media("", "dark"))
		pdf, err := chromedp.Run(ctx, chromedp.PrintToPDF(chromedp.PDFPaper(chromedp.PaperSize{Width: paper.width, Height: paper.height})))
		if err != nil {
			t.Fatal(err)
		}
		keep(t, paper.name+".pdf", pdf)
		sheets := len(regexp.MustCompile(`/Type /Page\b`).FindAll(pdf, -1))
		if sheets < 3 || sheets > 6 {
			t.Errorf("%s: %d sheets", paper.name, sheets)
		}
		if boxes := regexp.MustCompile(paper.box).FindAll(pdf, -1); len(boxes) == 0 || !bytes.HasPrefix(pdf, []byte("%PDF")) {
			t.Errorf("%s: no sheet of that size: %q", paper.name, regexp.MustCompile(`/MediaBox [^\]]*\]`).FindAll(pdf, 3))
		}
		// On paper nothing scrolls: everything must fit between the margins of 16 mm.
		inside := int64((paper.width - 2*16/25.4) * 96)
		run(t, ctx, media("print", "dark"), chromedp.EmulateViewport(inside, 1000))
		js := fmt.Sprintf(`[...document.querySelectorAll("main *, footer *")].filter(e => e.getBoundingClientRect().right > %d + 1 && !e.closest("math, svg"))
			.map(e => e.tagName + "." + e.getAttribute("class"))`, inside)
		if list := ask[[]string](t, ctx, js); len(list) > 0 {
			t.Errorf("%s: wider than the sheet: %q", paper.name, list)
		}
		if ground := ask[string](t, ctx, ground); ground != "rgb(255, 255, 255)" {
			t.Errorf("%s: prints on %s", paper.name, ground)
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
	ctx := browser(t)
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
	run(t, ctx, chromedp.Sleep(500*time.Millisecond))
	found := ask[[]string](t, ctx, `[...document.querySelectorAll("script, iframe, object, embed, form, input, link, base, video, foreignObject, template, noscript")].map(e => e.outerHTML)
		.concat([...document.querySelectorAll("*")].flatMap(e => [...e.attributes].filter(a => /^on/i.test(a.name) || /^\s*javascript:/i.test(a.value)).map(a => e.tagName + " " + a.name + "=" + a.value)))
		.concat([...document.querySelectorAll("style")].slice(1).filter(e => !e.closest("svg")).map(e => e.outerHTML))
		.concat(document.querySelectorAll("main").length == 1 && document.body.lastElementChild.contains(document.querySelector("main")) ? [] : ["the frame of the page is broken"])`)
	if len(found) > 0 {
		t.Errorf("in the page: %q", found)
	}
	if len(w.list) > 0 {
		t.Errorf("the page did: %q", w.list)
	}
}

// TestBrowserSetsFormulas measures that the browser lays formulas out as MathML means them.
func TestBrowserSetsFormulas(t *testing.T) {
	ctx := browser(t)
	nb := notebook.New()
	nb.Add(notebook.Markdown, "# Formulas\n\n$$\\frac{a}{b} + \\sqrt{x} + \\sum_{i=1}^{n} x_i^2 + \\begin{pmatrix}a&b\\\\c&d\\end{pmatrix} + \\left(\\frac{\\frac{a}{b}}{c}\\right) + \\hat{x} + \\overline{AB}$$")
	w := open(t, ctx, nb, page.Options{})
	shoot(t, ctx, "formulas.png")
	bad := ask[[]string](t, ctx, `(() => { const bad = [], q = s => document.querySelector("math " + s), r = e => e.getBoundingClientRect();
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
	if len(w.list) > 0 {
		t.Errorf("the page did: %q", w.list)
	}
}
