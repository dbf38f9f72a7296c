package draw

import (
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math/rand"
	"strings"
	"testing"

	"ampturn/magcirc"
)

// threeLimb is an E core with a gapped, wound centre leg, a magnet and a stray path.
func threeLimb() Network {
	return Network{Title: "T1: 5 A in main", Nodes: []string{"bottom", "top"}, Paths: []Path{
		{Name: "left", From: 0, To: 1, Flux: "-21.4 uWb", Share: -0.5, Parts: []Part{{Kind: Leg, Name: "leg", Label: "0.21 T", Length: 97e-3}}},
		{Name: "centre", From: 0, To: 1, Flux: "42.8 uWb", Share: 1, Parts: []Part{
			{Kind: Leg, Name: "leg", Label: "0.23 T", Length: 36e-3}, {Kind: Gap, Name: "gap", Label: "0.6 mm", Length: 0.6e-3},
			{Kind: Winding, Name: "main", Label: "34 turns"}, {Kind: Winding, Name: "aux", Label: "9 turns", Reversed: true}}},
		{Name: "right", From: 1, To: 0, Flux: "21.4 uWb", Share: 0.5, Parts: []Part{
			{Kind: Leg, Name: "leg", Label: "0.21 T", Length: 97e-3}, {Kind: Magnet, Name: "magnet", Label: "0.38 T", Length: 3e-3}}},
		{Name: "window", From: 0, To: 1, Flux: "1.2 uWb", Share: 0.03, Parts: []Part{{Kind: Stray, Name: "permeance", Label: "12 nH"}}},
	}}
}

// randomNetwork is a connected network with long and strange names.
func randomNetwork(rnd *rand.Rand) Network {
	names := []string{"a", "centre", "left outer limb of the core", "P", "\u0394 \u00b5 <&>\"'", "", "WWWWWWWWWWWWWWWWWWWWWWWWWWWWWWW"}
	word := func() string { return names[rnd.Intn(len(names))] }
	n := Network{Title: strings.Repeat("title ", rnd.Intn(40))}
	for range 1 + rnd.Intn(6) {
		n.Nodes = append(n.Nodes, word())
	}
	for k := range len(n.Nodes) + rnd.Intn(8) {
		p := Path{Name: word(), From: rnd.Intn(len(n.Nodes)), To: rnd.Intn(len(n.Nodes)), Flux: word(), Share: 2*rnd.Float64() - 1}
		if k > 0 && k < len(n.Nodes) {
			p.From, p.To = k-1, k
		}
		for range rnd.Intn(7) {
			p.Parts = append(p.Parts, Part{Kind: Kind(rnd.Intn(5)), Name: word(), Label: word(), Length: rnd.Float64() * 0.1, Reversed: rnd.Intn(2) == 0})
		}
		n.Paths = append(n.Paths, p)
	}
	return n
}

// wellFormed reads the picture as XML to its end.
func wellFormed(t *testing.T, svg string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(svg))
	for {
		if _, err := d.Token(); err == io.EOF {
			return
		} else if err != nil {
			t.Fatalf("not well formed: %v", err)
		}
	}
}

// clear checks that every text lies inside the picture and none covers another.
func clear(t *testing.T, c *canvas, width, height float64) {
	t.Helper()
	for i, b := range c.texts {
		if b.x0 < 0 || b.y0 < 0 || b.x1 > width || b.y1 > height {
			t.Errorf("text %q at %.1f,%.1f..%.1f,%.1f leaves the picture of %g x %g", b.text, b.x0, b.y0, b.x1, b.y1, width, height)
		}
		for _, d := range c.texts[:i] {
			if b.overlaps(d) {
				t.Errorf("texts %q and %q overlap", b.text, d.text)
			}
		}
	}
}

