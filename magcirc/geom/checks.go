package geom

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// The sizes between which a side of a section is taken for what it says; outside, a slip of a unit is likelier.
const (
	least = 1e-6 // m
	most  = 10   // m
)

// WithStacking gives the section with share s of metal in its outline, 0 < s <= 1: lamination, ribbon or powder.
func (s Section) WithStacking(share float64) Section {
	s.Stacking = share
	return s
}

// Grown gives the section with its outline moved outwards so that each side (diameter) is longer by by, in m: the
// rule "add the gap to each side". A ring grows at its outer and closes at its inner circle. It reports false where
// the outline is not known.
//
//	rectangle (w+by)(d+by)    round pi/4 (do+by)^2    ring pi/4 ((do+by)^2 - max(di-by, 0)^2)
//
// Source: rectangle: Hambley, Electrical Engineering, 5th ed. 2011, ch. 15; round: Roters, Electromagnetic
// Devices, 1941, ch. 5 (from memory).
func (s Section) Grown(by float64) (Section, bool) {
	switch s.Shape {
	case Rectangle:
		s.W += by
		s.D += by
	case Round:
		s.Do += by
	case Ring:
		s.Do += by
		s.Di = max(s.Di-by, 0)
	default:
		return s, false
	}
	return s, true
}

// Scaled gives the section with k times its area, its outline keeping its shape, k > 0.
func (s Section) Scaled(k float64) Section {
	side := math.Sqrt(k)
	s.W, s.D, s.Do, s.Di, s.A = s.W*side, s.D*side, s.Do*side, s.Di*side, s.A*k
	return s
}

// Validate refuses a section that cannot be one, in the name of the part elem ("leg T1.centre").
//
// Errors: [magcirc.BadValue] for sides, areas and stacking that are not positive numbers, for stacking above 1 and
// a ring whose hole is as wide as itself; [magcirc.Implausible] for sides outside 1 um to 10 m.
func (s Section) Validate(elem string) error {
	for _, q := range s.sizes() {
		if err := checkSize(elem, q); err != nil {
			return err
		}
	}
	if s.Shape == Ring && !(s.Di < s.Do) {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "inner diameter", Unit: "m", Got: s.Di, Limit: s.Do,
			Msg:  fmt.Sprintf("inner diameter %s is not less than the outer, %s", phys.Format(s.Di, "m"), phys.Format(s.Do, "m")),
			Hint: "the outer diameter comes first: Annulus(do, di)"}
	}
	if s.Stacking < 0 || s.Stacking > 1 || s.Stacking != s.Stacking {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "stacking", Got: s.Stacking, Limit: 1,
			Msg:  fmt.Sprintf("stacking %s is not between 0 and 1", phys.Format(s.Stacking, "")),
			Hint: "it is the share of metal in the section: 0.95 for 95 percent"}
	}
	return nil
}

// Describe gives the section in words: "rectangle 12.2 mm x 15 mm, stacking 0.95".
func (s Section) Describe() string {
	var text string
	switch s.Shape {
	case Rectangle:
		text = "rectangle " + phys.Format(s.W, "m") + " x " + phys.Format(s.D, "m")
	case Round:
		text = "disc of diameter " + phys.Format(s.Do, "m")
	case Ring:
		text = "ring of diameters " + phys.Format(s.Do, "m") + " and " + phys.Format(s.Di, "m")
	default:
		text = "area " + phys.Format(s.A, "m2")
	}
	if s.Stacking > 0 && s.Stacking != 1 {
		text += ", stacking " + phys.Format(s.Stacking, "")
	}
	return text
}

// size is one dimension with the bounds within which it is plausible.
type size struct {
	name, unit string
	x, lo, hi  float64
}

func (s Section) sizes() []size {
	switch s.Shape {
	case Rectangle:
		return []size{{"width", "m", s.W, least, most}, {"depth", "m", s.D, least, most}}
	case Round:
		return []size{{"diameter", "m", s.Do, least, most}}
	case Ring:
		sizes := []size{{"outer diameter", "m", s.Do, least, most}}
		if s.Di != 0 { // a ring may be closed
			sizes = append(sizes, size{"inner diameter", "m", s.Di, least, most})
		}
		return sizes
	}
	return []size{{"area", "m2", s.A, least * least, most * most}}
}

func checkSize(elem string, q size) error {
	e := &magcirc.Error{Elem: elem, Quantity: q.name, Unit: q.unit, Got: q.x}
	switch {
	case !(q.x > 0) || q.x > 1e300:
		e.Code = magcirc.BadValue
		e.Msg = fmt.Sprintf("%s %s is not a positive size", q.name, phys.Format(q.x, q.unit))
	case q.x < q.lo:
		e.Code, e.Limit = magcirc.Implausible, q.lo
		e.Msg = fmt.Sprintf("%s %s is smaller than any section", q.name, phys.Format(q.x, q.unit))
		e.Hint = "Was a unit multiplied twice?"
	case q.x > q.hi:
		e.Code, e.Limit = magcirc.Implausible, q.hi
		e.Msg = fmt.Sprintf("%s %s is larger than any section", q.name, phys.Format(q.x, q.unit))
		small := map[string]string{"m": "mm", "m2": "mm2"}[q.unit]
		e.Hint = fmt.Sprintf("Was %s*%s meant?", phys.FormatDigits(q.x, "", 6), small)
	default:
		return nil
	}
	return e
}
