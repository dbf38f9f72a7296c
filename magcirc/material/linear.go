package material

import (
	"math"

	"ampturn/magcirc/phys"
)

type linear struct{ mur, mu float64 }

// NewLinear gives the law of constant relative permeability mur >= 1.
//
//	B = mu0 mur H
//
// Valid: well below saturation; the law itself has none, so nothing warns when B leaves what a material can carry.
// Errors: [magcirc.BadValue] below 1, [magcirc.Implausible] above 1e7.
func NewLinear(mur float64) (Law, error) {
	if err := checkMu("linear law", "relative permeability", mur); err != nil {
		return nil, err
	}
	return linear{mur, mur * phys.Mu0}, nil
}

func (l linear) At(h float64) (b, slope float64)      { return l.mu * h, l.mu }
func (l linear) Inverse(b float64) (h, slope float64) { return b / l.mu, 1 / l.mu }
func (l linear) Coenergy(h float64) float64           { return l.mu * h * h / 2 }
func (l linear) Range() (hmax, bmax float64)          { return math.Inf(1), math.Inf(1) }
func (l linear) Describe() string                     { return "linear, mu_r " + phys.Format(l.mur, "") }
