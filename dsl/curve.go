package dsl

import (
	"fmt"
	"maps"
	"strings"

	"ampturn/dsl/chart"
	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/phys"
)

// BiasCurve is the inductance of a winding over its current.
type BiasCurve struct {
	curve      *design.Curve
	circuit    MagneticCircuit
	winding    string
	name       string // in a picture
	conditions string
	remarks    []Remark
	latest     *[]Remark // of the points computed since it was emptied
}

// curvePoints is how many currents a bias curve is computed at.
const curvePoints = 61

// BiasCurve follows the inductance of a winding from one current to another; other windings as the drives say, else
// without current.
//
//	curve := T1.BiasCurve("main", 0, 6*amp)
//	curve.SaturationCurrent(20*percent)
func (c *MagneticCircuit) BiasCurve(winding string, from, to Ampere, others ...Drive) *BiasCurve {
	w := c.windingOf(winding)
	elem := "bias curve of " + c.name + "." + c.windings()[w]
	wantFinite(elem, "current", from, "A")
	wantFinite(elem, "current", to, "A")
	m := c.model()
	base := c.driveOf(others)
	if _, twice := base.Current[w]; twice {
		refuse(magcirc.WrongUse, elem, "the other drives name this winding too", "leave it out of them")
	}
	b := &BiasCurve{circuit: *c, winding: c.windings()[w], conditions: c.state()}
	b.name = strings.Join(append([]string{phys.Format(c.temperature, "degC")}, c.changes...), ", ")
	if len(others) > 0 {
		b.conditions += ", " + driveWords(c, base)
	}
	latest := mergeNotes(nil, m.notes)
	b.latest = &latest
	at := func(i float64) (incremental, secant float64, err error) {
		d := base
		d.Current = maps.Clone(base.Current)
		d.Current[w] = i
		s, err := m.net.Solve(session.Context(), d, nil)
		if err != nil {
			return 0, 0, err
		}
		latest = mergeNotes(latest, s.Notes)
		inc, err := s.Incremental()
		if err != nil {
			return 0, 0, err
		}
		sec, err := s.Secant()
		if err != nil {
			return 0, 0, err
		}
		return inc.At(w, w), sec.At(w, w), nil
	}
	curve, err := design.Follow(session.Context(), at, from, to, curvePoints)
	named(elem, err)
	b.curve = curve
	b.remarks = onePerPart(latest)
	c.keepAssumptions(b.remarks)
	return b
}

// onePerPart keeps the first of the notes of a kind on a part: along a curve the figures in them differ.
func onePerPart(notes []magcirc.Note) []magcirc.Note {
	var kept []magcirc.Note
	type about struct {
		kind magcirc.NoteKind
		elem string
	}
	seen := map[about]bool{}
	for _, n := range notes {
		key := about{n.Kind, n.Elem}
		if n.Kind == magcirc.Extrapolated && seen[key] {
			continue
		}
		seen[key] = true
		kept = append(kept, n)
	}
	return kept
}

// At is the incremental inductance at a current, computed there.
func (b *BiasCurve) At(current Ampere) Henry { inc, _ := b.at(current); return inc }

// SecantAt is the secant inductance at a current, computed there.
func (b *BiasCurve) SecantAt(current Ampere) Henry { _, sec := b.at(current); return sec }

func (b *BiasCurve) at(current float64) (incremental, secant float64) {
	b.given()
	wantFinite(b.elem(), "current", current, "A")
	*b.latest = nil
	incremental, secant, err := b.curve.At(current)
	check(err)
	b.remarks = onePerPart(mergeNotes(b.remarks, *b.latest))
	b.circuit.keepAssumptions(b.remarks)
	return incremental, secant
}

// SaturationCurrent is the current at which the incremental inductance has fallen by a share of its value at zero
// current, on the side of the curve's larger end.
func (b *BiasCurve) SaturationCurrent(drop Ratio) Ampere {
	b.given()
	return must(b.curve.Drop(session.Context(), b.elem(), drop))
}

func (b *BiasCurve) elem() string { return "bias curve of " + b.circuit.name + "." + b.winding }

func (b *BiasCurve) given() {
	if b == nil || b.curve == nil {
		refuse(magcirc.BadValue, "bias curve", "there is none", `make it with T1.BiasCurve("main", 0, 6*amp)`)
	}
}

// Notes lists what a reader must know about this result.
func (b *BiasCurve) Notes() []Remark { b.given(); return append([]Remark(nil), b.remarks...) }

// Plot draws incremental and secant inductance over current.
func (b *BiasCurve) Plot() *Figure {
	b.given()
	f := newFigure(fmt.Sprintf("inductance of %s.%s over current, %s", b.circuit.name, b.winding, b.conditions), axis{Label: "current", Unit: "A"}, axis{Label: "inductance", Unit: "H"})
	f.add("incremental", b.curve.Current, b.curve.Incremental)
	f.add("secant", b.curve.Current, b.curve.Secant)
	return f
}

// As names the curve in a picture; its own name is the temperature with the changes of a variant.
func (b *BiasCurve) As(name string) *BiasCurve {
	b.given()
	next := *b
	next.name = name
	return &next
}

// drawn draws the incremental inductance.
func (b *BiasCurve) drawn() drawing {
	b.given()
	return drawing{title: fmt.Sprintf("incremental inductance of %s.%s over current, %s", b.circuit.name, b.winding, b.conditions),
		x: axis{Label: "current", Unit: "A"}, y: axis{Label: "inductance", Unit: "H"},
		lines: []chart.Series{{Name: b.name, X: b.curve.Current, Y: b.curve.Incremental}}}
}

// MIMEBundle shows both inductances over current as a picture, with its text twin and the notes.
func (b *BiasCurve) MIMEBundle() map[string]any {
	if b == nil || b.curve == nil {
		return nil
	}
	f := b.Plot()
	text := f.lines.Text()
	for _, n := range noteLines(b.remarks) {
		text += "\nnote: " + n
	}
	return doc.Bundle(text, "", f.lines.SVG())
}
