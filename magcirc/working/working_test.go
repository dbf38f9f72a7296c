package working_test

import (
	"context"
	"math"
	"strings"
	"testing"

	"ampturn/magcirc/gap"
	"ampturn/magcirc/material"
	"ampturn/magcirc/reluct"
	"ampturn/magcirc/working"
)

func law(t *testing.T) material.Law {
	t.Helper()
	l, err := material.NewFroehlich(2200, 0.49)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func names(branch, element int) working.Part {
	r := gap.Result{Factor: 1.2, Method: gap.ConformalMap, Source: "test"}
	if element == 1 {
		return working.Part{Elem: "gap", Gap: &r, Area: 62e-6}
	}
	return working.Part{Elem: "leg"}
}

func solve(t *testing.T, n *reluct.Network, i float64) *reluct.Solution {
	t.Helper()
	s, err := n.Solve(context.Background(), reluct.Drive{Current: map[int]float64{0: i}}, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func ring(t *testing.T) *reluct.Network {
	n := reluct.New("L1")
	at := n.Node("ring")
	n.Branch(reluct.Branch{Name: "core", From: at, To: at, Turns: []reluct.Turn{{Winding: n.Winding("N"), Turns: 7}}, Elements: []reluct.Element{
		{Name: "leg", Kind: reluct.Leg, Law: law(t), Length: 46e-3, Area: 62e-6, Air: 20e-6},
		{Name: "gap", Kind: reluct.Gap, Permeance: 1.2 * 4e-7 * math.Pi * 62e-6 / 0.45e-3, Length: 0.45e-3, Area: 62e-6}}})
	return n
}

func limbs(t *testing.T) *reluct.Network {
	n := reluct.New("T1")
	b, top := n.Node("bottom"), n.Node("top")
	n.Branch(reluct.Branch{Name: "centre", From: b, To: top, Turns: []reluct.Turn{{Winding: n.Winding("main"), Turns: 34}}, Elements: []reluct.Element{
		{Name: "leg", Kind: reluct.Leg, Law: law(t), Length: 36e-3, Area: 183e-6},
		{Name: "gap", Kind: reluct.Gap, Permeance: 0.49e-6, Length: 0.6e-3, Area: 183e-6}}})
	for _, name := range []string{"left", "right"} {
		n.Branch(reluct.Branch{Name: name, From: top, To: b, Elements: []reluct.Element{{Name: "leg", Kind: reluct.Leg, Law: law(t), Length: 61e-3, Area: 90e-6}}})
	}
	n.Branch(reluct.Branch{Name: "window", From: b, To: top, Elements: []reluct.Element{{Name: "stray", Kind: reluct.Stray, Permeance: 12e-9}}})
	return n
}

// TestLinesLeadToTheSolution: what the lines come to is what the solver differentiated, for a ring with air beside its metal
// and for three limbs with a stray path, without and with saturation.
func TestLinesLeadToTheSolution(t *testing.T) {
	for name, n := range map[string]*reluct.Network{"ring": ring(t), "limbs": limbs(t)} {
		for _, i := range []float64{0, 3, 13, 60} {
			s := solve(t, n, i)
			inc, err := s.Incremental()
			if err != nil {
				t.Fatal(err)
			}
			sec, err := s.Secant()
			if err != nil {
				t.Fatal(err)
			}
			for secant, want := range map[bool]float64{false: inc.At(0, 0), true: sec.At(0, 0)} {
				if secant && i == 0 {
					continue
				}
				if secant && name == "ring" { // B/H of metal and air together is the sum of both
					want = s.Linkage[0] / i
				}
				w := working.Inductance(n, s, 0, want, secant, names)
				if !w.Hand || math.Abs(w.Value/want-1) > 1e-9 {
					t.Errorf("%s at %g A, secant %v: lines come to %g H, solver to %g H", name, i, secant, w.Value, want)
				}
			}
			b := working.FluxDensity(n, s, 0, 0, names)
			if math.Abs(b.Value-b.Solved) > 1e-9*math.Abs(b.Solved) {
				t.Errorf("%s at %g A: lines come to %g T, solver to %g T", name, i, b.Value, b.Solved)
			}
			air := working.FluxDensity(n, s, 0, 1, names) // B = mu0 H in the gap, whatever runs beside its faces
			if want := 4e-7 * math.Pi * s.State[0][1].H; math.Abs(air.Value-want) > 1e-12*math.Abs(want) || math.Abs(air.Solved-want) > 1e-12*math.Abs(want) {
				t.Errorf("%s at %g A: gap %g T by lines, %g T by the solver, mu0 H %g T", name, i, air.Value, air.Solved, want)
			}
			l := working.Linkage(n, s, 0)
			if math.Abs(l.Value-l.Solved) > 1e-9*math.Abs(l.Solved) {
				t.Errorf("%s at %g A: lines come to %g Wb, solver to %g Wb", name, i, l.Value, l.Solved)
			}
		}
	}
}

// TestWhatALineSays checks text and TeX of the lines of a ring.
func TestWhatALineSays(t *testing.T) {
	n := ring(t)
	s := solve(t, n, 0)
	inc, _ := s.Incremental()
	w := working.Inductance(n, s, 0, inc.At(0, 0), false, names)
	var plain, tex []string
	for _, l := range w.Lines {
		plain, tex = append(plain, l.Plain()), append(tex, l.TeX())
	}
	for _, want := range []string{"R_gap = l/(F * mu0 * A) = 450 um/(1.2 * 4 pi 1e-7 H/m * 62 mm2) = 4.813e6 1/H", "R_core = R_leg + R_gap", "L = N^2/R_core = 7^2/("} {
		if !strings.Contains(strings.Join(plain, "\n"), want) {
			t.Errorf("%q is missing in\n%s", want, strings.Join(plain, "\n"))
		}
	}
	for _, want := range []string{`\frac{l}{F\cdot \mu_0\cdot A}`, `450\,\mu\mathrm{m}`, `62\,\mathrm{mm}^{2}`, `4.813\cdot 10^{6}\,\mathrm{H}^{-1}`} {
		if !strings.Contains(strings.Join(tex, "\n"), want) {
			t.Errorf("%q is missing in\n%s", want, strings.Join(tex, "\n"))
		}
	}
	hot := working.FluxDensity(n, solve(t, n, 13), 0, 0, names)
	if text := hot.Lines[len(hot.Lines)-2].Plain(); !strings.HasPrefix(text, "N_N * i_N = 7 * 13 A = U_leg + U_gap = ") || !strings.HasSuffix(text, " = 91 A") {
		t.Errorf("balance of mmf: %s", text)
	}
}

// TestNotByHand: where flux divides twice the last line names the matrix formula and the solver's value.
func TestNotByHand(t *testing.T) {
	n := limbs(t)
	n.Branch(reluct.Branch{Name: "shunt", From: n.Node("top"), To: n.Node("middle"), Elements: []reluct.Element{{Name: "stray", Kind: reluct.Stray, Permeance: 50e-9}}})
	n.Branch(reluct.Branch{Name: "end", From: n.Node("middle"), To: n.Node("bottom"), Elements: []reluct.Element{{Name: "stray", Kind: reluct.Stray, Permeance: 50e-9}}})
	s := solve(t, n, 1)
	inc, _ := s.Incremental()
	w := working.Inductance(n, s, 0, inc.At(0, 0), false, names)
	if last := w.Lines[len(w.Lines)-1].Plain(); w.Hand || !strings.Contains(last, "N B^T (B R B^T)^-1 B N^T = ") {
		t.Errorf("by hand %v: %s", w.Hand, last)
	}
}

// TestTwoWindings: k = M/sqrt(L1 L2) and L1 - M^2/L2 with round numbers: 100 uH, 25 uH, M 45 uH.
func TestTwoWindings(t *testing.T) {
	k := working.Coupling(100e-6, 25e-6, 45e-6, 0.9)
	l := working.Leakage(100e-6, 25e-6, 45e-6, 19e-6)
	if math.Abs(k.Value-0.9) > 1e-12 || math.Abs(l.Value-19e-6) > 1e-15 {
		t.Errorf("k %g, leakage %g H", k.Value, l.Value)
	}
	if got, want := k.Lines[0].Plain(), "k = M/sqrt(L1 L2) = 45 uH/sqrt(100 uH * 25 uH) = 0.9"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	if got, want := l.Lines[0].Plain(), "L_leak = L1 - M^2/L2 = 100 uH - (45 uH)^2/25 uH = 19 uH"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
}
