package dsl

import (
	"fmt"
	"math"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/reluct"
)

// History is a sequence of states of a circuit whose legs remember, quasi-statically: each follows from the one before.
type History struct {
	circuit MagneticCircuit
	points  []*OperatingPoint
}

// rampSteps divides a step of a history in which several legs may turn at different times.
const rampSteps = 16

// History takes the circuit from the demagnetised state through a sequence of states, one for each drive. Legs with a
// [JilesAtherton] or [Play] law keep their memory; a winding that a drive does not name carries no current.
//
//	h := T1.History(Currents{"main": 8*amp}, Currents{"main": 0})
//	h.Last().Flux("core")           // what stays
//	T1.History(Demagnetise("main", 8*amp)...)
func (c *MagneticCircuit) History(drives ...Drive) *History {
	c.given()
	elem := "history of " + c.name
	if len(drives) == 0 {
		refuse(magcirc.WrongUse, elem, "has no state", `write `+c.name+`.History(Currents{"main": 8*amp}, Currents{"main": 0})`)
	}
	steps := make([]reluct.Drive, len(drives))
	for i, d := range drives {
		steps[i] = c.driveOf([]Drive{d})
	}
	h := &History{circuit: *c, points: c.remembered(steps)}
	if h.Last().memories == 0 {
		refuse(magcirc.WrongUse, elem, "no leg remembers: its materials have laws without memory", "give one a JilesAtherton or Play law, or use Solve")
	}
	if !c.drawn {
		for _, op := range h.points {
			c.keepAssumptions(op.Notes())
			op.keepEnergy()
		}
	}
	return h
}

// remembered gives the states under a sequence of drives.
func (c *MagneticCircuit) remembered(steps []reluct.Drive) []*OperatingPoint {
	m := c.model()
	m.notes = withoutInitial(m.notes)
	below := must(m.net.History(nil))
	divide := 1
	if below.Memories() > 1 {
		divide = rampSteps
	}
	points := make([]*OperatingPoint, len(steps))
	from := reluct.Drive{}
	for i, d := range steps {
		s := must(below.Ramp(session.Context(), from, d, divide))
		points[i] = &OperatingPoint{circuit: *c, drive: d, model: m, solution: s, shown: s.Rounded(), past: steps[:i], memories: below.Memories()}
		from = d
	}
	return points
}

var historyBasis = basisRow{"fluxes", "loop fluxes of least energy, each state from the one before, with the trials of the laws with memory",
	solutionBasis.source + "; the laws: D. C. Jiles, D. L. Atherton, J. Magn. Magn. Mater. 61 (1986) 48; A. Bergqvist, Physica B 233 (1997) 342",
	"quasi-static: one move of each leg between states; no eddy currents"}

func (h *History) basis() []basisRow { return h.Last().basis() }

// withoutInitial drops the note that a law is followed along its initial curve.
func withoutInitial(notes []magcirc.Note) []magcirc.Note {
	var kept []magcirc.Note
	for _, n := range notes {
		if n.Text != hyst.InitialNote {
			kept = append(kept, n)
		}
	}
	return kept
}

// solvedLike is the state of another circuit under a drive, after the history of this point if it has one.
func (op *OperatingPoint) solvedLike(c *MagneticCircuit, d reluct.Drive) *OperatingPoint {
	if op.memories == 0 {
		return c.solved(d)
	}
	points := c.remembered(append(append([]reluct.Drive(nil), op.past...), d))
	return points[len(points)-1]
}

// Demagnetise gives the currents that demagnetise: alternating from a peak down to nothing, each 7 percent less than the
// one before.
func Demagnetise(winding string, peak Ampere) []Drive {
	wantPositive("Demagnetise", "peak current", peak, "A")
	var list []Drive
	for i := peak; math.Abs(i) > 1e-3*peak; i *= -0.93 {
		list = append(list, Currents{winding: i})
	}
	return append(list, Currents{winding: 0})
}

