package dsl

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/induct"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// OperatingPoint is the state of a circuit under given currents or linkages: fluxes, flux densities, energies, and the
// inductances that its windings have there.
type OperatingPoint struct {
	circuit     MagneticCircuit // as it was when it was solved
	drive       reluct.Drive
	model       *model
	solution    *reluct.Solution
	shown       *reluct.Solution // without what only rounding made
	past        []reluct.Drive   // of a history: the drives before
	memories    int              // of a history: legs that remember
	incremental *InductanceMatrix
	secant      *InductanceMatrix
}

// Solve finds the state of the circuit. Without a drive no winding carries current; a winding that no drive names
// carries none.
//
//	op := T1.Solve(Currents{"main": 3.2*amp})
//	op.FluxDensity("centre")
func (c *MagneticCircuit) Solve(drives ...Drive) *OperatingPoint {
	op := c.solved(c.driveOf(drives))
	if !c.drawn {
		c.keepAssumptions(op.Notes())
		op.keepEnergy()
	}
	return op
}

// given refuses the operating point that nobody solved.
func (op *OperatingPoint) given() {
	if op == nil || op.solution == nil {
		refuse(magcirc.BadValue, "operating point", "there is none", `make it with T1.Solve(Currents{"main": 3.2*amp})`)
	}
}

// Flux is the flux of a path along its arrow.
func (op *OperatingPoint) Flux(path string) Weber {
	op.given()
	i := op.circuit.pathOf(path)
	return op.keep(fluxKind, "Wb", op.shown.Flux[i], func(op *OperatingPoint) float64 { return op.shown.Flux[i] }, path)
}

// FluxDensity is the flux density in a leg, or the largest magnitude among the legs of a path (its gaps never), with
// the sign of the path's arrow. Which leg it was stands in the table that the operating point shows. In a gap it is the flux
// density between the faces; the flux beside them is not in it.
func (op *OperatingPoint) FluxDensity(path string) Tesla {
	return op.keep(densityKind, "T", op.leg(path).B, func(op *OperatingPoint) float64 { return op.leg(path).B }, path)
}

// FieldStrength is the field strength in a leg, a gap or a magnet, or in that leg of a path whose flux density is largest.
func (op *OperatingPoint) FieldStrength(path string) AmperePerMetre {
	return op.keep(fieldKind, "A/m", op.leg(path).H, func(op *OperatingPoint) float64 { return op.leg(path).H }, path)
}

// leg gives the state of a part, or of the leg of a path with the largest flux density.
func (op *OperatingPoint) leg(name string) reluct.ElementState {
	op.given()
	at := op.circuit.pathOrPart(name)
	if at.part < 0 {
		at.part = op.fullest(at.path)
	}
	if at.part < 0 {
		refuse(magcirc.WrongUse, "path "+op.circuit.name+"."+op.circuit.paths[at.path].name, "has no leg", "name the part that is meant")
	}
	if op.circuit.paths[at.path].parts[at.part].part() == strayKind {
		refuse(magcirc.WrongUse, op.circuit.paths[at.path].full(op.circuit.name, at.part), "has a permeance and no section", "ask for its Flux or MMF")
	}
	return op.state(at)
}

// state is the state of one part.
func (op *OperatingPoint) state(at place) reluct.ElementState {
	return op.shown.State[at.path][op.model.element[at.path][at.part]]
}

// fullest is the leg of a path with the largest flux density, -1 where the path has none.
func (op *OperatingPoint) fullest(path int) int {
	best, most := -1, -1.0
	for k, part := range op.circuit.paths[path].parts {
		if part.part() != legKind {
			continue
		}
		if b := math.Abs(op.state(place{path, k}).B); b > most {
			best, most = k, b
		}
	}
	return best
}

// MMF is the drop of magnetic potential over a part, or over all parts of a path, along the arrow.
func (op *OperatingPoint) MMF(part string) Ampere {
	op.given()
	ask := func(op *OperatingPoint) float64 { return op.mmf(part) }
	return op.keep(mmfKind, "A", ask(op), ask, part)
}

func (op *OperatingPoint) mmf(part string) float64 {
	at := op.circuit.pathOrPart(part)
	if at.part >= 0 {
		return op.state(at).MMF
	}
	return op.drop(at.path)
}

// drop is the sum of the drops along a path.
func (op *OperatingPoint) drop(path int) float64 {
	sum, size := 0.0, 0.0
	for _, s := range op.shown.State[path] {
		sum += s.MMF
		size += math.Abs(s.MMF)
	}
	if math.Abs(sum) < 1e-12*size {
		return 0 // what rounding leaves of drops that cancel
	}
	return sum
}

// Current is the current of a winding into its dot: as given, or as its linkage needs it.
func (op *OperatingPoint) Current(winding string) Ampere {
	op.given()
	w := op.circuit.windingOf(winding)
	return op.keep(currentKind, "A", op.shown.Current[w], func(op *OperatingPoint) float64 { return op.shown.Current[w] }, winding)
}

