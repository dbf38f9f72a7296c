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
	largest, numbers := 0.0, 0
	for _, row := range t.Rows {
		if k < len(row) && row[k].Number {
			numbers++
			if v := math.Abs(row[k].Value); !math.IsInf(v, 0) && v > largest {
				largest = v
			}
		}
	}
	factor, unit := 1.0, c.Unit
	if !c.Mixed && unit != "" {
		factor, unit = phys.Scale(largest, c.Unit)
	}
	head = c.Name
	if unit != "" && numbers > 0 {
		head += " (" + unit + ")"
	}
	behind := 0
	for i, row := range t.Rows {
		if k >= len(row) {
			continue
		}
		texts[i] = row[k].print(c, factor)
		if row[k].Number && !c.Mixed {
			behind = max(behind, decimals(texts[i]))
		}
	}
	for i, row := range t.Rows {
		if k < len(row) && row[k].Number && !c.Mixed {
			texts[i] = fill(texts[i], behind, digit, point)
		}
	}
	return head, texts, numbers > 0 && !c.Mixed
}

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

// Number prints a plain number with the given significant digits: without an exponent from 1e-4 to 1e7.
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
	case a < 1e-4 || a >= 1e7:
		return strconv.FormatFloat(x, 'e', digits-1, 64)
	}
	// The exponent after rounding decides: 9.9996 has one digit before the point, but prints as 10.00.
	mantissa := strconv.FormatFloat(x, 'e', digits-1, 64)
	exponent, _ := strconv.Atoi(mantissa[strings.IndexByte(mantissa, 'e')+1:])
	return strconv.FormatFloat(x, 'f', max(0, digits-1-exponent), 64)
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
