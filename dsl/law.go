package dsl

import (
	"fmt"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// Law is a magnetisation law: flux density over field strength. [Linear], [Froehlich], [Langevin], [Arctan], [Curve],
// [LawOf], [JilesAtherton], [Play], [ReadCurve] and the fits make one; any value of your own with this method is one
// too. A law of your own is tabulated
// once, up to 100 kA/m, and checked: zero at zero field, odd, rising.
type Law interface {
	// FluxDensity is the flux density at a field strength.
	FluxDensity(field AmperePerMetre) Tesla
}

// Linear is the law of constant permeability: B = mu0 mur H.
func Linear(mur Ratio) Law {
	wantPositive("Linear", "relative permeability", mur, "")
	return boundLaw{must(material.NewLinear(mur))}
}

// Froehlich is the Froehlich-Kennelly law with initial relative permeability mui and saturation polarisation Bs:
//
//	B = mu0 H + J(H),  J = (mui-1) mu0 H / (1 + (mui-1) mu0 |H| / Bs)
func Froehlich(mui Ratio, Bs Tesla) Law {
	initial("Froehlich", mui, Bs)
	return boundLaw{must(material.NewFroehlich(mui, Bs))}
}

// Arctan is the arctangent law with initial relative permeability mui and saturation polarisation Bs:
//
//	B = mu0 H + J(H),  J = (2/pi) Bs atan(pi (mui-1) mu0 H / (2 Bs))
func Arctan(mui Ratio, Bs Tesla) Law {
	initial("Arctan", mui, Bs)
	return boundLaw{must(material.NewArctan(mui, Bs))}
}

// Langevin is the Langevin law with saturation magnetisation Ms (A/m), shape a (A/m) and mean-field coupling alpha:
//
//	M = Ms (coth(He/a) - a/He),  He = H + alpha M,  B = mu0 (H + M)
func Langevin(Ms, a AmperePerMetre, alpha Ratio) Law {
	wantPositive("Langevin", "saturation magnetisation Ms", Ms, "A/m")
	wantPositive("Langevin", "shape a", a, "A/m")
	wantFinite("Langevin", "coupling alpha", alpha, "")
	return boundLaw{must(material.NewLangevin(Ms, a, alpha))}
}

// Curve is a measured magnetisation curve through points of field strength H and flux density B, both rising, from
// zero; between the points it keeps their shape, beyond the last one B rises with mu0 and the result says so.
func Curve(H []AmperePerMetre, B []Tesla) Law {
	for i := range H {
		wantFinite("Curve", "field strength H", H[i], "A/m")
	}
	for i := range B {
		wantFinite("Curve", "flux density B", B[i], "T")
	}
	return boundLaw{must(material.NewCurve(H, B))}
}

// LawOf makes a law of a function; it is tabulated once, up to 100 kA/m, and checked: zero at zero field, odd, rising.
func LawOf(fluxDensity func(field AmperePerMetre) Tesla) Law {
	if fluxDensity == nil {
		refuse(magcirc.BadValue, "LawOf", "there is no function", "write LawOf(func(h AmperePerMetre) Tesla { ... })")
	}
	return boundLaw{must(material.Tabulate(fluxDensity, tableEnd))}
}

// tableEnd is the field strength to which a law of one's own is tabulated, A/m: far in the saturation of soft
// materials.
const tableEnd = 1e5

func initial(elem string, mui, bs float64) {
	wantFinite(elem, "initial permeability", mui, "")
	if mui < 1 {
		refuseValue(magcirc.BadValue, elem, "initial permeability", mui, 1, "", "is below that of air (1)", "it is a relative permeability")
	}
	wantPositive(elem, "saturation polarisation", bs, "T")
	if bs > material.MostPolarisation {
		refuseValue(magcirc.Implausible, elem, "saturation polarisation", bs, material.MostPolarisation, "T",
			fmt.Sprintf("is above that of any known material (%s)", phys.Format(material.MostPolarisation, "T")), "was mT meant?")
	}
}

// boundLaw is a law of the layer below in the words of the vocabulary.
type boundLaw struct {
	law material.Law
}

// FluxDensity is the flux density at a field strength.
func (l boundLaw) FluxDensity(field AmperePerMetre) Tesla {
	b, _ := l.law.At(field)
	return b
}

func (l boundLaw) below() material.Law { return l.law }

// MIMEBundle shows the law in words.
func (l boundLaw) MIMEBundle() map[string]any { return words(l.law.Describe()) }

// lawBelow gives the law that the layer below computes with.
func lawBelow(elem string, law Law) material.Law {
	if law == nil {
		refuse(magcirc.BadValue, elem, "there is no law", "give one: Linear(2200), Froehlich(2200, 0.49*tesla), Curve(H, B)")
	}
	if own, ok := law.(interface{ below() material.Law }); ok {
		return own.below()
	}
	b, err := material.Tabulate(law.FluxDensity, tableEnd)
	named(elem, err)
	return b
}
