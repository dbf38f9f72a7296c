package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// The bounds beyond which a parameter is taken for a slip of a unit.
const (
	mostMu = 1e7   // relative permeability; best laboratory values are near 1e6
	mostMs = 2.4e6 // A/m; the same
	mostH  = 1e9   // A/m; 1 kT
)

// MostPolarisation is above the saturation polarisation in T of any material at room temperature: that of cobalt iron is 2.43 T.
//
// Source: R. M. Bozorth, Ferromagnetism, 1951, p. 196.
const MostPolarisation = 2.5

// MostTemperature in degC is above the Curie point of cobalt, 1121 degC, the highest of all: no law is for more.
//
// Source: R. M. Bozorth, Ferromagnetism, 1951.
const MostTemperature = 1200.0

// checkMu refuses a relative permeability below that of air and one above any material's.
func checkMu(elem, quantity string, mu float64) error {
	e := &magcirc.Error{Elem: elem, Quantity: quantity, Got: mu}
	switch {
	case !(mu >= 1): // NaN too
		e.Code, e.Limit = magcirc.BadValue, 1
		e.Msg = fmt.Sprintf("%s %s is below 1, that of air", quantity, phys.Format(mu, ""))
	case mu > mostMu:
		e.Code, e.Limit = magcirc.Implausible, mostMu
		e.Msg = fmt.Sprintf("%s %s is above that of any material (%s)", quantity, phys.Format(mu, ""), phys.Format(mostMu, ""))
	default:
		return nil
	}
	return e
}

// checkBs refuses a saturation polarisation that is not positive or that no material reaches.
func checkBs(elem string, bs float64) error {
	return checkPositive(elem, "saturation", bs, MostPolarisation, "T", fmt.Sprintf("Was %s*mT meant?", phys.FormatDigits(bs, "", 6)))
}

// checkPositive refuses what is not a positive number, and what is above most with a hint at the likely slip.
func checkPositive(elem, quantity string, x, most float64, unit, hint string) error {
	e := &magcirc.Error{Elem: elem, Quantity: quantity, Unit: unit, Got: x}
	switch {
	case !(x > 0) || math.IsInf(x, 1):
		e.Code = magcirc.BadValue
		e.Msg = fmt.Sprintf("%s %s is not a positive value", quantity, phys.Format(x, unit))
	case x > most:
		e.Code, e.Limit, e.Hint = magcirc.Implausible, most, hint
		e.Msg = fmt.Sprintf("%s %s is above that of any material (%s)", quantity, phys.Format(x, unit), phys.Format(most, unit))
	default:
		return nil
	}
	return e
}
