package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

type langevin struct{ ms, a, alpha float64 }

// NewLangevin gives the Langevin law with saturation magnetisation ms in A/m, shape parameter a in A/m and
// mean-field parameter alpha >= 0.
//
//	M = ms L((H + alpha M)/a),   L(z) = coth z - 1/z,   B = mu0 (H + M)
//
// Its initial susceptibility is ms/(3a - alpha ms). Inside it is written in the effective field x = H + alpha M, in
// which both B and H are explicit.
//
// Valid: anhysteretic magnetisation of soft material. alpha ms/(3a) < 1, else the curve folds.
// Errors: [magcirc.BadValue] for parameters that are not positive and for a fold, [magcirc.Implausible].
// Source: P. Langevin, J. Phys. Theor. Appl. 4 (1905) 678-693; mean field: D. C. Jiles and D. L. Atherton,
// J. Magn. Magn. Mater. 61 (1986) 48-60; initial susceptibility: D. C. Jiles, J. B. Thoelke, M. K. Devine,
// IEEE Trans. Magn. 28 (1992) 27-35.
func NewLangevin(ms, a, alpha float64) (Law, error) {
	const elem = "Langevin law"
	if err := checkPositive(elem, "saturation magnetisation", ms, mostMs, "A/m", "Give it in A/m: Bs/mu0"); err != nil {
		return nil, err
	}
	if err := checkPositive(elem, "shape parameter", a, math.MaxFloat64, "A/m", ""); err != nil {
		return nil, err
	}
	if !(alpha >= 0) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "alpha", Got: alpha,
			Msg: fmt.Sprintf("mean-field parameter %s is negative", phys.Format(alpha, ""))}
	}
	if r := alpha * ms / (3 * a); r >= 1 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "alpha Ms/(3a)", Got: r, Limit: 1,
			Msg: fmt.Sprintf("the curve folds (alpha Ms/(3a) = %s, it must stay below 1)", phys.FormatDigits(r, "", 3)), Hint: "lower alpha or raise a"}
	}
	l := langevin{ms, a, alpha}
	if err := checkMu(elem, "initial permeability", 1+l.chi()); err != nil {
		return nil, err
	}
	return l, nil
}

func (l langevin) chi() float64 { return l.ms / (3*l.a - l.alpha*l.ms) }

// at gives B and dB/dH at the reduced effective field z = x/a, where chi = dM/dx:
//
//	dB/dH = (dB/dx)/(dH/dx) = mu0 (1 + (1-alpha) chi)/(1 - alpha chi)
func (l langevin) at(z float64) (b, slope float64) {
	v, d := num.Langevin(z)
	chi := l.ms / l.a * d
	return phys.Mu0 * (l.a*z + (1-l.alpha)*l.ms*v), phys.Mu0 * (1 + chi/(1-l.alpha*chi))
}

// effective gives the reduced effective field at field strength h: the root of a z - alpha ms L(z) = h. The left
// side is convex for z > 0, so Newton steps from an upper bound (L < z/3, L < 1) approach it from the right.
func (l langevin) effective(h float64) float64 {
	if l.alpha == 0 || h == 0 {
		return h / l.a
	}
	y, r := math.Abs(h)/l.a, l.alpha*l.ms/l.a
	z := math.Min(y/(1-r/3), y+r)
	for range 200 {
		v, d := num.Langevin(z)
		step := (z - r*v - y) / (1 - r*d)
		z -= step
		if math.Abs(step) <= 1e-9*z {
			break
		}
	}
	return math.Copysign(z, h)
}

func (l langevin) At(h float64) (b, slope float64) {
	z := l.effective(h)
	v, d := num.Langevin(z)
	chi := l.ms / l.a * d
	return phys.Mu0 * (h + l.ms*v), phys.Mu0 * (1 + chi/(1-l.alpha*chi))
}

// Inverse solves for the effective field by Newton steps from the larger of two lower bounds, L <= z/3 and
// L <= z/(1+z), on the concave B(z) of alpha < 1; the rare alpha >= 1, for which B(z) is convex, by a bracket.
func (l langevin) Inverse(b float64) (h, slope float64) {
	if b == 0 {
		return b, 1 / (phys.Mu0 * (1 + l.chi()))
	}
	y := math.Abs(b) / phys.Mu0
	m := (1 - l.alpha) * l.ms
	rise := func(z float64) (float64, float64) {
		v, d := num.Langevin(z)
		return l.a*z + m*v, l.a + m*d
	}
	var z float64
	if m > 0 {
		p := l.a + m - y
		z = newton(rise, math.Max(y/(l.a+m/3), quadratic(l.a, p, y)), y)
	} else {
		f := func(z float64) (float64, float64) { v, d := rise(z); return v - y, d }
		z = num.Root(f, 0, math.Min((y-m)/l.a, y/(l.a+m/3)), y/(l.a+m/3), 1e-14)
	}
	v, d := num.Langevin(z)
	chi := l.ms / l.a * d
	return math.Copysign(l.a*z-l.alpha*l.ms*v, b), (1 - l.alpha*chi) / (phys.Mu0 * (1 + (1-l.alpha)*chi))
}

// Coenergy is mu0 (H^2/2 + integral of M dH) with dH = dx - alpha dM:
//
//	integral of M dH = ms a ln(sinh z/z) - alpha M^2/2
func (l langevin) Coenergy(h float64) float64 {
	z := l.effective(h)
	v, _ := num.Langevin(z)
	m := l.ms * v
	return phys.Mu0 * (h*h/2 + l.ms*l.a*num.LangevinIntegral(z) - l.alpha*m*m/2)
}

func (l langevin) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (l langevin) Describe() string {
	s := "Langevin, Ms " + phys.Format(l.ms, "A/m") + ", a " + phys.Format(l.a, "A/m")
	if l.alpha > 0 {
		s += ", alpha " + phys.Format(l.alpha, "")
	}
	return s + ", mu_i " + phys.Format(1+l.chi(), "")
}
