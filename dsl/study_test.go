package dsl_test

import (
	"math"
	"testing"

	. "ampturn/dsl"
)

// TestBuckInductor is the output choke of a 48 V to 12 V stage: 62 mm2, 46 mm, 7 turns, one gap in a round post, window
// 14.3 mm high, about 10 uH. The figures are those of the closed formulas below: reluctances in series, with the fringing
// factor 1 + g/sqrt(A) ln(2 G/g) of C. W. T. McLyman, Transformer and Inductor Design Handbook, ch. 8, or none.
func TestBuckInductor(t *testing.T) {
	choke := func(gap GapPart) *MagneticCircuit {
		L1 := Magnetic("L1")
		L1.Ring("core", Leg(fer(), 46*mm, Disc(8.9*mm)), gap, Winding("N", 7*turn))
		return L1
	}
	const mu0 = 4e-7 * math.Pi
	area := math.Pi / 4 * 8.9 * mm * 8.9 * mm
	inductance := func(g, factor float64) float64 { return 49 * mu0 * area / (46*mm/2200 + g/factor) }
	factor := 1 + 0.45*mm/math.Sqrt(area)*math.Log(2*14.3/0.45) // 1.237
	l := inductance(0.45*mm, factor)                            // 9.96 uH
	log := choke(Gap(0.45 * mm).Fringe(LogRule.Window(14.3 * mm)))
	near(t, "inductance", log.Solve().Inductance("N"), l, 1e-6)
	near(t, "fringing factor", log.Fringing("gap").Factor(LogRule), factor, 1e-9)
	near(t, "gap with the logarithmic rule", log.GapFor("gap", "N", l), 0.45*mm, 1e-6)
	plain := choke(Gap(0.36 * mm).Fringe(NoFringe))
	near(t, "gap without fringing", plain.GapFor("gap", "N", inductance(0.36*mm, 1)), 0.36*mm, 1e-6)

	// At 13 A and 110 degC the ferrite has lost a part of its permeability: less flux density than L i/(N A) with the
	// inductance at zero current, 0.297 T; the incremental inductance lies below the secant one.
	op := log.At(110 * degC).Solve(Currents{"N": 13 * amp})
	if b := op.FluxDensity("core"); b > l*13/(7*area) || b < 0.25 {
		t.Errorf("flux density at 13 A and 110 degC: %g T", b)
	}
	if op.Inductance("N") >= op.Secant("N") || op.Secant("N") >= log.Solve().Inductance("N") {
		t.Errorf("incremental %g, secant %g, at zero current %g", op.Inductance("N"), op.Secant("N"), log.Solve().Inductance("N"))
	}
}

// TestThreeLegCoupledInductor is an inverse-coupled inductor for two phases: 4 turns on each outer leg of 84 mm2, centre
// leg 140 mm2, gaps 0.18 and 0.44 mm without fringing. With perfect iron, which a permeability of 1e6 is to 3e-4 here, the
// reluctances are R = g/(mu0 A), 1.705e6 and 2.501e6 1/H, and two meshes give in closed form
//
//	self N^2 (R1 + R2)/(R1 (R1 + 2 R2))   coupling -R2/(R1 + R2)   equal currents N^2/(R1 + 2 R2)
//	flux of a leg: N i/(R1 + 2 R2) of the mean current, N (i - mean)/R1 of the rest
func TestThreeLegCoupledInductor(t *testing.T) {
	iron := NewMaterial("iron", Linear(1e6))
	c := Magnetic("L2")
	c.Path("left", "bottom -> top", Leg(iron, 40*mm, Area(84*mm2)), Gap(0.18*mm).Fringe(NoFringe), Winding("A", 4*turn))
	c.Path("right", "bottom -> top", Leg(iron, 40*mm, Area(84*mm2)), Gap(0.18*mm).Fringe(NoFringe), Winding("B", 4*turn))
	c.Path("centre", "top -> bottom", Leg(iron, 20*mm, Area(140*mm2)), Gap(0.44*mm).Fringe(NoFringe))
	op := c.Solve(Currents{"A": 20 * amp, "B": 20 * amp})
	const mu0, n, perfect = 4e-7 * math.Pi, 4.0, 5e-4
	r1, r2 := 0.18*mm/(mu0*84*mm2), 0.44*mm/(mu0*140*mm2)
	flux := func(mean, rest float64) float64 { return n*mean/(r1+2*r2) + n*rest/r1 }
	near(t, "outer reluctance", c.Reluctance("left.gap"), 1.705e6, 2e-4)
	near(t, "centre reluctance", c.Reluctance("centre.gap"), 2.501e6, 2e-4)
	near(t, "self inductance", op.Inductance("A"), n*n*(r1+r2)/(r1*(r1+2*r2)), perfect) // 5.88 uH
	near(t, "coupling", op.Coupling("A", "B"), -r2/(r1+r2), perfect)                    // -0.595
	near(t, "outer legs", op.FluxDensity("left"), flux(20, 0)/(84*mm2), perfect)        // 0.142 T
	near(t, "centre leg", op.FluxDensity("centre"), 2*flux(20, 0)/(140*mm2), perfect)   // 0.170 T
	near(t, "transient inductance: equal currents", op.InPhase("A", "B"), n*n/(r1+2*r2), perfect)
	near(t, "opposed currents", op.PerPhase("A", "B"), op.Inductance("A")-op.Mutual("A", "B"), 1e-12)
	near(t, "21 and 19 A", c.Solve(Currents{"A": 21 * amp, "B": 19 * amp}).FluxDensity("left"), flux(20, 1)/(84*mm2), perfect)
	near(t, "28 and 26 A", c.Solve(Currents{"A": 28 * amp, "B": 26 * amp}).FluxDensity("left"), flux(27, 1)/(84*mm2), perfect)
}

