package dsl

import (
	"fmt"
	"math"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// JAFit is a Jiles-Atherton law fitted to measured loops: the law, how well it follows each loop, and how far its
// parameters are known. It is a [Law].
type JAFit struct {
	bound   boundLaw
	fit     *hyst.JAFit
	loops   []*Loop
	initial *CurveData
}

// FitJilesAtherton finds the Jiles-Atherton law that follows measured loops best, in Form1992; [JAFit.In] fits the other
// form. Loops of different height are needed: one alone does not determine the parameters, and the fit says so. Each loop
// counts alike, its deviations relative to its own peak.
//
//	fit := FitJilesAtherton(ReadLoop("small.csv"), ReadLoop("large.csv"))
//	core := NewMaterial("core 7", fit)
func FitJilesAtherton(loops ...*Loop) *JAFit { return fitJA(Form1992, loops, nil) }

func fitJA(form JAForm, loops []*Loop, initial *CurveData) *JAFit {
	list := records(loops)
	if initial != nil {
		list = append(list, hyst.Record{Name: initial.points.Name, H: initial.points.H, B: initial.points.B})
	}
	fit := must(hyst.FitJilesAtherton(list, &hyst.FitSettings{Form: hyst.Form(form)}))
	return &JAFit{boundLaw{hyst.Initial(fit.Law)}, fit, loops, initial}
}

// records gives loops as the fits take them.
func records(loops []*Loop) []hyst.Record {
	list := make([]hyst.Record, len(loops))
	for i, l := range loops {
		l.given()
		list[i] = l.loop.Record()
		list[i].Name, list[i].Weight = l.name, l.weight
	}
	return list
}

func (f *JAFit) given() {
	if f == nil || f.fit == nil {
		refuse(magcirc.BadValue, "fit", "there is none", `make it with FitJilesAtherton(ReadLoop("loop.csv"))`)
	}
}

func (f *JAFit) below() material.Law { f.given(); return f.bound.law }

// In fits the same loops in another form.
func (f *JAFit) In(form JAForm) *JAFit { f.given(); return fitJA(form, f.loops, f.initial) }

// WithInitial fits the same loops together with a measured initial curve, from the demagnetised state: what one loop
// leaves open it determines.
func (f *JAFit) WithInitial(curve *CurveData) *JAFit {
	f.given()
	curve.given()
	return fitJA(JAForm(f.fit.Law.Parameters().Form), f.loops, curve)
}

// Parameters are the fitted parameters.
func (f *JAFit) Parameters() JA {
	f.given()
	p := f.fit.Law.Parameters()
	return JA{Ms: p.Ms, A: p.A, K: p.K, Alpha: p.Alpha, C: p.C, Form: JAForm(p.Form), Name: p.Name}
}

// Deviation is the root mean square of the deviation of flux density, relative to the peak of each loop.
func (f *JAFit) Deviation() Ratio { f.given(); return f.fit.RMS }

// FluxDensity is the flux density of the initial curve at a field strength.
func (f *JAFit) FluxDensity(field AmperePerMetre) Tesla {
	f.given()
	return f.bound.FluxDensity(field)
}

// Notes says how far the law can follow the loops, and what they leave open.
func (f *JAFit) Notes() []Remark { f.given(); return append([]Remark(nil), f.fit.Notes...) }

// Plot draws measured loops and those of the law, the smallest and the largest; without a loop the initial curve.
func (f *JAFit) Plot() *Figure {
	f.given()
	if len(f.loops) == 0 {
		p := f.initial.points
		return curvePlot("initial curve", p.H, p.B, f.bound.FluxDensity)
	}
	return fitPlot("Jiles-Atherton fit", f.loops, f.fit.Records)
}

// Residuals draws law less measurement over the field strength, for five loops at most.
func (f *JAFit) Residuals() *Figure {
	f.given()
	if len(f.loops) == 0 {
		p := residualPlot(nil, nil)
		p.add("initial curve", f.initial.points.H, f.fit.Records[0].Residual)
		return p
	}
	return residualPlot(f.loops, f.fit.Records)
}

// MIMEBundle shows parameters with their confidence, and each loop's figures measured and fitted.
func (f *JAFit) MIMEBundle() map[string]any {
	if f == nil || f.fit == nil {
		return nil
	}
	return doc.Join(f.tables()...)
}

// MIMEMetadata gives the numbers in full.
func (f *JAFit) MIMEMetadata() map[string]any {
	if f == nil || f.fit == nil {
		return nil
	}
	return joinMetadata(f.tables())
}

func (f *JAFit) tables() []doc.Table {
	t := doc.Table{Caption: fmt.Sprintf("Jiles-Atherton, %s, fitted to %s", f.fit.Law.Parameters().Form, f.data()),
		Columns: []doc.Column{{Name: "parameter"}, {Name: "value", Mixed: true}, {Name: "from (95 %)", Mixed: true}, {Name: "to (95 %)", Mixed: true}}}
	for _, p := range []struct {
		name, unit string
		i          hyst.Interval
	}{{"Ms", "A/m", f.fit.Ms}, {"a", "A/m", f.fit.A}, {"k", "A/m", f.fit.K}, {"alpha", "", f.fit.Alpha}, {"c", "", f.fit.C}} {
		factor, unit := phys.Scale(p.i.Value, p.unit) // one for the three
		cell := func(x float64) doc.Cell {
			return doc.Cell{Value: x, Number: true, Unit: p.unit, Words: strings.TrimSpace(doc.Number(x*factor, 4) + " " + unit), Printed: true}
		}
		row := []doc.Cell{doc.Text(p.name), cell(p.i.Value), cell(p.i.Low), cell(p.i.High)}
		if p.i.Open {
			row = append(row[:2], doc.Text("not determined"), doc.Text("not determined"))
		}
		t.Rows = append(t.Rows, row)
	}
	return []doc.Table{t, followTable(f.fit.Records, f.fit.Notes)}
}

// data says what the law was fitted to.
func (f *JAFit) data() string {
	switch {
	case f.initial == nil:
		return counted(len(f.loops), "loop")
	case len(f.loops) == 0:
		return "an initial curve"
	}
	return counted(len(f.loops), "loop") + " and an initial curve"
}

func counted(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// followTable shows how a law follows loops.
func followTable(list []hyst.Fitted, notes []magcirc.Note) doc.Table {
	t := doc.Table{Caption: "measured, and of the law", Columns: []doc.Column{{Name: "loop"}, {Name: "deviation, rms", Unit: "percent", Digits: 2}, {Name: "at worst", Unit: "percent", Digits: 2},
		{Name: "Br", Unit: "T", Beside: "Br"}, {Name: "law", Unit: "T", Beside: "Br"}, {Name: "Hc", Unit: "A/m", Beside: "Hc"},
		{Name: "law", Unit: "A/m", Beside: "Hc"}, {Name: "area", Unit: "J/m3", Beside: "area"}, {Name: "law", Unit: "J/m3", Beside: "area"}}, Notes: noteLines(notes)}
	for i := range list {
		f := &list[i]
		row := []doc.Cell{doc.Text(f.Name), doc.Num(f.RMS), doc.Num(f.Worst)}
		for _, x := range []float64{f.Br, f.LawBr, f.Hc, f.LawHc, f.Area, f.LawArea} {
			cell := doc.Text("") // an initial curve has none
			switch {
			case f.Loop && math.IsNaN(x):
				cell = doc.Text("none") // its branches do not cross the axis
			case f.Loop:
				cell = doc.Num(x)
			}
			row = append(row, cell)
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// fitPlot draws the smallest and the largest loop, measured and fitted.
func fitPlot(title string, loops []*Loop, list []hyst.Fitted) *Figure {
	f := newFigure(title, axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	for _, i := range ends(loops) {
		l := loops[i]
		f.add(l.name+", measured", closedList(l.loop.H), closedList(l.loop.B))
		f.add(l.name+", law", closedList(l.loop.H), closedList(list[i].B))
	}
	return f
}

// ends are all of two loops, and the smallest and the largest of more.
func ends(loops []*Loop) []int {
	small, large := 0, 0
	for i, l := range loops {
		if l.Peak() < loops[small].Peak() {
			small = i
		}
		if l.Peak() > loops[large].Peak() {
			large = i
		}
	}
	if small == large {
		return []int{large}
	}
	return []int{small, large}
}

// residualPlot draws the deviations of a fit.
func residualPlot(loops []*Loop, list []hyst.Fitted) *Figure {
	f := newFigure("law less measurement", axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	for i, l := range loops[:min(len(loops), 5)] { // more lines are told apart no longer
		f.add(l.name, closedList(l.loop.H), closedList(list[i].Residual))
	}
	return f
}

// PlayFit is a [Play] law fitted to measured loops. It is a [Law].
type PlayFit struct {
	bound boundLaw
	fit   *hyst.PlayFit
	loops []*Loop
}

// FitPlay finds the play cells that follow a family of measured loops best: a convex problem, so there is one answer.
func FitPlay(loops ...*Loop) *PlayFit {
	fit := must(hyst.FitPlay(records(loops), ""))
	return &PlayFit{boundLaw{hyst.Initial(fit.Law)}, fit, loops}
}

func (f *PlayFit) given() {
	if f == nil || f.fit == nil {
		refuse(magcirc.BadValue, "fit", "there is none", `make it with FitPlay(ReadLoop("small.csv"), ReadLoop("large.csv"))`)
	}
}

func (f *PlayFit) below() material.Law { f.given(); return f.bound.law }

// Cells are the fitted cells, by rising friction.
func (f *PlayFit) Cells() []PlayCell {
	f.given()
	var list []PlayCell
	for _, c := range f.fit.Law.Cells() {
		list = append(list, PlayCell{Ms: c.Ms, A: c.A, Kappa: c.Kappa})
	}
	return list
}

// Deviation is the root mean square of the deviation of flux density, relative to the peak of each loop.
func (f *PlayFit) Deviation() Ratio { f.given(); return f.fit.RMS }

// FluxDensity is the flux density of the initial curve at a field strength.
func (f *PlayFit) FluxDensity(field AmperePerMetre) Tesla {
	f.given()
	return f.bound.FluxDensity(field)
}

// Notes says how far the law can follow the loops.
func (f *PlayFit) Notes() []Remark { f.given(); return append([]Remark(nil), f.fit.Notes...) }

// Plot draws measured loops and those of the law: the smallest and the largest.
func (f *PlayFit) Plot() *Figure { f.given(); return fitPlot("play fit", f.loops, f.fit.Records) }

// Residuals draws law less measurement over the field strength, for five loops at most.
func (f *PlayFit) Residuals() *Figure { f.given(); return residualPlot(f.loops, f.fit.Records) }

// MIMEBundle shows the cells, and each loop's figures measured and fitted.
func (f *PlayFit) MIMEBundle() map[string]any {
	if f == nil || f.fit == nil {
		return nil
	}
	return doc.Join(f.tables()...)
}

// MIMEMetadata gives the numbers in full.
func (f *PlayFit) MIMEMetadata() map[string]any {
	if f == nil || f.fit == nil {
		return nil
	}
	return joinMetadata(f.tables())
}

func (f *PlayFit) tables() []doc.Table {
	t := doc.Table{Caption: fmt.Sprintf("play law fitted to %s", counted(len(f.loops), "loop")),
		Columns: []doc.Column{{Name: "cell"}, {Name: "Ms", Unit: "A/m"}, {Name: "a", Unit: "A/m"}, {Name: "friction", Unit: "A/m"}}}
	for i, c := range f.Cells() {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(fmt.Sprint(i + 1)), doc.Num(c.Ms), doc.Num(c.A), doc.Num(c.Kappa)})
	}
	return []doc.Table{t, followTable(f.fit.Records, f.fit.Notes)}
}
