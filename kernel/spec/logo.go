package spec

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"strings"
)

// The logo: a square core with a gap in its right leg and three turns around its left one, drawn here from
// rectangles on a 64 by 64 field. One list makes the vector and the pixel drawings.
type box struct {
	x, y, w, h float64
	fill       color.NRGBA
}

var (
	coreColour   = color.NRGBA{0x4a, 0x55, 0x68, 0xff}
	copperColour = color.NRGBA{0xb8, 0x62, 0x1b, 0xff}
	gapColour    = color.NRGBA{0x1f, 0x8a, 0x8a, 0xff}
)

var logo = []box{
	{14, 8, 40, 10, coreColour},  // top yoke
	{14, 46, 40, 10, coreColour}, // bottom yoke
	{14, 18, 10, 28, coreColour}, // wound leg
	{44, 18, 10, 11, coreColour}, // upper part of the gapped leg
	{44, 35, 10, 11, coreColour}, // lower part
	{42, 31, 14, 2, gapColour},   // the gap, with a little fringing
	{9, 21, 20, 5, copperColour}, // turns
	{9, 29.5, 20, 5, copperColour},
	{9, 38, 20, 5, copperColour},
}

// field is the side of the drawing.
const field = 64

func logoSVG() string {
	var b strings.Builder
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %d %d" width="%d" height="%d">`+"\n",
		field, field, field, field)
	b.WriteString("<title>a core with a gap and a coil</title>\n")
	for _, r := range logo {
		fmt.Fprintf(&b, `<rect x="%g" y="%g" width="%g" height="%g" fill="#%02x%02x%02x"/>`+"\n",
			r.x, r.y, r.w, r.h, r.fill.R, r.fill.G, r.fill.B)
	}
	b.WriteString("</svg>\n")
	return b.String()
}

// logoPNG draws the logo with size pixels a side. A pixel takes each rectangle by the part that it covers.
func logoPNG(size int) ([]byte, error) {
	img := image.NewNRGBA(image.Rect(0, 0, size, size))
	side := float64(field) / float64(size)
	for y := range size {
		for x := range size {
			img.SetNRGBA(x, y, pixel(float64(x)*side, float64(y)*side, side))
		}
	}
	var b bytes.Buffer
	err := png.Encode(&b, img)
	return b.Bytes(), err
}

// pixel mixes the rectangles over a square, later ones above earlier ones.
func pixel(x, y, side float64) color.NRGBA {
	var red, green, blue, alpha float64 // colours times alpha
	for _, r := range logo {
		a := overlap(x, side, r.x, r.w) * overlap(y, side, r.y, r.h)
		red = red*(1-a) + float64(r.fill.R)*a
		green = green*(1-a) + float64(r.fill.G)*a
		blue = blue*(1-a) + float64(r.fill.B)*a
		alpha = alpha*(1-a) + a
	}
	if alpha == 0 {
		return color.NRGBA{}
	}
	round := func(v float64) uint8 { return uint8(v/alpha + 0.5) }
	return color.NRGBA{round(red), round(green), round(blue), uint8(alpha*255 + 0.5)}
}

// overlap gives the part of a pixel that a rectangle covers along one axis.
func overlap(pixel, side, start, length float64) float64 {
	return max(0, min(pixel+side, start+length)-max(pixel, start)) / side
}
