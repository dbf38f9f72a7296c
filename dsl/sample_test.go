package dsl_test

import (
	"math"
	"runtime"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
)

// choke is a gapped ring with a tolerance of its gap, its section and its material.
func choke(gap GapPart) *MagneticCircuit {
	L1 := Magnetic("L1")
	L1.Ring("core", Leg(fer(), 46*mm, Disc(8.9*mm)).Tolerance(2*percent), gap, Winding("N", 7*turn))
	return L1
}

func inductance(L1 *MagneticCircuit) func(s *Sample) Henry {
	return func(s *Sample) Henry { return s.Part(L1).At(110 * degC).Solve(Currents{"N": 13 * amp}).Inductance("N") }
}

// built is the choke with other numbers, built anew: the plain way to a corner.
func built(gap, area, permeability float64) Henry {
	mui := func(mui float64) float64 { return 1 + permeability*(mui-1) }
	material := NewMaterial("FER-A", Froehlich(mui(2200), 0.49*tesla)).Also(100*degC, Froehlich(mui(2200), 0.39*tesla))
	c := Magnetic("L1")
	c.Ring("core", Leg(material, 46*mm, Disc(8.9*mm*math.Sqrt(area))), Gap(gap), Winding("N", 7*turn))
	return c.At(110 * degC).Solve(Currents{"N": 13 * amp}).Inductance("N")
}

// TestWorstCaseAgainstCorners compares with circuits built anew at all eight corners.
func TestWorstCaseAgainstCorners(t *testing.T) {
	session.Reset()
	b := WorstCase(inductance(choke(Gap(0.45 * mm).PlusMinus(0.02 * mm))))
	low, high := math.Inf(1), math.Inf(-1)
	for _, gap := range []float64{0.43 * mm, 0.47 * mm} {
		for _, area := range []float64{0.98, 1.02} {
			for _, permeability := range []float64{0.75, 1.25} {
				l := built(gap, area, permeability)
				low, high = math.Min(low, l), math.Max(high, l)
			}
		}
	}
	near(t, "nominal", b.Nom(), built(0.45*mm, 1, 1), 1e-9)
	near(t, "smallest", b.Min(), low, 1e-9)
	near(t, "largest", b.Max(), high, 1e-9)
	s := text(t, b)
	for _, want := range []string{"incremental inductance of L1.N, worst case over 3 tolerances, L1 at 110 degC, N 13 A", "all 8 corners computed", "length of gap L1.core.gap", "450 um +-20 um", "permeability of FER-A, factor"} {
		contains(t, s, want)
	}
	contains(t, text(t, b.Tornado()), "length of gap L1.core.gap: ")
	contains(t, refused(t, func() { b.Mean() }).Error(), "draw it with MonteCarlo")
}

// TestMonteCarloSameBytes: a function of a cell and a compiled one give the same draws, on one processor and on two.
func TestMonteCarloSameBytes(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm).PlusMinus(0.02 * mm))
	run := func(procs int, same func(s *Sample) Henry) *Band {
		defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(procs))
		return MonteCarlo(2000, 7, same)
	}
	want := run(1, inductance(L1))
	compiled := L1.At(110*degC).InductanceAt("N", Currents{"N": 13 * amp})
	for name, b := range map[string]*Band{"two processors": run(2, inductance(L1)), "compiled, one": run(1, compiled), "compiled, two": run(2, compiled)} {
		if b.Min() != want.Min() || b.Max() != want.Max() || b.Mean() != want.Mean() || b.Deviation() != want.Deviation() || b.Quantile(0.1) != want.Quantile(0.1) {
			t.Errorf("%s: another band", name)
		}
		if text(t, b) != text(t, want) || b.Plot().MIMEBundle()["image/svg+xml"] != want.Plot().MIMEBundle()["image/svg+xml"] {
			t.Errorf("%s: shows something else", name)
		}
	}
	if worst := WorstCase(inductance(L1)); want.Min() < worst.Min() || want.Max() > worst.Max() {
		t.Errorf("uniform draws %g..%g leave the worst case %g..%g", want.Min(), want.Max(), worst.Min(), worst.Max())
	}
	contains(t, text(t, want), "2000 draws of 3 tolerances, seed 7")
	contains(t, text(t, want.Plot().LimitAcross("required", AtLeast(8*uH))), "limit: required: at least 8")
	b := L1.FluxDensityAt("core", Currents{"N": 13 * amp})
	if band := MonteCarlo(300, 1, b); band.Min() >= band.Nom() || band.Max() <= band.Nom() {
		t.Errorf("flux density %g..%g around %g", band.Min(), band.Max(), band.Nom())
	}
	found := false
	for _, s := range session.Sources() {
		found = found || s.Kind == "seed" && s.Value == "7"
	}
	if !found {
		t.Error("the seed is not among the sources")
	}
}

// TestDrawsByTable: a gap whose field is solved is drawn from a table, and the draws are what solving each gives.
func TestDrawsByTable(t *testing.T) {
	session.Reset()
	gap := Gap(0.5 * mm).Fringe(FieldSolve.Window(14.3 * mm)).PlusMinus(0.02 * mm)
	same := choke(gap).InductanceAt("N")
	few, many := MonteCarlo(199, 3, same), MonteCarlo(200, 3, same) // with 200 draws the table is made; the first 199 are the same
	near(t, "smallest draw", many.Min(), few.Min(), 1e-6)
	near(t, "largest draw", many.Max(), few.Max(), 1e-6)
	near(t, "median", many.Quantile(0.5), few.Quantile(0.5), 2e-3)
	if many.Min() == few.Min() && many.Max() == few.Max() {
		t.Error("no table was used")
	}
}

