package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

type langevin struct {
	ms, a, alpha float64
	ofB          rising // B/mu0 over the reduced effective field z = x/a
	ofH          rising // H over z; not used where alpha is 0
}

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
	if err := checkMu(elem, "initial permeability", 1+ms/(3*a-alpha*ms)); err != nil {
		return nil, err
	}
	effective := func(m float64) rising {
		return newRising(func(z float64) (float64, float64) {
			v, d := num.Langevin(z)
			return a*z + m*v, a + m*d
		})
	}
	l := &langevin{ms: ms, a: a, alpha: alpha, ofB: effective((1 - alpha) * ms)}
	if alpha > 0 {
		l.ofH = effective(-alpha * ms)
	}
	return l, nil
}

func (l *langevin) chi() float64 { return l.ms / (3*l.a - l.alpha*l.ms) }

// effective gives the reduced effective field at field strength h.
func (l *langevin) effective(h float64) float64 {
	if l.alpha == 0 {
		return h / l.a
	}
	return math.Copysign(l.ofH.solve(math.Abs(h)), h)
}

func (l *langevin) At(h float64) (b, slope float64) {
	v, d := num.Langevin(l.effective(h))
	chi := l.ms / l.a * d // dM/dx; dM/dH = chi/(1 - alpha chi)
	return phys.Mu0 * (h + l.ms*v), phys.Mu0 * (1 + chi/(1-l.alpha*chi))
}

func (l *langevin) Inverse(b float64) (h, slope float64) {
	z := l.ofB.solve(math.Abs(b) / phys.Mu0)
	v, d := num.Langevin(z)
	chi := l.ms / l.a * d
	return math.Copysign(l.a*z-l.alpha*l.ms*v, b), (1 - l.alpha*chi) / (phys.Mu0 * (1 + (1-l.alpha)*chi))
}

// Coenergy is mu0 (H^2/2 + integral of M dH) with dH = dx - alpha dM:
//
//	integral of M dH = ms a ln(sinh z/z) - alpha M^2/2
func (l *langevin) Coenergy(h float64) float64 {
	z := l.effective(h)
	v, _ := num.Langevin(z)
	m := l.ms * v
	return phys.Mu0 * (h*h/2 + l.ms*l.a*num.LangevinIntegral(z) - l.alpha*m*m/2)
}

func (l *langevin) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (l *langevin) Describe() string {
	s := "Langevin, Ms " + phys.Format(l.ms, "A/m") + ", a " + phys.Format(l.a, "A/m")
	if l.alpha > 0 {
		s += ", alpha " + phys.Format(l.alpha, "")
	}
	return s + ", mu_i " + phys.Format(1+l.chi(), "")
}
