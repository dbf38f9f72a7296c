package dsl

import (
	"fmt"
	"math"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/tol"
)

// BenchReading is a measured value beside what the model gives, with the explanations that fit.
type BenchReading struct {
	what, unit      string
	measured, model float64
	conditions      string
	from            *answer
	moves           []tol.Move
	inputs          []input
	band            *tol.Band
	turns           []turnCase
}

// turnCase is the model with another number of turns.
type turnCase struct {
	turns, value float64
}

// Bench sets a measured value beside the model's and lists what would explain the difference: each input of the circuit, moved
// by itself until the model gives the measured value, against its tolerance; a turn more or less; what the methods leave
// open. The model's value is one that an operating point gave, as it gave it; for any other there are no explanations.
//
//	Bench("Lp, sample 3", 585*uH, op.Inductance("P"), op)
func Bench(what string, measured, model Value, conditions ...Condition) *BenchReading {
	return BenchWithUnits(nil, what, measured, model, conditions...)
}

// BenchWithUnits is [Bench] with the units of its values.
func BenchWithUnits(units []string, what string, measured, model Value, conditions ...Condition) *BenchReading {
	wantName("bench reading", what)
	elem := "bench reading \"" + what + "\""
	unit := unitOf(unitAt(units, 2))
	if unit == "" {
		unit = unitOf(unitAt(units, 1))
	}
	wantFinite(elem, "measured value", measured, unit)
	wantFinite(elem, "model value", model, unit)
	b := &BenchReading{what: what, unit: unit, measured: measured, model: model, from: conditionAnswer(model, conditions)}
	if b.from != nil && b.unit == "" {
		b.unit = b.from.unit
	}
	for _, c := range conditions {
		if c == nil {
			refuse(magcirc.BadValue, elem, "a condition is missing (nil)", "give the operating point")
		}
		b.conditions += ", " + c.conditions()
	}
	b.explain()
	return b
}

// explain computes the explanations.
func (b *BenchReading) explain() {
	a := b.from
	if a == nil || b.measured == b.model {
		return
	}
	b.inputs = a.allInputs()
	b.moves = must(tol.Explain(session.Context(), a.again(b.inputs), below(b.inputs), b.measured))
	if spreads := a.op.circuit.spreads(); len(spreads) > 0 {
		b.band = must(tol.WorstCase(session.Context(), a.again(spreads), below(spreads)))
	}
	if a.kind == incrementalKind || a.kind == secantKind {
		b.countTurns(a.names[0])
	}
}

// mostTurnsOff is how many turns a winding may be off in an explanation.
const mostTurnsOff = 200

// countTurns asks the model with a turn less, two less, or more, until it passes the measured value, and keeps the nearer of
// the last two.
func (b *BenchReading) countTurns(winding string) {
	c := &b.from.op.circuit
	name := c.windings()[c.windingOf(winding)]
	own := c.turnsOn(name)
	step := math.Copysign(1, b.measured-b.model)
	best := turnCase{own, b.model}
	for n := 1.0; n <= mostTurnsOff && own+step*n >= 1; n++ {
		next := c.changed(moreTurns(name, step*n))
		next.drawn = true
		value := 0.0
		if err := Try(func() { value = b.from.ask(next.solved(b.from.op.drive)) }); err != nil {
			return
		}
		if math.Abs(value-b.measured) < math.Abs(best.value-b.measured) {
			best = turnCase{own + step*n, value}
		}
		if (value-b.measured)*step > 0 {
			break
		}
	}
	if best.turns != own {
		b.turns = []turnCase{best}
	}
}

// moreTurns adds turns to the first part of a winding.
func moreTurns(winding string, more float64) func(paths []path) {
	return func(paths []path) {
		for i := range paths {
			for k, part := range paths[i].parts {
				if w, ok := part.(WindingPart); ok && paths[i].names[k] == winding {
					w.turns += more
					paths[i].parts[k] = w
					return
				}
			}
		}
	}
}

