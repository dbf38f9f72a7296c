package material

import (
	"math"

	"ampturn/magcirc/phys"
)

type arctan struct{ mui, bs, c float64 }

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
	return arctan{mui, bs, 2 * bs / (math.Pi * phys.Mu0 * (mui - 1))}, nil
}

func (l arctan) At(h float64) (b, slope float64) {
	x := h / l.c
	j := 2 / math.Pi * l.bs
	return phys.Mu0*h + j*math.Atan(x), phys.Mu0 + j/(l.c*(1+x*x))
}

// Inverse starts from the larger of two lower bounds, atan x <= x and (2/pi) atan x <= x/(x + 2/pi), and goes on by
// Newton steps, which approach the root of this concave law from the left.
func (l arctan) Inverse(b float64) (h, slope float64) {
	const k = 2 / math.Pi
	kappa, y := phys.Mu0*l.c/l.bs, math.Abs(b)/l.bs
	if y == 0 {
		return b, 1 / (l.mui * phys.Mu0)
	}
	p := kappa*k + 1 - y
	start := math.Max(y/(kappa+k), quadratic(kappa, p, k*y))
	x := newton(func(x float64) (float64, float64) {
		return kappa*x + k*math.Atan(x), kappa + k/(1+x*x)
	}, start, y)
	return math.Copysign(l.c*x, b), 1 / (phys.Mu0 + k*l.bs/(l.c*(1+x*x)))
}

// Coenergy is mu0 H^2/2 + (2 bs/pi) c (x atan x - ln(1+x^2)/2) with x = H/c.
func (l arctan) Coenergy(h float64) float64 {
	x := h / l.c
	return phys.Mu0*h*h/2 + 2/math.Pi*l.bs*l.c*(x*math.Atan(x)-math.Log1p(x*x)/2)
}

func (l arctan) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (l arctan) Describe() string {
	return "arctangent, mu_i " + phys.Format(l.mui, "") + ", Bs " + phys.Format(l.bs, "T")
}

// quadratic gives the positive root of k x^2 + p x - q = 0 for k, q > 0 without cancellation.
func quadratic(k, p, q float64) float64 {
	root := math.Sqrt(p*p + 4*k*q)
	if p > 0 {
		return 2 * q / (p + root)
	}
	return (root - p) / (2 * k)
}
