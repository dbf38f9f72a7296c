package chart

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// band draws a limit: hatching, its edges, its words.
func (f frame) band(b Band) plot.Plotter {
	r := f.y
	if b.OnX {
		r = f.x
	}
	low, high := b.Low*r.factor, b.High*r.factor
	return hatch{low: math.Max(low, r.low), high: math.Min(high, r.high), openLow: math.IsInf(b.Low, -1), openHigh: math.IsInf(b.High, 1), text: b.Text, onX: b.OnX}
}

// hatch is a band in the chart's printed units.
type hatch struct {
	low, high         float64
	openLow, openHigh bool
	text              string
	onX               bool
}

// limitInk is the colour of limits: the ink, so that a line is never taken for one.
var limitInk = color.RGBA{0x8a, 0x6a, 0x6a, 0xff}

func (h hatch) Plot(c draw.Canvas, p *plot.Plot) {
	if h.low >= h.high {
		return
	}
	tx, ty := p.Transforms(&c)
	box := c.Rectangle
	if h.onX {
		box.Min.X, box.Max.X = tx(h.low), tx(h.high)
	} else {
		box.Min.Y, box.Max.Y = ty(h.low), ty(h.high)
	}
	h.words(c, box)
	h.fill(c, h.strip(box))
}

// fill draws the hatching of a band and its bounds.
func (h hatch) fill(c draw.Canvas, box vg.Rectangle) {
	c.SetColor(limitInk)
	c.SetLineDash(nil, 0)
	c.SetLineWidth(0.5)
	const pitch = 9
	for start := box.Min.X - (box.Max.Y - box.Min.Y); start < box.Max.X; start += pitch {
		x0, y0, x1, y1 := start, box.Min.Y, start+(box.Max.Y-box.Min.Y), box.Max.Y
		if x0 < box.Min.X {
			y0 += box.Min.X - x0
			x0 = box.Min.X
		}
		if x1 > box.Max.X {
			y1 -= x1 - box.Max.X
			x1 = box.Max.X
		}
		if x1 > x0 {
			c.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: x0, Y: y0}}, {Type: vg.LineComp, Pos: vg.Point{X: x1, Y: y1}}})
		}
	}
	h.edges(c, box)
}

// strip cuts a band that is open to one side to a strip along its bound: enough to see which side is forbidden,
// without covering the lines.
func (h hatch) strip(box vg.Rectangle) vg.Rectangle {
	const deep = 26
	low, high := &box.Min.Y, &box.Max.Y
	if h.onX {
		low, high = &box.Min.X, &box.Max.X
	}
	switch {
	case h.openLow && !h.openHigh:
		*low = max(*low, *high-deep)
	case h.openHigh && !h.openLow:
		*high = min(*high, *low+deep)
	}
	return box
}

// edges draws the bounds themselves, thicker than the hatching.
func (h hatch) edges(c draw.Canvas, box vg.Rectangle) {
	c.SetLineWidth(1.2)
	stroke := func(x0, y0, x1, y1 vg.Length) {
		c.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: x0, Y: y0}}, {Type: vg.LineComp, Pos: vg.Point{X: x1, Y: y1}}})
	}
	if h.onX {
		if !h.openLow {
			stroke(box.Min.X, box.Min.Y, box.Min.X, box.Max.Y)
		}
		if !h.openHigh {
			stroke(box.Max.X, box.Min.Y, box.Max.X, box.Max.Y)
		}
		return
	}
	if !h.openLow {
		stroke(box.Min.X, box.Min.Y, box.Max.X, box.Min.Y)
	}
	if !h.openHigh {
		stroke(box.Min.X, box.Max.Y, box.Max.X, box.Max.Y)
	}
}

// words writes the limit's text on the allowed side of its edge.
func (h hatch) words(c draw.Canvas, box vg.Rectangle) {
	sty := draw.TextStyle{Color: limitInk, Font: face, Handler: letters}
	at := vg.Point{X: box.Min.X + 6, Y: box.Max.Y + 4}
	switch {
	case h.onX:
		at = vg.Point{X: box.Min.X - vg.Length(extent(h.text)) - 4, Y: c.Max.Y - fontSize - 2}
		if h.openLow {
			at.X = box.Max.X + 6
		}
	case h.openHigh:
		at.Y = box.Min.Y - fontSize - 1
	}
	c.FillText(sty, at, h.text)
}

// DataRange keeps the band from moving the axes.
func (h hatch) DataRange() (xmin, xmax, ymin, ymax float64) {
	return math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
}
