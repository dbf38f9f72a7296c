package dsl_test

import (
	"fmt"
	"math"

	. "ampturn/dsl"
)

// D. P. Kothari, I. J. Nagrath, Electric Machines, 4th ed., Tata McGraw-Hill 2010, examples 2.1 and 2.8: a core of 0.40 m
// and 4 cm x 4 cm with mu_r 6000, a gap of 0.6 mm, 600 turns. For 1.2 T in the core the book has 1.06 A, 1.92 mWb,
// 1.152 Wb turns, 33157 and 298416 A/Wb, 1.0857 H and 0.6112 J.
func ExampleMagneticCircuit_Solve() {
	core := Magnetic("core")
	core.Ring("path", Leg(NewMaterial("iron", Linear(6000)), 40*cm, Rect(4*cm, 4*cm)), Gap(0.6*mm).Fringe(NoFringe), Winding("N", 600*turn))
	op := core.Solve(Linkages{"N": 600 * 1.2 * 16 * cm2})
	fmt.Printf("%.2f A, %.2f mWb, %.3f Wb turns\n", op.Current("N"), op.Flux("path")*1e3, op.Linkage("N"))
	fmt.Printf("%.0f and %.0f 1/H\n", core.Reluctance("path.leg"), core.Reluctance("path.gap"))
	fmt.Printf("%.4f H, %.4f J\n", op.Inductance("N"), op.Energy())
	// Output:
	// 1.06 A, 1.92 mWb, 1.152 Wb turns
	// 33157 and 298416 1/H
	// 1.0857 H, 0.6112 J
}

// The same book, example 2.3: one leg of 2 cm2 with a gap of 0.2 mm feeds two of 1 cm2 with gaps of 0.25 and 0.20 mm, all
// of mu_r 5000. For 0.75 mWb in the common leg it has an mmf of 1680 A.
func ExampleMagneticCircuit_Path() {
	iron := NewMaterial("iron", Linear(5000))
	T1 := Magnetic("T1")
	T1.Path("common", "bottom -> top", Leg(iron, 0.2, Area(2*cm2)), Gap(0.2*mm).Fringe(NoFringe), Winding("N", 1*turn))
	T1.Path("left", "top -> bottom", Leg(iron, 0.5, Area(1*cm2)), Gap(0.25*mm).Fringe(NoFringe))
	T1.Path("right", "top -> bottom", Leg(iron, 0.5, Area(1*cm2)), Gap(0.20*mm).Fringe(NoFringe))
	op := T1.Solve(Linkages{"N": 0.75e-3})
	fmt.Printf("%.0f A\n", op.Current("N"))
	// Output:
	// 1680 A
}

// B. S. Guru, H. R. Hiziroglu, Electric Machinery and Transformers, 3rd ed., Oxford UP 2004, example 2.11 p. 106: two coils
// of 4 to 1 turns, coupled evenly, in series measure 2.38 H aiding and 1.02 H opposing. The book has 0.34 H of mutual inductance, 1.6 and
// 0.1 H, and a coupling of 0.85.
func ExampleFromReadings() {
	m := FromReadings(
		Reading{At: "1", Aiding: []string{"2"}, Inductance: 2.38},
		Reading{At: "1", Opposing: []string{"2"}, Inductance: 1.02},
		Reading{At: "1", Inductance: 16.0 / 17 * (2.38 + 1.02) / 2}) // of the sum L1 + L2, by the square of the turns
	fmt.Printf("%.2f H, %.1f and %.1f H, k %.2f\n", m.Mutual("1", "2"), m.Self("1"), m.Self("2"), m.Coupling("1", "2"))
	// Output:
	// 0.34 H, 1.6 and 0.1 H, k 0.85
}

// A. R. Hambley, Electrical Engineering, 5th ed., Pearson 2011, example 15.5 p. 670: a square path of 6 cm sides with a gap
// of 0.5 cm, section 2 cm x 3 cm, mu_r 6000, 500 turns, the gap's length added to each side of its faces. For 0.25 T in the
// gap the book has 4.547e6 1/H for the gap and 2.01 A. The flux density of the gap is that between its faces.
func ExampleGapPart_Fringe() {
	core := Magnetic("core")
	core.Ring("path", Leg(NewMaterial("iron", Linear(6000)), 23.5*cm, Rect(2*cm, 3*cm)), Gap(0.5*cm).Fringe(AddTheGap), Winding("N", 500*turn))
	flux := 0.25 * 2.5 * cm * 3.5 * cm
	op := core.Solve(Linkages{"N": 500 * flux})
	fmt.Printf("%.3fe6 1/H, %.2f A, %.4f T\n", core.Reluctance("path.gap")/1e6, op.Current("N"), op.FluxDensity("path.gap"))
	// Output:
	// 4.547e6 1/H, 2.01 A, 0.2500 T
}

// P. C. Sen, Principles of Electric Machines and Power Electronics, example 1.8 p. 31: a magnet 6.06 cm long of 2.105 cm2 is
// to hold 0.8 T in a gap of 0.4 cm and 2.5 cm2, working at 0.95 T and -42 kA/m.
func ExampleOperatingPoint_LoadLine() {
	const mu0, mur = 4e-7 * math.Pi, 1.05 // any recoil permeability whose line runs through that point
	M1 := Magnetic("M1")
	M1.Ring("yoke", Magnet(0.95+mu0*mur*42e3, mur, 6.06*cm, Area(2.105*cm2)), Gap(0.4*cm).Faces(Area(2.5*cm2)).Fringe(NoFringe))
	op := M1.Solve()
	line := op.LoadLine("yoke.magnet")
	fmt.Printf("%.2f T and %.0f kA/m in the magnet, %.2f T in the gap\n", line.FluxDensity(), line.FieldStrength()/1e3, op.Flux("yoke")/(2.5*cm2))
	// Output:
	// 0.95 T and -42 kA/m in the magnet, 0.80 T in the gap
}
