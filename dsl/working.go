package dsl

import (
	"fmt"
	"math"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/working"
)

// WorkingView is a result as lines to check: formula, the numbers put in with their units, result.
type WorkingView struct {
	what, conditions string
	unit             string
	work             working.Working
}

// Working shows how a number was computed, line by line: formula, the numbers put in with their units, result. The number is
// one that an operating point gave, as it gave it: an inductance, a flux density, a flux, an mmf, a linkage, a coupling, a
// leakage; or a verdict on one.
//
//	Working(op.Inductance("N"))
func Working(result any) *WorkingView {
	var a *answer
	switch r := result.(type) {
	case float64:
		a = wantAnswer("Working", r)
	case *Verdict:
		r.given()
		a = wantAnswer("Working", r.kept.Value)
	default:
		refuse(magcirc.WrongUse, "Working", fmt.Sprintf("%T is not one number", result), `give the number itself: Working(op.Inductance("N"))`)
	}
	return &WorkingView{what: a.what, conditions: a.op.conditions(), unit: a.unit, work: a.working()}
}

// working asks the layer below for the lines.
func (a *answer) working() working.Working {
	op := a.op
	n, s, c := op.model.net, op.shown, &op.circuit
	switch a.kind {
	case incrementalKind, secantKind:
		return working.Inductance(n, s, c.windingOf(a.names[0]), a.value, a.kind == secantKind, op.describePart)
	case densityKind:
		at := c.pathOrPart(a.names[0])
		if at.part < 0 {
			at.part = op.fullest(at.path)
		}
		return working.FluxDensity(n, s, at.path, op.model.element[at.path][at.part], op.describePart)
	case fluxKind:
		return working.Flux(n, s, c.pathOf(a.names[0]), op.describePart)
	case mmfKind:
		w := working.Flux(n, s, c.pathOrPart(a.names[0]).path, op.describePart)
		w.Value, w.Solved = a.value, a.value
		return w
	case linkageKind:
		return working.Linkage(n, s, c.windingOf(a.names[0]))
	}
	if m := op.Matrix(); len(a.names) == 2 && (a.kind == couplingKind || a.kind == leakageKind) {
		i, j := m.index(a.names[0]), m.index(a.names[1])
		l1, l2, mutual := m.matrix.Self(i), m.matrix.Self(j), m.matrix.Mutual(i, j)
		if a.kind == couplingKind {
			return working.Coupling(l1, l2, mutual, a.value)
		}
		return working.Leakage(l1, l2, mutual, a.value)
	}
	refuse(magcirc.WrongUse, "Working", "has no lines for "+string(a.kind), "ask for an inductance, a flux density, a flux, an mmf, a linkage, a coupling or a leakage; Basis(op) names the method")
	return working.Working{}
}

// describePart tells the layer below what a part is called, and by which method a gap was computed.
func (op *OperatingPoint) describePart(branch, element int) working.Part {
	p := &op.circuit.paths[branch]
	for k := range p.parts {
		if op.model.element[branch][k] != element {
			continue
		}
		d := working.Part{Elem: p.full(op.circuit.name, k)}
		if r, ok := op.model.gaps[place{branch, k}]; ok {
			d.Gap = &r
			d.Area = op.model.net.Branches()[branch].Elements[element].Area
		}
		return d
	}
	return working.Part{}
}

func (w *WorkingView) given() {
	if w == nil || w.what == "" {
		refuse(magcirc.BadValue, "working", "there is none", `make it with Working(op.Inductance("N"))`)
	}
}

// Value is what the lines come to.
func (w *WorkingView) Value() float64 { w.given(); return w.work.Value }

// closing says how the lines and the solved network agree.
func (w *WorkingView) closing() string {
	solved := phys.Format(w.work.Solved, w.unit)
	switch {
	case !w.work.Hand:
		return "solved network: " + solved
	case w.work.Solved == 0:
		return "by these lines " + phys.Format(w.work.Value, w.unit) + "; solved network: " + solved
	}
	off := math.Abs(w.work.Value/w.work.Solved - 1)
	if off < 1e-6 {
		return "by these lines " + phys.Format(w.work.Value, w.unit) + ", as the solved network gives it"
	}
	return "by these lines " + phys.Format(w.work.Value, w.unit) + "; the solved network gives " + solved + ", " + phys.FormatDigits(off, "percent", 2) + " off"
}

// MIMEBundle shows the lines as text and as formulas.
func (w *WorkingView) MIMEBundle() map[string]any {
	if w == nil || w.what == "" {
		return nil
	}
	head := w.what + ": " + w.conditions
	text, tex := []string{head}, []string{head + "."}
	for _, l := range w.work.Lines {
		what := l.What
		if l.Source != "" {
			what += " (" + l.Source + ")"
		}
		text = append(text, "  "+what+":", "    "+l.Plain())
		tex = append(tex, what+":", "$$"+l.TeX()+"$$")
	}
	text, tex = append(text, w.closing()), append(tex, w.closing())
	return map[string]any{"text/plain": strings.Join(text, "\n"), "text/latex": strings.Join(tex, "\n\n")}
}
