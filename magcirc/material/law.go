// Package material holds magnetisation laws and the materials that carry them over temperature.
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
