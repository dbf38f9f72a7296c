package draw

import (
	"fmt"
	"html"
	"math"
	"strconv"
	"strings"
)

// The house look: ink has a contrast of 4.5 on white and 4.2 on #111, each line colour at least 3.4 on both. The class
// lets a page make the ink lighter on dark ground.
const (
	pageWidth  = 640.0
	pageHeight = 400.0
	ink        = "#767676"
	blue       = "#0072B2"
	orange     = "#D55E00"
	green      = "#009E73"
	brown      = "#A67C00"
	fontStack  = "Liberation Sans, Arial, Helvetica, sans-serif"
	lineWidth  = 1.5
	style      = "<style>.amp-ink{fill:#767676}.amp-line{stroke:#767676}@media (prefers-color-scheme: dark){.amp-ink{fill:#8f8f8f}.amp-line{stroke:#8f8f8f}}</style>\n"
)

// point is a place on the picture, px.
type point struct{ x, y float64 }

// box is the place that a text takes.
type box struct {
	x0, y0, x1, y1 float64
	text           string
}

func (b box) overlaps(c box) bool {
	return b.x0 < c.x1 && c.x0 < b.x1 && b.y0 < c.y1 && c.y0 < b.y1
}

// canvas collects the elements of a picture and the boxes of its texts.
type canvas struct {
	body  strings.Builder
	texts []box
}

// num gives a coordinate rounded to 0.01, without a negative zero.
func num(x float64) string {
	x = math.Round(x*100) / 100
	if x == 0 {
		x = 0
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}

// words writes a text with its baseline at y; anchor is start, middle or end.
func (c *canvas) words(x, y float64, anchor, text string) {
	if text == "" {
		return
	}
	w := extent(text)
	left := x
	at := ""
	switch anchor {
	case "middle":
		left, at = x-w/2, ` text-anchor="middle"`
	case "end":
		left, at = x-w, ` text-anchor="end"`
	}
	c.texts = append(c.texts, box{left, y - ascent, left + w, y + descent, text})
	fmt.Fprintf(&c.body, `<text class="amp-ink" x="%s" y="%s" fill="%s"%s>%s</text>`+"\n", num(x), num(y), ink, at, html.EscapeString(text))
}

// pen is how a line is drawn.
type pen struct {
	paint string
	width float64
	dash  string
}

var (
	inkLine  = pen{ink, lineWidth, ""}
	hairLine = pen{ink, 0.75, "2 3"}
)

func (p pen) attributes() string {
	s := fmt.Sprintf(`fill="none" stroke="%s" stroke-width="%s"`, p.paint, num(p.width))
	if p.paint == ink {
		s = `class="amp-line" ` + s
	}
	if p.dash != "" {
		s += fmt.Sprintf(` stroke-dasharray="%s"`, p.dash)
	}
	return s
}

// line draws a polyline.
func (c *canvas) line(p pen, points ...point) {
	if d := pathData(points); d != "" {
		fmt.Fprintf(&c.body, `<path d="%s" %s/>`+"\n", d, p.attributes())
	}
}

// pathData writes a polyline, leaving out points that fall on the one before.
func pathData(points []point) string {
	var b strings.Builder
	last := ""
	for k, p := range points {
		at := num(p.x) + " " + num(p.y)
		if at == last {
			continue
		}
		if k == 0 {
			b.WriteByte('M')
		} else {
			b.WriteByte('L')
		}
		b.WriteString(at)
		last = at
	}
	if !strings.Contains(b.String(), "L") {
		return ""
	}
	return b.String()
}

// bar draws a rectangle with an outline and a thin tint.
func (c *canvas) bar(x0, y0, x1, y1 float64, paint, dash string, tint float64) {
	if x1 <= x0 || y1 <= y0 {
		return
	}
	class := ""
	if paint == ink {
		class = `class="amp-ink amp-line" `
	}
	fmt.Fprintf(&c.body, `<rect %sx="%s" y="%s" width="%s" height="%s" fill="%s" fill-opacity="%s" stroke="%s" stroke-width="1"`,
		class, num(x0), num(y0), num(x1-x0), num(y1-y0), paint, num(tint), paint)
	if dash != "" {
		fmt.Fprintf(&c.body, ` stroke-dasharray="%s"`, dash)
	}
	c.body.WriteString("/>\n")
}

// dot draws a filled circle.
func (c *canvas) dot(x, y, r float64, paint string) {
	class := ""
	if paint == ink {
		class = `class="amp-ink" `
	}
	fmt.Fprintf(&c.body, `<circle %scx="%s" cy="%s" r="%s" fill="%s"/>`+"\n", class, num(x), num(y), num(r), paint)
}

// arrow draws the head of an arrow that points up (dir = -1) or down (+1).
func (c *canvas) arrow(x, y, dir float64) {
	fmt.Fprintf(&c.body, `<path class="amp-ink" d="M%s %sL%s %sL%s %sZ" fill="%s"/>`+"\n",
		num(x), num(y+6*dir), num(x-6), num(y-6*dir), num(x+6), num(y-6*dir), ink)
}

// scaleBar draws a bar of the length metres, at a scale in px per metre, with its words.
func (c *canvas) scaleBar(x, y, scale, metres float64, words string) {
	end := x + metres*scale
	c.line(inkLine, point{x, y - 4}, point{x, y}, point{end, y}, point{end, y - 4})
	c.words(end+6, y+3, "start", words)
}

// roundLength is the largest of 1, 2, 5 times a power of ten that is not above x.
func roundLength(x float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(x)+1e-9))
	for _, m := range []float64{5, 2} {
		if m*p <= x*(1+1e-9) {
			return m * p
		}
	}
	return p
}

// svg closes the picture.
func (c *canvas) svg(width, height float64, title, desc string) string {
	return fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %s %s" width="%s" height="%s" role="img" font-family="%s" font-size="%s">`+
		"\n<title>%s</title>\n<desc>%s</desc>\n%s%s</svg>\n",
		num(width), num(height), num(width), num(height), fontStack, num(fontSize),
		html.EscapeString(title), html.EscapeString(desc), style, c.body.String())
}
