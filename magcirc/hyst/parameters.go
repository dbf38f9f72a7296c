package hyst

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Form says which of the two published Jiles-Atherton equations a set of parameters belongs to; sets are not
// interchangeable between them.
type Form int

const (
	// Form1992 splits M = (1-c) Mirr + c Man with dMirr/dHe = (Man - Mirr)/(k delta), 0 <= c <= 1.
	Form1992 Form = iota
	// Form1986 has the total M as its state,
	// dM/dH = [(Man - M)/(k delta - alpha (Man - M)) + c dMan/dHe]/(1+c), c >= 0.
	Form1986
)

// String gives the form's name.
func (f Form) String() string {
	if f == Form1986 {
		return "Form1986"
	}
	return "Form1992"
}

// Parameters of a Jiles-Atherton law.
type Parameters struct {
	Ms    float64 // saturation magnetisation in A/m
	A     float64 // shape of the anhysteretic curve, a in A/m
	K     float64 // pinning, k in A/m: near the coercivity; the 1986 paper writes k/mu0 for it
	Alpha float64 // coupling between domains, alpha
	C     float64 // reversible share: Form1992 0 to 1; Form1986 from 0, where it weighs c/(1+c)
	Form  Form
	Name  string // for messages; may be empty
}

// Ratio gives alpha Ms/(3a): below 1 the law cannot fold.
func (p Parameters) Ratio() float64 { return p.Alpha * p.Ms / (3 * p.A) }

// String gives the parameters in words.
func (p Parameters) String() string {
	return fmt.Sprintf("Ms %s, a %s, k %s, alpha %s, c %s, %s", phys.Format(p.Ms, "A/m"), phys.Format(p.A, "A/m"),
		phys.Format(p.K, "A/m"), phys.Format(p.Alpha, ""), phys.Format(p.C, ""), p.Form)
}

func (p Parameters) elem() string {
	if p.Name == "" {
		return "Jiles-Atherton law"
	}
	return fmt.Sprintf("Jiles-Atherton %q", p.Name)
}

const mostMs = 2.4e6 // A/m; iron-cobalt saturates at 2.45 T, 1.95e6 A/m

// check refuses parameters outside what they can be.
func (p Parameters) check() error {
	e := &magcirc.Error{Code: magcirc.BadValue, Elem: p.elem()}
	switch {
	case !(p.Ms > 0) || math.IsInf(p.Ms, 1):
		e.Quantity, e.Unit, e.Got = "Ms", "A/m", p.Ms
		e.Msg = fmt.Sprintf("Ms <= 0 (it is %s): a saturation magnetisation is above zero", phys.Format(p.Ms, "A/m"))
	case p.Ms > mostMs:
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "Ms", "A/m", p.Ms, mostMs
		e.Msg = fmt.Sprintf("Ms %s is above that of any material (%s)", phys.Format(p.Ms, "A/m"), phys.Format(mostMs, "A/m"))
		e.Hint = "give it in A/m: Bs/mu0"
	case p.Ms < 10:
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "Ms", "A/m", p.Ms, 10
		e.Msg = fmt.Sprintf("Ms %s is that of no core", phys.Format(p.Ms, "A/m"))
		e.Hint = fmt.Sprintf("was %s meant? Give it in A/m: Bs/mu0", phys.Format(p.Ms, "T"))
	case !(p.A > 0) || math.IsInf(p.A, 1):
		e.Quantity, e.Unit, e.Got = "a", "A/m", p.A
		e.Msg = fmt.Sprintf("a <= 0 (it is %s): the shape parameter is above zero", phys.Format(p.A, "A/m"))
	case !(p.K > 0) || math.IsInf(p.K, 1):
		e.Quantity, e.Unit, e.Got = "k", "A/m", p.K
		e.Msg = fmt.Sprintf("k <= 0 (it is %s): pinning is above zero", phys.Format(p.K, "A/m"))
		e.Hint = "a curve without loop is Langevin(Ms, a, alpha)"
	case !(p.Alpha >= 0) || math.IsInf(p.Alpha, 1):
		e.Quantity, e.Got = "alpha", p.Alpha
		e.Msg = fmt.Sprintf("alpha < 0 (it is %s): the coupling is not below zero", phys.Format(p.Alpha, ""))
	case p.Alpha >= 1:
		e.Code, e.Quantity, e.Got, e.Limit = magcirc.Implausible, "alpha", p.Alpha, 1
		e.Msg = fmt.Sprintf("alpha %s is above that of any soft material (1)", phys.Format(p.Alpha, ""))
	case p.Form != Form1992 && p.Form != Form1986:
		e.Msg, e.Hint = fmt.Sprintf("there is no form %d", int(p.Form)), "write Form1992 or Form1986"
	case p.Form == Form1992 && !(p.C >= 0 && p.C <= 1):
		e.Quantity, e.Got, e.Limit = "c", p.C, 1
		e.Msg = fmt.Sprintf("c outside 0 to 1 (it is %s, Form1992)", phys.Format(p.C, ""))
		if p.C > 1 {
			e.Hint = fmt.Sprintf("is this a set for Form1986? There c weighs c/(1+c), here %s", phys.Format(p.C/(1+p.C), ""))
		}
	case p.Form == Form1986 && (!(p.C >= 0) || math.IsInf(p.C, 1)):
		e.Quantity, e.Got = "c", p.C
		e.Msg = fmt.Sprintf("c < 0 (it is %s, Form1986)", phys.Format(p.C, ""))
	case p.A > 1e9*p.K || p.K > 1e6*p.A:
		e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "k", "A/m", p.K, p.A
		e.Msg = fmt.Sprintf("k %s and a %s belong to no material", phys.Format(p.K, "A/m"), phys.Format(p.A, "A/m"))
	default:
		return nil
	}
	return e
}
