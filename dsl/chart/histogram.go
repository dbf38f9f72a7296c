package chart

import (
	"fmt"
	"image/color"
	"math"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"ampturn/magcirc/phys"
)

// Histogram gives a chart of counts in bins: len(edges) == len(counts)+1, edges rising.
func Histogram(title string, a Axis, edges []float64, counts []int) *Chart {
	c := &Chart{Title: title, X: a, Y: Axis{Label: "draws in a bin"}, Zero: true, filled: true}
	if len(counts) == 0 || len(edges) != len(counts)+1 {
		return c // which its check refuses
	}
	s := Series{X: []float64{edges[0]}, Y: []float64{0}}
	total, most := 0, 0
	for i, n := range counts {
		s.X, s.Y = append(s.X, edges[i], edges[i+1]), append(s.Y, float64(n), float64(n))
		total += n
		if n > counts[most] {
			most = i
		}
	}
	last := len(edges) - 1
	s.X, s.Y = append(s.X, edges[last]), append(s.Y, 0)
	c.Series = []Series{s}
	c.twin = fmt.Sprintf("histogram of %s: %d draws from %s to %s in %d bins, most of them (%d) between %s and %s", a.Label, total,
		phys.Format(edges[0], a.Unit), phys.Format(edges[last], a.Unit), len(counts), counts[most], phys.Format(edges[most], a.Unit), phys.Format(edges[most+1], a.Unit))
	c.Desc = c.twin
	return c
}

// area fills what lies between a line and the horizontal axis.
type area struct{ plotter.XYs }

// Plot fills the area.
func (a area) Plot(c draw.Canvas, p *plot.Plot) {
	tx, ty := p.Transforms(&c)
	var path vg.Path
	for i, pt := range a.XYs {
		kind := vg.LineComp
		if i == 0 {
			kind = vg.MoveComp
		}
		path = append(path, vg.PathComp{Type: kind, Pos: vg.Point{X: tx(pt.X), Y: ty(pt.Y)}})
	}
	path = append(path, vg.PathComp{Type: vg.CloseComp})
	c.SetColor(sheer(strokes[0].paint))
	c.Fill(path)
}

// sheer is a colour that lets the hatching of a limit be seen over it, whatever the page's colour.
func sheer(p color.Color) color.Color {
	c := color.NRGBAModel.Convert(p).(color.NRGBA)
	c.A = sheerness
	return c
}

// sheerness is the share of 255 by which areas and bars cover what lies below them.
const sheerness = 0x73

// words are the twin's lines where a chart has words of its own.
func (c *Chart) words() string {
	var b strings.Builder
	if c.Title != "" {
		b.WriteString(c.Title + "\n")
	}
	b.WriteString(c.twin)
	for _, l := range c.Bands {
		fmt.Fprintf(&b, "\n  limit: %s", l.Text)
	}
	return b.String()
}

// between says the two ends of a bar in words.
func between(low, high float64, unit string) string {
	return phys.Format(math.Min(low, high), unit) + " .. " + phys.Format(math.Max(low, high), unit)
}
