package dsl_test

import (
	"testing"

	. "ampturn/dsl"
)

// TestReadingsInSeries is B. S. Guru, H. R. Hiziroglu, Electric Machinery and Transformers, example 2.11, p. 106: two
// coils of 4 : 1 turns read 2.38 H aiding and 1.02 H opposing. Printed: M 0.34 H, 1.6 H and 0.1 H, k 0.85. The ratio of
// turns stands for the third reading, that of the smaller coil.
func TestReadingsInSeries(t *testing.T) {
	m := FromReadings(
		Reading{At: "A", Aiding: []string{"B"}, Inductance: 2.38},
		Reading{At: "A", Opposing: []string{"B"}, Inductance: 1.02},
		Reading{At: "B", Inductance: 0.1},
	)
	near(t, "M", m.Mutual("A", "B"), 0.34, 1e-6)
	near(t, "larger coil", m.Self("A"), 1.6, 1e-6)
	near(t, "coupling", m.Coupling("A", "B"), 0.85, 1e-6)
	contains(t, text(t, m), "positive definite")
	contains(t, text(t, m), "coupling of A and B: 0.85, uncertain by")
	contains(t, text(t, m), "readings")
}

// TestOpenAndShorted: k^2 = 1 - Lshort/Lopen for two windings, by definition of both readings.
func TestOpenAndShorted(t *testing.T) {
	m := FromReadings(
		Reading{At: "P", Inductance: 630 * uH},
		Reading{At: "S", Inductance: 24 * uH},
		Reading{At: "P", Shorted: []string{"S"}, Inductance: 9.5 * uH},
	)
	k := m.Coupling("P", "S")
	near(t, "k squared", k*k, 1-9.5/630, 1e-9)
	near(t, "leakage", m.Leakage("P", "S"), 9.5*uH, 1e-9)
	c := m.EquivalentCircuit("P", "S")
	near(t, "series", c.Series(), 9.5*uH, 1e-9)
	near(t, "magnetising", c.Magnetising(), (630-9.5)*uH, 1e-9)
	near(t, "T form adds up", c.T().First()+c.T().Magnetising(), 630*uH, 1e-9)
	near(t, "T form of the turns ratio", c.TFor(5).Second()+c.TFor(5).Magnetising()/25, 24*uH, 1e-9)
	near(t, "ratio", c.Ratio(), m.Mutual("P", "S")/(24*uH), 1e-9)
	contains(t, text(t, c), "series, at P")
	contains(t, text(t, c.TFor(5)), "ideal transformer 5 : 1")
}

func TestReadingsThatClash(t *testing.T) {
	fault := refused(t, func() {
		FromReadings(
			Reading{At: "P", Inductance: 630 * uH},
			Reading{At: "S", Inductance: 24 * uH},
			Reading{At: "P", Aiding: []string{"S"}, Inductance: 1200 * uH},
		)
	})
	if fault.CodeName() != "NotPositive" {
		t.Errorf("code %s: %v", fault.CodeName(), fault)
	}
	contains(t, fault.Error(), "not positive definite")
}

// TestThreeWindings: three windings in a ring with a common gap of permeance Pm and stray permeances Pi across each,
// perfect iron; closed forms: Lii = Ni^2 (Pi + Pm), leakages by series and parallel permeances.
func TestThreeWindings(t *testing.T) {
	const pm, p1, p2, p3 = 400 * nH, 10 * nH, 14 * nH, 20 * nH
	op := strayTransformer(pm, p1, p2, p3).Solve()
	near(t, "self P", op.Inductance("P"), 900*(p1+pm), 1e-4)
	// A shorted winding lets no flux through its limb: what comes there runs in its stray path, in series with the
	// common one.
	inS := pm * p2 / (pm + p2)
	near(t, "leakage P, S shorted", op.Leakage("P", "S"), 900*(p1+inS), 1e-4)
	inSQ := 1 / (1/pm + 1/p2 + 1/p3)
	near(t, "leakage P, S and Q shorted", op.Leakage("P", "S", "Q"), 900*(p1+inSQ), 1e-4)
	if op.Matrix().Definite() != "positive definite" {
		t.Errorf("definite: %s", op.Matrix().Definite())
	}
}

// strayTransformer is a ring with a common gap of permeance pm and three windings, each with its own stray permeance
// across it.
func strayTransformer(pm, p1, p2, p3 float64) *MagneticCircuit {
	c := Magnetic("T3")
	nodes := []string{"a", "b", "c", "d"}
	for i, w := range []struct {
		name  string
		turns Turns
		stray float64
	}{{"P", 30, p1}, {"S", 6, p2}, {"Q", 10, p3}} {
		from, to := nodes[i], nodes[i+1]
		c.Path(w.name, from+" -> "+to, Leg(NewMaterial("iron", Linear(1e7)), 20*mm, Area(100*mm2)), Winding(w.name, w.turns))
		c.Path("stray "+w.name, from+" -> "+to, Permeance(w.stray))
	}
	c.Path("common", "d -> a", Permeance(pm))
	return c
}
