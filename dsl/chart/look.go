package chart

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The house look. Ink has a contrast of 4.5 on white and 4.2 on #111, each line colour at least 3.4 on both.
const (
	width      = 640
	height     = 400
	heightWide = 240
	fontSize   = 12
	fontStack  = "Liberation Sans, Arial, Helvetica, sans-serif" // three names of one set of letter widths
	inkHex     = "#767676"
)

var ink = color.RGBA{0x76, 0x76, 0x76, 0xff}

// MaxSeries is how many lines one chart may hold; more is another picture.
const MaxSeries = 5

// stroke is how one series is drawn: its own colour and, for grey print, its own dash.
type stroke struct {
	paint color.RGBA
	dash  []vg.Length
}

var strokes = [MaxSeries]stroke{
	{color.RGBA{0x00, 0x72, 0xb2, 0xff}, nil},
	{color.RGBA{0xd5, 0x5e, 0x00, 0xff}, []vg.Length{8, 3}},
	{color.RGBA{0x00, 0x9e, 0x73, 0xff}, []vg.Length{3, 3}},
	{color.RGBA{0xb0, 0x59, 0x9a, 0xff}, []vg.Length{10, 3, 2, 3}},
	{color.RGBA{0xa6, 0x7c, 0x00, 0xff}, []vg.Length{14, 4}},
}

var letters = text.Plain{Fonts: font.NewCache(liberation.Collection())}

var face = font.Font{Typeface: "Liberation", Variant: "Sans", Size: fontSize}

// extent is the width that a text takes at the house size, with a tenth to spare for other letters.
func extent(s string) float64 {
	w, _, _ := letters.Box(s, face)
	return 1.1 * float64(w)
}

// dress gives a plot the house look.
func dress(p *plot.Plot) {
	p.BackgroundColor = nil
	p.TextHandler = letters
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Color = ink
		a.Width = 1
		a.Padding = 0
		a.Tick.Color = ink
		a.Tick.Width = 1
		a.Tick.Length = 5
		a.Tick.Label.Color = ink
		a.Tick.Label.Font = face
		a.Tick.Label.Handler = letters
		a.Label.TextStyle.Color = ink
		a.Label.TextStyle.Font = face
		a.Label.TextStyle.Handler = letters
		a.Label.Padding = 6
		a.Tick.Marker = ticks{}
	}
	p.Y.Tick.Label.XAlign = text.XRight
	p.Y.Tick.Label.YAlign = text.YCenter
	p.X.Tick.Label.XAlign = text.XCenter
	p.X.Tick.Label.YAlign = text.YTop
}

// line is the style of series i.
func line(i int) draw.LineStyle {
	s := strokes[i%MaxSeries]
	return draw.LineStyle{Color: s.paint, Width: 1.5, Dashes: s.dash}
}
