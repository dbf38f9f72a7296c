package dsl

import (
	"fmt"
	"math"

	"ampturn/dsl/chart"
	"ampturn/dsl/doc"
	"ampturn/magcirc"
)

// Figure is a picture with its text twin.
type Figure struct {
	lines *chart.Chart
	bars  *chart.Bars
	svg   string
	text  string
}

// axis names what an axis shows and in which unit.
type axis = chart.Axis

func newFigure(title string, x, y axis) *Figure {
	return &Figure{lines: &chart.Chart{Title: title, X: x, Y: y}}
}

func (f *Figure) add(name string, x, y []float64) {
	f.lines.Series = append(f.lines.Series, chart.Series{Name: name, X: x, Y: y})
}

// copy gives a figure that can be changed without changing f.
func (f *Figure) copy() *Figure {
	if f == nil {
		refuse(magcirc.BadValue, "figure", "there is none", "make it with Plot(...) or Bars(...)")
	}
	next := *f
	if f.lines != nil {
		c := *f.lines
		c.Series = append([]chart.Series(nil), c.Series...)
		c.Bands = append([]chart.Band(nil), c.Bands...)
		next.lines = &c
	}
	if f.bars != nil {
		b := *f.bars
		b.Bands = append([]chart.Band(nil), b.Bands...)
		next.bars = &b
	}
	return &next
}

// Title gives the figure with a title of one's own.
func (f *Figure) Title(text string) *Figure {
	next := f.copy()
	switch {
	case next.lines != nil:
		next.lines.Title = text
	case next.bars != nil:
		next.bars.Title = text
	}
	return next
}

// Labels names the quantities on the axes.
func (f *Figure) Labels(horizontal, vertical string) *Figure {
	next := f.copy()
	switch {
	case next.lines != nil:
		next.lines.X.Label, next.lines.Y.Label = horizontal, vertical
	case next.bars != nil:
		next.bars.Axis.Label = vertical
	}
	return next
}

// Wide gives the figure at two fifths of its height less, for pictures under each other.
func (f *Figure) Wide() *Figure {
	next := f.copy()
	if next.lines != nil {
		next.lines.Wide = true
	}
	return next
}

// Limit draws a bound of the vertical quantity as a hatched band with its words.
//
//	Plot(T1.BiasCurve("main", 0, 6*amp)).Limit("required", AtLeast(500*uH))
func (f *Figure) Limit(words string, bound Bound) *Figure { return f.limit(words, bound, false) }

// LimitAcross draws a bound of the horizontal quantity.
//
//	Plot(T1.BiasCurve("main", 0, 6*amp)).LimitAcross("current limit", AtMost(5*amp))
func (f *Figure) LimitAcross(words string, bound BoundAcross) *Figure {
	if bound == nil {
		Bound{}.given()
	}
	return f.limit(words, bound.across(), true)
}

// BoundAcross is a [Bound] on the horizontal quantity of a picture, whose unit is not that of the values drawn.
type BoundAcross interface {
	across() Bound
}

func (f *Figure) limit(words string, bound Bound, across bool) *Figure {
	bound.given()
	next := f.copy()
	next.fits(bound, across)
	for _, b := range bands(words, bound, across) {
		switch {
		case next.lines != nil:
			next.lines.Bands = append(next.lines.Bands, b)
		case next.bars != nil:
			next.bars.Bands = append(next.bars.Bands, b)
		}
	}
	return next
}

// fits refuses a bound that is in another unit than the axis which it belongs to.
func (f *Figure) fits(bound Bound, across bool) {
	var along axis
	switch {
	case f.lines != nil && across:
		along = f.lines.X
	case f.lines != nil:
		along = f.lines.Y
	case f.bars != nil && across:
		refuse(magcirc.WrongUse, "bars", "have no horizontal quantity", "bound their values with .Limit")
	case f.bars != nil:
		along = f.bars.Axis
	default:
		refuse(magcirc.WrongUse, "drawing", "has no axes to bound", "bounds belong to Plot and Bars")
	}
	if unit := unitOf(bound.rule.Unit); unit != "" && along.Unit != "" && unit != along.Unit {
		refuse(magcirc.Inconsistent, "limit", fmt.Sprintf("%s is in %s, and the axis of the %s is in %s", bound.rule, unit, along.Label, along.Unit),
			"Limit bounds the vertical quantity, LimitAcross the horizontal one")
	}
}

// bands gives the ranges that a bound forbids.
func bands(words string, bound Bound, across bool) []chart.Band {
	text := bound.rule.String()
	if words != "" {
		text = words + ": " + text
	}
	var all []chart.Band
	if !math.IsInf(bound.rule.Low, -1) {
		all = append(all, chart.Band{Low: math.Inf(-1), High: bound.rule.Low, Text: text, OnX: across})
	}
	if !math.IsInf(bound.rule.High, 1) {
		all = append(all, chart.Band{Low: bound.rule.High, High: math.Inf(1), Text: text, OnX: across})
	}
	return all
}

// MIMEBundle shows the picture and its text twin.
func (f *Figure) MIMEBundle() map[string]any {
	switch {
	case f == nil:
		return nil
	case f.lines != nil:
		return doc.Bundle(f.lines.Text(), "", f.lines.SVG())
	case f.bars != nil:
		return doc.Bundle(f.bars.Text(), "", f.bars.SVG())
	}
	return doc.Bundle(f.text, "", f.svg)
}

// Drawable is what [Plot] draws: [Series], [Line], a bias curve.
type Drawable interface {
	drawn() drawing
}

