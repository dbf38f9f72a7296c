package chart

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"ampturn/magcirc/phys"
)

// Axis names a quantity and its SI unit; the numbers are printed with the prefix that fits.
type Axis struct {
	Label string // "current"
	Unit  string // "A"; empty: a plain number
}

// Series is one line of a chart.
type Series struct {
	Name string
	X, Y []float64 // equal lengths; SI. A pair with a NaN breaks the line
}

// Band is a limit: the part of the chart that values must not enter, hatched, with its words.
type Band struct {
	Low, High float64 // the forbidden range; infinite: to the edge
	Text      string  // "at least 8 uH"
	OnX       bool    // on the horizontal axis instead of the vertical one
}

// Chart is lines over a common axis.
type Chart struct {
	Title, Desc string
	X, Y        Axis
	Series      []Series
	Bands       []Band
	Wide        bool // 640 x 240 instead of 640 x 400, for waveforms under each other
	Zero        bool // the vertical axis starts at zero

	filled bool   // the area below the first line is filled
	twin   string // words of its own for its text
}

// Check tells what is wrong with the chart's data, or nil.
func (c *Chart) Check() error {
	if len(c.Series) == 0 {
		return fmt.Errorf("a chart needs at least one series")
	}
	if len(c.Series) > MaxSeries {
		return fmt.Errorf("%d series are too many for one picture (%d at most); make two", len(c.Series), MaxSeries)
	}
	for _, s := range c.Series {
		if len(s.X) != len(s.Y) {
			return fmt.Errorf("series %q: %d values over %d positions; the lists must be equally long", s.Name, len(s.Y), len(s.X))
		}
		finite := 0
		for i := range s.X {
			if !bad(s.X[i]) && !bad(s.Y[i]) {
				finite++
			}
		}
		if finite == 0 {
			return fmt.Errorf("series %q: no finite point to draw", s.Name)
		}
	}
	return nil
}

func bad(x float64) bool { return math.IsNaN(x) || math.IsInf(x, 0) }

// SVG draws the chart. A chart that [Chart.Check] refuses is drawn as its refusal.
func (c *Chart) SVG() string {
	high := float64(height)
	if c.Wide {
		high = heightWide
	}
	cv := newCanvas(width, high)
	if err := c.Check(); err != nil {
		cv.words(16, high/2, 0, "start", fontSize, inkHex, "no picture: "+err.Error())
		return cv.svg(c.Title, err.Error())
	}
	f := c.frame()
	p := plot.New()
	dress(p)
	p.X.Label.Text, p.Y.Label.Text = f.x.title(c.X), f.y.title(c.Y)
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = f.x.low, f.x.high, f.y.low, f.y.high
	if c.filled {
		for _, piece := range pieces(c.Series[0], f) {
			p.Add(area{piece})
		}
	}
	for _, b := range c.Bands {
		p.Add(f.band(b))
	}
	for i, s := range c.Series {
		for _, piece := range pieces(s, f) {
			l := &plotter.Line{XYs: piece, LineStyle: line(i)}
			p.Add(l)
			p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = f.x.low, f.x.high, f.y.low, f.y.high
		}
	}
	top := heading(cv, c.Title)
	area := draw.Canvas{Canvas: cv, Rectangle: vg.Rectangle{
		Min: vg.Point{X: 8, Y: 8}, Max: vg.Point{X: vg.Length(width - f.margin), Y: vg.Length(high - top)}}}
	p.Draw(area)
	inner := p.DataCanvas(area)
	c.direct(cv, p, inner, f)
	return cv.svg(c.Title, c.describe())
}

// heading writes the title and gives the height it took.
func heading(cv *canvas, title string) float64 {
	y := 18.0
	for _, row := range wrap(title, width-24) {
		cv.words(12, y, 0, "start", fontSize, inkHex, row)
		y += 16
	}
	return y - 4
}

// wrap breaks a text into rows that fit a width.
func wrap(s string, limit float64) []string {
	var rows []string
	row := ""
	for _, w := range strings.Fields(s) {
		if row != "" && extent(row+" "+w) > limit {
			rows = append(rows, row)
			row = w
			continue
		}
		row = strings.TrimSpace(row + " " + w)
	}
	if row != "" {
		rows = append(rows, row)
	}
	return rows
}

// ruler is an axis as it is drawn: its range in printed units.
type ruler struct {
	factor    float64
	unit      string
	low, high float64
}

func (r ruler) title(a Axis) string {
	if r.unit == "" {
		return a.Label
	}
	return fmt.Sprintf("%s (%s)", a.Label, r.unit)
}

// frame is what the drawing of a chart needs to know of all its parts.
type frame struct {
	x, y   ruler
	margin float64 // room right of the chart for the names of the series
}

