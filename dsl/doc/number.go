package doc

import (
	"math"
	"strconv"
	"strings"

	"ampturn/magcirc/phys"
)

// Blanks as wide as a digit and as a point, which align numbers of a proportional font with even digits.
const (
	figureSpace = '\u2007'
	pointSpace  = '\u2008'
)

// column gives the header and the texts of column k, and whether it stands right. digit and point are the blanks that
// fill up what a number lacks behind its decimal point.
func (t Table) column(k int, digit, point rune) (head string, texts []string, right bool) {
	c := t.Columns[k]
	texts = make([]string, len(t.Rows))
	largest, numbers := t.largest(k)
	for i, other := range t.Columns {
		if c.Beside != "" && i != k && other.Beside == c.Beside && other.Unit == c.Unit {
			v, _ := t.largest(i)
			largest = math.Max(largest, v)
		}
	}
	factor, unit := 1.0, c.Unit
	if !c.Mixed && unit != "" {
		factor, unit = scale(largest, c.Unit)
	}
	head = c.Name
	if unit != "" && numbers > 0 {
		head += " (" + unit + ")"
	}
	counts := t.counts(k)
	behind, powers := 0, false
	for i, row := range t.Rows {
		if k >= len(row) {
			continue
		}
		texts[i] = row[k].print(c, factor)
		if counts && row[k].Number && !row[k].Printed {
			texts[i] = strconv.FormatInt(int64(row[k].Value), 10)
		}
		if row[k].Number && !c.Mixed {
			behind = max(behind, decimals(texts[i]))
			powers = powers || strings.ContainsRune(texts[i], 'e')
		}
	}
	for i, row := range t.Rows {
		if k < len(row) && row[k].Number && !c.Mixed && !powers { // beside a power of ten, points say nothing
			texts[i] = fill(texts[i], behind, digit, point)
		}
	}
	return head, texts, numbers > 0 && !c.Mixed
}

// counts tells whether the numbers of a column are turns or other counts: without a unit that takes a prefix, and all whole.
func (t Table) counts(k int) bool {
	c := t.Columns[k]
	if c.Mixed || c.Unit != "" && c.Unit != "turn" {
		return false
	}
	for _, row := range t.Rows {
		if k < len(row) && row[k].Number && (row[k].Value != math.Trunc(row[k].Value) || math.Abs(row[k].Value) >= 1e7) { // infinite and not a number too
			return false
		}
	}
	return true
}

// largest gives the largest finite magnitude in column k and how many numbers it has.
func (t Table) largest(k int) (largest float64, numbers int) {
	for _, row := range t.Rows {
		if k < len(row) && row[k].Number {
			numbers++
			if v := math.Abs(row[k].Value); !math.IsInf(v, 0) && v > largest {
				largest = v
			}
		}
	}
	return largest, numbers
}

// scale gives the factor to print a column by and its unit: with a prefix, or, where the unit takes none and the numbers
// are large, with a power of ten, "1e6 1/H".
func scale(largest float64, unit string) (factor float64, prefixed string) {
	factor, prefixed = phys.Scale(largest, unit)
	if largest*factor < tooLarge || math.IsInf(largest, 0) {
		return factor, prefixed
	}
	thirds := 3 * int(math.Log10(largest*factor)*(1+1e-12)/3)
	return factor / math.Pow(10, float64(thirds)), "1e" + strconv.Itoa(thirds) + " " + prefixed
}

// tooLarge is where four significant digits would need zeros that are not known.
const tooLarge = 1e4

// print is the cell in the printed unit of its column.
func (c Cell) print(col Column, factor float64) string {
	switch {
	case !c.Number || c.Printed:
		return c.Words
	case col.Mixed:
		return phys.Format(c.Value, c.Unit)
	}
	digits := col.Digits
	if digits == 0 {
		digits = 4
	}
	return Number(c.Value*factor, digits)
}

// Number prints a plain number with the given significant digits: without an exponent where these reach the decimal
// point and the number is 1e-4 or more; whole numbers without one up to 1e7.
func Number(x float64, digits int) string {
	switch a := math.Abs(x); {
	case math.IsNaN(x):
		return "not a number"
	case math.IsInf(x, 1):
		return "inf"
	case math.IsInf(x, -1):
		return "-inf"
	case x == 0:
		return "0"
	case x == math.Trunc(x) && a < 1e7 && a >= math.Pow(10, float64(digits)):
		return strconv.FormatFloat(x, 'f', 0, 64)
	case a < 1e-4 || a >= math.Pow(10, float64(digits)):
		return power(x, digits)
	}
	// The exponent after rounding decides: 9.9996 has one digit before the point, but prints as 10.00.
	mantissa := strconv.FormatFloat(x, 'e', digits-1, 64)
	exponent, _ := strconv.Atoi(mantissa[strings.IndexByte(mantissa, 'e')+1:])
	return strconv.FormatFloat(x, 'f', max(0, digits-1-exponent), 64)
}

// power prints a number with an exponent: 1.235e-5.
func power(x float64, digits int) string {
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(x, 'e', digits-1, 64), "e")
	e, _ := strconv.Atoi(exponent)
	return mantissa + "e" + strconv.Itoa(e)
}

// decimals counts what stands behind the decimal point.
func decimals(s string) int {
	if i := strings.IndexByte(s, '.'); i >= 0 {
		return len(s) - i - 1
	}
	return 0
}

// fill adds blanks for the digits that s lacks behind its point, so that points stand below each other.
func fill(s string, behind int, digit, point rune) string {
	have := decimals(s)
	if behind == 0 || have == behind {
		return s
	}
	blanks := strings.Repeat(string(digit), behind-have)
	if have == 0 {
		blanks += string(point)
	}
	return s + blanks
}
