package draw

import "math"

// contour finds the lines of constant value v of a function given at the nodes x, y of a tensor grid. Grid cells for
// which skip reports true are left out. Lines run from the lowest row and column on, so that their order is fixed.
func contour(x, y []float64, f [][]float64, v float64, skip func(i, j int) bool) [][]point {
	t := tracer{x: x, y: y, f: f, v: v, next: map[int][]int{}}
	for j := 0; j+1 < len(y); j++ {
		for i := 0; i+1 < len(x); i++ {
			if skip == nil || !skip(i, j) {
				t.square(i, j)
			}
		}
	}
	return t.chains()
}

// tracer joins the pieces of a contour. Edges of the grid are numbered: 2(j*nx+i) runs from node (i, j) eastward,
// 2(j*nx+i)+1 northward.
type tracer struct {
	x, y  []float64
	f     [][]float64
	v     float64
	next  map[int][]int // from edge to the edges that the contour joins it to
	edges []int         // in the order in which they were met
}

func (t *tracer) above(i, j int) bool { return t.f[j][i] >= t.v }

// square adds the pieces in the grid cell between nodes (i, j) and (i+1, j+1).
func (t *tracer) square(i, j int) {
	nx := len(t.x)
	south, north := 2*(j*nx+i), 2*((j+1)*nx+i)
	west, east := south+1, 2*(j*nx+i+1)+1
	var cuts []int
	a, b, c, d := t.above(i, j), t.above(i+1, j), t.above(i+1, j+1), t.above(i, j+1)
	if a != b {
		cuts = append(cuts, south)
	}
	if b != c {
		cuts = append(cuts, east)
	}
	if c != d {
		cuts = append(cuts, north)
	}
	if d != a {
		cuts = append(cuts, west)
	}
	for k := 0; k+1 < len(cuts); k += 2 {
		t.join(cuts[k], cuts[k+1])
	}
}

func (t *tracer) join(a, b int) {
	for _, e := range []int{a, b} {
		if t.next[e] == nil {
			t.edges = append(t.edges, e)
		}
	}
	t.next[a] = append(t.next[a], b)
	t.next[b] = append(t.next[b], a)
}

// at is the point on an edge where the function has the value.
func (t *tracer) at(e int) point {
	nx := len(t.x)
	j, i := e/2/nx, e/2%nx
	i2, j2 := i+1, j
	if e%2 == 1 {
		i2, j2 = i, j+1
	}
	a, b := t.f[j][i], t.f[j2][i2]
	s := 0.5
	if a != b {
		s = math.Min(1, math.Max(0, (t.v-a)/(b-a)))
	}
	return point{t.x[i] + s*(t.x[i2]-t.x[i]), t.y[j] + s*(t.y[j2]-t.y[j])}
}

// chains gives the contour's lines: first those with ends, then closed ones.
func (t *tracer) chains() [][]point {
	var lines [][]point
	done := map[int]bool{}
	walk := func(e int) {
		var line []point
		for {
			done[e] = true
			line = append(line, t.at(e))
			on := -1
			for _, n := range t.next[e] {
				if !done[n] {
					on = n
					break
				}
			}
			if on < 0 {
				break
			}
			e = on
		}
		if len(line) > 1 {
			lines = append(lines, line)
		}
	}
	for _, e := range t.edges {
		if len(t.next[e]) == 1 && !done[e] {
			walk(e)
		}
	}
	for _, e := range t.edges {
		if !done[e] {
			walk(e)
		}
	}
	return lines
}

// frame is a rectangle, x0 < x1, y0 < y1.
type frame struct{ x0, y0, x1, y1 float64 }

// part gives the shares s0 < s1 of the line from a to b that lie inside the frame; ok is false where none do.
// Source: Y.-D. Liang, B. A. Barsky, ACM Trans. Graphics 3 (1984) 1-22.
func (r frame) part(a, b point) (s0, s1 float64, ok bool) {
	s0, s1 = 0, 1
	dx, dy := b.x-a.x, b.y-a.y
	for _, e := range [4][2]float64{{-dx, a.x - r.x0}, {dx, r.x1 - a.x}, {-dy, a.y - r.y0}, {dy, r.y1 - a.y}} {
		p, q := e[0], e[1]
		switch {
		case p == 0:
			if q < 0 {
				return 0, 0, false
			}
		case p < 0:
			s0 = math.Max(s0, q/p)
		default:
			s1 = math.Min(s1, q/p)
		}
	}
	return s0, s1, s0 < s1
}

// inside cuts a polyline to what lies in the frame.
func (r frame) inside(line []point) [][]point {
	var out [][]point
	var now []point
	for k := 0; k+1 < len(line); k++ {
		a, b := line[k], line[k+1]
		s0, s1, ok := r.part(a, b)
		if !ok {
			out, now = flush(out, now)
			continue
		}
		if s0 > 0 || len(now) == 0 {
			out, now = flush(out, now)
			now = append(now, between(a, b, s0))
		}
		now = append(now, between(a, b, s1))
		if s1 < 1 {
			out, now = flush(out, now)
		}
	}
	out, _ = flush(out, now)
	return out
}

// outside cuts a polyline to what lies out of the frame.
func (r frame) outside(line []point) [][]point {
	var out [][]point
	var now []point
	for k := 0; k+1 < len(line); k++ {
		a, b := line[k], line[k+1]
		s0, s1, ok := r.part(a, b)
		if !ok {
			s0, s1 = 1, 1
		}
		if s0 > 0 {
			if len(now) == 0 {
				now = append(now, a)
			}
			now = append(now, between(a, b, s0))
		}
		if s1 < 1 || s0 < s1 {
			if s0 < s1 {
				out, now = flush(out, now)
			}
			if s1 < 1 {
				now = append(now, between(a, b, s1), b)
			}
		}
	}
	out, _ = flush(out, now)
	return out
}

func flush(out [][]point, now []point) ([][]point, []point) {
	if len(now) > 1 {
		out = append(out, now)
	}
	return out, nil
}

func between(a, b point, s float64) point {
	switch s {
	case 0:
		return a
	case 1:
		return b
	}
	return point{a.x + s*(b.x-a.x), a.y + s*(b.y-a.y)}
}
