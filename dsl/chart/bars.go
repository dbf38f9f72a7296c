package chart

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"ampturn/magcirc/phys"
)

// Bars compares one quantity over named cases, one horizontal bar each.
type Bars struct {
	Title, Desc string
	Axis        Axis
	Names       []string
	Values      []float64
	From        []float64 // where each bar begins; nil: all at zero
	Middle      float64   // with From: the value that all bars belong to, drawn as a line
	Bands       []Band
}

// Check tells what is wrong with the data, or nil.
func (b *Bars) Check() error {
	switch {
	case len(b.Names) == 0:
		return fmt.Errorf("a bar chart needs at least one bar")
	case len(b.Names) != len(b.Values):
		return fmt.Errorf("%d names for %d values; the lists must be equally long", len(b.Names), len(b.Values))
	case b.From != nil && len(b.From) != len(b.Values):
		return fmt.Errorf("%d beginnings for %d values; the lists must be equally long", len(b.From), len(b.Values))
	}
	for i, v := range b.Values {
		if bad(v) || bad(b.from(i)) {
			return fmt.Errorf("bar %q: %g cannot be drawn", b.Names[i], v)
		}
	}
	return nil
}

// from is where a bar begins.
func (b *Bars) from(i int) float64 {
	if b.From == nil {
		return 0
	}
	return b.From[i]
}

const (
	barPitch  = 30
	barHeight = 16
)

// SVG draws the bars, each with its value at its end. Data that [Bars.Check] refuses are drawn as the refusal.
func (b *Bars) SVG() string {
	if err := b.Check(); err != nil {
		cv := newCanvas(width, 80)
		cv.words(16, 40, 0, "start", fontSize, inkHex, "no picture: "+err.Error())
		return cv.svg(b.Title, err.Error())
	}
	rows := wrap(b.Title, width-24)
	top := 14 + 16*float64(len(rows))
	if len(b.Bands) > 0 {
		top += 16
	}
	cv := newCanvas(width, top+barPitch*float64(len(b.Names))+46)
	heading(cv, b.Title)
	r := b.ruler()
	left := 16.0
	for _, n := range b.Names {
		left = math.Max(left, 24+extent(n))
	}
	left = math.Min(left, 240)
	right := width - 84.0
	x := func(v float64) float64 { return left + (v-r.low)/(r.high-r.low)*(right-left) }
	b.scale(cv, r, x, top)
	for i := range b.Names {
		begin, end := x(b.from(i)*r.factor), x(b.Values[i]*r.factor)
		y := top + barPitch*float64(i) + (barPitch-barHeight)/2
		fmt.Fprintf(&cv.body, `<rect x="%s" y="%s" width="%s" height="%d" fill="%s"%s/>`+"\n", num(math.Min(begin, end)), num(y),
			num(math.Max(math.Abs(end-begin), 1)), barHeight, hex(strokes[0].paint), opacity(sheer(strokes[0].paint)))
	}
	for _, band := range b.Bands { // above the bars, which would hide the hatching
		b.limit(cv, band, r, x, top)
	}
	for i, n := range b.Names {
		y := top + barPitch*float64(i) + (barPitch-barHeight)/2
		v := b.Values[i] * r.factor
		begin := x(b.from(i) * r.factor)
		x0, x1 := math.Min(begin, x(v)), math.Max(begin, x(v))
		cv.words(left-8, y+barHeight-4, 0, "end", fontSize, inkHex, shorten(n, left-24))
		cv.words(x1+5, y+barHeight-4, 0, "start", fontSize, inkHex, phys.Format(b.Values[i], b.Axis.Unit))
		if b.From != nil {
			cv.words(x0-5, y+barHeight-4, 0, "end", fontSize, inkHex, phys.Format(b.From[i], b.Axis.Unit))
		}
	}
	return cv.svg(b.Title, b.describe())
}

// shorten cuts a name that has no room; the text twin has it in full.
func shorten(name string, room float64) string {
	letters := []rune(name)
	if extent(name) <= room {
		return name
	}
	for len(letters) > 1 && extent(string(letters)+"...") > room {
		letters = letters[:len(letters)-1]
	}
	return string(letters) + "..."
}

