package chart

import (
	"fmt"
	"html"
	"image"
	"image/color"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// canvas writes vector graphics as SVG. It takes one point for one pixel, rounds to 0.01 and turns the vertical axis
// over, since vector graphics count upwards and SVG downwards.
type canvas struct {
	width, height float64
	body          strings.Builder
	now           state
	stack         []state
}

// state is what Push saves.
type state struct {
	line  float64
	dash  []vg.Length
	paint color.Color
	m     [6]float64 // x' = m0 x + m2 y + m4, y' = m1 x + m3 y + m5
}

func newCanvas(width, height float64) *canvas {
	return &canvas{width: width, height: height, now: state{line: 1, paint: color.Black, m: [6]float64{1, 0, 0, 1, 0, 0}}}
}

// Size makes the canvas one that knows its size.
func (c *canvas) Size() (w, h vg.Length) { return vg.Length(c.width), vg.Length(c.height) }

func (c *canvas) SetLineWidth(w vg.Length) { c.now.line = float64(w) }

func (c *canvas) SetLineDash(pattern []vg.Length, _ vg.Length) {
	c.now.dash = append([]vg.Length(nil), pattern...)
}

func (c *canvas) SetColor(p color.Color) {
	if p == nil {
		p = color.Black
	}
	c.now.paint = p
}

func (c *canvas) Rotate(rad float64) {
	s, k := math.Sincos(rad)
	c.apply([6]float64{k, s, -s, k, 0, 0})
}

func (c *canvas) Translate(p vg.Point) { c.apply([6]float64{1, 0, 0, 1, float64(p.X), float64(p.Y)}) }

func (c *canvas) Scale(x, y float64) { c.apply([6]float64{x, 0, 0, y, 0, 0}) }

func (c *canvas) apply(t [6]float64) {
	m := c.now.m
	c.now.m = [6]float64{
		m[0]*t[0] + m[2]*t[1], m[1]*t[0] + m[3]*t[1],
		m[0]*t[2] + m[2]*t[3], m[1]*t[2] + m[3]*t[3],
		m[0]*t[4] + m[2]*t[5] + m[4], m[1]*t[4] + m[3]*t[5] + m[5],
	}
}

func (c *canvas) Push() { c.stack = append(c.stack, c.now) }

func (c *canvas) Pop() {
	c.now = c.stack[len(c.stack)-1]
	c.stack = c.stack[:len(c.stack)-1]
}

// at gives the picture's coordinates of a point.
func (c *canvas) at(p vg.Point) (x, y float64) {
	m := c.now.m
	px, py := float64(p.X), float64(p.Y)
	return m[0]*px + m[2]*py + m[4], c.height - (m[1]*px + m[3]*py + m[5])
}

func (c *canvas) Stroke(p vg.Path) {
	if c.now.line <= 0 {
		return
	}
	fmt.Fprintf(&c.body, `<path d="%s" fill="none" stroke="%s" stroke-width="%s"`, c.path(p), hex(c.now.paint), num(c.now.line))
	if len(c.now.dash) > 0 {
		parts := make([]string, len(c.now.dash))
		for i, d := range c.now.dash {
			parts[i] = num(float64(d))
		}
		fmt.Fprintf(&c.body, ` stroke-dasharray="%s"`, strings.Join(parts, " "))
	}
	c.body.WriteString("/>\n")
}

func (c *canvas) Fill(p vg.Path) {
	fmt.Fprintf(&c.body, `<path d="%s" fill="%s"%s/>`+"\n", c.path(p), hex(c.now.paint), opacity(c.now.paint))
}

// path writes a path's data. Arcs are drawn as short lines: charts hold none but round glyphs.
func (c *canvas) path(p vg.Path) string {
	var b strings.Builder
	to := func(letter byte, pt vg.Point) {
		x, y := c.at(pt)
		b.WriteByte(letter)
		b.WriteString(num(x))
		b.WriteByte(' ')
		b.WriteString(num(y))
	}
	for _, part := range p {
		switch part.Type {
		case vg.MoveComp:
			to('M', part.Pos)
		case vg.LineComp:
			to('L', part.Pos)
		case vg.ArcComp:
			const steps = 24
			for i := 0; i <= steps; i++ {
				s, k := math.Sincos(part.Start + part.Angle*float64(i)/steps)
				to('L', vg.Point{X: part.Pos.X + part.Radius*vg.Length(k), Y: part.Pos.Y + part.Radius*vg.Length(s)})
			}
		case vg.CurveComp:
			letter := byte('Q')
			if len(part.Control) == 2 {
				letter = 'C'
			}
			for i, q := range part.Control {
				if i > 0 {
					letter = ' '
				}
				to(letter, q)
			}
			to(' ', part.Pos)
		case vg.CloseComp:
			b.WriteByte('Z')
		}
	}
	d := b.String()
	if strings.HasPrefix(d, "L") { // an arc that opens a path
		d = "M" + d[1:]
	}
	return d
}

func (c *canvas) FillString(f font.Face, pt vg.Point, text string) {
	if f.Font.Size == 0 || text == "" {
		return
	}
	x, y := c.at(pt)
	turn := -math.Atan2(c.now.m[1], c.now.m[0]) * 180 / math.Pi
	c.words(x, y, turn, "start", float64(f.Font.Size), hex(c.now.paint), text)
}

func (c *canvas) DrawImage(vg.Rectangle, image.Image) {} // charts hold no bitmaps

// words writes text at the picture's own coordinates; anchor is start, middle or end.
func (c *canvas) words(x, y, turn float64, anchor string, size float64, paint, text string) {
	fmt.Fprintf(&c.body, `<text x="%s" y="%s" font-size="%s" fill="%s"`, num(x), num(y), num(size), paint)
	if anchor != "start" {
		fmt.Fprintf(&c.body, ` text-anchor="%s"`, anchor)
	}
	if turn != 0 {
		fmt.Fprintf(&c.body, ` transform="rotate(%s %s %s)"`, num(turn), num(x), num(y))
	}
	fmt.Fprintf(&c.body, ">%s</text>\n", html.EscapeString(text))
}

// svg closes the picture.
func (c *canvas) svg(title, desc string) string {
	return fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %s %s" width="%s" height="%s" role="img" font-family="%s">`+
		"\n<title>%s</title>\n<desc>%s</desc>\n%s</svg>\n",
		num(c.width), num(c.height), num(c.width), num(c.height), fontStack,
		html.EscapeString(title), html.EscapeString(desc), c.body.String())
}

// hex gives a colour as SVG writes it.
func hex(p color.Color) string {
	if c, ok := p.(color.NRGBA); ok {
		return fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B)
	}
	r, g, b, _ := p.RGBA()
	return fmt.Sprintf("#%02x%02x%02x", r>>8, g>>8, b>>8)
}

// opacity is the attribute of a colour that lets what lies below it through.
func opacity(p color.Color) string {
	if c, ok := p.(color.NRGBA); ok && c.A < 0xff {
		return fmt.Sprintf(` fill-opacity="%.2f"`, float64(c.A)/0xff)
	}
	return ""
}

// num gives a coordinate rounded to 0.01, without a negative zero.
func num(x float64) string {
	x = math.Round(x*100) / 100
	if x == 0 {
		x = 0
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}
