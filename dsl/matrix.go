package dsl

import (
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/induct"
)

// InductanceMatrix is the matrix of self and mutual inductances of windings, with what follows from it.
type InductanceMatrix struct {
	matrix  *induct.Matrix
	owner   string // the circuit, for messages
	caption string
	remarks []Remark
	checks  *doc.Table // the readings it was made from
	origin  *OperatingPoint
	kind    answerKind // of its inductances
}

// index finds a winding.
func (m *InductanceMatrix) index(winding string) int {
	m.given()
	name := strings.TrimPrefix(winding, m.owner+".")
	i := slices.Index(m.matrix.Names, name)
	if i < 0 {
		refuse(magcirc.UnknownName, "", m.owner+` has no winding "`+winding+`"`, "it has "+strings.Join(m.matrix.Names, ", "))
	}
	return i
}

func (m *InductanceMatrix) indices(windings []string) []int {
	m.given()
	all := make([]int, len(windings))
	for k, w := range windings {
		all[k] = m.index(w)
		if slices.Contains(all[:k], all[k]) {
			refuse(magcirc.DuplicateName, "winding "+w, "is named twice", "")
		}
	}
	return all
}

func (m *InductanceMatrix) given() {
	if m == nil || m.matrix == nil {
		refuse(magcirc.BadValue, "inductance matrix", "there is none", "take it from an operating point: op.Matrix()")
	}
}

// Self is the inductance of a winding with the others open.
func (m *InductanceMatrix) Self(winding string) Henry {
	i := m.index(winding)
	return m.keep(m.kind, "H", func(m *InductanceMatrix) float64 { return m.matrix.Self(i) }, winding)
}

// keep asks the matrix, and remembers what the number is where an operating point gave the matrix.
func (m *InductanceMatrix) keep(kind answerKind, unit string, ask func(m *InductanceMatrix) float64, names ...string) float64 {
	if m.kind == secantKind && kind != secantKind {
		kind += ", secant"
	}
	return m.origin.keep(kind, unit, ask(m), func(op *OperatingPoint) float64 {
		if m.kind == secantKind {
			return ask(op.SecantMatrix())
		}
		return ask(op.Matrix())
	}, names...)
}

// Mutual is the mutual inductance of two windings, negative where their dots oppose.
func (m *InductanceMatrix) Mutual(first, second string) Henry {
	i := m.indices([]string{first, second})
	return m.keep(mutualKind, "H", func(m *InductanceMatrix) float64 { return m.matrix.Mutual(i[0], i[1]) }, first, second)
}

// Coupling is the coupling factor of two windings, with the sign of their mutual inductance.
func (m *InductanceMatrix) Coupling(first, second string) Ratio {
	i := m.indices([]string{first, second})
	return m.keep(couplingKind, "", func(m *InductanceMatrix) float64 { return m.matrix.Coupling(i[0], i[1]) }, first, second)
}

// Leakage is the inductance seen at a winding with the others named shorted, and the rest open.
func (m *InductanceMatrix) Leakage(seen string, shorted ...string) Henry {
	if len(shorted) == 0 {
		refuse(magcirc.WrongUse, "Leakage", "names no shorted winding", `write Leakage("P", "S")`)
	}
	i := m.indices(append([]string{seen}, shorted...))
	return m.keep(leakageKind, "H", func(m *InductanceMatrix) float64 { return must(m.matrix.Leakage(i[0], i[1:])) }, append([]string{seen}, shorted...)...)
}

// PerPhase is the inductance per phase of windings with balanced currents, whose sum is zero; the mean over the phases
// where these differ.
func (m *InductanceMatrix) PerPhase(windings ...string) Henry {
	i := m.indices(windings)
	return m.keep(perPhaseKind, "H", func(m *InductanceMatrix) float64 { return must(m.matrix.PerPhase(i...)) }, windings...)
}

// InPhase is the inductance per winding of windings with equal currents; the mean over the windings where these differ.
func (m *InductanceMatrix) InPhase(windings ...string) Henry {
	i := m.indices(windings)
	return m.keep(inPhaseKind, "H", func(m *InductanceMatrix) float64 { return must(m.matrix.InPhase(i...)) }, windings...)
}

// EquivalentCircuit is the circuit of two windings: series, magnetising and ratio, and the T form.
func (m *InductanceMatrix) EquivalentCircuit(primary, secondary string) *EquivalentCircuit {
	i := m.indices([]string{primary, secondary})
	c := must(m.matrix.EquivalentCircuit(i[0], i[1]))
	return &EquivalentCircuit{matrix: m, at: [2]int(i), circuit: c, primary: m.matrix.Names[i[0]], secondary: m.matrix.Names[i[1]]}
}

// Definite says what kind of network the matrix can belong to: "positive definite", "singular" (an ideal network
// without leakage) or "not positive definite" (no part is like that).
func (m *InductanceMatrix) Definite() string {
	m.given()
	d, _ := m.matrix.Definite()
	return d.String()
}

// Notes lists what a reader must know about this result.
func (m *InductanceMatrix) Notes() []Remark { m.given(); return slices.Clone(m.remarks) }

// MIMEBundle shows the matrix and the coupling factors.
func (m *InductanceMatrix) MIMEBundle() map[string]any {
	if m == nil || m.matrix == nil {
		return nil
	}
	return doc.Join(m.tables()...)
}

// MIMEMetadata gives the numbers in full.
func (m *InductanceMatrix) MIMEMetadata() map[string]any {
	if m == nil || m.matrix == nil {
		return nil
	}
	return joinMetadata(m.tables())
}

func (m *InductanceMatrix) tables() []doc.Table {
	t := doc.Table{Caption: m.caption, Columns: []doc.Column{{Name: "winding"}}}
	k := doc.Table{Caption: "coupling factors", Columns: []doc.Column{{Name: "winding"}}}
	for i, name := range m.matrix.Names {
		t.Columns = append(t.Columns, doc.Column{Name: name, Unit: "H"})
		k.Columns = append(k.Columns, doc.Column{Name: name})
		inductances, couplings := []doc.Cell{doc.Text(name)}, []doc.Cell{doc.Text(name)}
		for j := range m.matrix.Names {
			if i == j {
				inductances, couplings = append(inductances, doc.Num(m.matrix.Self(i))), append(couplings, doc.Text("1"))
				continue
			}
			inductances = append(inductances, doc.Num(m.matrix.Mutual(i, j)))
			couplings = append(couplings, doc.Num(m.matrix.Coupling(i, j)))
		}
		t.Rows, k.Rows = append(t.Rows, inductances), append(k.Rows, couplings)
	}
	tables := []doc.Table{t}
	if len(m.matrix.Names) > 1 {
		tables = append(tables, k)
	}
	if m.checks != nil {
		tables = append(tables, *m.checks)
	}
	last := &tables[len(tables)-1]
	last.Notes = append(last.Notes, noteLines(m.remarks)...)
	if len(m.matrix.Names) > 1 {
		_, detail := m.matrix.Definite()
		last.Notes = append(last.Notes, detail.Text)
	}
	return tables
}
