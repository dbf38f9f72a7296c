package draw

import (
	"fmt"
	"math"
	"sort"

	"ampturn/magcirc/field"
	"ampturn/magcirc/phys"
)

// How a field is drawn.
const (
	tubes       = 24   // flux tubes between the axis, or the left end of the drawing, and its right end
	levels      = 5    // equipotentials between the mid-plane and a pole
	leastGapPx  = 24.0 // a gap that would be thinner shows its edge only
	mapTop      = 30.0
	mapLow      = 44.0
	windowGaps  = 6.0 // what is shown beside the pole, in lengths of the gap, at least
	windowShare = 0.3 // and of half the pole's breadth
)

// FieldMap draws the field around a solved gap to scale: the poles, equipotentials (dashed), field lines between which
// the same flux runs, the gap's length and a scale bar. A gap that would be thinner than 24 px beside the whole pole
// shows the surroundings of the pole's edge only.
func FieldMap(title string, s *field.Solution) Picture {
	v := newView(&s.Map)
	c := &canvas{}
	v.lines(c)
	v.poles(c)
	c.words(pad, 18, "start", cut(title, pageWidth-2*pad))
	v.captions(c)
	text := v.text(title, s)
	return Picture{SVG: c.svg(pageWidth, pageHeight, title, text), Text: text}
}

// view is the part of a field that is drawn, in metres, and its scale. Only x >= 0 and y >= 0 are solved; the rest is
// their mirror image.
type view struct {
	m      *field.Map
	shown  frame
	scale  float64 // px per metre
	centre point   // of the picture's field, px
	edge   bool    // only the surroundings of the pole's edge
	page   frame   // the field's place on the picture, px
}

func newView(m *field.Map) *view {
	v := &view{m: m, page: frame{pad, mapTop, pageWidth - pad, pageHeight - mapLow}}
	g := 2 * m.Face
	w, h := v.page.x1-v.page.x0, v.page.y1-v.page.y0
	beside := min(m.X[len(m.X)-1]-m.Right, max(windowGaps*g, windowShare*m.Right))
	half := m.Right + beside
	v.scale = min(w/(2*half), h/(2*min(m.Top, max(half*h/w, 1.6*m.Face))))
	v.centre = point{(v.page.x0 + v.page.x1) / 2, (v.page.y0 + v.page.y1) / 2}
	if g*v.scale < leastGapPx {
		v.edge = true
		v.scale = leastGapPx * 2 / g
		width := w / v.scale
		left := max(0, m.Right-0.4*width)
		v.shown = frame{left, -h / v.scale / 2, left + width, h / v.scale / 2}
	} else {
		v.shown = frame{-w / v.scale / 2, -h / v.scale / 2, w / v.scale / 2, h / v.scale / 2}
	}
	end, top := m.X[len(m.X)-1], m.Y[len(m.Y)-1]
	v.shown = frame{max(v.shown.x0, -end), max(v.shown.y0, -top), min(v.shown.x1, end), min(v.shown.y1, top)}
	v.centre = point{
		(v.page.x0+v.page.x1)/2 - v.scale*(v.shown.x0+v.shown.x1)/2,
		(v.page.y0 + v.page.y1) / 2,
	}
	return v
}

// px gives the place of a point of the field on the picture.
func (v *view) px(p point) point { return point{v.centre.x + v.scale*p.x, v.centre.y - v.scale*p.y} }

// pole is the part of the upper pole, right of the axis, that can be drawn.
func (v *view) pole() frame {
	return frame{v.m.Left, v.m.Face, v.m.Right, v.m.Y[len(v.m.Y)-1]}
}

