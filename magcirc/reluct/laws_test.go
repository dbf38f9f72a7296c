package reluct_test

import (
	"fmt"
	"math"

	"ampturn/magcirc/phys"
)

// saturating is an odd concave law B = mu0 (H + M(H)) made for the tests, in three shapes with initial susceptibility
// chi and saturation magnetisation ms:
//
//	langevin   M = ms (coth z - 1/z), z = 3 chi H/ms
//	arctan     M = (2 ms/pi) atan(pi chi H/(2 ms))
//	froehlich  M = chi H/(1 + chi |H|/ms)
type saturating struct {
	shape   int
	chi, ms float64
}

const (
	langevin = iota
	arctan
	froehlich
)

// polarised gives a law of initial permeability mui and saturation polarisation bs in T.
func polarised(shape int, mui, bs float64) saturating {
	return saturating{shape, mui - 1, bs / phys.Mu0}
}

func (s saturating) magnetisation(h float64) (m, slope float64) {
	switch s.shape {
	case langevin:
		a := s.ms / (3 * s.chi)
		l, d := langevinFunction(h / a)
		return s.ms * l, s.ms / a * d
	case arctan:
		q := math.Pi / 2 * s.chi / s.ms
		return s.ms * 2 / math.Pi * math.Atan(q*h), s.chi / (1 + q*q*h*h)
	}
	t := 1 + s.chi*math.Abs(h)/s.ms
	return s.chi * h / t, s.chi / (t * t)
}

// langevinFunction gives L(z) = coth z - 1/z and L'(z): a series for small z, exponentials else.
func langevinFunction(z float64) (l, d float64) {
	if w := z * z; w < 0.09 {
		l = z * (1./3 - w*(1./45-w*(2./945-w*(1./4725-w*2./93555))))
		return l, 1./3 - w*(1./15-w*(2./189-w*(1./675-w*2./10395)))
	}
	e := math.Exp(-2 * math.Abs(z))
	l = math.Copysign((1+e)/(1-e), z) - 1/z
	return l, 1/(z*z) - 4*e/((1-e)*(1-e))
}

func (s saturating) At(h float64) (b, slope float64) {
	m, d := s.magnetisation(h)
	return phys.Mu0 * (h + m), phys.Mu0 * (1 + d)
}

// Inverse starts left of the root on both asymptotes; a concave law brings Newton's method up monotonically.
func (s saturating) Inverse(b float64) (h, slope float64) {
	x := math.Abs(b) / phys.Mu0
	h = max(x/(1+s.chi), x-s.ms)
	for range 60 {
		m, d := s.magnetisation(h)
		step := (x - h - m) / (1 + d)
		slope = 1 / (phys.Mu0 * (1 + d))
		h += step
		if !(math.Abs(step) > 1e-8*h) { // converges quadratically: the next step would be below rounding
			break
		}
	}
	return math.Copysign(h, b), slope
}

// Coenergy is the integral of B dH in closed form (arctan, froehlich) or with ln(sinh z/z) (langevin).
func (s saturating) Coenergy(h float64) float64 {
	h = math.Abs(h)
	air := h * h / 2
	switch s.shape {
	case langevin:
		a := s.ms / (3 * s.chi)
		z := h / a
		if z < 0.03 {
			return phys.Mu0 * (air + s.ms*a*z*z*(1./6-z*z/180))
		}
		return phys.Mu0 * (air + s.ms*a*(z+math.Log(-math.Expm1(-2*z)/(2*z))))
	case arctan:
		q := math.Pi / 2 * s.chi / s.ms
		return phys.Mu0 * (air + s.ms*2/math.Pi*(h*math.Atan(q*h)-math.Log1p(q*q*h*h)/(2*q)))
	}
	r := s.chi * h / s.ms
	return phys.Mu0 * (air + s.ms*s.ms/s.chi*(r-math.Log1p(r)))
}

func (s saturating) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (s saturating) Describe() string {
	return fmt.Sprintf("%s, mu_i %.4g, Bs %.4g T", [...]string{"Langevin", "arctan", "Froehlich"}[s.shape], 1+s.chi, phys.Mu0*s.ms)
}

// linear is B = mu0 mur H.
type linear float64

func (l linear) At(h float64) (b, slope float64) {
	return phys.Mu0 * float64(l) * h, phys.Mu0 * float64(l)
}
func (l linear) Inverse(b float64) (h, slope float64) {
	return b / (phys.Mu0 * float64(l)), 1 / (phys.Mu0 * float64(l))
}
func (l linear) Coenergy(h float64) float64  { return phys.Mu0 * float64(l) * h * h / 2 }
func (l linear) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }
func (l linear) Describe() string            { return fmt.Sprintf("linear, mu_r %.4g", float64(l)) }

// polygon is a law of straight lines through measured points (h[0], b[0] = 0), with slope mu0 beyond the last.
type polygon struct{ h, b []float64 }

func (p polygon) segment(x float64, axis []float64) int {
	i := 1
	for i < len(axis)-1 && x > axis[i] {
		i++
	}
	return i
}

func (p polygon) At(h float64) (b, slope float64) {
	x, last := math.Abs(h), len(p.h)-1
	if x > p.h[last] {
		return math.Copysign(p.b[last]+phys.Mu0*(x-p.h[last]), h), phys.Mu0
	}
	i := p.segment(x, p.h)
	slope = (p.b[i] - p.b[i-1]) / (p.h[i] - p.h[i-1])
	return math.Copysign(p.b[i-1]+slope*(x-p.h[i-1]), h), slope
}

func (p polygon) Inverse(b float64) (h, slope float64) {
	x, last := math.Abs(b), len(p.b)-1
	if x > p.b[last] {
		return math.Copysign(p.h[last]+(x-p.b[last])/phys.Mu0, b), 1 / phys.Mu0
	}
	i := p.segment(x, p.b)
	slope = (p.h[i] - p.h[i-1]) / (p.b[i] - p.b[i-1])
	return math.Copysign(p.h[i-1]+slope*(x-p.b[i-1]), b), slope
}

func (p polygon) Coenergy(h float64) float64 {
	x, sum := math.Abs(h), 0.0
	for i := 1; i < len(p.h); i++ {
		if x <= p.h[i] {
			b, _ := p.At(x)
			return sum + (x-p.h[i-1])*(b+p.b[i-1])/2
		}
		sum += (p.h[i] - p.h[i-1]) * (p.b[i] + p.b[i-1]) / 2
	}
	last := len(p.h) - 1
	b, _ := p.At(x)
	return sum + (x-p.h[last])*(b+p.b[last])/2
}

func (p polygon) Range() (hmax, bmax float64) { return p.h[len(p.h)-1], p.b[len(p.b)-1] }
func (p polygon) Describe() string            { return fmt.Sprintf("curve of %d points", len(p.h)) }
