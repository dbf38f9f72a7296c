package page

import (
	"regexp"
	"strings"
)

// quantity is a number, a blank and a unit: "9.5 A", "-40 degC", "at least 8 uH", "3 %".
var quantity = regexp.MustCompile(`(\d) ((?:[pnumkMGµ]?(?:m[23²³]?|s|A2?s?|V|Vs|H|T|Wb|W|J|K|N|F|C|Hz|ohm|rad|VA|g)|degC|kg|mm[23²³]?|cm[234²³]?|inch|mil|percent|%|°C|Ω|turns?)(?:/(?:m[23²³]?|s|A|V|H|K|W|kg|Hz|ohm))?)([^\pL\pN]|$)`)

const fixedSpace = "\u00a0"

// verbatim are elements whose text stays as it is.
var verbatim = regexp.MustCompile(`^<(/?)(code|pre|math|svg|style)\b[^>]*?(/?)>$`)

var tag = regexp.MustCompile(`<[^>]*>`)

// bind puts a no-break space between numbers and their units in the running text of clean HTML, so that no line of a
// narrow column ends between them.
func bind(clean string) string {
	var b strings.Builder
	deep, at := 0, 0
	put := func(text string) {
		if deep == 0 {
			text = quantity.ReplaceAllString(text, "$1"+fixedSpace+"$2$3")
		}
		b.WriteString(text)
	}
	for _, m := range tag.FindAllStringIndex(clean, -1) {
		put(clean[at:m[0]])
		word := clean[m[0]:m[1]]
		if v := verbatim.FindStringSubmatch(word); v != nil && v[3] == "" {
			if v[1] == "" {
				deep++
			} else if deep > 0 {
				deep--
			}
		}
		b.WriteString(word)
		at = m[1]
	}
	put(clean[at:])
	return b.String()
}
