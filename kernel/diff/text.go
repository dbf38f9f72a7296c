// Package diff compares notebooks: the outputs saved in one with those of a fresh run ([Stale], [Outputs]), and two
// revisions of one ([Revisions]). Words are compared as they stand, numbers within a tolerance.
package diff

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// Tolerance says how far apart two numbers may be and still count as the same. Rounding to the printed digits cannot
// hide a difference: where full values stand beside printed numbers, they are compared. A printed number may differ by one
// in its last place only where the full value lies so exactly between the two that either may be printed.
type Tolerance struct {
	Relative float64 // share of the larger magnitude
}

// Default is what other processors and libraries leave of a computation in float64.
var Default = Tolerance{Relative: 1e-6}

// Magnitudes below which two numbers are what rounding left of zero: of a number as it is printed, and of one in full,
// in whatever unit.
const (
	printedNoise = 1e-12
	fullNoise    = 1e-14
)

// same tells whether two numbers are one; noise is the magnitude that counts as zero.
func (t Tolerance) same(a, b, noise float64) bool {
	switch {
	case a == b, math.Abs(a) < noise && math.Abs(b) < noise:
		return true
	}
	return math.Abs(a-b) <= t.Relative*math.Max(math.Abs(a), math.Abs(b))
}

// Change is a place where two texts differ.
type Change struct {
	Place    string // words before it, or what differs as a whole
	Old, New string
}

// String is the change in words.
func (c Change) String() string {
	if c.Place == "" {
		return fmt.Sprintf("saved %s, now %s", c.Old, c.New)
	}
	return fmt.Sprintf("%s: saved %s, now %s", c.Place, c.Old, c.New)
}

// piece is a number or the words between two numbers.
type piece struct {
	text   string
	number bool
	value  float64
	full   bool // a number in full, which the next number prints
}

var numeral = regexp.MustCompile(`(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?`)

// pieces splits a text. With names, a digit that belongs to a name, as in L1, is part of the words; so is a minus sign
// between two names. Without, as in the paths of a drawing, every number counts.
func pieces(s string, names bool) []piece {
	var list []piece
	words := 0 // start of the words under way
	for at := 0; at < len(s); {
		m := numeral.FindStringIndex(s[at:])
		if m == nil {
			break
		}
		start, end := at+m[0], at+m[1]
		if names && start > 0 && isName(s[start-1]) {
			for end < len(s) && isName(s[end]) {
				end++
			}
			at = end
			continue
		}
		if start > 0 && (s[start-1] == '-' || s[start-1] == '+') && (!names || start == 1 || !isName(s[start-2]) && s[start-2] != ')') {
			start--
		}
		value, err := strconv.ParseFloat(s[start:end], 64)
		if err != nil {
			at = end
			continue
		}
		before := s[words:start]
		list = append(list, piece{text: strings.Join(strings.Fields(before), " ")},
			piece{text: s[start:end], number: true, value: value, full: strings.HasSuffix(before, `data-value="`)})
		at, words = end, end
	}
	return append(list, piece{text: strings.Join(strings.Fields(s[words:]), " ")})
}

func isName(c byte) bool {
	return c == '_' || c >= '0' && c <= '9' || c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z'
}

// compared is the outcome of comparing two texts.
type compared struct {
	changes []Change
	numbers int
	fulls   []float64 // values in full, which are the same in both
}

// texts compares two texts. fulls are values in full that are known to be the same and may stand behind printed ones.
func (t Tolerance) texts(a, b string, fulls []float64) compared {
	old, now := pieces(a, true), pieces(b, true)
	var c compared
	if !alike(old, now) {
		c.changes = []Change{firstWords(a, b)}
		return c
	}
	for i, p := range old {
		if !p.number {
			continue
		}
		c.numbers++
		q := now[i]
		switch {
		case p.full:
			rest := i+2 < len(old) && old[i+2].number && noise(old[i+2], now[i+2])
			if t.same(p.value, q.value, fullNoise) || rest {
				c.fulls = append(c.fulls, p.value)
				continue
			}
		case t.same(p.value, q.value, printedNoise), t.rounded(p.text, q.text, append(fulls, c.fulls...)):
			continue
		}
		c.changes = append(c.changes, Change{Place: context(old, i), Old: p.text, New: q.text})
	}
	return c
}

