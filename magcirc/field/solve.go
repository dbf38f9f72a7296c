package field

import (
	"fmt"
	"math"

	"ampturn/magcirc"
)

// level is the solution on one grid.
type level struct {
	*grid
	potential  []float64 // at node (i, j): j*len(x) + i
	east       []float64 // conductance over mu0 from node (i, j) to (i+1, j)
	north      []float64 // conductance over mu0 from node (i, j) to (i, j+1)
	factor     float64
	unknowns   int
	iterations int
}

// inPole reports whether node (i, j) lies in or on the pole.
func (m *grid) inPole(i, j int) bool { return j >= m.face && i >= m.left && i <= m.right }

// fixed reports whether the potential of node (i, j) is given, and gives it.
func (m *grid) fixed(i, j int) (float64, bool) {
	switch {
	case m.inPole(i, j):
		return 1, true
	case j == 0, m.boundary == Iron && i == len(m.x)-1:
		return 0, true
	}
	return 0, false
}

// bounds gives the finite volume around node k of the coordinates x.
func bounds(x []float64, k int) (lo, hi float64) {
	lo, hi = x[k], x[k]
	if k > 0 {
		lo = (x[k-1] + x[k]) / 2
	}
	if k < len(x)-1 {
		hi = (x[k] + x[k+1]) / 2
	}
	return lo, hi
}

// eastward is the conductance over mu0 from column i to i+1 per height, northArea the area of volume i seen from
// above: per metre of depth in the plane, for the whole turn about the axis.
func (m *grid) eastward(i int) float64 {
	a, b := m.x[i], m.x[i+1]
	if !m.round {
		return 1 / (b - a)
	}
	if a == 0 {
		return math.Pi * (a + b) / (b - a)
	}
	return 2 * math.Pi / math.Log(b/a)
}

func (m *grid) northArea(i int) float64 {
	lo, hi := bounds(m.x, i)
	if !m.round {
		return hi - lo
	}
	return math.Pi * (hi - lo) * (hi + lo)
}

// solve assembles and solves the potential and sums the flux of the pole.
func (m *grid) solve() (*level, error) {
	nx, ny := len(m.x), len(m.y)
	s := &level{grid: m, potential: make([]float64, nx*ny), east: make([]float64, nx*ny), north: make([]float64, nx*ny)}
	s.conductances()
	number := make([]int, nx*ny)
	var sys system
	for j := range ny {
		for i := range nx {
			k := j*nx + i
			v, given := m.fixed(i, j)
			if given {
				s.potential[k], number[k] = v, -1
				continue
			}
			number[k] = sys.add()
		}
	}
	for j := range ny {
		for i := range nx {
			k := j*nx + i
			if i < nx-1 {
				sys.join(number[k], number[k+1], s.east[k], s.potential[k], s.potential[k+1], false)
			}
			if j < ny-1 {
				sys.join(number[k], number[k+nx], s.north[k], s.potential[k], s.potential[k+nx], true)
			}
		}
	}
	v, it, err := sys.solve()
	if err != nil {
		return nil, err
	}
	for k, n := range number {
		if n >= 0 {
			s.potential[k] = v[n]
		}
	}
	s.unknowns, s.iterations = len(v), it
	s.factor = s.flux() * m.gap / m.faceArea()
	return s, nil
}

// conductances fills the conductances of the grid.
func (s *level) conductances() {
	nx, ny := len(s.x), len(s.y)
	for i := range nx {
		area := s.northArea(i)
		for j := range ny - 1 {
			s.north[j*nx+i] = area / (s.y[j+1] - s.y[j])
		}
		if i == nx-1 {
			break
		}
		e := s.eastward(i)
		for j := range ny {
			lo, hi := bounds(s.y, j)
			s.east[j*nx+i] = e * (hi - lo)
		}
	}
}

// flux sums the reactions at the pole's face and at its sides up to their end: flux over mu0 at unit potential.
func (s *level) flux() float64 {
	nx, sum := len(s.x), 0.0
	for i := s.left; i <= s.right; i++ {
		k := s.face*nx + i
		sum += s.north[k-nx] * (1 - s.potential[k-nx])
	}
	for j := s.face; j <= s.top; j++ {
		share := 1.0
		if j == s.top { // the lower half of the volume
			lo, hi := bounds(s.y, j)
			share = (s.y[j] - lo) / (hi - lo)
		}
		k := j*nx + s.right
		sum += share * s.east[k] * (1 - s.potential[k+1])
		if s.left > 0 {
			k = j*nx + s.left
			sum += share * s.east[k-1] * (1 - s.potential[k-1])
		}
	}
	return sum
}

// faceArea is the area of the pole's face, of its half in the plane.
func (g geometry) faceArea() float64 {
	if g.round {
		return math.Pi * g.half * (g.half + 2*g.hole)
	}
	return g.half
}

