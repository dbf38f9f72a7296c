package draw

import (
	"fmt"
	"math"
)

// bar draws the bar of a node through the ends of its paths, hopping over columns that only pass.
func (l *layout) bar(c *canvas, node int) {
	y := l.y(l.row[node])
	lo, hi := l.reach(node)
	if !(lo < hi) {
		return
	}
	const hop = 6.0
	d := fmt.Sprintf("M%s %s", num(lo), num(y))
	for lane, x := range l.x {
		if x > lo && x < hi && l.passes(lane, l.row[node]) {
			d += fmt.Sprintf("L%s %sA%s %s 0 0 1 %s %s", num(x-hop), num(y), num(hop), num(hop), num(x+hop), num(y))
		}
	}
	d += fmt.Sprintf("L%s %s", num(hi), num(y))
	fmt.Fprintf(&c.body, `<path d="%s" %s/>`+"\n", d, pen{ink, 3, ""}.attributes())
}

// reach gives the ends of a node's bar; a node without paths has none.
func (l *layout) reach(node int) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for i, p := range l.paths {
		if p.From == node || p.To == node {
			lo, hi = min(lo, l.x[l.lane[i]]), max(hi, l.x[l.lane[i]])
			if p.From == p.To {
				lo = min(lo, l.x[l.lane[i]]-loopBack)
			}
		}
	}
	return lo, hi
}

// name writes the name of a node left of its bar where there is room between the labels, else at the margin with a
// hair line to the bar.
func (l *layout) name(c *canvas, node int, name string) {
	name = cut(name, labelMost)
	y := l.y(l.row[node])
	lo, _ := l.reach(node)
	w := extent(name)
	place := box{lo - 12 - w, y + 4 - ascent, lo - 12, y + 4 + descent, name}
	if !math.IsInf(lo, 1) && place.x0 >= pad && l.free(c, place, l.row[node]) {
		c.words(lo-12, y+4, "end", name)
		return
	}
	c.words(pad, y+4, "start", name)
	if !math.IsInf(lo, 1) {
		c.line(hairLine, point{pad + w + 4, y}, point{lo, y})
	}
}

// free reports whether a box at a row is clear of texts and of the columns that pass there.
func (l *layout) free(c *canvas, b box, row int) bool {
	for _, t := range c.texts {
		if t.overlaps(b) {
			return false
		}
	}
	for lane, x := range l.x {
		if l.passes(lane, row) && x+halfIron+coilOut > b.x0 && x-columnLeft < b.x1 {
			return false
		}
	}
	return true
}

// passes reports whether a path of the lane runs through the row without ending there.
func (l *layout) passes(lane, row int) bool {
	for k, e := range l.ends {
		if l.lane[k] == lane && e[0] < row && row < e[1] {
			return true
		}
	}
	return false
}

// column draws path k: wires at both ends, its parts between them, the flux through all.
func (l *layout) column(c *canvas, k int, p Path) {
	x := l.x[l.lane[k]]
	bottom, top := l.y(l.ends[k][0]), l.y(l.ends[k][1])
	up := l.upward(k)
	loop := p.From == p.To
	high := top
	if loop {
		high = top + 10
	}
	flux := pen{blue, 1 + 5*math.Min(1, math.Abs(p.Share)), ""}
	if p.Share < 0 {
		flux.dash = "8 4"
	}
	if loop {
		back := x - loopBack
		c.line(flux, point{x, bottom}, point{x, high}, point{back, high}, point{back, bottom}, point{x, bottom})
	} else {
		c.line(flux, point{x, bottom}, point{x, high})
	}
	step := (bottom - top - 2*stub) / float64(max(1, len(p.Parts)))
	for i, q := range p.Parts {
		at := bottom - stub - step*float64(i) // lower end of the part where the arrow points up
		if up > 0 {
			at = top + stub + step*float64(i+1)
		}
		l.part(c, q, x, at-step, at, up)
	}
	c.dot(x, bottom, 4, ink)
	if !loop {
		c.dot(x, top, 4, ink)
	}
	width := l.label[l.lane[k]]
	tail, head := bottom, top // where the arrow comes from and goes to
	if up > 0 {
		tail, head = top, bottom
	}
	c.arrow(x, tail+up*stub*0.55, up)
	c.words(x+labelLeft-14, tail+up*stub*0.5+4, "start", cut(p.Flux, width))
	c.words(x+labelLeft-14, head-up*stub*0.5+4, "start", cut(p.Name, width))
}

