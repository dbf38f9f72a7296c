package reluct_test

import (
	"context"
	"fmt"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// The gapped core of Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., McGraw-Hill 2003, examples 1.1 and 1.2
// (p. 9): 9 cm2, 30 cm of mu_r 70000, a gap of 0.5 mm, 500 turns; 1 T needs 0.80 A.
func Example() {
	iron, err := material.NewLinear(70000)
	if err != nil {
		fmt.Println(err)
		return
	}
	n := reluct.New("T1")
	a, main := n.Node("a"), n.Winding("main")
	n.Branch(reluct.Branch{Name: "core", From: a, To: a,
		Elements: []reluct.Element{
			{Name: "leg", Kind: reluct.Leg, Law: iron, Length: 0.3, Area: 9e-4},
			{Name: "gap", Kind: reluct.Gap, Permeance: phys.Mu0 * 9e-4 / 0.5e-3, Length: 0.5e-3, Area: 9e-4},
		},
		Turns: []reluct.Turn{{Winding: main, Turns: 500}},
	})
	s, err := n.Solve(context.Background(), reluct.Drive{Linkage: map[int]float64{main: 500 * 9e-4}}, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	l, err := s.Incremental()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(phys.FormatDigits(s.Flux[0], "Wb", 2), phys.FormatDigits(s.State[0][1].B, "T", 2), phys.FormatDigits(s.Current[main], "A", 2), phys.FormatDigits(l.At(0, 0), "H", 2))
	// Output: 900 uWb 1 T 800 mA 560 mH
}

// A path that ends at a node where nothing leads the flux back is refused.
func ExampleNetwork_Validate() {
	n := reluct.New("T1")
	n.Branch(reluct.Branch{Name: "centre", From: n.Node("bottom"), To: n.Node("top"), Elements: []reluct.Element{{Kind: reluct.Gap, Permeance: 1e-7}}})
	fmt.Println(n.Validate())
	// Output: circuit T1: flux cannot return at node bottom (one path ends there): add the path that closes it, or make it a Ring
}