// ruler spans zero, all bars and the finite ends of the limits.
func (b *Bars) ruler() ruler {
	low, high := b.zero(), b.zero()
	for i, v := range b.Values {
		low, high = math.Min(low, math.Min(v, b.from(i))), math.Max(high, math.Max(v, b.from(i)))
	}
	for _, l := range b.Bands {
		for _, e := range []float64{l.Low, l.High} {
			if !bad(e) {
				low, high = math.Min(low, 1.06*e), math.Max(high, 1.06*e)
			}
		}
	}
	if b.From != nil { // room for the value at the lower end of each bar
		low, high = low-0.25*(high-low), high+0.05*(high-low)
	}
	return span(low, high, b.Axis.Unit, b.From == nil)
}

// zero is where the line is that all bars begin at or belong to.
func (b *Bars) zero() float64 {
	if b.From == nil {
		return 0
	}
	return b.Middle
}

// scale draws the axis below the bars.
func (b *Bars) scale(cv *canvas, r ruler, x func(float64) float64, top float64) {
	y := top + barPitch*float64(len(b.Names)) + 4
	fmt.Fprintf(&cv.body, `<path d="M%s %sL%s %sM%s %sL%s %s" fill="none" stroke="%s" stroke-width="1"/>`+"\n",
		num(x(r.low)), num(y), num(x(r.high)), num(y), num(x(b.zero()*r.factor)), num(top), num(x(b.zero()*r.factor)), num(y), inkHex)
	for _, t := range (ticks{}).Ticks(r.low, r.high) {
		fmt.Fprintf(&cv.body, `<path d="M%s %sv4" stroke="%s" stroke-width="1"/>`+"\n", num(x(t.Value)), num(y), inkHex)
		cv.words(x(t.Value), y+16, 0, "middle", fontSize, inkHex, t.Label)
	}
	cv.words((x(r.low)+x(r.high))/2, y+33, 0, "middle", fontSize, inkHex, r.title(b.Axis))
}

// limit draws a forbidden range across the bars, its words above.
func (b *Bars) limit(cv *canvas, l Band, r ruler, x func(float64) float64, top float64) {
	low, high := cv.height-(top+barPitch*float64(len(b.Names))), cv.height-top
	box := vg.Rectangle{Min: vg.Point{X: vg.Length(x(math.Max(l.Low*r.factor, r.low))), Y: vg.Length(low)},
		Max: vg.Point{X: vg.Length(x(math.Min(l.High*r.factor, r.high))), Y: vg.Length(high)}}
	if box.Min.X >= box.Max.X {
		return
	}
	h := hatch{openLow: math.IsInf(l.Low, -1), openHigh: math.IsInf(l.High, 1), onX: true}
	box = h.strip(box)
	h.fill(draw.Canvas{Canvas: cv, Rectangle: box}, box)
	anchor, at := "start", float64(box.Min.X)
	if h.openLow {
		anchor, at = "end", float64(box.Max.X)
	}
	cv.words(at, top-5, 0, anchor, fontSize, hex(limitInk), l.Text)
}

func (b *Bars) describe() string {
	if b.Desc != "" {
		return b.Desc
	}
	d := b.Axis.Label + " of " + strings.Join(b.Names, ", ")
	for _, l := range b.Bands {
		d += "; limit: " + l.Text
	}
	return d
}

// Text is the bars in words.
func (b *Bars) Text() string {
	var s strings.Builder
	if b.Title != "" {
		s.WriteString(b.Title + "\n")
	}
	if err := b.Check(); err != nil {
		return s.String() + "no picture: " + err.Error()
	}
	for i, n := range b.Names {
		words := phys.Format(b.Values[i], b.Axis.Unit)
		if b.From != nil {
			words = between(b.From[i], b.Values[i], b.Axis.Unit)
		}
		fmt.Fprintf(&s, "  %s: %s\n", n, words)
	}
	for _, l := range b.Bands {
		fmt.Fprintf(&s, "  limit: %s\n", l.Text)
	}
	return strings.TrimRight(s.String(), "\n")
}
