package reluct_test

import (
	"context"
	"errors"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// TestRounded: two equal windings on the outer limbs of a symmetric core push no flux through its centre; what rounding
// leaves there is shown as none, a flux that is small but real stays.
func TestRounded(t *testing.T) {
	build := func() *reluct.Network {
		n := reluct.New("T1")
		a, b := n.Node("bottom"), n.Node("top")
		for k, name := range []string{"left", "right"} {
			w := n.Winding([]string{"A", "B"}[k])
			turns := []float64{31, -31}[k]
			n.Branch(reluct.Branch{Name: name, From: a, To: b, Elements: []reluct.Element{iron(2317, 0.0613, 91*mm2)}, Turns: []reluct.Turn{{Winding: w, Turns: turns}}})
		}
		n.Branch(reluct.Branch{Name: "centre", From: b, To: a, Elements: []reluct.Element{iron(2317, 0.031, 97*mm2), airGap("gap", 0.31*mm, 97*mm2)},
			Turns: []reluct.Turn{{Winding: n.Winding("C"), Turns: 7}}})
		return n
	}
	s := solve(t, build(), reluct.Drive{Current: map[int]float64{0: 1.3, 1: 1.3}})
	r := s.Rounded()
	if r.Flux[2] != 0 || r.State[2][1].B != 0 || r.State[2][1].MMF != 0 || r.Linkage[2] != 0 {
		t.Errorf("centre: flux %g, %+v, linkage %g, want none", r.Flux[2], r.State[2], r.Linkage[2])
	}
	if r.Flux[0] != s.Flux[0] || r.State[0][0] != s.State[0][0] || r.Linkage[0] != s.Linkage[0] {
		t.Error("what is not rounding was changed")
	}
	uneven := solve(t, build(), reluct.Drive{Current: map[int]float64{0: 1.3, 1: 1.3 * (1 - 1e-6)}})
	if u := uneven.Rounded(); u.Flux[2] != uneven.Flux[2] || u.Flux[2] == 0 {
		t.Errorf("a flux of %g beside %g is real, shown as %g", uneven.Flux[2], uneven.Flux[0], u.Flux[2])
	}
	p, err := hyst.NewJilesAtherton(hyst.Parameters{Ms: 3.8e5, A: 27, K: 30, Alpha: 5e-5, C: 0.55})
	if err != nil {
		t.Fatal(err)
	}
	h, err := ring(10, reluct.Element{Name: "leg", Law: hyst.Initial(p), Length: 60 * mm, Area: 1 * cm2}).History(nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, i := range []float64{30, 0} {
		if s, err = h.Step(context.Background(), reluct.Drive{Current: map[int]float64{0: i}}); err != nil {
			t.Fatal(err)
		}
	}
	if r := s.Rounded().State[0][0]; r.H != 0 || r.MMF != 0 || r.B < 0.05 { // Ampere's law: H l = N i = 0
		t.Errorf("remanence of a closed ring: %+v, want no field strength", r)
	}
	var e *magcirc.Error
	if _, err := s.Secant(); !errors.As(err, &e) || e.Code != magcirc.NoSolution {
		t.Errorf("secant inductance at remanence: %v", err)
	}
	magnet := reluct.Element{Name: "magnet", Kind: reluct.Magnet, Length: 5 * mm, Area: 1 * cm2, Mur: 1.05, Br: 1.2}
	held := ring(100, magnet, airGap("gap", 1*mm, 1*cm2))
	d := reluct.Drive{Current: map[int]float64{0: -1.2 * 5 * mm / (phys.Mu0 * 1.05) / 100}}
	if m := solve(t, held, d).Rounded(); m.State[0][0].H >= 0 {
		t.Errorf("a magnet held at no flux has H %g A/m, want its coercive field", m.State[0][0].H)
	}
}
