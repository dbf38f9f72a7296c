package hyst

import (
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
)

var _ material.Law = (*Curve)(nil)

// Between gives the Jiles-Atherton law at w of the way from j to other, the laws of one core at two temperatures: ln Ms,
// ln a, ln k, c and alpha Ms/(3a) go in straight lines, so that the law between two that cannot fold cannot fold. Beyond
// them, w outside 0 to 1, it is an extrapolation; c and alpha then stop at the ends of what they can be.
//
// Errors: [magcirc.WrongUse] for laws of different form; those of [NewJilesAtherton].
// Source: definition. Measured Ms, k and a fall with temperature about as exp(-T/T0) well below the Curie point.
func (j *JilesAtherton) Between(other *JilesAtherton, w float64) (*JilesAtherton, error) {
	p, q := j.p, other.p
	if p.Form != q.Form {
		return nil, &magcirc.Error{Code: magcirc.WrongUse, Elem: p.elem(), Msg: "has " + p.Form.String() + " at one temperature and " + q.Form.String() + " at another",
			Hint: "parameters of the two forms are not interchangeable: fit both in one form"}
	}
	mix := func(a, b float64) float64 { return a + w*(b-a) }
	ratio := math.Max(0, mix(p.Ratio(), q.Ratio()))
	if p.Ratio() < 1 && q.Ratio() < 1 {
		ratio = math.Min(ratio, 0.999)
	}
	r := Parameters{Ms: math.Exp(mix(math.Log(p.Ms), math.Log(q.Ms))), A: math.Exp(mix(math.Log(p.A), math.Log(q.A))),
		K: math.Exp(mix(math.Log(p.K), math.Log(q.K))), C: math.Max(0, mix(p.C, q.C)), Form: p.Form, Name: p.Name}
	if r.Form == Form1992 {
		r.C = math.Min(r.C, 1)
	}
	r.Alpha = ratio * 3 * r.A / r.Ms
	return NewJilesAtherton(r)
}

// Between gives the play law at w of the way from p to other, the laws of one core at two temperatures. Laws with as many
// cells each go over cell by cell, in the order of friction. Otherwise, for w from 0 to 1, it is the cells of both with
// their shares: B is then interpolated at equal history of H.
//
// Errors: [magcirc.OutsideData] for w outside 0 to 1 where the cells do not correspond.
func (p *Play) Between(other *Play, w float64) (*Play, error) {
	var cells []PlayCell
	switch {
	case len(p.cell) == len(other.cell):
		mix := func(a, b float64) float64 {
			if a <= 0 || b <= 0 {
				return math.Max(0, a+w*(b-a))
			}
			return math.Exp(math.Log(a) + w*(math.Log(b)-math.Log(a)))
		}
		for i, c := range p.cell {
			d := other.cell[i]
			cells = append(cells, PlayCell{mix(c.Ms, d.Ms), mix(c.A, d.A), mix(c.Kappa, d.Kappa)})
		}
	case w >= 0 && w <= 1:
		for _, c := range p.cell {
			cells = append(cells, PlayCell{(1 - w) * c.Ms, c.A, c.Kappa})
		}
		for _, c := range other.cell {
			cells = append(cells, PlayCell{w * c.Ms, c.A, c.Kappa})
		}
		cells = present(cells)
	default:
		return nil, &magcirc.Error{Code: magcirc.OutsideData, Elem: p.elem(), Msg: "play laws of different numbers of cells cannot be extrapolated in temperature",
			Hint: "give both temperatures the same cells, or data nearer"}
	}
	return NewNamedPlay(p.name, cells...)
}

// present drops cells without share.
func present(cells []PlayCell) []PlayCell {
	kept := cells[:0]
	for _, c := range cells {
		if c.Ms > 0 {
			kept = append(kept, c)
		}
	}
	return kept
}

// Toward gives the law at w of the way to the law at another temperature, which must have a memory of the same kind.
//
// Errors: [magcirc.WrongUse]; those of Between.
func (c *Curve) Toward(other material.Law, w float64) (material.Law, error) {
	o, ok := other.(*Curve)
	if !ok {
		return nil, c.apart("has a memory at one temperature and none at another")
	}
	switch a := c.law.(type) {
	case *JilesAtherton:
		if b, ok := o.law.(*JilesAtherton); ok {
			l, err := a.Between(b, w)
			if err != nil {
				return nil, err
			}
			return Initial(l), nil
		}
	case *Play:
		if b, ok := o.law.(*Play); ok {
			l, err := a.Between(b, w)
			if err != nil {
				return nil, err
			}
			return Initial(l), nil
		}
	}
	return nil, c.apart("is of one kind at one temperature and of another at another")
}

func (c *Curve) apart(msg string) error {
	return &magcirc.Error{Code: magcirc.WrongUse, Elem: c.Describe(), Msg: msg, Hint: "give laws of one kind for all temperatures"}
}

// Stretch gives the law with J'(H) = J(k H) after every history: a lot whose permeability differs by the factor k.
func (c *Curve) Stretch(k float64) (material.Law, error) {
	switch l := c.law.(type) {
	case *JilesAtherton:
		p := l.p
		p.A, p.K, p.Alpha = p.A/k, p.K/k, p.Alpha/k
		next, err := NewJilesAtherton(p)
		if err != nil {
			return nil, err
		}
		return Initial(next), nil
	case *Play:
		cells := l.Cells()
		for i := range cells {
			cells[i].A /= k
			cells[i].Kappa /= k
		}
		next, err := NewNamedPlay(l.name, cells...)
		if err != nil {
			return nil, err
		}
		return Initial(next), nil
	}
	return nil, c.apart("cannot be stretched")
}