func (c *Chart) frame() frame {
	xl, xh, yl, yh := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for _, s := range c.Series {
		for i := range s.X {
			if bad(s.X[i]) || bad(s.Y[i]) {
				continue
			}
			xl, xh = math.Min(xl, s.X[i]), math.Max(xh, s.X[i])
			yl, yh = math.Min(yl, s.Y[i]), math.Max(yh, s.Y[i])
		}
	}
	for _, b := range c.Bands {
		low, high := &yl, &yh
		if b.OnX {
			low, high = &xl, &xh
		}
		for _, e := range []float64{b.Low, b.High} {
			if !bad(e) {
				*low, *high = math.Min(*low, e), math.Max(*high, e)
			}
		}
		room := 0.06 * (*high - *low) // a strip of the band is always seen
		for _, e := range []float64{b.Low, b.High} {
			if !bad(e) {
				*low, *high = math.Min(*low, e-room), math.Max(*high, e+room)
			}
		}
	}
	if c.Zero {
		yl, yh = math.Min(yl, 0), math.Max(yh, 0)
	}
	f := frame{x: span(xl, xh, c.X.Unit, false), y: span(yl, yh, c.Y.Unit, true), margin: 20}
	if len(c.Series) > 1 {
		for _, s := range c.Series {
			f.margin = math.Max(f.margin, 34+extent(s.Name))
		}
		f.margin = math.Min(f.margin, 220)
	}
	return f
}

func span(low, high float64, unit string, round bool) ruler {
	factor, prefixed := phys.Scale(math.Max(math.Abs(low), math.Abs(high)), unit)
	if prefixed == unit { // no prefix fits: a power of ten in the label keeps the marks short
		if e := 3 * math.Floor(math.Log10(math.Max(math.Abs(low), math.Abs(high)))/3); e >= 6 || e <= -6 {
			factor, prefixed = math.Pow(10, -e), strings.TrimSpace(fmt.Sprintf("1e%.0f %s", e, unit))
		}
	}
	r := ruler{factor: factor, unit: prefixed}
	r.low, r.high = low*factor, high*factor
	if round || low == high {
		r.low, r.high = widen(r.low, r.high)
	}
	return r
}

// pieces cuts a series at its gaps.
func pieces(s Series, f frame) []plotter.XYs {
	var all []plotter.XYs
	var run plotter.XYs
	for i := range s.X {
		if bad(s.X[i]) || bad(s.Y[i]) {
			if len(run) > 0 {
				all, run = append(all, run), nil
			}
			continue
		}
		run = append(run, plotter.XY{X: s.X[i] * f.x.factor, Y: s.Y[i] * f.y.factor})
	}
	if len(run) > 0 {
		all = append(all, run)
	}
	return all
}

// direct names the series at the right edge, each beside its line's end, moved apart where they would touch.
func (c *Chart) direct(cv *canvas, p *plot.Plot, inner draw.Canvas, f frame) {
	if len(c.Series) < 2 {
		return
	}
	tx, ty := p.Transforms(&inner)
	type label struct {
		i       int
		x, y, t float64 // end of the line, height of the text
	}
	var all []label
	for i, s := range c.Series {
		for k := len(s.X) - 1; k >= 0; k-- {
			if !bad(s.X[k]) && !bad(s.Y[k]) {
				y := cv.height - float64(ty(s.Y[k]*f.y.factor))
				all = append(all, label{i, float64(tx(s.X[k] * f.x.factor)), y, y})
				break
			}
		}
	}
	sort.SliceStable(all, func(a, b int) bool { return all[a].y < all[b].y })
	const apart = 16
	top, bottom := cv.height-float64(inner.Max.Y)+6, cv.height-float64(inner.Min.Y)
	for i := range all {
		least := top
		if i > 0 {
			least = all[i-1].t + apart
		}
		all[i].t = math.Max(all[i].t, least)
	}
	for i := len(all) - 1; i >= 0; i-- {
		most := bottom
		if i < len(all)-1 {
			most = all[i+1].t - apart
		}
		all[i].t = math.Min(all[i].t, most)
	}
	x0 := float64(inner.Max.X)
	for _, l := range all {
		paint := hex(strokes[l.i].paint)
		fmt.Fprintf(&cv.body, `<path d="M%s %sL%s %s" fill="none" stroke="%s" stroke-width="1"/>`+"\n", num(x0+3), num(clampTo(l.y, top-6, bottom)), num(x0+16), num(l.t), paint)
		cv.words(x0+20, l.t+4, 0, "start", fontSize, paint, c.Series[l.i].Name)
	}
}

func clampTo(x, low, high float64) float64 { return math.Max(low, math.Min(high, x)) }