// TestNumbersOfOnesOwn: shares, ranges and groups.
func TestNumbersOfOnesOwn(t *testing.T) {
	session.Reset()
	b := WorstCase(func(s *Sample) Value { return s.Of("C", 100, 5*percent) * s.Between("k", 1, 2) })
	near(t, "smallest", b.Min(), 95, 1e-12)
	near(t, "largest", b.Max(), 210, 1e-12)
	near(t, "nominal", b.Nom(), 150, 1e-12)
	ratio := WorstCase(func(s *Sample) Value {
		batch := s.Together("one batch")
		return batch.Of("C1", 47, 5*percent) / batch.Of("C2", 47, 5*percent)
	})
	near(t, "ratio in one batch, smallest", ratio.Min(), 1, 1e-12)
	near(t, "ratio in one batch, largest", ratio.Max(), 1, 1e-12)
	apart := WorstCase(func(s *Sample) Value { return s.Of("C1", 47, 5*percent) / s.Of("C2", 47, 5*percent) })
	near(t, "ratio of two batches", apart.Max(), 1.05/0.95, 1e-12)
	normal := MonteCarlo(4000, 1, choke(Gap(0.45*mm).PlusMinus(0.03*mm).Normal()).InductanceAt("N"))
	near(t, "share within a tolerance", normal.Yield(Within(normal.Min(), normal.Max())), 1, 0)
	near(t, "Cpk by its definition", normal.Cpk(AtLeast(9*uH)), (normal.Mean()-9*uH)/(3*normal.Deviation()), 1e-12)
	contains(t, text(t, normal), "normal")
}

// TestTogetherGaps: gaps ground in one pass spread more than two of their own.
func TestTogetherGaps(t *testing.T) {
	session.Reset()
	two := func(group string) *MagneticCircuit {
		gap := Gap(0.2 * mm).PlusMinus(0.02 * mm)
		if group != "" {
			gap = gap.Together(group)
		}
		c := Magnetic("L2")
		c.Path("a", "x -> y", Leg(NewMaterial("m", Linear(2000)), 20*mm, Disc(9*mm)), gap, Winding("N", 10*turn))
		c.Path("b", "y -> x", Leg(NewMaterial("m", Linear(2000)), 20*mm, Disc(9*mm)), gap)
		return c
	}
	one, own := MonteCarlo(3000, 1, two("pass").InductanceAt("N")), MonteCarlo(3000, 1, two("").InductanceAt("N"))
	near(t, "deviation of one pass over that of two", one.Deviation()/own.Deviation(), math.Sqrt2, 0.06) // 3000 draws: 1.3 % each
}

func TestRefusedSamples(t *testing.T) {
	session.Reset()
	L1 := choke(Gap(0.45 * mm).PlusMinus(0.02 * mm))
	calls := 0
	for want, f := range map[string]func(){
		"nothing in its function has a tolerance": func() { WorstCase(func(s *Sample) Value { return 3 }) },
		"is judged within a sampled function":     func() { WorstCase(func(s *Sample) Value { Limit("x", 1, AtMost(2)); return s.Of("a", 1, 0.1) }) },
		"asked for in some samples only": func() {
			WorstCase(func(s *Sample) Value {
				if calls++; calls > 2 {
					s.Of("late", 1, 0.1)
				}
				return s.Of("a", 1, 0.1)
			})
		},
		"one name, one number":             func() { WorstCase(func(s *Sample) Value { return s.Of("a", 1, 0.1) + s.Of("a", 2, 0.1) }) },
		"called within a sampled function": func() { WorstCase(func(s *Sample) Value { return WorstCase(inductance(L1)).Min() }) },
		"number of draws 1 is not":         func() { MonteCarlo(1, 1, inductance(L1)) },
		"seed -1 is not":                   func() { MonteCarlo(10, -1, inductance(L1)) },
		"there is no function":             func() { WorstCase(nil) },
		"is not below the upper one":       func() { WorstCase(func(s *Sample) Value { return s.Between("a", 2, 1) }) },
		"is not below the nominal value":   func() { Gap(0.45 * mm).PlusMinus(2 * mm) },
		"tolerance 2 is outside 0..0.99":   func() { Gap(0.45 * mm).Tolerance(2) },
		"result at nominal values":         func() { WorstCase(func(s *Sample) Value { return math.NaN() }) },
	} {
		calls = 0
		contains(t, refused(t, f).Error(), want)
	}
	if b := WorstCase(inductance(L1)); b.Min() >= b.Max() { // a refusal leaves nothing behind
		t.Error("no spread after the refusals")
	}
}

// TestBandAsCondition: a limit on a band says what it covers, and takes the uncertainty of the nominal value.
func TestBandAsCondition(t *testing.T) {
	session.Reset()
	cell("a", 1, func() {
		b := WorstCase(inductance(choke(Gap(0.45 * mm).PlusMinus(0.02 * mm))))
		v := Limit("L, worst case", b.Min(), AtLeast(1*uH), b)
		contains(t, text(t, v), "worst case over 3 tolerances, L1 at 110 degC, N 13 A")
		contains(t, text(t, v), "uncertainty")
		MonteCarlo(100, 1, inductance(choke(Gap(0.45*mm).PlusMinus(0.02*mm))))
	})
	found := false
	for _, a := range review.Assumptions() {
		found = found || a.Text == "length of gap L1.core.gap: tolerance without a distribution, taken as uniform"
	}
	if !found {
		t.Errorf("the distribution is not among the assumptions: %v", review.Assumptions())
	}
}
