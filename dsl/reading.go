package dsl

import (
	"fmt"
	"math"
	"slices"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/induct"
	"ampturn/magcirc/phys"
)

// Reading is what an inductance meter shows at one winding, or at several in series, while others are shorted and the
// rest open.
//
//	Reading{At: "P", Inductance: 630*uH}
//	Reading{At: "P", Shorted: []string{"S"}, Inductance: 9.5*uH}
//	Reading{At: "A", Aiding: []string{"B"}, Inductance: 23.8*uH}
//	Reading{At: "A", Opposing: []string{"B"}, Inductance: 10.2*uH}
type Reading struct {
	Name        string   // how messages call it; "" names it by its connection
	At          string   // the winding at the meter
	Aiding      []string // in series with it, the current entering each dot
	Opposing    []string // in series with it, the current leaving each dot
	Shorted     []string // shorted meanwhile; windings named nowhere are open
	Inductance  Henry    // what the meter shows
	Uncertainty Ratio    // of the meter, relative; 0 stands for 1 percent
}

// FromReadings is the inductance matrix that fits meter readings, with coupling and leakage. Readings that belong to
// no part are refused with those that clash.
func FromReadings(readings ...Reading) *InductanceMatrix {
	below := make([]induct.Reading, len(readings))
	for i, r := range readings {
		below[i] = induct.Reading(r)
	}
	model := must(induct.FromReadings(below, nil))
	m := &InductanceMatrix{matrix: &model.Matrix, owner: "readings", caption: fmt.Sprintf("inductances from %d readings", len(readings)), remarks: slices.Clone(model.Notes)}
	for i, name := range model.Names {
		for j, other := range model.Names[:i] {
			u := model.Uncertainty(func(l *induct.Matrix) float64 { return l.Coupling(j, i) })
			m.remarks = append(m.remarks, Remark{Kind: magcirc.Remark, Text: fmt.Sprintf("coupling of %s and %s: %s, uncertain by %s from the readings",
				other, name, phys.FormatDigits(model.Coupling(j, i), "", 5), phys.FormatDigits(u, "", 2))})
		}
	}
	m.checks = readingTable(model.Checks)
	return m
}

// readingTable sets each reading beside what the matrix gives for it.
func readingTable(checks []induct.Check) *doc.Table {
	t := &doc.Table{Caption: "readings", Columns: []doc.Column{{Name: "reading"}, {Name: "meter", Unit: "H"}, {Name: "matrix", Unit: "H"}, {Name: "off by"}}}
	for _, c := range checks {
		off := c.Deviation
		if math.Abs(off) < 1e-9 {
			off = 0 // rounding
		}
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(c.Reading.String()), doc.Num(c.Reading.Inductance), doc.Num(c.Model), doc.Text(phys.FormatDigits(off, "percent", 2))})
	}
	return t
}
