package dsl

import (
	"fmt"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
)

// based is a result that knows its method, the method's published source and its validity.
type based interface {
	basis() []basisRow
}

// basisRow is one method.
type basisRow struct{ what, method, source, validity string }

// Basis shows by which method a result was computed, where that is published, where it holds, and the notes on it. A number is
// known if an operating point gave it, as it gave it.
func Basis(result any) *TableView {
	b, caption := basisOf(result)
	t := doc.Table{Caption: caption, Columns: []doc.Column{{Name: "what"}, {Name: "method"}, {Name: "source"}, {Name: "valid for"}}}
	for _, r := range b.basis() {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(r.what), doc.Text(r.method), doc.Text(r.source), doc.Text(r.validity)})
	}
	if n, ok := b.(interface{ Notes() []Remark }); ok {
		t.Notes = noteLines(n.Notes())
	}
	return &TableView{table: t}
}

// basisOf finds what knows the method behind a result.
func basisOf(result any) (b based, caption string) {
	switch r := result.(type) {
	case based:
		return r, ""
	case float64:
		a := wantAnswer("Basis", r)
		return a.op, a.what + ": " + a.op.conditions()
	case *Verdict:
		r.given()
		a := wantAnswer("Basis", r.kept.Value)
		return a.op, r.kept.What + ", " + a.what + ": " + a.op.conditions()
	}
	refuse(magcirc.WrongUse, "Basis", fmt.Sprintf("%T does not carry its method", result), "ask what it came from: Basis(op)")
	return nil, ""
}

var solutionBasis = basisRow{"fluxes", "loop fluxes of least energy by Newton's method with a line search",
	"W. Millar, Phil. Mag. 42 (1951) 1150 (minimum of energy in nonlinear networks)", "static; laws without hysteresis; no eddy currents"}

var inductanceBasis = basisRow{"inductances", "differentiation of the solved network", "derivative of the loop equations at the solution", "small signals about this point, without eddy currents"}

// magnetEnergy is how the energies of a circuit with magnets are counted.
var magnetEnergy = basisRow{"energies", "a magnet counts as its recoil reluctance, with its remanence as a source outside", "definition", "differences of energy at one magnetisation"}

func (op *OperatingPoint) basis() []basisRow {
	op.given()
	first := []basisRow{solutionBasis, inductanceBasis}
	if op.circuit.magnets() > 0 {
		first = append(first, magnetEnergy)
	}
	if op.memories > 0 {
		first[0] = historyBasis
	}
	return append(append(first, op.model.gapBasis(&op.circuit)...), op.circuit.lawBasis()...)
}

// gapBasis lists the gaps with their methods.
func (m *model) gapBasis(c *MagneticCircuit) []basisRow {
	var rows []basisRow
	for i := range c.paths {
		for k := range c.paths[i].parts {
			if r, ok := m.gaps[place{i, k}]; ok {
				rows = append(rows, basisRow{c.paths[i].full(c.name, k), methodWords(r), r.Source, r.Validity})
			}
		}
	}
	return rows
}

// lawBasis lists the materials with their laws.
func (c *MagneticCircuit) lawBasis() []basisRow {
	var rows []basisRow
	seen := map[*MagneticMaterial]bool{}
	for i := range c.paths {
		for _, part := range c.paths[i].parts {
			if leg, ok := part.(LegPart); ok && !seen[leg.material] {
				seen[leg.material] = true
				rows = append(rows, leg.material.basis()...)
			}
		}
	}
	return rows
}

func (m *MagneticMaterial) basis() []basisRow {
	m.given()
	var rows []basisRow
	for _, t := range m.below.Temperatures() {
		rows = append(rows, basisRow{"material " + m.Name(), m.law(t).Describe(), "as its author gives it (Cite)", fmt.Sprintf("%g degC", t)})
	}
	return rows
}

func (b *BiasCurve) basis() []basisRow {
	b.given()
	return append([]basisRow{solutionBasis, inductanceBasis}, b.circuit.lawBasis()...)
}

func (g *GapComparison) basis() []basisRow {
	var rows []basisRow
	for _, c := range g.all {
		if c.Err == nil {
			rows = append(rows, basisRow{g.elem, c.Method.String(), c.Result.Source, c.Result.Validity})
		}
	}
	return rows
}

var readingBasis = basisRow{"inductances", "weighted least squares over the readings; aiding and opposing give M = (La - Lo)/4",
	"B. S. Guru, H. R. Hiziroglu, Electric Machinery and Transformers, 3rd ed. 2004, ch. 2", "at the meter's frequency and level; resistances left out"}

var equivalentBasis = basisRow{"equivalent circuit", "series = Lp - M^2/Ls, magnetising = M^2/Ls, ratio = M/Ls", "two-port of coupled coils (any textbook)", "two windings, all others open"}

func (m *InductanceMatrix) basis() []basisRow {
	m.given()
	if m.checks != nil {
		return []basisRow{readingBasis}
	}
	return []basisRow{solutionBasis, inductanceBasis}
}

func (e *EquivalentCircuit) basis() []basisRow {
	e.given()
	return append(e.matrix.basis(), equivalentBasis)
}

// methodWords is the method of a gap with what it leaves open.
func methodWords(r gap.Result) string {
	return r.Method.String() + ", uncertain by " + phys.FormatDigits(r.Uncertainty, "percent", 2)
}
