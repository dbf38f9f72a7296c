package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// name is how messages call the curve.
func (p Points) name() string {
	if p.Source == "" {
		return "curve"
	}
	return "curve " + p.Source
}

// place names point i: "curve bh.csv, row 8", or "curve, point 8".
func (p Points) place(i int) string {
	if p.FirstRow > 0 {
		return fmt.Sprintf("%s, row %d", p.name(), p.FirstRow+i)
	}
	return fmt.Sprintf("%s, point %d", p.name(), i+1)
}

// fromOrigin checks the points and gives copies that begin with (0, 0).
func (p Points) fromOrigin() (h, b []float64, err error) {
	if len(p.H) != len(p.B) {
		return nil, nil, &magcirc.Error{Code: magcirc.BadValue, Elem: p.name(), Quantity: "points", Got: float64(len(p.B)), Limit: float64(len(p.H)),
			Msg: fmt.Sprintf("%d values of H and %d of B", len(p.H), len(p.B)), Hint: "each point wants both"}
	}
	for i := range p.H {
		if err := p.check(i); err != nil {
			return nil, nil, err
		}
	}
	h, b = append([]float64{0}, p.H...), append([]float64{0}, p.B...)
	if len(p.H) > 0 && p.H[0] == 0 {
		h, b = h[1:], b[1:]
	}
	if len(h) < 3 {
		return nil, nil, &magcirc.Error{Code: magcirc.BadValue, Elem: p.name(), Quantity: "points", Got: float64(len(h) - 1), Limit: 2,
			Msg: fmt.Sprintf("%d points beside the origin make no curve", max(len(h)-1, 0)), Hint: "give two or more, or a linear law"}
	}
	return h, b, nil
}

// check refuses what cannot be point i of a magnetisation curve.
func (p Points) check(i int) error {
	h, b := p.H[i], p.B[i]
	e := &magcirc.Error{Code: magcirc.BadValue, Elem: p.place(i), Quantity: "H", Unit: "A/m", Got: h}
	switch {
	case math.IsNaN(h+b) || math.IsInf(h+b, 0):
		e.Msg = fmt.Sprintf("H %s, B %s is no point", phys.Format(h, "A/m"), phys.Format(b, "T"))
	case h < 0:
		e.Msg = fmt.Sprintf("H %s is negative", phys.Format(h, "A/m"))
		e.Hint = "give one branch from H = 0 upwards; the law is taken as odd"
	case h == 0 && b != 0:
		e.Quantity, e.Unit, e.Got = "B", "T", b
		e.Msg = fmt.Sprintf("B is %s at H = 0", phys.Format(b, "T"))
		e.Hint = "a law without memory passes zero: give the mean of the two branches"
	case h > mostH:
		e.Code, e.Limit = magcirc.Implausible, mostH
		e.Msg = fmt.Sprintf("H %s is above any field strength (%s)", phys.Format(h, "A/m"), phys.Format(mostH, "A/m"))
	case b > mostMu*phys.Mu0*h:
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "relative permeability", "", b/(phys.Mu0*h), mostMu
		e.Msg = fmt.Sprintf("B %s at %s means a relative permeability of %s, above that of any material (%s)",
			phys.Format(b, "T"), phys.Format(h, "A/m"), phys.Format(e.Got, ""), phys.Format(mostMu, ""))
		e.Hint = "Is H in kA/m or Oe?"
	case i > 0 && h >= p.H[i-1] && h-p.H[i-1] <= 1e-7*h:
		e.Msg = fmt.Sprintf("H %s stands twice, with B %s and %s", phys.Format(h, "A/m"), phys.Format(p.B[i-1], "T"), phys.Format(b, "T"))
	case i > 0 && h < p.H[i-1]:
		e.Limit = p.H[i-1]
		e.Msg = fmt.Sprintf("H goes back from %s to %s", phys.Format(p.H[i-1], "A/m"), phys.Format(h, "A/m"))
		e.Hint = "give the points from small to large H"
	case b < p.before(i):
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.NotMonotone, "B", "T", b, p.before(i)
		e.Msg = fmt.Sprintf("B falls from %s to %s while H rises; a magnetisation curve cannot fall",
			phys.Format(p.before(i), "T"), phys.Format(b, "T"))
	case b-phys.Mu0*h > MostPolarisation:
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "B", "T", b, MostPolarisation
		e.Msg = fmt.Sprintf("B %s is above that of any material (%s)", phys.Format(b, "T"), phys.Format(MostPolarisation, "T"))
		e.Hint = "Are these mT, or are H and B exchanged?"
	default:
		return nil
	}
	return e
}

// before is B at the point before i, zero at the origin.
func (p Points) before(i int) float64 {
	if i == 0 {
		return 0
	}
	return p.B[i-1]
}

// tooSlow names the point that was lifted most; b holds the lifted points.
func (p Points) tooSlow(h, b []float64) error {
	skip := len(h) - len(p.H) // 1 if the origin was added
	worst, most := 0, -1.0
	for i := range p.H {
		if d := b[i+skip] - p.B[i]; d > most {
			worst, most = i, d
		}
	}
	return &magcirc.Error{Code: magcirc.NotMonotone, Elem: p.place(worst), Quantity: "B", Unit: "T", Got: p.B[worst], Limit: b[worst+skip],
		Msg: fmt.Sprintf("B %s at %s rises more slowly than in air, which gives at least %s here",
			phys.Format(p.B[worst], "T"), phys.Format(p.H[worst], "A/m"), phys.Format(b[worst+skip], "T")),
		Hint: "is this J = B - mu0 H? Then add mu0 H"}
}
