package draw

// Widths of the letters from space to tilde in thousandths of the type size, of the sans-serif whose metrics all
// three families of the font stack share.
// Source: Core 14 font metrics of the PostScript language (Helvetica), from memory.
var widths = [...]int{
	278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333, 278, 278, // space to /
	556, 556, 556, 556, 556, 556, 556, 556, 556, 556, 278, 278, 584, 584, 584, 556, // 0 to ?
	1015, 667, 667, 722, 722, 667, 611, 778, 722, 278, 500, 667, 556, 833, 722, 778, // @ to O
	667, 778, 722, 667, 611, 722, 667, 944, 667, 667, 611, 278, 278, 278, 469, 556, // P to _
	333, 556, 556, 500, 556, 556, 278, 556, 556, 222, 222, 500, 222, 833, 556, 556, // ` to o
	556, 556, 333, 500, 278, 556, 500, 722, 500, 500, 500, 334, 260, 334, 584, // p to ~
}

const (
	fontSize = 12.0
	spare    = 1.08 // for families with slightly wider letters
	ascent   = 0.95 * fontSize
	descent  = 0.25 * fontSize
)

// extent is the width in px that a text takes at the house size, with some to spare.
func extent(s string) float64 {
	sum := 0
	for _, r := range s {
		switch {
		case r >= ' ' && r <= '~':
			sum += widths[r-' ']
		default:
			sum += 1000 // no letter is wider in the common scripts
		}
	}
	return spare * fontSize * float64(sum) / 1000
}

// cut shortens a text to the width by its end.
func cut(s string, width float64) string {
	if extent(s) <= width {
		return s
	}
	letters := []rune(s)
	for n := len(letters) - 1; n > 0; n-- {
		if short := string(letters[:n]) + "..."; extent(short) <= width {
			return short
		}
	}
	return ""
}
