package hyst

import (
	"math"

	"ampturn/magcirc/internal/num"
)

// The table of the Langevin function: nodes z_k = 2 sinh(k spacing) for k = -nodes..nodes, which lie at the same places
// whatever the move, so that a trial is a continuous function of its end. Between them L is the cubic with the exact
// values and slopes at the nodes; it misses L by 4e-8 at most.
const (
	spacing = 0.04
	nodes   = 421 // z up to 2e7: at 1 A/m of shape parameter all fields that there are
	cells   = 2 * nodes
	first   = 0         // the cell below the table
	last    = cells + 1 // the cell above the table
)

// cell is an interval of the table with the cubic l + v (c1 + v (c2 + v c3)), v = z - z0.
type cell struct{ z0, l, c1, c2, c3 float64 }

// langevin holds the cells 1..cells; cell 0 and cell cells+1 are what lies outside, where L = 1 - 1/z.
var langevin = func() *[last + 1]cell {
	var t [last + 1]cell
	for i := 1; i <= cells; i++ {
		z0, z1 := node(i), node(i+1)
		l0, s0 := num.Langevin(z0)
		l1, s1 := num.Langevin(z1)
		t[i] = hermite(z0, z1-z0, l0, l1, s0, s1)
	}
	l, s := num.Langevin(node(last))
	t[last] = cell{z0: node(last), l: l, c1: s}
	t[first] = cell{z0: math.Inf(-1), l: -1}
	return &t
}()

// node gives the lower end of cell i.
func node(i int) float64 {
	k := i - 1 - nodes
	return math.Copysign(2*math.Sinh(math.Abs(float64(k))*spacing), float64(k))
}

// hermite gives the cubic over [z0, z0+w] with values l0, l1 and slopes s0, s1 at its ends.
func hermite(z0, w, l0, l1, s0, s1 float64) cell {
	d := (l1 - l0) / w
	return cell{z0, l0, s0, (3*d - 2*s0 - s1) / w, (s0 + s1 - 2*d) / (w * w)}
}

// at gives L and L' at z, which lies in cell i or at its end.
func at(i int, z float64) (l, slope float64) {
	if i == first || i == last {
		r := 1 / math.Abs(z)
		return math.Copysign(1-r, z), r * r
	}
	c := &langevin[i]
	v := z - c.z0
	return c.l + v*(c.c1+v*(c.c2+v*c.c3)), c.c1 + v*(2*c.c2+3*v*c.c3)
}

// mirror gives the cell of -z for the cell of z.
func mirror(i int) int { return last - i }

// find gives the cell that holds z.
func find(z float64) int {
	i := nodes + 1 + int(math.Floor(math.Asinh(z/2)/spacing))
	if i <= first || math.IsNaN(z) {
		return first
	}
	if i >= last {
		return last
	}
	for i < last && z >= langevin[i+1].z0 {
		i++
	}
	for i > first && z < langevin[i].z0 {
		i--
	}
	return i
}