func TestTextsClear(t *testing.T) {
	rnd := rand.New(rand.NewSource(1))
	for k := range 300 {
		n := threeLimb()
		if k > 0 {
			n = randomNetwork(rnd)
		}
		l, c := n.layout(), &canvas{}
		n.draw(c, l)
		clear(t, c, l.width, l.height)
		p, err := n.Draw()
		if err != nil {
			t.Fatal(err)
		}
		wellFormed(t, p.SVG)
		q, _ := n.Draw()
		if q != p {
			t.Fatal("the same network gave two pictures")
		}
		if t.Failed() {
			t.Fatalf("network %d: %+v", k, n)
		}
	}
}

// TestColumnsClear: no two paths share a lane in the same rows, and their columns do not touch.
func TestColumnsClear(t *testing.T) {
	rnd := rand.New(rand.NewSource(2))
	for range 300 {
		l := randomNetwork(rnd).layout()
		for i := range l.paths {
			for k := range i {
				if l.lane[i] == l.lane[k] && l.ends[i][0] < l.ends[k][1] && l.ends[k][0] < l.ends[i][1] {
					t.Fatalf("paths %d and %d share lane %d", k, i, l.lane[i])
				}
			}
		}
		for i := 1; i < len(l.x); i++ {
			if l.x[i]-l.x[i-1] < columnLeft+labelLeft {
				t.Fatalf("lanes %d and %d are %g px apart", i-1, i, l.x[i]-l.x[i-1])
			}
		}
	}
}

// TestBarsReach: the bar of a node runs through the ends of all its paths.
func TestBarsReach(t *testing.T) {
	rnd := rand.New(rand.NewSource(4))
	for range 300 {
		l := randomNetwork(rnd).layout()
		for i, p := range l.paths {
			for _, node := range []int{p.From, p.To} {
				if lo, hi := l.reach(node); l.x[l.lane[i]] < lo || l.x[l.lane[i]] > hi {
					t.Fatalf("path %d ends at %g, the bar of node %d runs from %g to %g", i, l.x[l.lane[i]], node, lo, hi)
				}
			}
		}
	}
}

// TestSigns: dots, arrows and dashes follow the positive direction.
func TestSigns(t *testing.T) {
	p, err := threeLimb().Draw()
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"<title>T1: 5 A in main</title>", "<desc>", `viewBox="0 0 640 400"`, "42.8 uWb", "34 turns", "prefers-color-scheme"} {
		if !strings.Contains(p.SVG, want) {
			t.Errorf("no %q in the picture", want)
		}
	}
	if n := strings.Count(p.SVG, `stroke-dasharray="8 4"`); n != 1 {
		t.Errorf("%d paths dashed for flux against the arrow, wanted 1", n)
	}
	if n := strings.Count(p.SVG, "<circle") - 8; n != 2 { // 8 ends of paths
		t.Errorf("%d dots of windings, wanted 2", n)
	}
	for _, want := range []string{"2 nodes and 4 paths", "winding aux (9 turns), reversed", "right (top -> bottom)", "Largest flux in centre, smallest in window"} {
		if !strings.Contains(p.Text, want) {
			t.Errorf("no %q in %q", want, p.Text)
		}
	}
	// A coil: its dot stands at the tail of the arrow, above the middle where the arrow points down.
	for _, c := range []struct {
		up       float64
		reversed bool
		below    bool
	}{{-1, false, true}, {-1, true, false}, {1, false, false}, {1, true, true}} {
		cv := &canvas{}
		coil(cv, Part{Kind: Winding, Reversed: c.reversed}, 100, 200, c.up)
		var x, y, r float64
		s := cv.body.String()
		s = s[strings.Index(s, "<circle"):]
		if _, err := fmt.Sscanf(s, `<circle cx="%f" cy="%f" r="%f"`, &x, &y, &r); err != nil {
			t.Fatal(err)
		}
		if (y > 200) != c.below {
			t.Errorf("up %g, reversed %v: dot at %g", c.up, c.reversed, y)
		}
	}
}

