package page_test

import (
	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// sampleNotebook is an invented study with all that a page can show: text, formulas, tables, drawings, verdicts,
// printed text, notes, a caution, footnotes. Its figures mean nothing.
func sampleNotebook() *notebook.Notebook {
	nb := notebook.New()
	md := func(s string) { nb.Add(notebook.Markdown, s) }
	count := 0
	code := func(s string, outputs ...*notebook.Output) *notebook.Cell {
		c := nb.Add(notebook.Code, s)
		count++
		c.Count, c.Outputs = count, outputs
		return c
	}
	md("# D7, damping choke of the 24 V rail\n\nRevision A. *Does one small drum hold 47 µH at 3.1 A, and how far is it from its knee?* " +
		"The answer stands in the table below; what nobody has checked yet is in [Left open](#Left-open).[^rev]\n\n[^rev]: An invented study, for looking at this page only.")
	code("Revision(\"A\", \"2026-01-15\", \"first issue\")\nVerdicts()", html(verdictTable))
	md("## What is asked\n\nThe rail feeds three stages. At the highest load the choke carries $I_\\text{pk} = 3.1\\,\\mathrm{A}$; the filter needs\n\n" +
		"$$\nL(I) = \\frac{\\mathrm{d}\\lambda}{\\mathrm{d}i} \\ge 38\\,\\mathrm{\\mu H}\n- \\Delta L_\\vartheta,\n\\qquad \\Delta L_\\vartheta = \\int_{25}^{\\vartheta} \\alpha(T)\\,\\mathrm{d}T .\n$$\n\n" +
		"- cold start, $-25\\,^\\circ\\mathrm{C}$: the knee is highest;\n- full load, hot: the knee is lowest;\n- a single pulse of $2\\,I_\\text{pk}$, costs $5 and $6 in parts, no formula.")
	code("type Case struct {\n\tName string\n\tPeak Ampere // A\n\tCore Celsius\n}\ncases := []Case{\n\t{\"cold start\", 2.4*amp, -25*degC},\n\t{\"full load, hot\", 3.1*amp, 105*degC},\n}\nfor i, k := range cases {\n\tfmt.Printf(\"%d %s\\n\", i, k.Name)\n}",
		stream("stdout", "0 cold start\n1 full load, hot\n"), stream("stderr", "note: full load, hot is 5 K beyond the data of \"lot 3\"; the document lists it\n"))
	md("## The numbers\n\nTwo ways to the same inductance, with $\\mathcal{R} = \\sum_k \\frac{l_k}{\\mu_0 \\mu_{\\mathrm{r},k} A_k}$:\n\n" +
		"\\begin{align}\nL_1 &= \\frac{N^2}{\\mathcal{R}} & L_2 &= \\sqrt{\\hat{L}_a \\, \\overline{L_b}} \\\\\n&= \\left[ \\begin{pmatrix} a & b \\\\ c & d \\end{pmatrix} \\vec{x} \\right]_{1} & &\\approx \\begin{cases} L_0 & i < i_k \\\\ L_0\\,(i_k/i)^2 & \\text{beyond} \\end{cases}\n\\end{align}\n\n" +
		"| method | range | error (%) |\n|:--|:--|--:|\n| plain | $l_g/d < 0.1$ | 4.2 |\n| mapped | any | 0.3 |\n\n### Inductance over current\n\nThe bound is the hatched band.")
	code("Plot(d7.BiasCurve(\"N\", 0, 6*amp))", svg(lineChart, "L over current of D7: 47.1 uH at 0 A, falls to 39.4 uH at 3.1 A; crosses 38 uH at 3.36 A."))
	code("d7.At(105*degC).Waveforms()", svg(wideChart, "current of D7 over two periods, 2.4 A to 3.1 A."))
	code("byHand := mu0*sq(31*turn)*24*mm2/0.62/mm\nbyHand", result("46.74 uH"), latex(`$\displaystyle \frac{\mu_0 N^2 A}{l_g} = 46.7\,\mathrm{\mu H} \quad \mystery{x}$`))
	code("d7.Matrix()", html(wideTable))
	md("## How sure\n\nSee the draws in the table; `Within` judges the signed value. A line of Python, for its colours:\n\n```python\ndef f(x):  # not ours\n    return \"text\", 0x1F\n```\n\n> A supplier's curve replaces the two-point fit before release.")
	code("bias.Check(op.Inductance(\"N\"), op)\nlimit.Check(99.3*degC)", html(verdictLines))
	md("## Left open\n\n1. Loss of the drum under bias.\n2. Insulation is functional only.\n\n<div class=\"at-caution\"><p><strong>Caution.</strong> A stored-energy part can hurt. Discharge it first; trained people only.</p></div>\n\n<script>alert(\"a script of the notebook\")</script><img src=\"https://example.invalid/x.png\" onerror=\"alert(1)\" alt=\"a remote picture\">")
	return nb
}

func sampleOptions() page.Options {
	return page.Options{Provenance: []page.Row{
		{Name: "program", Value: "ampturn 0.1, go1.26.8"},
		{Name: "libraries", Value: "gonum v0.17.0, yaegi v0.16.1"},
		{Name: "cells", Value: "sha256 3f6c0a2f9b77d2b9be4d3a3f0a1c9e2f7d5b8a6c4e2f1a0b9c8d7e6f5a4b3c2d"},
		{Name: "seeds", Value: "7 (10000 draws)"},
	}}
}

func html(s string) *notebook.Output {
	return &notebook.Output{Kind: notebook.Display, Data: map[string]any{"text/html": s, "text/plain": "as text"}}
}

func svg(s, words string) *notebook.Output {
	return &notebook.Output{Kind: notebook.Display, Data: map[string]any{"image/svg+xml": s, "text/plain": words}}
}

func latex(s string) *notebook.Output {
	return &notebook.Output{Kind: notebook.Display, Data: map[string]any{"text/latex": s, "text/plain": s}}
}

func result(s string) *notebook.Output {
	return &notebook.Output{Kind: notebook.Result, Data: map[string]any{"text/plain": s}}
}

func stream(name, text string) *notebook.Output {
	return &notebook.Output{Kind: notebook.Stream, Name: name, Text: text}
}

const verdictTable = `<table class="at"><caption>verdicts: 2 of 5 pass, 1 misses, 1 open, 1 waived</caption>
<thead><tr><th scope="col">what</th><th scope="col" class="num">value</th><th scope="col">limit</th><th scope="col" class="num">margin</th><th scope="col">corner</th><th scope="col">verdict</th></tr></thead>
<tbody>
<tr><td>inductance at peak current</td><td class="num" data-value="3.94e-05">39.4 uH</td><td>at least 38 uH</td><td class="num">3.7 %</td><td>full load, hot</td><td class="pass">PASS</td></tr>
<tr><td>inductance at 0 A</td><td class="num">47.1 uH</td><td>47 uH ± 10 %</td><td class="num">9.8 %</td><td>25 degC</td><td class="pass">PASS - margin below uncertainty</td></tr>
<tr><td>winding temperature</td><td class="num">131 degC</td><td>at most 125 degC</td><td class="num">-4.8 %</td><td>full load, hot</td><td class="fail">FAIL</td></tr>
<tr><td>insulation</td><td class="num"></td><td></td><td class="num"></td><td>for the safety engineer</td><td class="open">OPEN</td></tr>
<tr><td>height</td><td class="num">9.4 mm</td><td>at most 9 mm</td><td class="num">-4.4 %</td><td></td><td class="waived">WAIVED by M. Lind</td></tr>
</tbody></table><p class="note">the curve of "lot 3" is used 5 K beyond its data</p>`

const verdictLines = `<p class="verdict pass">inductance at peak current: 39.4 uH, at least 38 uH: PASS</p>
<p class="verdict fail">winding temperature: 131 degC, at most 125 degC: FAIL</p>
<p class="verdict open">insulation: OPEN, for the safety engineer</p>
<p class="verdict waived">height: 9.4 mm, at most 9 mm: WAIVED by M. Lind, the case was changed</p>
<p>In running text: <span class="at-verdict" data-status="PASS">PASS</span> <span class="at-verdict" data-status="FAIL">FAIL</span> <span class="at-verdict" data-status="OPEN">OPEN</span> <span class="at-verdict" data-status="WAIVED">WAIVED</span></p>
<p class="at-note">A note that stands out.</p>`

const wideTable = `<table class="at"><caption>inductance matrix over corners</caption><thead><tr><th scope="col">corner</th><th scope="col" class="num">L11 (uH)</th><th scope="col" class="num">L22 (uH)</th><th scope="col" class="num">L33 (uH)</th><th scope="col" class="num">M12 (uH)</th><th scope="col" class="num">M13 (uH)</th><th scope="col" class="num">M23 (uH)</th><th scope="col" class="num">k12</th><th scope="col" class="num">k13</th><th scope="col" class="num">k23</th><th scope="col" class="num">leakage 1 to 2 (nH)</th><th scope="col" class="num">leakage 1 to 3 (nH)</th><th scope="col">conditions</th></tr></thead><tbody>
<tr><td>cold start</td><td class="num">47.10</td><td class="num">46.92</td><td class="num">11.80</td><td class="num">46.30</td><td class="num">23.10</td><td class="num">23.02</td><td class="num">0.985</td><td class="num">0.980</td><td class="num">0.978</td><td class="num">1390</td><td class="num">1865</td><td>-25 degC, 2.4 A</td></tr>
<tr><td>full load, hot</td><td class="num">39.40</td><td class="num">39.21</td><td class="num">9.87</td><td class="num">38.60</td><td class="num">19.31</td><td class="num">19.26</td><td class="num">0.982</td><td class="num">0.979</td><td class="num">0.979</td><td class="num">1410</td><td class="num">1612</td><td>105 degC, 3.1 A, 5 K beyond the data</td></tr></tbody></table>`

const lineChart = `<?xml version="1.0"?>
<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 640 400" width="640" height="400" font-family="sans-serif" font-size="12">
<title>Inductance of D7 over current</title><desc>Falls from 47.1 uH at 0 A to 39.4 uH at 3.1 A; the bound of 38 uH is crossed at 3.36 A.</desc>
<style>.amp-ink{fill:#767676}.amp-line{stroke:#767676}@media (prefers-color-scheme: dark){.amp-ink{fill:#8f8f8f}.amp-line{stroke:#8f8f8f}}</style>
<defs><pattern id="hatch" width="8" height="8" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path d="M0 0V8" stroke="#D55E00" stroke-width="1.5"/></pattern></defs>
<path class="amp-line" d="M70 20V340H600" fill="none" stroke="#767676"/>
<rect x="70" y="260" width="530" height="80" fill="url(#hatch)" opacity="0.5"/>
<path d="M70 90C200 92 300 110 380 180S520 300 600 320" fill="none" stroke="#0072B2" stroke-width="1.5"/>
<g class="amp-ink" fill="#767676"><text x="335" y="380" text-anchor="middle">current (A)</text><text x="20" y="180" transform="rotate(-90 20 180)" text-anchor="middle">inductance (uH)</text>
<text x="65" y="94" text-anchor="end">47</text><text x="65" y="264" text-anchor="end">38</text><text x="70" y="358" text-anchor="middle">0</text><text x="600" y="358" text-anchor="middle">6</text><text x="480" y="250">at least 38 uH</text></g>
</svg>`

const wideChart = `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 900 240" width="900" height="240" font-family="sans-serif" font-size="12">
<title>Current over two periods</title><desc>Between 2.4 A and 3.1 A.</desc>
<style>.amp-ink{fill:#767676}.amp-line{stroke:#767676}</style>
<defs><pattern id="hatch" width="4" height="4" patternUnits="userSpaceOnUse"><path d="M0 0V4" stroke="#009E73"/></pattern></defs>
<path class="amp-line" d="M60 20V200H880" fill="none"/><path d="M60 150L260 60L470 150L670 60L880 150" fill="none" stroke="#009E73" stroke-width="1.5" stroke-dasharray="6 3"/>
<rect x="60" y="20" width="820" height="14" fill="url(#hatch)"/>
<g class="amp-ink"><text x="470" y="228" text-anchor="middle">time (us)</text><text x="52" y="64" text-anchor="end">3.1</text><text x="52" y="154" text-anchor="end">2.4</text></g></svg>`
