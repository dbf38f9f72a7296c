package material

import (
	"math"
	"sync"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// scaled is a law whose susceptibility differs by a factor at all fields that are equally far into saturation.
type scaled struct {
	law Law
	k   float64
}

// NewScaled gives the law of a lot whose permeability differs by a factor k while its saturation stays: polarisation J is
// reached at the k-th part of the field.
//
//	J'(H) = J(k H),   mu_i' = 1 + k (mu_i - 1)
//
// Inputs: 0.01 <= k <= 100. Errors: [magcirc.BadValue] outside, or without a law.
// Source: definition; data sheets state a spread for the initial permeability only, and saturation polarisation is a
// property of the composition.
func NewScaled(law Law, k float64) (Law, error) {
	if law == nil || !(k >= 0.01 && k <= 100) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "scaled law", Quantity: "factor of the permeability", Got: k, Limit: 1,
			Msg: "factor " + phys.Format(k, "") + " of the permeability is outside 0.01..100", Hint: "give a spread below 100 percent"}
	}
	if k == 1 {
		return law, nil
	}
	if l, ok := law.(stretching); ok {
		return l.Stretch(k)
	}
	return scaled{law, k}, nil
}

func (l scaled) At(h float64) (b, slope float64) {
	b, slope = l.law.At(l.k * h)
	return b - phys.Mu0*(l.k-1)*h, l.k*slope - phys.Mu0*(l.k-1)
}

// Inverse solves B(g) + mu0 g (1/k - 1) = b for the field g = k H of the law that is scaled.
func (l scaled) Inverse(b float64) (h, slope float64) {
	y, extra := math.Abs(b), phys.Mu0*(1/l.k-1)
	g0, _ := l.law.Inverse(y)
	lo, hi := 0.0, g0
	if l.k > 1 {
		lo, hi = g0, y*l.k/phys.Mu0
	}
	g := num.Root(func(g float64) (float64, float64) {
		v, s := l.law.At(g)
		return v + extra*g - y, s + extra
	}, lo, hi, g0, 1e-13)
	h = g / l.k
	_, s := l.At(h)
	return math.Copysign(h, b), 1 / s
}

func (l scaled) Coenergy(h float64) float64 {
	g := l.k * h
	return phys.Mu0*h*h/2 + (l.law.Coenergy(g)-phys.Mu0*g*g/2)/l.k
}

func (l scaled) Range() (hmax, bmax float64) {
	hmax, _ = l.law.Range()
	if math.IsInf(hmax, 1) {
		return hmax, hmax
	}
	hmax /= l.k
	bmax, _ = l.At(hmax)
	return hmax, bmax
}

func (l scaled) Describe() string {
	return l.law.Describe() + ", permeability times " + phys.Format(l.k, "")
}

// Notes are those of the law that is scaled.
func (l scaled) Notes() []magcirc.Note { return Notes(l.law) }

// Scaled gives the material of a lot whose permeability differs by a factor k at every temperature; see [NewScaled].
//
// Errors: [magcirc.BadValue] for a factor outside 0.01..100.
func (m *Material) Scaled(k float64) (*Material, error) {
	c := *m
	if c.factor == 0 {
		c.factor = 1
	}
	c.factor *= k
	if _, err := NewScaled(m.states[0].law, c.factor); err != nil {
		return nil, err
	}
	return &c, nil
}

// known keeps the laws that a material has at temperatures without data, for the check of an extrapolated law costs more
// than its use. A law depends on the states and the temperature only, so who asks first does not matter.
type known struct {
	mu  sync.Mutex
	law map[float64]Law
}

// keptLaws is for how many temperatures laws are kept.
const keptLaws = 64

func (k *known) at(m *Material, t float64) (Law, error) {
	if k == nil {
		return m.at(t)
	}
	k.mu.Lock()
	law, ok := k.law[t]
	k.mu.Unlock()
	if ok {
		return law, nil
	}
	law, err := m.at(t)
	if err != nil {
		return nil, err
	}
	k.mu.Lock()
	defer k.mu.Unlock()
	if k.law == nil || len(k.law) >= keptLaws {
		k.law = map[float64]Law{}
	}
	k.law[t] = law
	return law, nil
}