// system is a symmetric positive definite system on a grid: each unknown is joined to at most one west and one south
// neighbour of lower number.
type system struct {
	diag, rhs       []float64
	west, south     []float64 // conductances to them
	westOf, southOf []int     // their numbers, -1: none
}

// add appends an unknown and gives its number.
func (a *system) add() int {
	a.diag = append(a.diag, 0)
	a.rhs = append(a.rhs, 0)
	a.west, a.south = append(a.west, 0), append(a.south, 0)
	a.westOf, a.southOf = append(a.westOf, -1), append(a.southOf, -1)
	return len(a.diag) - 1
}

// join connects nodes p and q (of higher number) by the conductance c; a number below 0 is a node of given potential.
func (a *system) join(p, q int, c, vp, vq float64, upward bool) {
	if p >= 0 {
		a.diag[p] += c
	}
	if q >= 0 {
		a.diag[q] += c
	}
	switch {
	case p >= 0 && q >= 0 && upward:
		a.south[q], a.southOf[q] = c, p
	case p >= 0 && q >= 0:
		a.west[q], a.westOf[q] = c, p
	case p >= 0:
		a.rhs[p] += c * vq
	case q >= 0:
		a.rhs[q] += c * vp
	}
}

// lumping is the share of the dropped fill-in that modified incomplete Cholesky adds to the diagonal.
const lumping = 0.97

// factorise gives the inverse pivots of the modified incomplete Cholesky factorisation without fill-in.
func (a *system) factorise() []float64 {
	n := len(a.diag)
	east, north := make([]float64, n), make([]float64, n) // conductances to the neighbours of higher number
	for k := range n {
		if w := a.westOf[k]; w >= 0 {
			east[w] = a.west[k]
		}
		if s := a.southOf[k]; s >= 0 {
			north[s] = a.south[k]
		}
	}
	inv := make([]float64, n)
	for k := range n {
		d := a.diag[k]
		if w := a.westOf[k]; w >= 0 {
			d -= a.west[k] * (a.west[k] + lumping*north[w]) * inv[w]
		}
		if s := a.southOf[k]; s >= 0 {
			d -= a.south[k] * (a.south[k] + lumping*east[s]) * inv[s]
		}
		inv[k] = 1 / d
	}
	return inv
}

// precondition solves (L D L') z = r with the pivots 1/inv.
func (a *system) precondition(inv, r, z []float64) {
	for k := range r {
		t := r[k]
		if w := a.westOf[k]; w >= 0 {
			t += a.west[k] * z[w]
		}
		if s := a.southOf[k]; s >= 0 {
			t += a.south[k] * z[s]
		}
		z[k] = t * inv[k]
	}
	for k := len(r) - 1; k >= 0; k-- {
		if w := a.westOf[k]; w >= 0 {
			z[w] += a.west[k] * z[k] * inv[w]
		}
		if s := a.southOf[k]; s >= 0 {
			z[s] += a.south[k] * z[k] * inv[s]
		}
	}
}

// multiply sets y = A x.
func (a *system) multiply(x, y []float64) {
	for k := range x {
		t := a.diag[k] * x[k]
		if w := a.westOf[k]; w >= 0 {
			t -= a.west[k] * x[w]
			y[w] -= a.west[k] * x[k]
		}
		if s := a.southOf[k]; s >= 0 {
			t -= a.south[k] * x[s]
			y[s] -= a.south[k] * x[k]
		}
		y[k] = t
	}
}

// tolerance is the residual asked for, in the norm of the preconditioner, relative to the start.
const tolerance = 1e-10

// solve runs preconditioned conjugate gradients from zero.
func (a *system) solve() (x []float64, iterations int, err error) {
	n := len(a.diag)
	inv := a.factorise()
	x = make([]float64, n)
	r := append([]float64(nil), a.rhs...)
	z, p, q := make([]float64, n), make([]float64, n), make([]float64, n)
	a.precondition(inv, r, z)
	copy(p, z)
	rz := dot(r, z)
	stop := rz * tolerance * tolerance
	limit := 20*int(math.Sqrt(float64(n))) + 200
	for rz > stop {
		if iterations++; iterations > limit {
			return nil, iterations, &magcirc.Error{Code: magcirc.NoConvergence, Elem: "field of the gap",
				Msg: fmt.Sprintf("%d unknowns not solved in %d iterations", n, limit), Quantity: "residual", Got: math.Sqrt(rz), Limit: math.Sqrt(stop)}
		}
		a.multiply(p, q)
		alpha := rz / dot(p, q)
		for k := range x {
			x[k] += alpha * p[k]
			r[k] -= alpha * q[k]
		}
		a.precondition(inv, r, z)
		next := dot(r, z)
		beta := next / rz
		rz = next
		for k := range p {
			p[k] = z[k] + beta*p[k]
		}
	}
	return x, iterations, nil
}

func dot(a, b []float64) float64 {
	s := 0.0
	for k := range a {
		s += a[k] * b[k]
	}
	return s
}
