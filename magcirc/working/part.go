package working

import (
	"math"

	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// Part is what is known of a part of a network beside its element: its name in messages, and for a gap the method.
type Part struct {
	Elem string
	Gap  *gap.Result
	Area float64 // of a gap's faces, m2
}

var (
	symMu0    = Formula{"mu0", `\mu_0`}
	symLength = Formula{"l", "l"}
	symArea   = Formula{"A", "A"}
	symF      = Formula{"F", "F"}
	numMu0    = Formula{"4 pi 1e-7 H/m", `4\pi\cdot 10^{-7}\,\mathrm{H/m}`}
)

// reluctance writes the reluctance of one element at a solution, differential or secant, and gives its value.
func reluctance(e *reluct.Element, s reluct.ElementState, p Part, secant bool) Line {
	l := Line{What: "reluctance of " + p.Elem, Unit: "1/H"}
	length, area := number(e.Length, "m"), number(e.Area, "m2")
	switch e.Kind {
	case reluct.Leg:
		return legLine(l, e, s, length, area, secant)
	case reluct.Magnet:
		mur := number(e.Mur, "")
		l.Symbol = name("R", "R", e.Name)
		l.Rule = fraction(symLength, product(symMu0, Formula{"mur", `\mu_r`}, symArea))
		l.Numbers = fraction(length, product(numMu0, mur, area))
		l.Value = e.Length / (phys.Mu0 * e.Mur * e.Area)
		return l
	case reluct.Gap:
		if p.Gap != nil {
			f, a := number(p.Gap.Factor, ""), number(p.Area, "m2")
			l.Rule = fraction(symLength, product(symF, symMu0, symArea))
			l.Numbers = fraction(length, product(f, numMu0, a))
			l.What += ", fringing factor F by " + p.Gap.Method.String()
			l.Source = p.Gap.Source
		}
	}
	l.Symbol = name("R", "R", e.Name)
	if l.Rule.Plain == "" {
		l.Rule = fraction(Formula{"1", "1"}, Formula{"P", `\Lambda`})
		l.Numbers = fraction(Formula{"1", "1"}, number(e.Permeance, "H"))
	}
	l.Value = 1 / e.Permeance
	return l
}

// legLine writes the reluctance of a leg: with the slope of its law at its state, or with B/H there.
func legLine(l Line, e *reluct.Element, s reluct.ElementState, length, area Formula, secant bool) Line {
	_, slope := e.Law.At(s.H)
	mu := Formula{"dB/dH", `\frac{dB}{dH}`}
	how := ", with the slope of its law at "
	if secant && s.H != 0 {
		slope, mu, how = s.B/s.H, Formula{"B/H", `\frac{B}{H}`}, ", with B/H at "
	}
	l.What += how + phys.Format(s.B, "T")
	l.Symbol = name("R", "R", e.Name)
	below, numbers := product(mu, symArea), product(number(slope, "H/m"), area)
	value := slope * e.Area
	if e.Air > 0 {
		below = sum(below, product(symMu0, Formula{"A_air", `A_{\text{air}}`}))
		numbers = sum(numbers, product(numMu0, number(e.Air, "m2")))
		value += phys.Mu0 * e.Air
	}
	l.Rule, l.Numbers, l.Value = fraction(symLength, below), fraction(length, numbers), e.Length/value
	return l
}

// total writes the sum of reluctances in series, where there is more than one.
func total(what, index string, lines []Line) (Line, bool) {
	if len(lines) == 1 {
		return lines[0], false
	}
	var symbols, numbers []Formula
	l := Line{What: what, Symbol: name("R", "R", index), Unit: "1/H"}
	for _, one := range lines {
		symbols, numbers = append(symbols, one.Symbol), append(numbers, number(one.Value, "1/H"))
		l.Value += one.Value
	}
	l.Rule, l.Numbers = sum(symbols...), sum(numbers...)
	return l, true
}

// parallel writes reluctances in parallel.
func parallel(what, index string, lines []Line) Line {
	one := Formula{"1", "1"}
	var symbols, numbers []Formula
	l := Line{What: what, Symbol: name("R", "R", index), Unit: "1/H"}
	inverse := 0.0
	for _, p := range lines {
		symbols, numbers = append(symbols, fraction(one, p.Symbol)), append(numbers, fraction(one, number(p.Value, "1/H")))
		inverse += 1 / p.Value
	}
	l.Rule, l.Numbers, l.Value = fraction(one, sum(symbols...)), fraction(one, sum(numbers...)), 1/inverse
	if len(lines) == 1 || math.IsInf(l.Value, 0) {
		l.Rule, l.Numbers = lines[0].Symbol, Formula{}
	}
	return l
}