// TestGapToScale: a gap has the breadth that the scale bar says, and never less than 1 px.
func TestGapToScale(t *testing.T) {
	for _, length := range []float64{1e-6, 0.6e-3, 5e-3, 60e-3} {
		n := threeLimb()
		n.Paths[1].Parts[1].Length = length
		l := n.layout()
		c := &canvas{}
		l.part(c, n.Paths[1].Parts[1], l.x[1], 100, 200, -1)
		var x, y, w, h0, y1 float64
		s := c.body.String()
		if _, err := fmt.Sscanf(s[strings.Index(s, ` x="`):], ` x="%f" y="%f" width="%f" height="%f"`, &x, &y, &w, &h0); err != nil {
			t.Fatal(err)
		}
		s = s[strings.LastIndex(s, "<rect"):]
		if _, err := fmt.Sscanf(s[strings.Index(s, ` x="`):], ` x="%f" y="%f"`, &x, &y1); err != nil {
			t.Fatal(err)
		}
		got, want := y1-y-h0, max(1, length*l.scale)
		if d := got - want; d > 0.02 || d < -0.02 {
			t.Errorf("gap %g m: drawn %.2f px, scale says %.2f", length, got, want)
		}
	}
}

func TestRefusals(t *testing.T) {
	var e *magcirc.Error
	if _, err := (Network{Title: "T"}).Draw(); !errors.As(err, &e) || e.Code != magcirc.WrongUse {
		t.Errorf("empty network: %v", err)
	}
	if _, err := (Network{Nodes: []string{"a"}, Paths: []Path{{Name: "p", To: 3}}}).Draw(); !errors.As(err, &e) || e.Code != magcirc.BadValue {
		t.Errorf("node that is not there: %v", err)
	}
}

func TestCut(t *testing.T) {
	if got := cut("permeance", 1000); got != "permeance" {
		t.Error(got)
	}
	got := cut("a very long name of a leg", 60)
	if extent(got) > 60 || !strings.HasSuffix(got, "...") {
		t.Errorf("%q of %g px", got, extent(got))
	}
}

func TestRoundLength(t *testing.T) {
	for _, c := range []struct{ x, want float64 }{{1, 1}, {1.9, 1}, {2, 2}, {4.99, 2}, {5, 5}, {0.099, 0.05}, {0.01, 0.01}, {1000, 1000}, {730e-6, 500e-6}} {
		if got := roundLength(c.x); got < c.want*(1-1e-12) || got > c.want*(1+1e-12) {
			t.Errorf("%g: %g, wanted %g", c.x, got, c.want)
		}
	}
}

// TestCaptionsClearOfBars: a bar that passes through a long column leaves the words beside it alone.
func TestCaptionsClearOfBars(t *testing.T) {
	leg := Part{Kind: Leg, Name: "leg", Label: "58.76 mT", Length: 67e-3}
	n := Network{Title: "T4", Nodes: []string{"bottom", "middle", "top"}, Paths: []Path{
		{Name: "lower", From: 0, To: 1, Parts: []Part{leg, {Kind: Winding, Name: "P", Label: "25 turns"}}},
		{Name: "upper", From: 1, To: 2, Parts: []Part{leg, {Kind: Gap, Name: "gap", Label: "720 um", Length: 0.72e-3}}},
		{Name: "left", From: 2, To: 0, Parts: []Part{leg}}, {Name: "right", From: 2, To: 0, Parts: []Part{{Kind: Leg, Label: "67 mm"}}},
		{Name: "stray", From: 1, To: 0, Parts: []Part{{Kind: Stray, Name: "stray", Label: "37 nH"}}},
	}}
	l, c := n.layout(), &canvas{}
	n.draw(c, l)
	clear(t, c, l.width, l.height)
	for _, b := range c.texts {
		for _, y := range l.passingBars(b.x0, b.x1) {
			if b.y0 < y && y < b.y1 {
				t.Errorf("a bar runs through %q", b.text)
			}
		}
	}
}
