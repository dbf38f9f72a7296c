package phys

import (
	"math"
	"strconv"
	"strings"
)

// Format prints a quantity with four significant digits and the engineering prefix its unit takes.
//
//	Format(630e-6, "H") = "630 uH"    Format(34e-6, "m2") = "34 mm2"    Format(0.32, "T") = "0.32 T"
//
// Inputs: x in the coherent SI unit named by unit; unit as in "H", "A/m", "J/m3", "1/H", "" for none. The unit
// "percent" takes a ratio and prints it times 100, "turn" counts, "degC", "K" and "deg" are never prefixed.
// Trailing zeros are not printed. ASCII only: u stands for micro.
func Format(x float64, unit string) string { return FormatDigits(x, unit, 4) }

// FormatDigits prints a quantity as [Format] does, with the given number of significant digits (1 to 15).
func FormatDigits(x float64, unit string, digits int) string {
	digits = min(max(digits, 1), 15)
	x = roundTo(x, digits)
	factor, prefixed := Scale(x, unit)
	n := number(x*factor, digits)
	switch {
	case prefixed == "":
		return n
	case prefixed == "turn" && x != 1:
		return n + " turns"
	}
	return n + " " + prefixed
}

// Scale gives the factor and the prefixed unit with which a quantity of the size of x is best written, for axes
// and table columns: x*factor is the number to print.
//
//	Scale(630e-6, "H") = 1e6, "uH"
//
// The choice follows |x|: numbers from 1 to 1000 where the unit takes prefixes, T from 0.1 upwards, mm2 and cm2
// for sections, kW/m3 for loss densities. A unit that takes none comes back with factor 1.
func Scale(x float64, unit string) (factor float64, prefixed string) {
	x = math.Abs(x)
	if steps, ok := ladders[unit]; ok {
		return climb(x, unit, steps)
	}
	if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) || !takesPrefix(unit) {
		return 1, unit
	}
	if unit == "T" && x >= 0.1 && x < 1 { // flux densities of cores are spoken of in tesla
		return 1, unit
	}
	k := int(math.Floor(math.Log10(x*(1+1e-12)) / 3))
	k = min(max(k, -len(small)), len(large))
	switch {
	case k < 0:
		return decimal(-3 * k), string(small[-k-1]) + unit
	case k > 0:
		return 1 / decimal(3*k), string(large[k-1]) + unit
	}
	return 1, unit
}

const (
	small = "munpf" // 1e-3, 1e-6, ...
	large = "kMGT"  // 1e3, 1e6, ...
)

// step is one rung of a unit's own ladder: from the size upwards the quantity is written times factor in name.
type step struct {
	from, factor float64
	name         string
}

// ladders holds the units that do not follow the plain prefixes, smallest rung first.
var ladders = map[string][]step{
	"m2":      {{0, 1e6, "mm2"}, {1e-2, 1e4, "cm2"}, {1, 1, "m2"}},
	"m3":      {{0, 1e9, "mm3"}, {1e-6, 1e6, "cm3"}, {1, 1, "m3"}},
	"m4":      {{0, 1e12, "mm4"}, {1e-10, 1e8, "cm4"}, {1, 1, "m4"}},
	"kg":      {{0, 1e6, "mg"}, {1e-3, 1e3, "g"}, {1, 1, "kg"}},
	"A/m2":    {{0, 1, "A/m2"}, {1e3, 1e-6, "A/mm2"}},
	"percent": {{0, 100, "%"}},
	"%":       {{0, 100, "%"}},
	"A/Wb":    {{0, 1, "1/H"}},
}

func climb(x float64, unit string, steps []step) (float64, string) {
	if x == 0 && steps[len(steps)-1].factor == 1 {
		return 1, unit
	}
	s := steps[0]
	for _, next := range steps[1:] {
		if x >= next.from*(1-1e-12) {
			s = next
		}
	}
	return s.factor, s.name
}

// prefixable holds the symbols that take a prefix, alone or at the head of a compound such as A/m or ohm m.
var prefixable = map[string]bool{
	"m": true, "s": true, "A": true, "V": true, "T": true, "H": true, "F": true, "W": true, "J": true, "N": true,
	"Hz": true, "ohm": true, "Wb": true, "VA": true, "Vs": true, "Pa": true, "S": true, "C": true, "rad": true, "var": true,
}

// takesPrefix tells whether the first symbol of unit takes a prefix. A power (m2) or a power of a compound (A2s)
// does not: the prefix would be raised with it.
func takesPrefix(unit string) bool {
	head := unit
	if i := strings.IndexAny(unit, "/ "); i >= 0 {
		head = unit[:i]
	}
	return prefixable[head]
}

// number prints x, already rounded, without an exponent where it is short enough, else with an exponent of three.
func number(x float64, digits int) string {
	switch {
	case math.IsNaN(x):
		return "NaN"
	case math.IsInf(x, 1):
		return "inf"
	case math.IsInf(x, -1):
		return "-inf"
	case x == 0:
		return "0"
	}
	a := math.Abs(x)
	if a >= 1e-4 && a < 1e6 {
		return trim(strconv.FormatFloat(x, 'f', max(digits-1-exponent(x, digits), 0), 64))
	}
	e := 3 * int(math.Floor(float64(exponent(x, digits))/3))
	mantissa := x / math.Pow(10, float64(e))
	return trim(strconv.FormatFloat(mantissa, 'f', max(digits-1-exponent(mantissa, digits), 0), 64)) + "e" + strconv.Itoa(e)
}

// roundTo rounds x to the given number of significant digits; whole numbers below a million keep all of theirs.
func roundTo(x float64, digits int) float64 {
	if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) || x == math.Trunc(x) && math.Abs(x) < 1e6 {
		return x
	}
	r, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	return r
}

// exponent is the decimal exponent of x after rounding to the given digits.
func exponent(x float64, digits int) int {
	s := strconv.FormatFloat(x, 'e', digits-1, 64)
	e, _ := strconv.Atoi(s[strings.IndexByte(s, 'e')+1:])
	return e
}

func trim(s string) string {
	if strings.IndexByte(s, '.') < 0 {
		return s
	}
	return strings.TrimSuffix(strings.TrimRight(s, "0"), ".")
}

func decimal(n int) float64 {
	p := 1.0
	for ; n > 0; n-- {
		p *= 10
	}
	return p
}
