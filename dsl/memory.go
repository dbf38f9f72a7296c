package dsl

import (
	"ampturn/magcirc/hyst"
)

// JAForm says to which of the two published Jiles-Atherton equations a set of parameters belongs: [Form1992] or
// [Form1986]. Sets are not interchangeable.
type JAForm Count

const (
	// Form1992 splits M = (1-c) Mirr + c Man, with c from 0 to 1.
	Form1992 JAForm = iota
	// Form1986 has the total magnetisation as its state, with c from 0; c weighs c/(1+c).
	Form1986
)

// String gives the form's name.
func (f JAForm) String() string { return hyst.Form(f).String() }

// JA are the parameters of a [JilesAtherton] law.
type JA struct {
	Ms    AmperePerMetre // saturation magnetisation
	A     AmperePerMetre // shape of the anhysteretic curve
	K     AmperePerMetre // pinning, near the coercivity
	Alpha Ratio          // coupling between domains
	C     Ratio          // reversible share
	Form  JAForm         // Form1992 or Form1986
	Name  string         // for messages; may be left out
}

// JilesAtherton is the Jiles-Atherton law: a magnetisation with loops, remanence and losses. With x = H + Alpha M the
// effective field, Man = Ms (coth(x/A) - A/x) and d the direction of the move,
//
//	Form1992:  dM/dx = max(0, d (Man - M))/K + C dMan/dx
//	Form1986:  dM/dH = [d max(0, d (Man - M))/(K - Alpha d (Man - M)) + C dMan/dx]/(1 + C)
//
// A circuit's single operating points follow its initial curve, from the demagnetised state; [MagneticCircuit.History]
// keeps the memory. Small loops under bias creep; [Play] cells do not.
//
//	core := NewMaterial("core 7", JilesAtherton(JA{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.6e-3, C: 0.2, Form: Form1992}))
//
// Refused: K or A or Ms not above zero, C outside what its form allows, parameters whose loop folds.
func JilesAtherton(parameters JA) Law {
	p := hyst.Parameters{Ms: parameters.Ms, A: parameters.A, K: parameters.K, Alpha: parameters.Alpha, C: parameters.C,
		Form: hyst.Form(parameters.Form), Name: parameters.Name}
	return boundLaw{hyst.Initial(must(hyst.NewJilesAtherton(p)))}
}

// PlayCell is one cell of a [Play] law: a share of the saturation magnetisation that follows the field with friction.
type PlayCell struct {
	Ms    AmperePerMetre // its share of the saturation magnetisation
	A     AmperePerMetre // shape of its curve
	Kappa AmperePerMetre // its friction: how far its field lags behind
}

// Play is the energy-based law of play cells: each follows the field with a friction of its own, M = sum of
// Ms (coth(h/A) - A/h) with h within Kappa of the field. Minor loops close at once, and stored and dissipated energy are
// known at every instant.
//
//	Play(PlayCell{Ms: 2e5, A: 30, Kappa: 8}, PlayCell{Ms: 1.8e5, A: 15, Kappa: 20})
func Play(cells ...PlayCell) Law {
	list := make([]hyst.PlayCell, len(cells))
	for i, c := range cells {
		list[i] = hyst.PlayCell{Ms: c.Ms, A: c.A, Kappa: c.Kappa}
	}
	return boundLaw{hyst.Initial(must(hyst.NewPlay(list...)))}
}