// Linkage is the flux linkage of a winding: the flux through each turn, summed.
func (op *OperatingPoint) Linkage(winding string) Weber {
	op.given()
	w := op.circuit.windingOf(winding)
	return op.keep(linkageKind, "Wb", op.shown.Linkage[w], func(op *OperatingPoint) float64 { return op.shown.Linkage[w] }, winding)
}

// Energy is the magnetic energy of the circuit: the integral of H dB over its volume. A magnet counts as its recoil
// reluctance, with its remanence as a source outside, so that a circuit with a magnet has energy without current. Where legs
// remember it is the work put in since the demagnetised state, of which a part is heat by then: not what is stored.
func (op *OperatingPoint) Energy() Joule {
	op.given()
	ask := func(op *OperatingPoint) float64 { return op.solution.Energy() }
	kind := energyKind
	if op.remembers() {
		kind = workKind
	}
	return op.keep(kind, "J", ask(op), ask)
}

// remembers tells whether a leg's law has a memory, so that energy is no function of the state.
func (op *OperatingPoint) remembers() bool {
	return op.memories > 0 || slices.ContainsFunc(op.model.notes, func(n magcirc.Note) bool { return n.Text == hyst.InitialNote })
}

// Coenergy is the magnetic co-energy of the circuit: the integral of B dH over its volume; magnets as for
// [OperatingPoint.Energy]. After a [MagneticCircuit.History] there is none: what the integral gives depends on the way.
func (op *OperatingPoint) Coenergy() Joule {
	op.given()
	if op.memories > 0 {
		refuse(magcirc.WrongUse, "circuit "+op.circuit.name, "has no co-energy where legs remember", "ask for Energy, the work put in since the demagnetised state")
	}
	ask := func(op *OperatingPoint) float64 { return op.solution.Coenergy() }
	return op.keep(coenergyKind, "J", ask(op), ask)
}

// Inductance is the incremental inductance of a winding, the others open: what a small change of its current meets.
func (op *OperatingPoint) Inductance(winding string) Henry { return op.Matrix().Self(winding) }

// Secant is the secant inductance of a winding, the others at their currents: with permeabilities as they are at this
// point. For a single winding without magnets it is linkage over current.
func (op *OperatingPoint) Secant(winding string) Henry { return op.SecantMatrix().Self(winding) }

// Mutual is the incremental mutual inductance of two windings, negative where their dots oppose.
func (op *OperatingPoint) Mutual(first, second string) Henry {
	return op.Matrix().Mutual(first, second)
}

// Coupling is the coupling factor of two windings, with the sign of their mutual inductance.
func (op *OperatingPoint) Coupling(first, second string) Ratio {
	return op.Matrix().Coupling(first, second)
}

// Leakage is the inductance seen at a winding with the others named shorted, and the rest open.
func (op *OperatingPoint) Leakage(seen string, shorted ...string) Henry {
	return op.Matrix().Leakage(seen, shorted...)
}

// PerPhase is the inductance per phase of windings with balanced currents, whose sum is zero; the mean over the phases
// where these differ.
func (op *OperatingPoint) PerPhase(windings ...string) Henry {
	return op.Matrix().PerPhase(windings...)
}

// InPhase is the inductance per winding of windings with equal currents; the mean over the windings where these differ.
func (op *OperatingPoint) InPhase(windings ...string) Henry { return op.Matrix().InPhase(windings...) }

// EquivalentCircuit is the circuit of two windings: series, magnetising and ratio, and the T form.
func (op *OperatingPoint) EquivalentCircuit(primary, secondary string) *EquivalentCircuit {
	return op.Matrix().EquivalentCircuit(primary, secondary)
}

// Matrix is the matrix of the incremental inductances.
func (op *OperatingPoint) Matrix() *InductanceMatrix {
	op.wantWindings()
	if op.incremental == nil {
		l := must(op.solution.Incremental())
		op.incremental = op.matrix(must(induct.NewMatrix(op.circuit.windings(), l)).Rounded(), "incremental inductances", incrementalKind)
	}
	return op.incremental
}

// SecantMatrix is the matrix of the secant inductances: permeabilities as they are at this point.
func (op *OperatingPoint) SecantMatrix() *InductanceMatrix {
	op.wantWindings()
	if op.secant == nil {
		l := must(op.solution.Secant())
		op.secant = op.matrix(must(induct.NewMatrix(op.circuit.windings(), l)).Rounded(), "secant inductances", secantKind)
	}
	return op.secant
}

func (op *OperatingPoint) wantWindings() {
	op.given()
	if len(op.circuit.windings()) == 0 {
		refuse(magcirc.WrongUse, "circuit "+op.circuit.name, "has no winding", `give a path one: Winding("main", 34*turn)`)
	}
}