// TestWorkedExample is A. E. Fitzgerald, C. Kingsley, S. D. Umans, Electric Machinery, 6th ed., examples 1.1 and 1.2,
// p. 9: Ac = Ag = 9 cm2, g = 0.050 cm, lc = 30 cm, N = 500, mu_r = 70000. Printed: 3.79e3 and 4.42e5 A/Wb; at 1.0 T the
// flux is 9e-4 Wb and the current 0.80 A.
func TestWorkedExample(t *testing.T) {
	c := Magnetic("X")
	c.Ring("core", Leg(NewMaterial("iron", Linear(70000)), 30*cm, Area(9*cm2)), Gap(0.050*cm).Fringe(NoFringe), Winding("N", 500*turn))
	near(t, "core", c.Reluctance("core.leg"), 3.79e3, 0.0015)
	near(t, "gap", c.Reluctance("core.gap"), 4.42e5, 0.0015)
	op := c.Solve(Linkages{"N": 500 * 9e-4})
	near(t, "flux", op.Flux("core"), 9e-4, 1e-12)
	near(t, "flux density", op.FluxDensity("core"), 1, 1e-12)
	near(t, "current", op.Current("N"), 0.802596, 1e-6) // 0.80 A, unrounded from the example's own formula
	near(t, "current for 1 T", c.CurrentFor("N", 1*tesla), 0.802596, 1e-6)
	// Example 1.6, p. 19: W = B^2/2 terms summed give 0.18 J at this flux and 0.56 H.
	near(t, "energy", op.Energy(), 0.18, 0.01)
	near(t, "inductance", op.Inductance("N"), 0.56, 0.005)
}

// TestGappedSets is a maker's published table of ground gaps in a small core set (le 38.4 mm, Ae 63.0 mm2, C1 0.604/mm,
// mu_i 2300; centre post 8.4 mm, window 10.8 mm high and 4.3 mm broad), data sheet of 2008: total gap, inductance factor,
// effective permeability. The gap is given as approximate, about 10 % and to the digits printed; mu_e to 1 %, recomputed as A_L le/(mu0 Ae).
func TestGappedSets(t *testing.T) {
	const le, ae, mu0 = 38.4 * mm, 63.0 * mm2, 4e-7 * math.Pi
	for _, c := range []struct{ gap, al, mue, recomputed float64 }{
		{1100e-6, 100e-9, 49, 48.50}, {360e-6, 250e-9, 121, 121.26}, {200e-6, 400e-9, 194, 194.02}, {65e-6, 1000e-9, 485, 485.04},
	} {
		set := Magnetic("set")
		set.Ring("core", Leg(NewMaterial("ferrite", Linear(2300)), le, Area(le/0.604e3)),
			Gap(c.gap).Faces(Disc(8.4*mm)).Fringe(FieldSolve.Window(10.8*mm).Breadth(4.3*mm)), Winding("N", 1*turn))
		mue := func(al float64) float64 { return al * le / (mu0 * ae) }
		near(t, "effective permeability, recomputed", mue(c.al), c.recomputed, 1e-4)
		near(t, "effective permeability, printed", mue(c.al), c.mue, 0.0105)
		near(t, "gap for the inductance factor", set.GapFor("gap", "N", c.al), c.gap, 0.11)
		near(t, "effective permeability of the circuit", mue(set.Solve().Inductance("N")), c.mue, 0.10)
	}
}
