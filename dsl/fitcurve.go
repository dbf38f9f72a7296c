package dsl

import (
	"math"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/datafile"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/material"
)

// LangevinFit is a [Langevin] law fitted to an anhysteretic curve. It is a [Law].
type LangevinFit struct {
	bound        boundLaw
	ms, a, alpha float64
	deviation    float64
	h, b         []float64
}

// FitAnhysteretic finds the [Langevin] law that follows points of an anhysteretic curve best; they go well into
// saturation.
//
//	c := ReadCurve("anhysteretic.csv")
//	fit := FitAnhysteretic(c.FieldStrengths(), c.FluxDensities())
func FitAnhysteretic(H []AmperePerMetre, B []Tesla) *LangevinFit {
	ms, a, alpha, deviation, err := hyst.FitAnhysteretic(H, B)
	check(err)
	law := must(material.NewLangevin(ms, a, alpha))
	return &LangevinFit{boundLaw{law}, ms, a, alpha, deviation, append([]float64(nil), H...), append([]float64(nil), B...)}
}

func (f *LangevinFit) given() {
	if f == nil || f.h == nil {
		refuse(magcirc.BadValue, "fit", "there is none", "make it with FitAnhysteretic(H, B)")
	}
}

func (f *LangevinFit) below() material.Law { f.given(); return f.bound.law }

// Saturation is the fitted saturation magnetisation Ms.
func (f *LangevinFit) Saturation() AmperePerMetre { f.given(); return f.ms }

// Shape is the fitted shape a.
func (f *LangevinFit) Shape() AmperePerMetre { f.given(); return f.a }

// Coupling is the fitted mean-field coupling alpha.
func (f *LangevinFit) Coupling() Ratio { f.given(); return f.alpha }

// Deviation is the root mean square of the deviation of flux density, relative to the largest.
func (f *LangevinFit) Deviation() Ratio { f.given(); return f.deviation }

// FluxDensity is the flux density at a field strength.
func (f *LangevinFit) FluxDensity(field AmperePerMetre) Tesla {
	f.given()
	return f.bound.FluxDensity(field)
}

// Plot draws the points and the law.
func (f *LangevinFit) Plot() *Figure {
	f.given()
	return curvePlot("anhysteretic curve", f.h, f.b, f.bound.FluxDensity)
}

// curvePlot draws a measured curve and that of a law.
func curvePlot(title string, h, b []float64, law func(float64) float64) *Figure {
	p := newFigure(title, axis{Label: "field strength", Unit: "A/m"}, axis{Label: "flux density", Unit: "T"})
	of := make([]float64, len(h))
	for i := range h {
		of[i] = law(h[i])
	}
	p.add("measured", h, b)
	p.add("law", h, of)
	return p
}

// MIMEBundle shows the parameters.
func (f *LangevinFit) MIMEBundle() map[string]any {
	if f == nil || f.h == nil {
		return nil
	}
	return f.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (f *LangevinFit) MIMEMetadata() map[string]any {
	if f == nil || f.h == nil {
		return nil
	}
	return f.table().Metadata()
}

func (f *LangevinFit) table() doc.Table {
	t := doc.Table{Caption: "Langevin law fitted to " + counted(len(f.h), "point"), Columns: []doc.Column{{Name: "parameter"}, {Name: "value", Mixed: true}}}
	for _, p := range []struct {
		name, unit string
		value      float64
	}{{"Ms", "A/m", f.ms}, {"a", "A/m", f.a}, {"alpha", "", f.alpha}, {"deviation, rms", "percent", f.deviation}} {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(p.name), doc.Quantity(p.value, p.unit)})
	}
	return t
}

// FitInitial finds the Jiles-Atherton law, Form1992, whose initial curve follows points measured from the demagnetised
// state best. What such a curve alone leaves open is said; [JAFit.WithInitial] fits one together with loops.
//
//	c := ReadCurve("rise.csv")
//	fit := FitInitial(c.FieldStrengths(), c.FluxDensities())
func FitInitial(H []AmperePerMetre, B []Tesla) *JAFit {
	for i := range H {
		if H[i] < 0 || math.IsNaN(H[i]) {
			refuseValue(magcirc.BadValue, "initial curve", "field strength", H[i], 0, "A/m", "is below zero", "an initial curve rises from zero; loops go to FitJilesAtherton")
		}
	}
	points := &datafile.Points{Name: "initial curve", H: append([]float64(nil), H...), B: append([]float64(nil), B...)}
	return fitJA(Form1992, nil, &CurveData{points: points})
}