// part draws one part between the heights y0 (above) and y1 (below); up is the arrow's direction.
func (l *layout) part(c *canvas, q Part, x, y0, y1, up float64) {
	mid := (y0 + y1) / 2
	width := l.labelWidth(x)
	switch q.Kind {
	case Gap:
		half := math.Max(1, q.Length*l.scale) / 2
		c.bar(x-halfIron, y0, x+halfIron, mid-half, ink, "", 0.15)
		c.bar(x-halfIron, mid+half, x+halfIron, y1, ink, "", 0.15)
		for _, face := range []float64{mid - half - 0.75, mid + half + 0.75} {
			c.line(inkLine, point{x - halfIron - 6, face}, point{x + halfIron + 6, face})
		}
	case Winding:
		c.bar(x-halfIron, y0, x+halfIron, y1, ink, "", 0.15)
		coil(c, q, x, mid, up)
	case Stray:
		c.bar(x-halfIron, y0+3, x+halfIron, y1-3, ink, "4 3", 0)
	case Magnet:
		c.bar(x-halfIron, y0+3, x+halfIron, y1-3, brown, "", 0.3)
		north := up
		if q.Reversed {
			north = -up
		}
		c.words(x-halfIron-8, mid+north*9+4, "middle", "N")
		c.words(x-halfIron-8, mid-north*9+4, "middle", "S")
	default:
		c.bar(x-halfIron, y0, x+halfIron, y1, ink, "", 0.15)
	}
	l.caption(c, x, mid, y0, y1, cut(q.Name, width), cut(q.Label, width))
}

// caption writes name and label of a part beside its middle, or above or below a bar that passes there.
func (l *layout) caption(c *canvas, x, mid, y0, y1 float64, name, label string) {
	high, low := mid-3, mid+13 // baselines
	if name == "" || label == "" {
		name, label = name+label, ""
		high, low = mid+4, mid+4
	}
	top, bottom := high-ascent, low+descent
	shift := 0.0
	for _, y := range l.passingBars(x+labelLeft, x+labelLeft+max(extent(name), extent(label))) {
		if y < top-barClear || y > bottom+barClear {
			continue
		}
		shift = y - barClear - bottom
		if top+shift < y0 {
			shift = y + barClear - top
		}
		if bottom+shift > y1 {
			shift = 0 // the part is too short: the words stay where they are read as its own
		}
	}
	c.words(x+labelLeft, high+shift, "start", name)
	c.words(x+labelLeft, low+shift, "start", label)
}

// barClear is the distance of words from a bar.
const barClear = 5.0

// passingBars gives the heights of the nodes' bars that run through a range of the picture's breadth.
func (l *layout) passingBars(x0, x1 float64) []float64 {
	var all []float64
	for node := range l.row {
		if lo, hi := l.reach(node); lo < x1 && x0 < hi {
			all = append(all, l.y(l.row[node]))
		}
	}
	return all
}

// labelWidth is the width for labels of the lane with its middle at x.
func (l *layout) labelWidth(x float64) float64 {
	for i := range l.x {
		if l.x[i] == x {
			return l.label[i]
		}
	}
	return labelMost
}

// coil draws five turns around the iron, and the dot at the start of the winding: at the arrow's tail, or at its head
// where the winding is reversed.
func coil(c *canvas, q Part, x, mid, up float64) {
	const pitch, slant = 6.0, 3.0
	lean := slant
	if q.Reversed {
		lean = -slant
	}
	for k := -2; k <= 2; k++ {
		y := mid + float64(k)*pitch
		c.line(pen{orange, 2, ""}, point{x - halfIron - coilOut, y + lean}, point{x + halfIron + coilOut, y - lean})
	}
	start := -up
	if q.Reversed {
		start = up
	}
	c.dot(x-halfIron-coilOut-7, mid+start*2*pitch, 3.5, orange)
}
