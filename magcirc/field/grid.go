package field

import "math"

// geometry is one pole above the mid-plane: its face from hole to hole+half at the height gap, its sides above.
type geometry struct {
	half     float64 // extent of the face from the axis of symmetry (plane), or from the hole (round), m
	hole     float64 // radius of the hole; 0: none
	gap      float64 // height of the face over the mid-plane, half the gap's length, m
	wall     float64 // height of the pole's side, m
	span     float64 // distance from the pole's side to the boundary, m
	boundary Boundary
	round    bool
}

// grid is the tensor grid. Nodes (i, j) with left <= i <= right and j >= face lie in or on the pole.
type grid struct {
	geometry
	x, y        []float64
	left, right int // columns of the pole's sides; left is 0 where there is no hole
	face        int // row of the pole's face
	top         int // row of the end of the pole's side
}

// Grading: near an edge the step falls as the square root of the distance, since the potential there goes as the
// distance to the power 2/3; the distance itself is edgeScale*xi^2 times the
// smallest length of the pole and the gap, for a share xi of a segment's steps. Far from
// the edge the step grows exponentially.
const (
	edgeScale = 2.0
	farReach  = 25 // an open boundary lies at this many times the largest length near the gap
)

// grid lays the nodes with n steps in each segment, a segment running from an edge of the pole to a boundary.
func (g geometry) grid(n int) *grid {
	s := edgeScale * min(g.gap, g.half, g.wall)
	m := &grid{geometry: g}

	below := graded(g.gap, s, n)
	above := graded(g.wall, s, n)
	outside := graded(g.reach(), s, n)
	m.y = append(mirrored(below, g.gap), shifted(above, g.gap)...)
	m.face, m.top = n, 2*n
	switch {
	case g.hole > 0:
		m.x = mirrored(graded(g.hole, s, n), g.hole)
		m.x = append(m.x, shifted(twoSided(g.half, s, n), g.hole)...)
		m.left, m.right = n, 3*n
	default:
		m.x = mirrored(graded(g.half, s, n), g.half)
		m.right = n
	}
	edge := g.hole + g.half
	m.x = append(m.x, shifted(outside, edge)...)
	if g.boundary == Open {
		far := farReach * (g.wall + g.gap)
		m.x = append(m.x, shifted(continued(g.wall, s, far, n), edge)...)
		m.y = append(m.y, shifted(continued(g.wall, s, far, n), g.gap)...)
	}
	return m
}

// reach is the end of the outer segment: the window's wall, or for an open boundary the height of the pole's side.
func (g geometry) reach() float64 {
	if g.boundary == Open {
		return g.wall
	}
	return g.span
}

// graded gives the distances d(1/n), d(2/n) ... d(1) = length of nodes from an edge at d = 0:
//
//	d(xi) = length (exp(a xi^2) - 1)/(exp(a) - 1),  near the edge scale*xi^2
func graded(length, scale float64, n int) []float64 {
	a := rate(scale / length)
	d := make([]float64, n)
	for k := range d {
		xi := float64(k+1) / float64(n)
		d[k] = length * growth(a, xi*xi)
	}
	d[n-1] = length
	return d
}

// twoSided grades a segment towards both its ends, 2n steps.
func twoSided(length, scale float64, n int) []float64 {
	half := graded(length/2, scale, n)
	return append(half, shifted(mirrored(half, length/2)[1:], length/2)...)
}

// mirrored turns distances from an edge at end into coordinates 0 ... end.
func mirrored(d []float64, end float64) []float64 {
	n := len(d)
	x := make([]float64, n+1)
	for k := range d {
		x[n-1-k] = end - d[k]
	}
	x[0], x[n] = 0, end
	return x
}

func shifted(d []float64, by float64) []float64 {
	x := make([]float64, len(d))
	for k := range d {
		x[k] = d[k] + by
	}
	return x
}

// continued carries a graded segment on from length to far in n/2 steps; the step grows on from the segment's last.
func continued(length, scale, far float64, n int) []float64 {
	a := rate(scale / length)
	slope := 2 * length // of the distance to the share of steps, at the segment's end
	if a > 0 {
		slope *= a / -math.Expm1(-a)
	}
	rest := far - length
	b := rate(slope / 2 / rest) // half as many steps as in the segment before
	out := make([]float64, n/2)
	for k := range out {
		out[k] = length + rest*growth(b, float64(k+1)/float64(len(out)))
	}
	out[len(out)-1] = far
	return out
}

// growth is (exp(a t) - 1)/(exp(a) - 1), and t at a = 0.
func growth(a, t float64) float64 {
	if math.Abs(a) < 1e-9 {
		return t
	}
	return math.Expm1(a*t) / math.Expm1(a)
}

// rate solves a/(exp(a) - 1) = r for a >= 0; 0 for r >= 1.
func rate(r float64) float64 {
	if r >= 1 {
		return 0
	}
	lo, hi := 0.0, 60.0
	for range 80 {
		a := (lo + hi) / 2
		if a/math.Expm1(a) > r {
			lo = a
		} else {
			hi = a
		}
	}
	return (lo + hi) / 2
}
