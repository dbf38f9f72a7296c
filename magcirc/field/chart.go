package field

// Map is a solved field for drawing. Lines of constant Potential are equipotentials, lines of constant Flux are field
// lines. Between two field lines that differ by dF flows the flux mu0*dF for a unit difference of potential (per metre
// of depth in the plane, for the whole turn about the axis).
type Map struct {
	X, Y      []float64   // nodes: from the axis outwards, from the mid-plane upwards, m
	Potential [][]float64 // Potential[j][i] at X[i], Y[j]: 1 in the pole, 0 at the mid-plane
	XF, YF    []float64   // corners of the finite volumes, where the flux function is given, m
	Flux      [][]float64 // Flux[j][i] at XF[i], YF[j]: flux over mu0 that lands between the axis and the field line through that point
	Left      float64     // where the pole's face begins, m: 0 or the radius of the hole
	Right     float64     // where it ends, m
	Face      float64     // height of the face over the mid-plane, half the gap, m
	Top       float64     // height of the end of the pole's side, m
	Round     bool        // about an axis at X = 0
	Boundary  Boundary
}

// chart collects the solved level as a map.
func (s *level) chart() Map {
	nx, ny := len(s.x), len(s.y)
	m := Map{X: s.x, Y: s.y, Left: s.x[s.left], Right: s.x[s.right], Face: s.y[s.face], Top: s.y[s.top],
		Round: s.round, Boundary: s.boundary, XF: corners(s.x), YF: corners(s.y)}
	if s.left == 0 {
		m.Left = 0
	}
	for j := range ny {
		m.Potential = append(m.Potential, s.potential[j*nx:(j+1)*nx])
	}
	m.Flux = s.fluxFunction()
	return m
}

// corners gives the limits of the finite volumes along one coordinate.
func corners(x []float64) []float64 {
	c := make([]float64, len(x)+1)
	for k := range x {
		c[k], c[k+1] = bounds(x, k)
	}
	return c
}

// fluxFunction adds the flux through the faces of the finite volumes: outwards along the mid-plane, then upwards.
func (s *level) fluxFunction() [][]float64 {
	nx, ny := len(s.x), len(s.y)
	f := make([][]float64, ny+1)
	for j := range f {
		f[j] = make([]float64, nx+1)
	}
	for i := range nx {
		f[0][i+1] = f[0][i] + s.north[i]*s.potential[i+nx]
	}
	for j := range ny {
		east := 0.0 // flux out of volume (i, j) towards the boundary: it lands further out than the point
		for i := range nx {
			k := j*nx + i
			if i < nx-1 {
				east = s.east[k] * (s.potential[k] - s.potential[k+1])
			} else if s.boundary != Iron || j == 0 {
				east = 0
			} // else iron takes up what comes in
			f[j+1][i+1] = f[j][i+1] + east
		}
	}
	return f
}
