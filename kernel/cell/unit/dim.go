package unit

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Dim is a dimension: half powers of the base units metre, kilogram, second, ampere and kelvin. Point marks a
// temperature on the Celsius scale, whose differences are in kelvin. The zero Dim is that of a plain number.
type Dim struct {
	Half  [5]int8 // twice the powers of m, kg, s, A, K
	Point bool
}

// baseNames are the base units in the order of Dim.Half.
var baseNames = [5]string{"m", "kg", "s", "A", "K"}

// baseDims are the dimensions of the base units.
var baseDims = map[string]Dim{
	"m": {Half: [5]int8{2}}, "kg": {Half: [5]int8{0, 2}}, "s": {Half: [5]int8{0, 0, 2}},
	"A": {Half: [5]int8{0, 0, 0, 2}}, "K": {Half: [5]int8{0, 0, 0, 0, 2}},
	"degC": {Half: [5]int8{0, 0, 0, 0, 2}, Point: true},
}

// Number is the dimension of a plain number.
var Number = Dim{}

// mul gives d·e^sign; ok is false where a power leaves the range of Dim. A point becomes a difference.
func (d Dim) mul(e Dim, sign int) (Dim, bool) {
	var r Dim
	for i := range d.Half {
		p := int(d.Half[i]) + sign*int(e.Half[i])
		if p < -100 || p > 100 {
			return Dim{}, false
		}
		r.Half[i] = int8(p)
	}
	return r, true
}

// pow gives d^p; ok is false where the power is not a half power of every base unit.
func (d Dim) pow(p float64) (Dim, bool) {
	var r Dim
	for i, h := range d.Half {
		x := float64(h) * p
		if x != math.Trunc(x) || math.Abs(x) > 100 {
			return Dim{}, false
		}
		r.Half[i] = int8(x)
	}
	return r, true
}

// difference gives the dimension of a difference of two values of dimension d.
func (d Dim) difference() Dim {
	d.Point = false
	return d
}

// ParseDim reads a unit text: symbols with powers, separated by blanks or in one pair of brackets after a slash:
// "A/m", "kg m2 s-2", "W/(m2 K)", "1/H", "m0.5". The empty text is a plain number.
func (r *table) ParseDim(text string) (Dim, error) {
	above, below, divided := strings.Cut(text, "/")
	d, err := r.parseProduct(above)
	if err != nil || !divided {
		return d, err
	}
	below = strings.TrimSuffix(strings.TrimPrefix(below, "("), ")")
	e, err := r.parseProduct(below)
	if err != nil {
		return Dim{}, err
	}
	d, ok := d.mul(e, -1)
	if !ok {
		return Dim{}, fmt.Errorf("unit %q: power out of range", text)
	}
	return d, nil
}

// parseProduct reads symbols with powers separated by blanks.
func (r *table) parseProduct(text string) (Dim, error) {
	var d Dim
	terms := strings.Fields(text)
	for _, term := range terms {
		if term == "1" {
			continue
		}
		e, err := r.parsePower(term)
		if err != nil {
			return Dim{}, err
		}
		if len(terms) == 1 && e.Point {
			return e, nil
		}
		var ok bool
		if d, ok = d.mul(e, 1); !ok {
			return Dim{}, fmt.Errorf("unit %q: power out of range", text)
		}
	}
	return d, nil
}

// parsePower reads one symbol with its power: "m2", "s-1", "kg0.5".
func (r *table) parsePower(term string) (Dim, error) {
	at := strings.IndexAny(term, "-0123456789")
	if at < 0 {
		at = len(term)
	}
	d, ok := r.symbols[term[:at]]
	if !ok {
		return Dim{}, fmt.Errorf("unit %q: no such symbol", term)
	}
	if at == len(term) {
		return d, nil
	}
	p, err := strconv.ParseFloat(term[at:], 64)
	if err != nil {
		return Dim{}, fmt.Errorf("unit %q: bad power", term)
	}
	if d, ok = d.pow(p); !ok {
		return Dim{}, fmt.Errorf("unit %q: power out of range", term)
	}
	return d, nil
}

// text gives the unit text of a dimension: its symbol or listed text, else the shortest product or quotient of two
// symbols, else base units.
func (r *table) text(d Dim) string {
	if d == Number {
		return ""
	}
	if s, ok := r.texts[d]; ok {
		return s
	}
	s := r.composed(d)
	if s == "" {
		s = baseText(d)
	}
	return s
}

// composed looks for d as "U m2", "U/m", "U2" and the like: a symbol times or divided by a power of another.
func (r *table) composed(d Dim) string {
	best := ""
	take := func(s string) { // the shortest, products before quotients
		if best == "" || len(s)+strings.Count(s, "/") < len(best)+strings.Count(best, "/") {
			best = s
		}
	}
	for _, p := range []float64{-1, 2, -2, 0.5, -0.5} {
		for _, s := range r.Symbols {
			if e, ok := r.symbols[s.Name].pow(p); ok && e == d && s.Name != "degC" {
				take(powerText(s.Name, p))
			}
		}
	}
	if best != "" {
		return best
	}
	for _, base := range []bool{true, false} {
		for _, u := range r.Symbols {
			for _, v := range r.Symbols {
				if isBase(v) != base || r.symbols[u.Name].Point || r.symbols[v.Name].Point {
					continue
				}
				rest, ok := d.mul(r.symbols[u.Name], -1)
				if !ok || r.symbols[u.Name] == Number || r.symbols[v.Name] == Number {
					continue
				}
				for _, p := range []float64{1, -1, 2, -2, 3, -3, 0.5, -0.5} {
					if e, ok := r.symbols[v.Name].pow(p); ok && e == rest {
						take(productText(u.Name, v.Name, p))
					}
				}
			}
		}
		if best != "" {
			return best
		}
	}
	return best
}

// isBase tells whether a symbol is a base unit.
func isBase(s Symbol) bool { return s.Name == s.Base }

// powerText writes a symbol with its power: "m2", "1/H".
func powerText(name string, p float64) string {
	if p < 0 {
		return "1/" + powerText(name, -p)
	}
	if p == 1 {
		return name
	}
	return name + strconv.FormatFloat(p, 'g', -1, 64)
}

// productText writes u times a power of v: "V s", "V/m2".
func productText(u, v string, p float64) string {
	if p < 0 {
		return u + "/" + powerText(v, -p)
	}
	return u + " " + powerText(v, p)
}

// baseText writes a dimension in base units: "kg m2 s-2".
func baseText(d Dim) string {
	var terms []string
	for i, h := range d.Half {
		switch {
		case h == 0:
		case h == 2:
			terms = append(terms, baseNames[i])
		default:
			terms = append(terms, baseNames[i]+strconv.FormatFloat(float64(h)/2, 'g', -1, 64))
		}
	}
	return strings.Join(terms, " ")
}
