package field

import (
	"errors"
	"math"
	"math/rand"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// exactEdge is the exact permeance over mu0, per metre of depth, of one edge of a wide block over the plane in the
// middle of a gap g, beyond that of the uniform field, up to the height h of the block's side.
//
// Source: Schwarz-Christoffel mapping of a corner over a plane, derived here from dz/dw = (g/2 pi) sqrt(w+1)/w:
// h/g = (s - atan s)/pi, P = (ln(1 + s^2) + 2 - 2 ln 2)/pi. Its limit for large h is the logarithmic form of
// J. Muhlethaler, J. W. Kolar, A. Ecklebe, "A novel approach for 3D air gap reluctance calculations", ICPE 2011.
func exactEdge(h, g float64) float64 {
	lo, hi := 0.0, 10+math.Pi*h/g
	for range 200 {
		if s := (lo + hi) / 2; s-math.Atan(s) > math.Pi*h/g {
			hi = s
		} else {
			lo = s
		}
	}
	return (math.Log1p(lo*lo) + 2 - 2*math.Ln2) / math.Pi
}

// TestPlaneAgainstMapping holds the solution to 0.5 % of the fringing itself (far less of the whole) where the pole is
// wide enough for the corner's mapping to be exact: the other corner's influence falls as exp(-2 pi w/g).
func TestPlaneAgainstMapping(t *testing.T) {
	for _, c := range []struct{ w, g, h float64 }{
		{10e-3, 1e-3, 10e-3}, {10e-3, 0.5e-3, 10e-3}, {10e-3, 1e-3, 2e-3}, {10e-3, 4e-3, 20e-3}, {20e-3, 0.1e-3, 30e-3}, {8e-3, 8e-3, 8e-3},
	} {
		s, err := PlaneGap(Plane{Width: c.w, Length: c.g, Wall: c.h})
		if err != nil {
			t.Fatal(err)
		}
		fringe := exactEdge(c.h, c.g) * c.g / c.w
		if e := (s.Factor - 1 - fringe) / fringe; math.Abs(e) > 5e-4 {
			t.Errorf("w %g g %g h %g: fringing %.6f, exact %.6f, off by %.2g", c.w, c.g, c.h, s.Factor-1, fringe, e)
		}
		if e := math.Abs(s.Fine - 1 - fringe); e > 1.5*s.Uncertainty*s.Factor+1e-9 {
			t.Errorf("w %g g %g h %g: the fine grid is off by %.2g, estimated %.2g", c.w, c.g, c.h, e, s.Uncertainty*s.Factor)
		}
		if e := s.Permeance/(phys.Mu0*(c.w/c.g+exactEdge(c.h, c.g))) - 1; math.Abs(e) > 5e-4 {
			t.Errorf("permeance off by %.2g", e)
		}
	}
}

// TestOrder finds the order of convergence from four grids against the exact mapping.
func TestOrder(t *testing.T) {
	exact := 1 + exactEdge(10, 1)/10
	var last float64
	for _, n := range []int{16, 32, 64, 128} {
		s, err := PlaneGap(Plane{Width: 10, Length: 1, Wall: 10, Steps: n})
		if err != nil {
			t.Fatal(err)
		}
		e := s.Fine - exact
		if last != 0 {
			if p := math.Log2(last / e); math.Abs(p-2) > 0.05 {
				t.Errorf("%d steps: order %.3f, wanted 2", n, p)
			}
		}
		last = e
	}
}

// TestRoundFactors checks the factors of a round pole of radius r0 = 20, 5 and 2 gaps. Geometry, found by deriving the
// two-dimensional estimate 1 + P g/r0 that belongs to them (1.121, 1.484, 2.210, hence P = 2.42 and h = 10 g): two
// poles at the full gap g, sides 10 g high, no flux crosses a wall 10 g beside the pole and a plane 10 g above the face.
//
// Source: an independent finite-volume prototype, converged to 1e-4, 5e-4 and 2e-3.
func TestRoundFactors(t *testing.T) {
	for _, c := range []struct{ r, want, tol, strip float64 }{{20, 1.1331, 2e-4, 1.121}, {5, 1.645, 5e-4, 1.484}, {2, 3.106, 2e-3, 2.210}} {
		s, err := RoundGap(Round{Outer: 2 * c.r, Length: 1, Wall: 10, Span: 10, Boundary: Mirror})
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(s.Factor-c.want) > c.tol {
			t.Errorf("r0/g %g: factor %.5f, wanted %.4f +- %g", c.r, s.Factor, c.want, c.tol)
		}
		if strip := 1 + exactEdge(10, 1)/c.r; math.Abs(strip-c.strip) > 6e-4 {
			t.Errorf("r0/g %g: estimate %.4f, wanted %.3f: not the geometry meant", c.r, strip, c.strip)
		}
	}
}

// TestScaled: a factor has no dimension.
func TestScaled(t *testing.T) {
	rnd := rand.New(rand.NewSource(1))
	for range 5 {
		k := math.Exp(rnd.NormFloat64() * 3)
		p := Plane{Width: 9e-3, Length: 0.7e-3, Wall: 6e-3, Span: 4e-3, Boundary: Mirror, Steps: 16}
		q := Plane{Width: k * p.Width, Length: k * p.Length, Wall: k * p.Wall, Span: k * p.Span, Boundary: Mirror, Steps: 16}
		a, err := PlaneGap(p)
		if err != nil {
			t.Fatal(err)
		}
		b, err := PlaneGap(q)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(a.Factor-b.Factor) > 1e-9 {
			t.Errorf("scale %g: %.12f and %.12f", k, a.Factor, b.Factor)
		}
	}
}

// TestMirrored solves the whole plane pole with both its sides, and compares with the half; then sees that its left and
// right sides carry the same flux.
func TestMirrored(t *testing.T) {
	whole := geometry{half: 8e-3, hole: 5e-3, gap: 0.5e-3, wall: 6e-3, span: 5e-3, boundary: Mirror}
	m, err := whole.grid(32).solve()
	if err != nil {
		t.Fatal(err)
	}
	half, err := PlaneGap(Plane{Width: 8e-3, Length: 1e-3, Wall: 6e-3, Span: 5e-3, Boundary: Mirror})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(m.factor-half.Fine) > 1e-8 {
		t.Errorf("whole pole %.10f, half %.10f", m.factor, half.Fine)
	}
	nx := len(m.x)
	for j := range m.y {
		for i := range m.x {
			if d := m.potential[j*nx+i] - m.potential[j*nx+nx-1-i]; math.Abs(d) > 1e-8 {
				t.Fatalf("potentials at column %d of row %d differ by %g from their mirror image", i, j, d)
			}
		}
	}
}

// TestLargeRing: a ring of large radius is a plane gap.
func TestLargeRing(t *testing.T) {
	ring, err := RoundGap(Round{Outer: 816, Inner: 800, Length: 1, Wall: 6, Span: 5, Boundary: Mirror})
	if err != nil {
		t.Fatal(err)
	}
	whole := geometry{half: 8, hole: 400, gap: 0.5, wall: 6, span: 5, boundary: Mirror}
	strip, err := solve(whole, 32)
	if err != nil {
		t.Fatal(err)
	}
	// The side ways differ in the two geometries by the curvature, of the order of breadth over radius squared here.
	if e := ring.Factor/strip.Factor - 1; math.Abs(e) > 2e-3 {
		t.Errorf("ring %.6f, plane %.6f", ring.Factor, strip.Factor)
	}
}

// TestBoundaries: a wall far away is no wall; iron draws more flux than the open space, a mirror less; both the more
// the nearer they are.
func TestBoundaries(t *testing.T) {
	factor := func(b Boundary, span float64) float64 {
		s, err := PlaneGap(Plane{Width: 10, Length: 1, Wall: 5, Span: span, Boundary: b})
		if err != nil {
			t.Fatal(err)
		}
		return s.Factor
	}
	open := factor(Open, 0)
	lastMirror, lastIron := 1.0, math.Inf(1)
	for _, span := range []float64{1, 2, 5, 20} {
		mirror, iron := factor(Mirror, span), factor(Iron, span)
		if !(mirror > lastMirror && iron < lastIron) {
			t.Errorf("span %g: mirror %.5f, iron %.5f are not nearer to each other than before", span, mirror, iron)
		}
		if !(iron > open) {
			t.Errorf("span %g: iron %.5f, open %.5f", span, iron, open)
		}
		lastMirror, lastIron = mirror, iron
	}
	if near := factor(Mirror, 1); !(near < open) {
		t.Errorf("a mirror at one gap's length leaves %.5f, open %.5f", near, open)
	}
	if d := factor(Mirror, 400) - factor(Iron, 400); math.Abs(d) > 2e-3 {
		t.Errorf("at 400 gaps the kind of wall still matters: %.5f", d)
	}
}

// TestBalance: what leaves the pole arrives at the mid-plane and the iron wall, to the tolerance of the equations.
func TestBalance(t *testing.T) {
	for _, g := range []geometry{
		{half: 5, gap: 0.5, wall: 5, span: 3, boundary: Mirror},
		{half: 5, gap: 0.5, wall: 5, span: 3, boundary: Iron},
		{half: 3, hole: 2, gap: 0.5, wall: 5, span: 3, boundary: Iron, round: true},
	} {
		m, err := g.grid(16).solve()
		if err != nil {
			t.Fatal(err)
		}
		// With a closed boundary the whole volume at the end of the side counts, and there is none above it.
		want := m.factor * m.faceArea() / m.gap
		c := m.chart()
		last := c.Flux[len(c.Flux)-1]
		if got := last[len(last)-1]; math.Abs(got/want-1) > 1e-8 {
			t.Errorf("%v: pole %.9g, mid-plane and wall %.9g", g, want, got)
		}
		for j := 1; j <= m.face; j++ { // below the face the flux function grows outwards everywhere
			for i := 1; i < len(c.XF); i++ {
				if c.Flux[j][i] < c.Flux[j][i-1]-1e-9 {
					t.Fatalf("%v: flux function falls at %d, %d", g, i, j)
				}
			}
		}
	}
}

// TestExtremes: long and flat gaps, tall sides, narrow windows are solved, or refused beyond a ratio of 100000.
func TestExtremes(t *testing.T) {
	rnd := rand.New(rand.NewSource(2))
	pick := func() float64 { return math.Exp(rnd.Float64() * math.Log(30000)) }
	for range 60 {
		r := Round{Outer: 2 * pick(), Length: pick(), Wall: pick(), Span: pick(), Boundary: Boundary(rnd.Intn(3))}
		s, err := RoundGap(r)
		if err != nil {
			var e *magcirc.Error
			if errors.As(err, &e) && e.Code == magcirc.BadValue {
				continue
			}
			t.Fatalf("%+v: %v", r, err)
		}
		if !(s.Factor > 0.999) || s.Uncertainty > 0.05 {
			t.Errorf("%+v: factor %g +- %g", r, s.Factor, s.Uncertainty)
		}
	}
}

func TestRefusals(t *testing.T) {
	for name, p := range map[string]Plane{
		"no width": {Length: 1, Wall: 1}, "negative gap": {Width: 1, Length: -1, Wall: 1}, "no side": {Width: 1, Length: 1},
		"not a number": {Width: math.NaN(), Length: 1, Wall: 1}, "infinite": {Width: 1, Length: math.Inf(1), Wall: 1},
		"no span": {Width: 1, Length: 1, Wall: 1, Boundary: Mirror}, "odd steps": {Width: 1, Length: 1, Wall: 1, Steps: 17},
		"too flat": {Width: 1, Length: 1e-6, Wall: 1}, "boundary": {Width: 1, Length: 1, Wall: 1, Boundary: 7},
	} {
		_, err := PlaneGap(p)
		var e *magcirc.Error
		if !errors.As(err, &e) || e.Code != magcirc.BadValue {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := RoundGap(Round{Outer: 2, Inner: 3, Length: 1, Wall: 1}); err == nil {
		t.Error("a hole larger than the pole was accepted")
	}
}

func benchmarkPlane(b *testing.B, steps int) {
	for b.Loop() {
		if _, err := PlaneGap(Plane{Width: 10e-3, Length: 1e-3, Wall: 10e-3, Steps: steps}); err != nil {
			b.Fatal(err)
		}
	}
}

// The benchmarks give the time of both grids; the fringing's error against the exact mapping is 1.5e-4 with 16 steps,
// 3e-6 with 32.
func BenchmarkPlane16(b *testing.B) { benchmarkPlane(b, 16) }
func BenchmarkPlane32(b *testing.B) { benchmarkPlane(b, 32) }

func BenchmarkRound32(b *testing.B) {
	for b.Loop() {
		if _, err := RoundGap(Round{Outer: 8.4e-3, Length: 1e-3, Wall: 5e-3}); err != nil {
			b.Fatal(err)
		}
	}
}
