package material

import (
	"math"

	"ampturn/magcirc/phys"
)

type froehlich struct{ mui, bs, a float64 }

// NewFroehlich gives the Froehlich-Kennelly law with initial relative permeability mui and saturation polarisation
// bs in T.
//
//	B = mu0 H + bs H/(H + a),   a = bs/(mu0 (mui - 1)),   H >= 0, odd
//
// Valid: an anhysteretic curve of soft material without the S-shaped foot that measured commutation curves have;
// between foot and saturation it rises too slowly at the knee. Errors: [magcirc.BadValue], [magcirc.Implausible].
// Source: O. Froehlich, Elektrotechn. Z. 2 (1881) 134-141; A. E. Kennelly, Trans. AIEE 8 (1891) 485-533, whose law
// of reluctivity H/B = p + q H it is; the term mu0 H is added here so that the slope never falls below that of air.
func NewFroehlich(mui, bs float64) (Law, error) {
	const elem = "Froehlich law"
	if err := checkMu(elem, "initial permeability", mui); err != nil {
		return nil, err
	}
	if err := checkBs(elem, bs); err != nil {
		return nil, err
	}
	if mui == 1 {
		return NewLinear(1)
	}
	return froehlich{mui, bs, bs / (phys.Mu0 * (mui - 1))}, nil
}

func (f froehlich) At(h float64) (b, slope float64) {
	r := 1 / (math.Abs(h) + f.a)
	return h * (phys.Mu0 + f.bs*r), phys.Mu0 + f.bs*f.a*r*r
}

// Inverse solves mu0 H^2 + p H - a b = 0 with p = mu0 a + bs - b in the form that does not cancel.
func (f froehlich) Inverse(b float64) (h, slope float64) {
	y := math.Abs(b)
	p := phys.Mu0*f.a + f.bs - y
	root := math.Sqrt(p*p + 4*phys.Mu0*f.a*y)
	if p > 0 {
		h = 2 * f.a * y / (p + root)
	} else {
		h = (root - p) / (2 * phys.Mu0)
	}
	r := 1 / (h + f.a)
	return math.Copysign(h, b), 1 / (phys.Mu0 + f.bs*f.a*r*r)
}

// Coenergy is mu0 H^2/2 + bs a (x - ln(1+x)) with x = H/a.
func (f froehlich) Coenergy(h float64) float64 {
	return phys.Mu0*h*h/2 + f.bs*f.a*lessLog1p(math.Abs(h)/f.a)
}

func (f froehlich) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

func (f froehlich) Describe() string {
	return "Froehlich-Kennelly, mu_i " + phys.Format(f.mui, "") + ", Bs " + phys.Format(f.bs, "T")
}

// lessLog1p gives x - ln(1+x) for x >= 0 without cancellation: with s = x/(2+x), ln(1+x) = 2 (s + s^3/3 + ...).
func lessLog1p(x float64) float64 {
	if x > 0.6 {
		return x - math.Log1p(x)
	}
	s := x / (2 + x)
	q := s * s
	sum := 0.0
	for k := 23; k >= 3; k -= 2 {
		sum = sum*q + 1/float64(k)
	}
	return 2 * q * (1/(1-s) - s*sum)
}
