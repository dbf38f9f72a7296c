package hyst

// Law is a magnetisation law with a memory. Laws are immutable values, safe for use by many goroutines; a [State]
// belongs to one piece of core.
type Law interface {
	// Start gives the demagnetised state.
	Start() State
	// Now gives the point of the committed state; its slope is the reversible one, that of small signals.
	Now(s *State) Point
	// ByEffective gives the point at effective field x in A/m, reached from the committed state in one monotone move.
	ByEffective(s *State, x float64) Point
	// ByField gives the point at field strength h in A/m.
	ByField(s *State, h float64) Point
	// ByFluxDensity gives the point at flux density b in T.
	ByFluxDensity(s *State, b float64) Point
	// ByMix gives the point at which B + mu0 r H = b, in T, for r >= 0: a core of area A beside air of area r A.
	ByMix(s *State, r, b float64) Point
	// Commit makes p, a trial from s, the committed state.
	Commit(s *State, p Point)
	// Work is the integral of H dB in J/m3 on the move from the committed state to its trial p.
	Work(s *State, p Point) float64
	// Anhysteretic gives the flux density in T of the curve without memory at field strength h in A/m.
	Anhysteretic(h float64) float64
	// Knee gives a field strength in A/m at which the law is well into saturation, for the range of a picture.
	Knee() float64
	// Describe gives the law in words with its parameters.
	Describe() string
}

// Energetic is a law whose stored and dissipated energy are known at every instant.
type Energetic interface {
	Law
	// Stored is the energy density in J/m3 that the state holds and can give back.
	Stored(s *State) float64
	// Dissipated is the heat in J/m3 that all committed moves have made since the start.
	Dissipated(s *State) float64
}

// State is what a piece of core remembers. It is plain data; the zero value belongs to no law, [Law.Start] makes one.
type State struct {
	x, m float64   // Jiles-Atherton: reduced effective field and magnetisation; play: field strength in A/m, magnetisation
	cell int       // Jiles-Atherton: interval of the table that holds x
	hr   []float64 // play: reversible field of each cell in A/m
	own  []float64 // play: magnetisation of each cell in A/m
	rest []float64 // play: magnetisation in A/m of cell k and those after it
	heat float64   // play: dissipated energy in J/m3
}

// Clone gives an independent copy of the state.
func (s *State) Clone() State {
	c := *s
	if s.hr != nil {
		n := len(s.hr)
		all := make([]float64, 3*n+1)
		c.hr, c.own, c.rest = all[:n:n], all[n:2*n:2*n], all[2*n:]
		copy(c.hr, s.hr)
		copy(c.own, s.own)
		copy(c.rest, s.rest)
	}
	return c
}

// Point is a point of a law on a move: the committed state itself or a trial from it.
type Point struct {
	X  float64 // effective field in A/m: H + alpha M for Jiles-Atherton, H for the play law
	H  float64 // field strength in A/m
	B  float64 // flux density in T
	DH float64 // dH/dX in the direction of the move
	DB float64 // dB/dX in T m/A in the direction of the move

	x, m float64
	cell int
}

// Slope gives dB/dH in H/m in the direction of the move.
func (p *Point) Slope() float64 { return p.DB / p.DH }
