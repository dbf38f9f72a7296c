package reluct_test

import (
	"testing"

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
	magnet := reluct.Element{Name: "magnet", Kind: reluct.Magnet, Length: 5 * mm, Area: 1 * cm2, Mur: 1.05, Br: 1.2}
	held := ring(100, magnet, airGap("gap", 1*mm, 1*cm2))
	d := reluct.Drive{Current: map[int]float64{0: -1.2 * 5 * mm / (phys.Mu0 * 1.05) / 100}}
	if m := solve(t, held, d).Rounded(); m.State[0][0].H >= 0 {
		t.Errorf("a magnet held at no flux has H %g A/m, want its coercive field", m.State[0][0].H)
	}
}
