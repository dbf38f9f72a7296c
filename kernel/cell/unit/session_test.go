package unit_test

import (
	"go/ast"
	"go/token"
	"go/types"
	"strings"
	"testing"

	"ampturn/kernel/cell/unit"
)

const again = `type Case struct {
	Vin  Volt
	Gain float64
}
func (c Case) Out() float64 { return c.Vin * c.Gain }
func area(w, d Metre) float64 { return w * d * scale }
scale := 2.0
var gap Metre = 0.6*mm
c := Case{Vin: 36*volt, Gain: 2}
f := func() float64 { return scale * c.Vin }
x := area(gap, 3*mm)
`

// TestRunAgain demands that a cell which runs again and again leaves no more than once.
func TestRunAgain(t *testing.T) {
	n := newNotebook(t)
	n.run("scale := 1.0\n")
	n.run(again)
	once := n.checker.Kept()
	for range 100 {
		n.run(again)
	}
	if got := n.checker.Kept(); got > once {
		t.Errorf("after 100 more runs %d objects are kept, after the first %d", got, once)
	}
}

// TestNotCommitted demands that a cell that was not committed leaves nothing.
func TestNotCommitted(t *testing.T) {
	n := newNotebook(t)
	n.run("x := 3*mm\n")
	before := n.checker.Kept()
	if r := n.run("y := x + 3*amp\nx = 2*mm\n"); len(r.Diagnostics) != 1 {
		t.Fatalf("%d refusals, want 1", len(r.Diagnostics))
	}
	if got := n.checker.Kept(); got != before {
		t.Errorf("%d objects are kept, %d before", got, before)
	}
}

// TestOrder demands refusals in the order of their places, each once.
func TestOrder(t *testing.T) {
	r := newNotebook(t).run("f := func(a Metre) Metre { return a + 2*amp }\nRod(1)\nRod(f(2*volt))\nfor range 3 {\n\tRod(3*amp)\n}\n")
	if len(r.Diagnostics) != 4 {
		t.Fatalf("%d refusals, want 4: %v", len(r.Diagnostics), r.Diagnostics)
	}
	for i := 1; i < len(r.Diagnostics); i++ {
		if r.Diagnostics[i].Pos <= r.Diagnostics[i-1].Pos {
			t.Errorf("refusal %d lies before the one ahead of it", i)
		}
	}
}

// TestDeterministic demands the same words from two checks of one cell.
func TestDeterministic(t *testing.T) {
	cell := "a := 3*mm\nb := 2*amp\nc := a + b\nd := map[string]float64{\"x\": a, \"y\": b}\nRod(d[\"x\"] + c)\nFace(a)\nb += a\n"
	var texts []string
	for range 5 {
		var s strings.Builder
		for _, d := range newNotebook(t).run(cell).Diagnostics {
			s.WriteString(d.Text + "\n")
		}
		texts = append(texts, s.String())
	}
	for _, s := range texts[1:] {
		if s != texts[0] {
			t.Errorf("%q differs from %q", s, texts[0])
		}
	}
}

// BenchmarkCheck checks a cell of eleven lines with a type, a method, a function and a closure.
func BenchmarkCheck(b *testing.B) {
	n := newNotebook(b)
	n.run("scale := 1.0\n")
	n.check = func(fset *token.FileSet, files []*ast.File, info *types.Info, pkg *types.Package) *unit.Report {
		var r *unit.Report
		for b.Loop() {
			r = n.checker.Check(fset, files, info, pkg)
		}
		return r
	}
	n.run(again)
}
