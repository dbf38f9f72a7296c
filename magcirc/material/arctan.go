package material

import (
	"math"

	"ampturn/magcirc/phys"
)

type arctan struct {
	mui, bs, c float64
	inverse    rising // of B/Bs over x = H/c
}

// NewArctan gives the arctangent law with initial relative permeability mui and saturation polarisation bs in T.
//
//	B = mu0 H + (2 bs/pi) atan(H/c),   c = 2 bs/(pi mu0 (mui - 1)),   odd
//
// Valid: as [NewFroehlich]; saturates a little sooner. Errors: [magcirc.BadValue], [magcirc.Implausible].
// Source: textbook form, from memory.
func NewArctan(mui, bs float64) (Law, error) {
	const elem = "arctangent law"
	if err := checkMu(elem, "initial permeability", mui); err != nil {
		return nil, err
	}
	if err := checkBs(elem, bs); err != nil {
		return nil, err
	}
	if mui == 1 {
		return NewLinear(1)
	}
	c := 2 * bs / (math.Pi * phys.Mu0 * (mui - 1))
	air := phys.Mu0 * c / bs
	return &arctan{mui, bs, c, newRising(func(x float64) (float64, float64) {
		return air*x + 2/math.Pi*math.Atan(x), air + 2/math.Pi/(1+x*x)
	})}, nil
}

func (l *arctan) At(h float64) (b, slope float64) {
	x := h / l.c
	j := 2 / math.Pi * l.bs
	return phys.Mu0*h + j*math.Atan(x), phys.Mu0 + j/(l.c*(1+x*x))
}

func (l *arctan) Inverse(b float64) (h, slope float64) {
	x := l.inverse.solve(math.Abs(b) / l.bs)
	return math.Copysign(l.c*x, b), 1 / (phys.Mu0 + 2/math.Pi*l.bs/(l.c*(1+x*x)))
}

// Coenergy is mu0 H^2/2 + (2 bs/pi) c (x atan x - ln(1+x^2)/2) with x = H/c.
func (l *arctan) Coenergy(h float64) float64 {
	x := h / l.c
	return phys.Mu0*h*h/2 + 2/math.Pi*l.bs*l.c*(x*math.Atan(x)-math.Log1p(x*x)/2)
}

func (l *arctan) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (l *arctan) Describe() string {
	return "arctangent, mu_i " + phys.Format(l.mui, "") + ", Bs " + phys.Format(l.bs, "T")
}