// Off is by how much the measured value differs from the model's, relative to the model's.
func (b *BenchReading) Off() Ratio {
	b.given()
	if b.model == 0 {
		refuse(magcirc.BadValue, "bench reading \""+b.what+"\"", "has a model value of zero", "compare the difference")
	}
	return b.measured/b.model - 1
}

func (b *BenchReading) given() {
	if b == nil || b.what == "" {
		refuse(magcirc.BadValue, "bench reading", "there is none", `make it with Bench("Lp, sample 3", 585*uH, op.Inductance("P"), op)`)
	}
}

// MIMEBundle shows the comparison and its explanations.
func (b *BenchReading) MIMEBundle() map[string]any {
	if b == nil || b.what == "" {
		return nil
	}
	return b.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (b *BenchReading) MIMEMetadata() map[string]any {
	if b == nil || b.what == "" {
		return nil
	}
	return b.table().Metadata()
}

func (b *BenchReading) table() doc.Table {
	t := doc.Table{Caption: fmt.Sprintf("%s: measured %s, model %s%s%s", b.what, phys.Format(b.measured, b.unit), phys.Format(b.model, b.unit), b.offWords(), b.conditions),
		Columns: []doc.Column{{Name: "what would explain it by itself"}, {Name: "move"}, {Name: "to"}, {Name: "fits"}}}
	for _, m := range b.moves {
		in := b.inputs[m.Input]
		unit := in.Unit
		if unit == "degC" {
			unit = "K"
		}
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(in.Name), doc.Text(signed(m.By, unit)), doc.Text(phys.Format(m.To, in.Unit)), doc.Text(in.fits(m))})
	}
	for _, c := range b.turns {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text("turns"), doc.Text(""), doc.Text(phys.Format(c.turns, "")), doc.Text("model then " + phys.Format(c.value, b.unit))})
	}
	t.Notes = b.notes()
	return t
}

func (b *BenchReading) offWords() string {
	if b.model == 0 {
		return ""
	}
	off := b.measured/b.model - 1
	switch {
	case off < 0:
		return ", measured is " + phys.FormatDigits(-off, "percent", 2) + " lower"
	case off > 0:
		return ", measured is " + phys.FormatDigits(off, "percent", 2) + " higher"
	}
	return ", equal"
}

// notes say what the methods and the tolerances leave open.
func (b *BenchReading) notes() []string {
	if b.from == nil {
		return []string{"no explanations: the model's value did not come from an operating point as it is"}
	}
	var notes []string
	u, err := b.from.uncertainty()
	if err != nil {
		notes = append(notes, "what the methods for the gaps leave open is not known: "+err.Error())
	}
	if u > 0 && b.model != 0 {
		word := "more than"
		if math.Abs(b.measured/b.model-1) <= u {
			word = "within"
		}
		notes = append(notes, "the difference is "+word+" what the methods for the gaps leave open ("+phys.FormatDigits(u, "percent", 2)+")")
	}
	if w := b.band; w != nil {
		word := "outside"
		if b.measured >= w.Min && b.measured <= w.Max {
			word = "within"
		}
		notes = append(notes, fmt.Sprintf("the measured value is %s the worst case of the stated tolerances (%s..%s)", word, phys.Format(w.Min, b.unit), phys.Format(w.Max, b.unit)))
	}
	return append(notes, "compare like with like: the meter's frequency, level, bias and temperature must be those of the model")
}

func signed(x float64, unit string) string {
	s := phys.FormatDigits(x, unit, 3)
	if x > 0 {
		s = "+" + s
	}
	return s
}

// fits says whether a move lies within the tolerance of its input.
func (in input) fits(m tol.Move) string {
	times := math.Abs(m.Length)
	switch {
	case in.Half > 0 && times <= 1:
		return "within its tolerance (+-" + phys.Format(in.Half, in.Unit) + ")"
	case in.Half > 0:
		return phys.FormatDigits(times, "", 2) + " times its tolerance (+-" + phys.Format(in.Half, in.Unit) + ")"
	case times <= 1:
		return "plausible; no tolerance is stated"
	}
	return phys.FormatDigits(times, "", 2) + " times what is usual; no tolerance is stated"
}