// rounded tells whether two printed numbers are neighbours between which one of the full values lies so exactly that
// rounding may give either.
func (t Tolerance) rounded(a, b string, fulls []float64) bool {
	if !lastPlace(a, b) {
		return false
	}
	x, _ := strconv.ParseFloat(a, 64) // both have been parsed before
	y, _ := strconv.ParseFloat(b, 64)
	for _, full := range fulls {
		decade := math.Log10(math.Abs(full / ((x + y) / 2))) // the prefix of the unit is a power of ten
		if math.Abs(decade-math.Round(decade)) <= t.Relative {
			return true
		}
	}
	return false
}

func noise(a, b piece) bool {
	return math.Abs(a.value) < printedNoise && math.Abs(b.value) < printedNoise
}

// alike tells whether two texts have the same words with numbers at the same places.
func alike(a, b []piece) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i].number != b[i].number || a[i].full != b[i].full || !a[i].number && a[i].text != b[i].text {
			return false
		}
	}
	return true
}

// lastPlace tells whether two printed numbers have the same decimals and differ by one in the last.
func lastPlace(a, b string) bool {
	x, y := digits(a), digits(b)
	return decimals(a) == decimals(b) && exponent(a) == exponent(b) && (x-y == 1 || y-x == 1)
}

func digits(s string) int64 {
	mantissa, _, _ := strings.Cut(strings.ToLower(s), "e")
	n, err := strconv.ParseInt(strings.Replace(mantissa, ".", "", 1), 10, 64)
	if err != nil {
		return math.MinInt32 // beyond what is printed: never next to another
	}
	return n
}

func decimals(s string) int {
	mantissa, _, _ := strings.Cut(strings.ToLower(s), "e")
	_, behind, _ := strings.Cut(mantissa, ".")
	return len(behind)
}

func exponent(s string) string {
	_, e, _ := strings.Cut(strings.ToLower(s), "e")
	return e
}

var tags = regexp.MustCompile(`<[^>]*(?:>|$)`)

// context gives the last words before a number.
func context(list []piece, i int) string {
	text := ""
	for k := max(0, i-5); k < i; k++ {
		text += " " + list[k].text
	}
	words := strings.Fields(tags.ReplaceAllString(text, " "))
	return strings.Join(words[max(0, len(words)-6):], " ")
}

// firstWords gives the first line in which two texts differ.
func firstWords(a, b string) Change {
	old, now := strings.Split(a, "\n"), strings.Split(b, "\n")
	for i := 0; i < len(old) || i < len(now); i++ {
		x, y := lineAt(old, i), lineAt(now, i)
		if strings.Join(strings.Fields(x), " ") != strings.Join(strings.Fields(y), " ") {
			x, y = fromDifference(x, y)
			return Change{Place: fmt.Sprintf("line %d", i+1), Old: quoted(x), New: quoted(y)}
		}
	}
	return Change{Place: "blanks", Old: fmt.Sprintf("%d signs", len(a)), New: fmt.Sprintf("%d signs", len(b))}
}

// fromDifference cuts two lines to a few words before the place where they part.
func fromDifference(a, b string) (string, string) {
	x, y := strings.Fields(a), strings.Fields(b)
	i := 0
	for i < len(x) && i < len(y) && x[i] == y[i] {
		i++
	}
	i = max(0, i-3)
	return strings.Join(x[min(i, len(x)):], " "), strings.Join(y[min(i, len(y)):], " ")
}

func lineAt(lines []string, i int) string {
	if i < len(lines) {
		return lines[i]
	}
	return ""
}

// quoted shortens a line for a message.
func quoted(s string) string {
	r := []rune(strings.Join(strings.Fields(s), " "))
	if len(r) == 0 {
		return "nothing"
	}
	if len(r) > 100 {
		r = append(r[:97], '.', '.', '.')
	}
	return `"` + string(r) + `"`
}