func (op *OperatingPoint) matrix(m *induct.Matrix, what string, kind answerKind) *InductanceMatrix {
	if op.circuit.drawn {
		return &InductanceMatrix{matrix: m, owner: op.circuit.name, kind: kind}
	}
	return &InductanceMatrix{matrix: m, owner: op.circuit.name, caption: what + ": " + op.conditions(), remarks: op.Notes(), origin: op, kind: kind}
}

// Notes lists what a reader must know about this result.
func (op *OperatingPoint) Notes() []Remark {
	op.given()
	return mergeNotes(mergeNotes(mergeNotes(nil, op.model.notes), op.solution.Notes), op.legNotes())
}

// conditions says what this result holds for: circuit, temperature, currents.
func (op *OperatingPoint) conditions() string {
	op.given()
	when := ""
	if op.memories > 0 {
		when = fmt.Sprintf(", state %d of a history", len(op.past)+1)
	}
	return op.circuit.state() + ", " + driveWords(&op.circuit, op.drive) + when
}

// MIMEBundle shows paths and windings as tables, conditions first.
func (op *OperatingPoint) MIMEBundle() map[string]any {
	if op == nil || op.solution == nil {
		return nil
	}
	return doc.Join(op.tables()...)
}

// MIMEMetadata gives the numbers in full.
func (op *OperatingPoint) MIMEMetadata() map[string]any {
	if op == nil || op.solution == nil {
		return nil
	}
	return joinMetadata(op.tables())
}

func (op *OperatingPoint) tables() []doc.Table {
	tables := []doc.Table{op.pathTable()}
	if len(op.circuit.windings()) > 0 {
		tables = append(tables, op.windingTable())
	}
	last := &tables[len(tables)-1]
	last.Notes = append(last.Notes, noteLines(op.Notes())...)
	return tables
}

func (op *OperatingPoint) pathTable() doc.Table {
	t := doc.Table{Caption: op.conditions(), Columns: []doc.Column{{Name: "path"}, {Name: "flux", Unit: "Wb"},
		{Name: "flux density", Unit: "T"}, {Name: "field strength", Unit: "A/m"}, {Name: "in"}, {Name: "mmf drop", Unit: "A"}}}
	for i := range op.circuit.paths {
		p := &op.circuit.paths[i]
		row := []doc.Cell{doc.Text(p.name), doc.Num(op.shown.Flux[i]), doc.Text(""), doc.Text(""), doc.Text(""), doc.Num(op.drop(i))}
		if k := op.fullest(i); k >= 0 {
			s := op.state(place{i, k})
			row[2], row[3], row[4] = doc.Num(s.B), doc.Num(s.H), doc.Text(p.names[k])
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

func (op *OperatingPoint) windingTable() doc.Table {
	t := doc.Table{Caption: "windings of " + op.circuit.name + "; " + op.energyWords(), Columns: []doc.Column{{Name: "winding"}, {Name: "current", Unit: "A"},
		{Name: "linkage", Unit: "Wb"}, {Name: "inductance, incremental", Unit: "H"}}}
	for w, name := range op.circuit.windings() {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(name), doc.Num(op.shown.Current[w]), doc.Num(op.shown.Linkage[w]), doc.Num(op.Inductance(name))})
	}
	if op.circuit.magnets() > 0 {
		t.Notes = append(t.Notes, "energies: "+magnetEnergy.method)
	}
	return t
}

// energyWords says the energies of the point; where legs remember, what they are instead.
func (op *OperatingPoint) energyWords() string {
	switch {
	case op.memories > 0:
		return fmt.Sprintf("%s %s, heat in the core included", workKind, phys.Format(op.Energy(), "J"))
	case op.remembers():
		return fmt.Sprintf("%s %s, heat in the core included; co-energy along the initial curve %s", workKind, phys.Format(op.Energy(), "J"), phys.Format(op.Coenergy(), "J"))
	}
	return fmt.Sprintf("energy %s, co-energy %s", phys.Format(op.Energy(), "J"), phys.Format(op.Coenergy(), "J"))
}

// Balance shows how well flux and mmf balance at the solution, and what the solution took.
func (op *OperatingPoint) Balance() *TableView {
	op.given()
	s := op.solution
	t := doc.Table{Caption: "balance of " + op.conditions(), Columns: []doc.Column{{Name: "what"}, {Name: "value"}}}
	add := func(what string, value float64) {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(what), doc.Num(value)})
	}
	add("sum of fluxes at the worst node, relative to the largest flux", s.NodeBalance)
	add("sum of mmf along the worst path, relative to the largest mmf", s.MMFBalance)
	add("residual of the worst loop, relative to its terms", s.Residual)
	t.Rows = append(t.Rows, []doc.Cell{doc.Text("iterations"), doc.Text(strconv.Itoa(s.Iterations))})
	return &TableView{table: t}
}

// Worst is the leg nearest to saturation.
func (op *OperatingPoint) Worst() *LegState {
	op.given()
	worst := op.worst()
	if worst == nil {
		refuse(magcirc.WrongUse, "circuit "+op.circuit.name, "has no leg", "only legs saturate")
	}
	return worst
}
