// Package hyst holds magnetisation laws with a memory: loops, remanence, minor loops, their loss, and their fit to
// measured loops.
//
//	law                        what it is                                        known exactly
//	[NewJilesAtherton]         Jiles-Atherton, Form1992 and Form1986             work of Form1992
//	[NewPlay]                  energy-based play of any number of cells          stored and dissipated energy
//
// A law is immutable and shared; what a piece of core remembers is a [State], plain data, one for each leg. A trial
// asks where the core would be at another field strength, flux density or effective field, and changes nothing;
// [Law.Commit] makes the trial the state:
//
//	law, err := hyst.NewJilesAtherton(hyst.Parameters{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.6e-3, C: 0.2})
//	s := law.Start()                  // demagnetised
//	law.Commit(&s, law.ByField(&s, 6000))
//	p := law.ByFluxDensity(&s, 0)     // p.H is minus the coercivity of this branch
//
// A trial is one monotone move: turning points must be committed. Between two commits the trial is a continuous,
// rising function of its argument.
//
// On top of the laws: [Steady] loops, [Minor] loops with their accommodation, [Initial] and [Anhysteretic] curves,
// the field term of a lamination ([Sheet]), separation of losses, and fits ([FitJilesAtherton], [FitPlay]).
//
// Left out: rotational magnetisation, anisotropy, magnetostriction, after-effect.
//
// Units: field strengths, magnetisations in A/m, flux densities in T, energies and losses per cycle in J/m3.
package hyst
