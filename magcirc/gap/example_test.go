package gap_test

import (
	"fmt"

	"ampturn/magcirc/gap"
	"ampturn/magcirc/geom"
	"ampturn/magcirc/phys"
)

// Hambley, Electrical Engineering, 5th ed. 2011, ex. 15.5, p. 670: faces of 2 cm by 3 cm, gap 0.5 cm, each side longer
// by the gap: 4.547e6 A/Wb.
func ExamplePermeance() {
	r, err := gap.Permeance(gap.Spec{Elem: "gap", Length: 5e-3, Face: geom.Rect(20e-3, 30e-3), Method: gap.AddTheGap})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.4g A/Wb\n", r.Reluctance)
	for _, n := range r.Notes {
		fmt.Println(n)
	}
	// Output:
	// 4.547e+06 A/Wb
	// gap: fringing factor 1.46 is near the limit of AddTheGap (1.5): compare with FieldSolve
}

// A gap of 3 mm between round poles of 12 mm in a window 24 mm high and 6 mm broad: the simple rules end here.
func ExampleCompare() {
	s := gap.Spec{Elem: "gap", Length: 3e-3, Face: geom.Disc(12e-3), Window: 24e-3, Span: 6e-3}
	for _, c := range gap.Compare(s) {
		if c.Err != nil {
			fmt.Println(c.Err)
			continue
		}
		fmt.Printf("%v: %s, factor %.3f\n", c.Method, phys.FormatDigits(c.Result.Permeance, "H", 3), c.Result.Factor)
	}
	// Output:
	// NoFringe: 47.4 nH, factor 1.000
	// gap: fringing factor 1.56 is beyond 1.5, where AddTheGap ends. Use .Fringe(FieldSolve), or split the gap
	// gap: fringing factor 1.78 is beyond 1.5, where LogRule ends. Use .Fringe(FieldSolve), or split the gap
	// ConformalMap: 96 nH, factor 2.027
	// FieldSolve: 93.6 nH, factor 1.976
}
