package dsl_test

import (
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
)

// TestMagnetsOfBooks builds the magnets that two books size for a gap. The iron has no reluctance, the recoil
// line runs through the working point of the example; its recoil permeability does not count.
//
// Sources: P. C. Sen, Principles of Electric Machines and Power Electronics, ex. 1.8 p. 31: 0.8 T in a gap of 0.4 cm
// and 2.5 cm2 by a magnet at -42 kA/m and 0.95 T needs lm = 6.06 cm and Am = 2.105 cm2 (recomputed 6.06305, 2.105263).
// A. E. Fitzgerald, C. Kingsley, S. D. Umans, Electric Machinery, 6th ed., ex. 1.10 p. 34: 0.8 T in 0.2 cm and 2 cm2 at
// -40 kA/m and 1.0 T needs 5.09 cm3 (recomputed 5.092958).
func TestMagnetsOfBooks(t *testing.T) {
	const mur = 1.05
	for _, c := range []struct {
		name                   string
		bm, hm, lm, am, lg, ag float64
		pc                     float64 // Bm/(mu0 Hm), from the example's figures
	}{
		{"Sen 1.8", 0.95, 42e3, 6.06305 * cm, 2.105263 * cm2, 0.4 * cm, 2.5 * cm2, 0.95 / (4e-7 * math.Pi * 42e3)},
		{"Fitzgerald 1.10", 1, 40e3, 5.092958e-6 / (1.6 * cm2), 1.6 * cm2, 0.2 * cm, 2 * cm2, 1 / (4e-7 * math.Pi * 40e3)},
	} {
		for _, reversed := range []bool{false, true} {
			magnet := Magnet(c.bm+4e-7*math.Pi*mur*c.hm, mur, c.lm, Area(c.am)).As("magnet")
			if reversed {
				magnet = magnet.Reversed()
			}
			m := Magnetic("M1")
			m.Ring("yoke", magnet, Gap(c.lg).Faces(Area(c.ag)).Fringe(NoFringe))
			op := m.Solve()
			line := op.LoadLine("yoke.magnet")
			near(t, c.name+" flux density in the magnet", line.FluxDensity(), c.bm, 1e-6)
			near(t, c.name+" field strength in the magnet", line.FieldStrength(), -c.hm, 1e-6)
			near(t, c.name+" flux density in the gap", math.Abs(op.Flux("yoke"))/c.ag, 0.8, 1e-6)
			near(t, c.name+" permeance coefficient", line.PermeanceCoefficient(), c.pc, 1e-5)
			near(t, c.name+" energy product", line.EnergyProduct(), c.bm*c.hm, 1e-5)
			contains(t, text(t, line), "works at -4")
			contains(t, text(t, line.Plot()), "recoil line")
		}
	}
}

// TestLoadLineBends: a saturated yoke takes mmf of its own and bends the load line; a current moves it sideways by
// N i/l.
func TestLoadLineBends(t *testing.T) {
	build := func(iron ...Part) *MagneticCircuit {
		m := Magnetic("M1")
		m.Ring("yoke", append(iron, Magnet(1.2*tesla, 1.05, 10*mm, Area(4*cm2)), Gap(0.5*mm).Faces(Area(4*cm2)).Fringe(NoFringe), Winding("N", 100*turn))...)
		return m
	}
	yoke := Leg(NewMaterial("iron", Froehlich(3000, 1.6*tesla)), 100*mm, Area(2*cm2))
	plain, saturated := build().Solve().LoadLine("magnet"), build(yoke).Solve().LoadLine("magnet")
	if saturated.FluxDensity() >= 0.95*plain.FluxDensity() {
		t.Errorf("saturated yoke %g T, ideal %g T", saturated.FluxDensity(), plain.FluxDensity())
	}
	driven := build().Solve(Currents{"N": -5 * amp}).LoadLine("magnet")
	// B = -mu0 (Ag/Am) (lm/lg) (H - N i/lm) on the load line, so on the recoil line with mur the change of B is
	// mu0 mur Pc/(Pc + mur) N i/lm with Pc = 20.
	const pc, mur = 20.0, 1.05
	near(t, "change by the current", driven.FluxDensity()-plain.FluxDensity(), -4e-7*math.Pi*mur*pc/(pc+mur)*100*5/(10*mm), 1e-6)
	if said := text(t, driven); strings.Contains(said, "permeance coefficient") {
		t.Errorf("a load line off the origin has a slope through it:\n%s", said)
	}
	refusal := refused(t, func() { build(yoke).Solve().LoadLine("leg") })
	contains(t, refusal.Error(), "magnet")
}
