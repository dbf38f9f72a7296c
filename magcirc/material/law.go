// Package material holds magnetisation laws B(H) and the materials that carry them over temperature.
//
//	law                       parameters                     form, with J = B - mu0 H
//	[NewLinear]               mu_r                           B = mu0 mu_r H
//	[NewFroehlich]            mu_i, Bs                       J = Bs H/(H + a)
//	[NewArctan]               mu_i, Bs                       J = (2 Bs/pi) atan(H/c)
//	[NewLangevin]             Ms, a, alpha                   M = Ms L((H + alpha M)/a)
//	[LangevinThrough]         mu_i, one point            the same without mean field, from a data sheet
//	[NewBias]                 mu_i, half, exponent       dB/dH = mu0 mu_i/(1 + (H/half)^exponent)
//	[NewCurve], [Points.Law]  measured points                monotone piecewise cubic, mu0 beyond the data
//	[Tabulate]                a function of one's own        the same, through points close enough
//
//	law, err := material.NewFroehlich(2200, 0.49)
//	fer, err := material.New("lot 12", law).Also(100, hot)   // 25 degC and 100 degC
//	hotter, notes, err := fer.Law(80)
//	b, slope := hotter.At(120)                               // T and H/m at 120 A/m
//
// Laws are single-valued: loops and memory are not theirs. Field strength in A/m, flux density in T, energy
// densities in J/m3, temperatures in degC.
package material

// Law is a single-valued magnetisation law B(H), odd and monotone: dB/dH >= mu0 everywhere. Laws are immutable
// values, safe for use by many goroutines.
type Law interface {
	// At gives flux density in T and its slope dB/dH in H/m at field strength h in A/m.
	At(h float64) (b, slope float64)
	// Inverse gives field strength in A/m and dH/dB in m/H at flux density b in T.
	Inverse(b float64) (h, slope float64)
	// Coenergy is the integral of B dH from 0 to h, in J/m3. Energy density is h*b - Coenergy(h).
	Coenergy(h float64) float64
	// Range gives the largest field strength and flux density that the law's data cover; +Inf where it is a formula.
	Range() (hmax, bmax float64)
	// Describe gives the law in words with its parameters: "Froehlich-Kennelly, mu_i 2200, Bs 0.49 T".
	Describe() string
}