// drawing is what one drawable adds to a picture.
type drawing struct {
	title string
	x, y  axis
	lines []chart.Series
}

// Plot draws curves over one pair of axes.
//
//	Plot(Series("25 degC", i, cold), Series("100 degC", i, hot)).Labels("current", "inductance")
func Plot(curves ...Drawable) *Figure {
	if len(curves) == 0 {
		refuse(magcirc.BadValue, "Plot", "has nothing to draw", `write Plot(Series("25 degC", x, y))`)
	}
	var f *Figure
	for i, c := range curves {
		if c == nil {
			refuse(magcirc.BadValue, "Plot", fmt.Sprintf("curve %d is missing (nil)", i+1), "")
		}
		d := c.drawn()
		if f == nil {
			f = newFigure(d.title, d.x, d.y)
		} else {
			f.join(d)
		}
		f.lines.Series = append(f.lines.Series, d.lines...)
	}
	if len(curves) > 1 {
		f.lines.Title = f.lines.Y.Label + " over " + f.lines.X.Label
	}
	if err := f.lines.Check(); err != nil {
		refuse(magcirc.BadValue, "Plot", err.Error(), "")
	}
	return f
}

// join takes another drawing into the figure, whose units must be the same.
func (f *Figure) join(d drawing) {
	for _, pair := range [2][2]*axis{{&f.lines.X, &d.x}, {&f.lines.Y, &d.y}} {
		have, more := pair[0], pair[1]
		switch {
		case have.Unit == "":
			have.Unit = more.Unit
		case more.Unit != "" && more.Unit != have.Unit:
			refuse(magcirc.Inconsistent, "Plot", fmt.Sprintf("the curves are in %s and in %s", have.Unit, more.Unit), "draw them in two pictures")
		}
	}
}

// SeriesData is a named list of points.
type SeriesData struct {
	name         string
	x, y         []float64
	xUnit, yUnit string
}

// Series is a curve through points of equal number.
func Series(name string, x, y []Value) SeriesData { return SeriesWithUnits(nil, name, x, y) }

// SeriesWithUnits is [Series] with the unit of each argument.
func SeriesWithUnits(units []string, name string, x, y []Value) SeriesData {
	if len(x) != len(y) {
		refuse(magcirc.BadValue, fmt.Sprintf("series %q", name), fmt.Sprintf("has %d values over %d positions", len(y), len(x)), "the lists must be equally long")
	}
	if len(x) == 0 {
		refuse(magcirc.BadValue, fmt.Sprintf("series %q", name), "has no points", "")
	}
	return SeriesData{name: name, x: append([]float64(nil), x...), y: append([]float64(nil), y...), xUnit: unitOf(unitAt(units, 1)), yUnit: unitOf(unitAt(units, 2))}
}

// Line is a straight line between two points or through several: a [Series] by the name that a construction line has.
func Line(name string, x, y []Value) SeriesData { return SeriesWithUnits(nil, name, x, y) }

// LineWithUnits is [Line] with the unit of each argument.
func LineWithUnits(units []string, name string, x, y []Value) SeriesData {
	return SeriesWithUnits(units, name, x, y)
}

// MIMEBundle shows the series in words; [Plot] draws it.
func (s SeriesData) MIMEBundle() map[string]any {
	return words(fmt.Sprintf("series %q of %d points; draw it with Plot", s.name, len(s.x)))
}

func (s SeriesData) drawn() drawing {
	return drawing{title: s.name, x: axis{Label: quantity(s.xUnit, "x"), Unit: s.xUnit}, y: axis{Label: quantity(s.yUnit, "y"), Unit: s.yUnit}, lines: []chart.Series{{Name: s.name, X: s.x, Y: s.y}}}
}

// quantities are what units are commonly drawn for; [Figure.Labels] says it better.
var quantities = map[string]string{"A": "current", "V": "voltage", "H": "inductance", "T": "flux density", "A/m": "field strength", "Wb": "flux",
	"m": "length", "s": "time", "Hz": "frequency", "W": "power", "degC": "temperature", "K": "temperature difference", "ohm": "resistance", "1/H": "reluctance", "J": "energy"}

func quantity(unit, otherwise string) string {
	if q, ok := quantities[unit]; ok {
		return q
	}
	return otherwise
}

// Bars compares values over named cases.
func Bars(names []string, values []Value) *Figure { return BarsWithUnits(nil, names, values) }

// BarsWithUnits is [Bars] with the unit of each argument.
func BarsWithUnits(units []string, names []string, values []Value) *Figure {
	f := &Figure{bars: &chart.Bars{Axis: axis{Unit: unitOf(unitAt(units, 1))}, Names: append([]string(nil), names...), Values: append([]float64(nil), values...)}}
	if err := f.bars.Check(); err != nil {
		refuse(magcirc.BadValue, "Bars", err.Error(), "")
	}
	return f
}

// Span gives count values spread evenly from one to another, both included: Span(0, 6*amp, 61).
func Span(from, to Value, count Count) []Value {
	wantFinite("Span", "start", from, "")
	wantFinite("Span", "end", to, "")
	if count != math.Trunc(count) || count < 2 || count > 1e6 {
		refuseValue(magcirc.BadValue, "Span", "count", count, 2, "", "is not a whole number from 2 to 1000000", "write Span(0, 6*amp, 61)")
	}
	values := make([]float64, int(count))
	for i := range values {
		values[i] = from + (to-from)*float64(i)/(count-1)
	}
	values[len(values)-1] = to
	return values
}
