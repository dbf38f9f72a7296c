package browser

// Contrasts lists the texts of the page whose contrast with the ground behind them is below 4.5 (WCAG 2.2, success
// criterion 1.4.3 and its definitions of contrast ratio and relative luminance). Drawings have colours of their own.
const Contrasts = `(() => {
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

// Overflows lists what stands out of the window to the right without scrolling by itself.
const Overflows = `(() => document.documentElement.scrollWidth <= document.documentElement.clientWidth ? [] :
	[...document.querySelectorAll("main *, footer *")].filter(e => e.getBoundingClientRect().right > document.documentElement.clientWidth + 0.5
		&& !e.parentElement.closest(".at-scroll, pre, .at-formula")).map(e => e.tagName + "." + e.getAttribute("class")))()`

// Drawings lists the texts of drawings that leave their picture, or whose box overlaps that of another text in it.
const Drawings = `[...document.querySelectorAll("svg")].flatMap(svg => { const v = svg.viewBox.baseVal, box = svg.getBoundingClientRect(), bad = [];
	const texts = [...svg.querySelectorAll("text")].filter(t => t.textContent.trim()).map(t => [t, t.getBoundingClientRect()]);
	texts.forEach(([t, b], i) => {
		if (b.left < box.left - 0.5 || b.right > box.right + 0.5 || b.top < box.top - 0.5 || b.bottom > box.bottom + 0.5 || !v.width)
			bad.push("outside: " + t.textContent);
		for (const [o, c] of texts.slice(0, i))
			if (b.left < c.right - 0.5 && c.left < b.right - 0.5 && b.top < c.bottom - 0.5 && c.top < b.bottom - 0.5)
				bad.push("overlap: " + o.textContent + " | " + t.textContent);
	});
	return bad })`

// Ground is the colour of the page's ground.
const Ground = `getComputedStyle(document.documentElement).backgroundColor`