// lines draws equipotentials and field lines with their mirror images.
func (v *view) lines(c *canvas) {
	m := v.m
	potentials := pen{green, 0.75, "4 3"}
	inPole := func(i, j int) bool {
		return m.Y[j] >= m.Face && m.X[i] >= m.Left && m.X[i+1] <= m.Right
	}
	for k := 1; k < levels; k++ {
		for _, line := range contour(m.X, m.Y, m.Potential, float64(k)/levels, inPole) {
			v.mirrored(c, potentials, line)
		}
	}
	v.mirrored(c, potentials, []point{{0, 0}, {m.X[len(m.X)-1], 0}})
	first, last := v.shownFlux()
	fluxes := pen{blue, lineWidth, ""}
	pole := v.pole()
	flux, inIron := v.normal()
	for k := range tubes {
		level := first + (last-first)*(float64(k)+0.5)/tubes
		for _, line := range contour(m.XF, m.YF, flux, level, inIron) {
			for _, piece := range pole.outside(line) {
				v.mirrored(c, fluxes, piece)
			}
		}
	}
}

// normal gives the flux function with its values just inside the poles' sides made those just outside, so that field
// lines end at right angles to the iron, and tells which grid cells lie in it.
func (v *view) normal() (flux [][]float64, inIron func(i, j int) bool) {
	m := v.m
	right := sort.SearchFloat64s(m.XF, m.Right) // the first corner outside
	left := -1
	if m.Left > 0 {
		left = sort.SearchFloat64s(m.XF, m.Left) - 1
	}
	face := sort.SearchFloat64s(m.YF, m.Face)
	for j, row := range m.Flux {
		if j > face {
			row = append([]float64(nil), row...)
			row[right-1] = row[right]
			if left >= 0 {
				row[left+1] = row[left]
			}
		}
		flux = append(flux, row)
	}
	return flux, func(i, j int) bool { return j >= face && i > left && i+1 < right }
}

// mirrored draws a line of the solved quarter and its images.
func (v *view) mirrored(c *canvas, p pen, line []point) {
	for _, sx := range []float64{1, -1} {
		for _, sy := range []float64{1, -1} {
			if sy < 0 && line[0].y == 0 && line[len(line)-1].y == 0 {
				continue
			}
			image := make([]point, len(line))
			for k, q := range line {
				image[k] = point{sx * q.x, sy * q.y}
			}
			for _, piece := range v.shown.inside(image) {
				for k := range piece {
					piece[k] = v.px(piece[k])
				}
				c.line(p, thinned(piece)...)
			}
		}
	}
}

// thinned leaves out points within 2 px of the one kept before, but for the last, so that a picture stays small.
func thinned(line []point) []point {
	out := line[:1:1]
	for k := 1; k < len(line); k++ {
		last := out[len(out)-1]
		if k == len(line)-1 || math.Hypot(line[k].x-last.x, line[k].y-last.y) >= 2 {
			out = append(out, line[k])
		}
	}
	return out
}

// poles draws the iron, the wall of the window and the axis.
func (v *view) poles(c *canvas) {
	p := v.pole()
	for _, sy := range []float64{1, -1} {
		images := []frame{p, {-p.x1, p.y0, -p.x0, p.y1}}
		if p.x0 == 0 {
			images = []frame{{-p.x1, p.y0, p.x1, p.y1}}
		}
		for _, q := range images {
			v.rectangle(c, q, sy)
		}
	}
	if end := v.m.X[len(v.m.X)-1]; v.m.Boundary != field.Open && end <= v.shown.x1*(1+1e-9) {
		wall := pen{ink, 3, ""}
		if v.m.Boundary == field.Mirror {
			wall = pen{ink, 1.5, "10 4 2 4"}
		}
		for _, x := range []float64{end, -end} {
			if x >= v.shown.x0*(1+1e-9) {
				c.line(wall, v.px(point{x, v.shown.y0}), v.px(point{x, v.shown.y1}))
			}
		}
	}
	if v.m.Round && v.shown.x0 < 0 {
		c.line(pen{ink, 0.75, "10 3 2 3"}, v.px(point{0, v.shown.y0}), v.px(point{0, v.shown.y1}))
	}
}

