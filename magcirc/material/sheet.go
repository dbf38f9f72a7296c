package material

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// LangevinThrough gives the Langevin law of initial relative permeability mui that goes through one point (h, b) in
// saturation, A/m and T: the two figures that a ferrite's data sheet prints.
//
//	B = mu0 H + Js L(3 mu0 (mui-1) H/Js),   Js such that B(h) = b
//
// Valid: as [NewLangevin]. A measured commutation curve is S-shaped: it lies above this law at its knee.
// Errors: [magcirc.BadValue], [magcirc.Implausible]; [magcirc.NoSolution] for a point above 80
// percent of the straight line, which says nothing of saturation.
func LangevinThrough(mui, h, b float64) (Law, error) {
	const elem = "Langevin law"
	if err := checkMu(elem, "initial permeability", mui); err != nil {
		return nil, err
	}
	if err := checkPositive(elem, "field strength of the point", h, mostH, "A/m", ""); err != nil {
		return nil, err
	}
	j := b - phys.Mu0*h
	if err := checkBs(elem, j); err != nil {
		return nil, err
	}
	slope := phys.Mu0 * (mui - 1)
	if j >= 0.8*slope*h {
		return nil, &magcirc.Error{Code: magcirc.NoSolution, Elem: elem, Quantity: "B", Unit: "T", Got: b, Limit: 0.8 * slope * h,
			Msg: fmt.Sprintf("B %s at %s is no point in saturation: initial permeability %s alone gives %s there",
				phys.Format(b, "T"), phys.Format(h, "A/m"), phys.Format(mui, ""), phys.Format((slope+phys.Mu0)*h, "T"))}
	}
	// L(z)/z = j/(3 slope h) falls from 1/3 to 0; as a rising function of z it is z/L(z).
	z := num.Root(func(z float64) (float64, float64) {
		l, d := num.Langevin(z)
		return z/l - 3*slope*h/j, (l - z*d) / (l * l)
	}, 1e-3, 3*slope*h/j+1, 3*slope*h/j, 1e-13)
	js := 3 * slope * h / z
	return NewLangevin(js/phys.Mu0, js/(3*slope), 0)
}

// bias is the tabulated law of NewBias with its own words.
type bias struct {
	*curve
	mui, half, exponent float64
}

// NewBias gives the law of a powder core from its permeability under bias: initial relative permeability mui, field
// strength half in A/m at which half of it is left, and the exponent of its fall.
//
//	dB/dH = mu0 mui/(1 + (H/half)^exponent)
//
// B is its integral, in closed form (2F1(1, 1/c; 1 + 1/c; -x)), tabulated to 1e-7.
//
// Valid: where a quarter of mui is left or more; there the law's data end, beyond them B rises with mu0 only. The
// permeability to small alternating fields stands for the slope of a single-valued curve.
// Errors: [magcirc.BadValue], [magcirc.Implausible]; an exponent outside 1 to 5.
// Source: the form in which makers publish bias curves, percent = 1/(a + b H^c) with a = 0.01.
func NewBias(mui, half, exponent float64) (Law, error) {
	const elem = "bias law"
	if err := checkMu(elem, "initial permeability", mui); err != nil {
		return nil, err
	}
	if err := checkPositive(elem, "field strength at half permeability", half, mostH, "A/m", ""); err != nil {
		return nil, err
	}
	if !(exponent >= 1 && exponent <= 5) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "exponent", Got: exponent, Limit: 5,
			Msg: fmt.Sprintf("exponent %s is not between 1 and 5", phys.Format(exponent, ""))}
	}
	if mui < 4 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "initial permeability", Got: mui, Limit: 4,
			Msg: fmt.Sprintf("initial permeability %s leaves less than air's at a quarter", phys.Format(mui, "")), Hint: "take a linear law"}
	}
	law, err := Tabulate(func(h float64) float64 {
		return phys.Mu0 * mui * h * fallen(math.Pow(math.Abs(h)/half, exponent), 1/exponent)
	}, half*math.Pow(3, 1/exponent))
	if err != nil {
		return nil, err
	}
	return &bias{law.(*curve), mui, half, exponent}, nil
}

// fallen is the mean of 1/(1 + x t^(1/b)) over t from 0 to 1, 2F1(1, b; 1+b; -x), for 0 <= x <= 3 or so, by the series
// of its Pfaff transform 2F1(1, 1; 1+b; x/(1+x))/(1+x). Source: Abramowitz and Stegun 1964, 15.3.5.
func fallen(x, b float64) float64 {
	y := x / (1 + x)
	sum, term := 0.0, 1.0
	for n := 1.0; term > 1e-17*sum; n++ {
		sum += term
		term *= n / (n + b) * y
	}
	return sum / (1 + x)
}

func (l *bias) Describe() string {
	return fmt.Sprintf("under bias, mu_i %s, half of it at %s, exponent %s",
		phys.Format(l.mui, ""), phys.Format(l.half, "A/m"), phys.Format(l.exponent, ""))
}
