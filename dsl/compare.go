package dsl

import (
	"fmt"

	"ampturn/dsl/doc"
	"ampturn/dsl/draw"
	"ampturn/magcirc"
	"ampturn/magcirc/gap"
	"ampturn/magcirc/phys"
)

// GapComparison is a gap by every method for the flux around it, side by side.
type GapComparison struct {
	spec       gap.Spec
	elem, face string
	length     float64
	chosen     gap.Method
	all        []gap.Compared
}

// Factor is the fringing factor by a method: the permeance over that of the faces alone.
func (g *GapComparison) Factor(method FringeRule) Ratio { return g.by(method).Factor }

// Reluctance is the reluctance of the gap by a method.
func (g *GapComparison) Reluctance(method FringeRule) PerHenry { return g.by(method).Reluctance }

func (g *GapComparison) by(method FringeRule) gap.Result {
	g.given()
	want := method.method()
	for _, c := range g.all {
		if c.Method == want {
			return must(c.Result, c.Err)
		}
	}
	return gap.Result{}
}

// Plot draws the fringing factors of the methods that hold here.
func (g *GapComparison) Plot() *Figure {
	g.given()
	var names []string
	var factors []float64
	for _, c := range g.all {
		if c.Err == nil {
			names, factors = append(names, c.Method.String()), append(factors, c.Result.Factor)
		}
	}
	return Bars(names, factors).Title("fringing factor: "+g.caption()).Labels("", "fringing factor")
}

// Field draws the field of the gap to scale: equipotentials, and lines between which the same flux runs. For a
// rectangle it is the field across the width.
func (g *GapComparison) Field() *Figure {
	g.given()
	s, err := gap.Field(g.spec)
	named(g.elem, err)
	p := draw.FieldMap("field of "+g.caption(), s)
	return &Figure{svg: p.SVG, text: p.Text}
}

func (g *GapComparison) caption() string {
	return fmt.Sprintf("%s, %s long, faces %s", g.elem, phys.Format(g.length, "m"), g.face)
}

// MIMEBundle shows the methods as a table: factor, reluctance, uncertainty of the method, validity; why one refuses.
func (g *GapComparison) MIMEBundle() map[string]any {
	if g == nil {
		return nil
	}
	return g.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (g *GapComparison) MIMEMetadata() map[string]any {
	if g == nil {
		return nil
	}
	return g.table().Metadata()
}

func (g *GapComparison) given() {
	if g == nil {
		refuse(magcirc.BadValue, "gap comparison", "there is none", `make it with T1.Fringing("centre.gap")`)
	}
}

func (g *GapComparison) table() doc.Table {
	t := doc.Table{Caption: g.caption(), Columns: []doc.Column{{Name: "method"}, {Name: "fringing factor"}, {Name: "reluctance", Unit: "1/H"},
		{Name: "permeance", Unit: "H"}, {Name: "uncertain by"}, {Name: "valid for"}}}
	for _, c := range g.all {
		name := c.Method.String()
		if c.Method == g.chosen {
			name += " (in use)"
		}
		if c.Err != nil {
			t.Rows = append(t.Rows, []doc.Cell{doc.Text(name), doc.Text("refused"), doc.Text(""), doc.Text(""), doc.Text(""), doc.Text(reason(c.Err))})
			continue
		}
		r := c.Result
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(name), doc.Num(r.Factor), doc.Num(r.Reluctance), doc.Num(r.Permeance),
			doc.Text(phys.FormatDigits(r.Uncertainty, "percent", 2)), doc.Text(r.Validity)})
		if c.Method == g.chosen {
			t.Notes = append(t.Notes, noteLines(r.Notes)...)
		}
	}
	return t
}

// reason is a refusal without the name of the part, which stands in the caption.
func reason(err error) string {
	if f, ok := err.(*Fault); ok {
		return f.Msg
	}
	return err.Error()
}