// rectangle draws what is shown of a rectangle of the upper half, or of its mirror image.
func (v *view) rectangle(c *canvas, q frame, sy float64) {
	x0, x1 := max(q.x0, v.shown.x0), min(q.x1, v.shown.x1)
	y0, y1 := q.y0, min(q.y1, v.shown.y1)
	if x1 <= x0 || y1 <= y0 {
		return
	}
	a, b := v.px(point{x0, sy * y0}), v.px(point{x1, sy * y1})
	c.bar(a.x, min(a.y, b.y), b.x, max(a.y, b.y), ink, "", 0.25)
}

// captions writes the words and the scale bar below the field, where no line runs.
func (v *view) captions(c *canvas) {
	low := pageHeight - 12
	length := roundLength(110 / v.scale)
	c.scaleBar(pad, low-4, v.scale, length, phys.Format(length, "m"))
	words := "solid: field lines; dashed: equipotentials; grey: poles; gap " + phys.Format(2*v.m.Face, "m")
	c.words(pageWidth-pad, low, "end", words)
}

// fluxAt is the flux over mu0 that lands on the mid-plane between the axis and x.
func (v *view) fluxAt(x float64) float64 {
	f, at := v.m.Flux[0], v.m.XF
	k := sort.SearchFloat64s(at, x)
	switch {
	case k == 0:
		return f[0]
	case k >= len(at):
		return f[len(f)-1]
	}
	s := (x - at[k-1]) / (at[k] - at[k-1])
	return f[k-1] + s*(f[k]-f[k-1])
}

// shownFlux is the range of the flux function that the drawing shows, on an iron wall up to its end.
func (v *view) shownFlux() (first, last float64) {
	m := v.m
	end := len(m.XF) - 1
	first, last = v.fluxAt(max(0, v.shown.x0)), v.fluxAt(v.shown.x1)
	if m.Boundary == field.Iron && v.shown.x1 >= m.XF[end]*(1-1e-9) {
		last = m.Flux[min(sort.SearchFloat64s(m.YF, v.shown.y1), len(m.YF)-1)][end]
	}
	return first, last
}

// weakening is the distance beside the pole at which the field of the mid-plane has fallen to the share of the uniform
// field below the face; NaN where it does not fall so far within the solved space.
func (v *view) weakening(share float64) float64 {
	m := v.m
	lastX, last := 0.0, 1.0
	for i, x := range m.X {
		e := m.Potential[1][i] / m.Y[1] * m.Face
		if x > m.Right && e <= share {
			s := (last - share) / (last - e)
			return lastX + s*(x-lastX) - m.Right
		}
		lastX, last = x, e
	}
	return math.NaN()
}

// text says in words what the drawing shows.
func (v *view) text(title string, s *field.Solution) string {
	m := v.m
	what := "a plane"
	if m.Round {
		what = "a round"
		if m.Left > 0 {
			what = "an annular"
		}
	}
	t := fmt.Sprintf("%s: field around %s gap of %s between poles %s broad, to scale.", title, what,
		phys.Format(2*m.Face, "m"), phys.Format(v.breadth(), "m"))
	if v.edge {
		t += " Only the surroundings of the pole's edge are shown."
	}
	if m.Boundary != field.Open {
		t += fmt.Sprintf(" The window's wall is %s beside the pole (%s).", phys.Format(m.X[len(m.X)-1]-m.Right, "m"), m.Boundary)
	}
	t += fmt.Sprintf("\nFringing factor %.4g.", s.Factor)
	for _, share := range []float64{0.5, 0.1} {
		if d := v.weakening(share); d > 0 {
			t += fmt.Sprintf(" In the middle plane the field falls to %g %% of the uniform field %s beside the pole.", 100*share, phys.Format(d, "m"))
		}
	}
	return t
}

// breadth is the whole breadth of the pole, of one side for a pole with a hole.
func (v *view) breadth() float64 {
	if v.m.Left > 0 {
		return v.m.Right - v.m.Left
	}
	return 2 * v.m.Right
}