// given refuses the history that nobody made.
func (h *History) given() {
	if h == nil || len(h.points) == 0 {
		refuse(magcirc.BadValue, "history", "there is none", `make it with T1.History(Currents{"main": 8*amp}, Currents{"main": 0})`)
	}
}

// Count is the number of states.
func (h *History) Count() Count { h.given(); return float64(len(h.points)) }

// At is one state, counted from 1. Its incremental inductances are those of small signals about the state.
func (h *History) At(number Count) *OperatingPoint {
	h.given()
	if number != math.Trunc(number) || number < 1 || number > float64(len(h.points)) {
		refuseValue(magcirc.BadValue, "history of "+h.circuit.name, "state", number, float64(len(h.points)), "",
			fmt.Sprintf("is not among 1..%d", len(h.points)), "states are counted from 1")
	}
	return h.points[int(number)-1]
}

// Last is the last state.
func (h *History) Last() *OperatingPoint { h.given(); return h.points[len(h.points)-1] }

// Notes lists what a reader must know about the states: of each kind on each part the first, for the figures in them differ
// from state to state.
func (h *History) Notes() []Remark {
	h.given()
	all := append([]magcirc.Note(nil), h.points[0].model.notes...)
	type about struct {
		kind magcirc.NoteKind
		elem string
	}
	seen := map[about]bool{}
	for _, op := range h.points {
		for _, n := range append(op.legNotes(), op.solution.Notes...) {
			if key := (about{n.Kind, n.Elem}); !seen[key] {
				seen[key] = true
				all = append(all, n)
			}
		}
	}
	return all
}

// Flux is the flux of a path in each state.
func (h *History) Flux(path string) []Weber {
	return h.each(func(op *OperatingPoint) float64 { return op.Flux(path) })
}

// FluxDensity is the flux density of a path or leg in each state.
func (h *History) FluxDensity(path string) []Tesla {
	return h.each(func(op *OperatingPoint) float64 { return op.FluxDensity(path) })
}

// FieldStrength is the field strength of a path or leg in each state.
func (h *History) FieldStrength(path string) []AmperePerMetre {
	return h.each(func(op *OperatingPoint) float64 { return op.FieldStrength(path) })
}

func (h *History) each(ask func(op *OperatingPoint) float64) []float64 {
	h.given()
	list := make([]float64, len(h.points))
	for i, op := range h.points {
		list[i] = ask(op)
	}
	return list
}

// Plot draws the way of a path or leg: flux density over field strength.
func (h *History) Plot(path string) *Figure {
	h.given()
	f := newFigure(fmt.Sprintf("history of %s, %s", h.circuit.name, path), axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	f.add(path, append([]float64{0}, h.FieldStrength(path)...), append([]float64{0}, h.FluxDensity(path)...))
	return f
}

// MIMEBundle shows the states as a table.
func (h *History) MIMEBundle() map[string]any {
	if h == nil || len(h.points) == 0 {
		return nil
	}
	return h.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (h *History) MIMEMetadata() map[string]any {
	if h == nil || len(h.points) == 0 {
		return nil
	}
	return h.table().Metadata()
}

func (h *History) table() doc.Table {
	t := doc.Table{Caption: "history of " + h.circuit.state(), Columns: []doc.Column{{Name: "state"}, {Name: "drive"}}, Notes: noteLines(h.Notes())}
	for i := range h.circuit.paths {
		if h.points[0].fullest(i) >= 0 {
			t.Columns = append(t.Columns, doc.Column{Name: h.circuit.paths[i].name + ": B", Unit: "T"}, doc.Column{Name: "H", Unit: "A/m"})
		}
	}
	for n, op := range h.points {
		row := []doc.Cell{doc.Text(fmt.Sprint(n + 1)), doc.Text(driveWords(&h.circuit, op.drive))}
		for i := range h.circuit.paths {
			if k := op.fullest(i); k >= 0 {
				s := op.state(place{i, k})
				row = append(row, doc.Num(s.B), doc.Num(s.H))
			}
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
