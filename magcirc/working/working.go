// Package working writes the lines by which a result can be checked by hand: formula, the numbers put in with their units,
// result. The lines are made from the solved network itself, not from what somebody remembers of it.
//
//	[Inductance]   reluctances of the parts, how they combine, N^2/R
//	[FluxDensity]  flux over area, and the balance of mmf behind the flux
//	[Linkage]      turns times flux
//	[Coupling]     M over the root of the self inductances
//	[Leakage]      Lp - M^2/Ls
//
//	for _, l := range working.Inductance(net, solution, winding, nil).Lines {
//		fmt.Println(l.Plain())
//	}
//
// Units: SI; numbers are printed with prefixes. Each formula stands as plain text and as TeX.
//
// Left out: networks in which flux divides in more than one place are not reduced by hand; their last line names the
// matrix formula that was used.
package working

import (
	"math"
	"strings"

	"ampturn/magcirc/phys"
)

// Formula is a piece of a calculation as plain text and as TeX.
type Formula struct{ Plain, TeX string }

// Line is one line: symbol = formula = numbers = value.
type Line struct {
	What    string // in words: "reluctance of gap L1.core.gap"
	Symbol  Formula
	Rule    Formula // the formula with symbols
	Numbers Formula // the formula with the numbers put in
	Value   float64
	Unit    string
	Source  string // of the rule, where it is not elementary
}

// Working is the lines of a result, and what they come to.
type Working struct {
	Lines  []Line
	Value  float64 // by the lines
	Solved float64 // as the solver gave it
	Hand   bool    // the lines lead to the value by themselves
}

// Plain is the line as text: "R = l/(mu A) = 46 mm/(...) = 340.1e3 1/H".
func (l Line) Plain() string {
	return join(l.Symbol.Plain, l.Rule.Plain, l.Numbers.Plain, number(l.Value, l.Unit).Plain, " = ")
}

// longLine is the length of the text from which a formula is set on two lines.
const longLine = 72

// TeX is the line as a formula; a long one breaks before its numbers.
func (l Line) TeX() string {
	if l.Numbers.TeX != "" && len(l.Plain()) > longLine {
		return `\begin{aligned}` + join(l.Symbol.TeX, l.Rule.TeX, "", "", " &= ") + ` \\ &= ` + l.Numbers.TeX + " = " + number(l.Value, l.Unit).TeX + `\end{aligned}`
	}
	return join(l.Symbol.TeX, l.Rule.TeX, l.Numbers.TeX, number(l.Value, l.Unit).TeX, " = ")
}

func join(symbol, rule, numbers, value, equals string) string {
	parts := []string{symbol}
	for _, p := range []string{rule, numbers} {
		if p != "" && p != parts[len(parts)-1] {
			parts = append(parts, p)
		}
	}
	if value != "" {
		parts = append(parts, value)
	}
	return strings.Join(parts, equals)
}

// number is a quantity as text and as TeX.
func number(x float64, unit string) Formula {
	text := phys.Format(x, unit)
	if unit == "1/H" || unit == "H/m" || unit == "A/m" { // no prefixes: powers of ten in threes
		text = power(x, unit)
	}
	digits, rest, _ := strings.Cut(text, " ")
	tex := digits
	if mantissa, exponent, ok := strings.Cut(digits, "e"); ok {
		tex = mantissa + `\cdot 10^{` + strings.TrimPrefix(strings.TrimLeft(exponent, "+"), "0") + `}`
	}
	if rest != "" {
		tex += `\,` + texUnit(rest)
	}
	return Formula{text, tex}
}

// power prints a number with a power of ten that is a multiple of three.
func power(x float64, unit string) string {
	if x == 0 || math.IsInf(x, 0) {
		return phys.Format(x, unit)
	}
	e := 3 * int(math.Floor(math.Log10(math.Abs(x))/3))
	if e == 0 {
		return phys.FormatDigits(x, unit, 4)
	}
	return phys.FormatDigits(x/math.Pow10(e), "", 4) + "e" + phys.FormatDigits(float64(e), "", 3) + " " + unit
}

// texUnit sets a unit upright: "mm2" as mm with a raised 2, "uH" with a Greek mu.
func texUnit(unit string) string {
	switch unit {
	case "1/H":
		return `\mathrm{H}^{-1}`
	case "%":
		return `\text{%}`
	}
	tex := ""
	if strings.HasPrefix(unit, "u") {
		tex, unit = `\mu`, unit[1:]
	}
	if n := len(unit); n > 1 && unit[n-1] >= '2' && unit[n-1] <= '4' {
		return tex + `\mathrm{` + unit[:n-1] + `}^{` + unit[n-1:] + `}`
	}
	return tex + `\mathrm{` + unit + `}`
}

// name is a symbol with an index in words: R_gap.
func name(symbol, tex, index string) Formula {
	if index == "" {
		return Formula{symbol, tex}
	}
	return Formula{symbol + "_" + index, tex + `_{\text{` + index + `}}`}
}

func fraction(above, below Formula) Formula {
	return Formula{above.Plain + "/" + bracket(below.Plain), `\frac{` + above.TeX + `}{` + below.TeX + `}`}
}

// bracket puts round brackets around what a division would take apart.
func bracket(s string) string {
	if strings.ContainsAny(s, "+* ") || strings.Contains(s, "/") {
		return "(" + s + ")"
	}
	return s
}

func product(factors ...Formula) Formula {
	var plain, tex []string
	for _, f := range factors {
		plain, tex = append(plain, f.Plain), append(tex, f.TeX)
	}
	return Formula{strings.Join(plain, " * "), strings.Join(tex, `\cdot `)}
}

func sum(terms ...Formula) Formula {
	var plain, tex []string
	for _, f := range terms {
		if strings.HasPrefix(f.Plain, "-") {
			f = Formula{"(" + f.Plain + ")", "(" + f.TeX + ")"}
		}
		plain, tex = append(plain, f.Plain), append(tex, f.TeX)
	}
	return Formula{strings.Join(plain, " + "), strings.Join(tex, " + ")}
}

func square(f Formula) Formula { return Formula{bracket(f.Plain) + "^2", `{` + f.TeX + `}^2`} }
