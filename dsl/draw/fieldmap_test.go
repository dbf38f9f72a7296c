package draw

import (
	"math"
	"strings"
	"testing"

	"ampturn/magcirc/field"
)

// maps are solved gaps of every kind.
func maps(t *testing.T) map[string]*field.Solution {
	t.Helper()
	all := map[string]*field.Solution{}
	keep := func(name string, s *field.Solution, err error) {
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		all[name] = s
	}
	s, err := field.PlaneGap(field.Plane{Width: 12e-3, Length: 2e-3, Wall: 15e-3})
	keep("open plane", s, err)
	s, err = field.PlaneGap(field.Plane{Width: 12e-3, Length: 2e-6, Wall: 15e-3})
	keep("joint", s, err)
	s, err = field.PlaneGap(field.Plane{Width: 2e-3, Length: 20e-3, Wall: 3e-3, Span: 5e-3, Boundary: field.Mirror})
	keep("long gap", s, err)
	s, err = field.RoundGap(field.Round{Outer: 8.4e-3, Length: 1.1e-3, Wall: 4.85e-3, Span: 4.3e-3, Boundary: field.Mirror})
	keep("pot", s, err)
	s, err = field.RoundGap(field.Round{Outer: 8.4e-3, Length: 0.2e-3, Wall: 4.85e-3, Span: 4.3e-3, Boundary: field.Iron})
	keep("short gap of a pot", s, err)
	s, err = field.RoundGap(field.Round{Outer: 20e-3, Inner: 10e-3, Length: 2e-3, Wall: 8e-3, Span: 6e-3, Boundary: field.Iron})
	keep("ring", s, err)
	return all
}

func TestFieldMaps(t *testing.T) {
	for name, s := range maps(t) {
		p := FieldMap("gap "+name, s)
		wellFormed(t, p.SVG)
		if q := FieldMap("gap "+name, s); q != p {
			t.Errorf("%s: two pictures of one field", name)
		}
		if len(p.SVG) > 150000 {
			t.Errorf("%s: %d bytes", name, len(p.SVG))
		}
		if strings.Contains(p.SVG, "NaN") || strings.Contains(p.SVG, "Inf") || strings.Contains(p.Text, "NaN") {
			t.Errorf("%s: a number is none", name)
		}
		if strings.Count(p.SVG, `stroke="`+blue+`"`) < 12 || strings.Count(p.SVG, "<rect") < 2 {
			t.Errorf("%s: lines or poles are missing", name)
		}
		v, c := newView(&s.Map), &canvas{}
		c.words(pad, 18, "start", "gap "+name)
		v.captions(c)
		clear(t, c, pageWidth, pageHeight)
		if g := 2 * s.Map.Face * v.scale; g < 1 {
			t.Errorf("%s: the gap is %.2f px", name, g)
		}
		if !strings.Contains(p.Text, "Fringing factor") {
			t.Errorf("%s: %s", name, p.Text)
		}
	}
}

// TestPolesClear: no field line is drawn inside a pole.
func TestPolesClear(t *testing.T) {
	pole := frame{1, 1, 3, 4}
	line := []point{{0, 2}, {2, 2}, {2.5, 3}, {2, 5}, {5, 2}, {0, 1.5}}
	total := 0.0
	for _, piece := range pole.outside(line) {
		for k := 0; k+1 < len(piece); k++ {
			a, b := piece[k], piece[k+1]
			if m := (point{(a.x + b.x) / 2, (a.y + b.y) / 2}); m.x > 1+1e-9 && m.x < 3-1e-9 && m.y > 1+1e-9 && m.y < 4-1e-9 {
				t.Errorf("piece through %v lies in the pole", m)
			}
			total += math.Hypot(b.x-a.x, b.y-a.y)
		}
	}
	inside := 0.0
	for _, piece := range pole.inside(line) {
		for k := 0; k+1 < len(piece); k++ {
			inside += math.Hypot(piece[k+1].x-piece[k].x, piece[k+1].y-piece[k].y)
		}
	}
	whole := 0.0
	for k := 0; k+1 < len(line); k++ {
		whole += math.Hypot(line[k+1].x-line[k].x, line[k+1].y-line[k].y)
	}
	if math.Abs(total+inside-whole) > 1e-9 {
		t.Errorf("outside %g and inside %g are not the whole %g", total, inside, whole)
	}
}

// TestContour: the contour of x^2 + y^2 is one arc of the right radius.
func TestContour(t *testing.T) {
	var x []float64
	for k := range 41 {
		x = append(x, float64(k)/20-1)
	}
	f := make([][]float64, len(x))
	for j := range f {
		f[j] = make([]float64, len(x))
		for i := range x {
			f[j][i] = x[i]*x[i] + x[j]*x[j]
		}
	}
	lines := contour(x, x, f, 0.5, nil)
	if len(lines) != 1 {
		t.Fatalf("%d lines, wanted 1", len(lines))
	}
	for _, p := range lines[0] {
		if r := math.Hypot(p.x, p.y); math.Abs(r-math.Sqrt(0.5)) > 1e-3 {
			t.Errorf("radius %g", r)
		}
	}
	if n := len(contour(x, x, f, 3, nil)); n != 0 {
		t.Errorf("%d lines at a value that is not reached", n)
	}
}

// TestWeakening: far under the pole's side the field of the mid-plane is 1/(pi/2 d) of the difference of potential (the
// field about a corner of wide poles), so that it falls to the tenth at about 10 half gaps over pi/2.
func TestWeakening(t *testing.T) {
	s, err := field.PlaneGap(field.Plane{Width: 20, Length: 1, Wall: 20})
	if err != nil {
		t.Fatal(err)
	}
	v := newView(&s.Map)
	if d, want := v.weakening(0.1), 0.5*10/(math.Pi/2); math.Abs(d/want-1) > 0.1 {
		t.Errorf("%g, wanted about %g", d, want)
	}
}
