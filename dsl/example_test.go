package dsl_test

import (
	"fmt"

	. "ampturn/dsl"
)

// Six lines from a material to an answer.
func Example() {
	fer := NewMaterial("lot 12", Froehlich(2200, 0.49*tesla)).Also(100*degC, Froehlich(2200, 0.39*tesla))
	L1 := Magnetic("L1")
	L1.Ring("core", Leg(fer, 46*mm, Disc(8.9*mm)), Gap(0.45*mm).Fringe(LogRule.Window(14.3*mm)), Winding("N", 7*turn))
	op := L1.At(100 * degC).Solve(Currents{"N": 13 * amp})
	v := Limit("flux density", op.FluxDensity("core"), AtMost(0.32*tesla), op)
	fmt.Printf("%.2f uH, %.3f T, %s\n", op.Inductance("N")/uH, op.FluxDensity("core"), v.Status())
	// Output:
	// 6.73 uH, 0.266 T, PASS
}

// A failure as a value, for a design loop.
func ExampleTry() {
	L1 := Magnetic("L1")
	L1.Ring("core", Leg(NewMaterial("iron", Linear(2000)), 46*mm, Area(62*mm2)), Gap(0.1*mm).Fringe(NoFringe), Winding("N", 7*turn))
	err := Try(func() { L1.GapFor("gap", "N", 2000*uH) })
	fmt.Println(err)
	// Output:
	// gap L1.core.gap: inductance of 2 mH is out of reach: even 100 nm of gap gives only 165.3 uH; more turns or a larger section
}

// A result shows itself as a table with its conditions first.
func ExampleOperatingPoint() {
	iron := NewMaterial("iron", Linear(70000))
	c := Magnetic("X")
	c.Ring("core", Leg(iron, 300*mm, Area(900*mm2)), Gap(0.5*mm).Fringe(NoFringe), Winding("N", 500*turn))
	fmt.Println(c.At(25 * degC).Solve(Currents{"N": 0.8 * amp}).MIMEBundle()["text/plain"])
	// Output:
	// X at 25 degC, N 800 mA
	// path  flux (uWb)  flux density (T)  field strength (A/m)  in   mmf drop (A)
	// ----  ----------  ----------------  --------------------  ---  ------------
	// core       897.1            0.9968                 11.33  leg         400.0
	//
	// windings of X; energy 179.4 mJ, co-energy 179.4 mJ
	// winding  current (mA)  linkage (mWb)  inductance, incremental (mH)
	// -------  ------------  -------------  ----------------------------
	// N               800.0          448.5                         560.7
}
