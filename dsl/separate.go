package dsl

import (
	"fmt"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// LossPoint is a measured loss under sinusoidal flux: at a frequency, to a peak of flux density.
//
//	LossPoint{Frequency: 50*Hz, Peak: 1.5*tesla, Loss: 19.2e3}
type LossPoint struct {
	Frequency Hertz
	Peak      Tesla
	Loss      WattPerCubicMetre // W/kg times the density
}

// Separation is a measured loss by where it comes from, over frequency f and peak B:
//
//	P = kh f B^n + ke f^2 B^2 + kx (f B)^1.5
type Separation struct {
	parts  *hyst.Separation
	points []LossPoint
}

// Separate finds the parts of measured losses: hysteresis, classical eddy currents and, with points at three frequencies
// or more, the excess. Points at one frequency alone are refused: they do not tell the parts apart. The deviations count
// relative to each point, and no part is negative.
//
//	s := Separate(LossPoint{50*Hz, 1.5*tesla, 19.2e3}, LossPoint{100*Hz, 1.5*tesla, 47.5e3}, LossPoint{200*Hz, 1.5*tesla, 129e3})
//	s.Hysteresis(50*Hz, 1.5*tesla)
func Separate(points ...LossPoint) *Separation {
	const elem = "loss separation"
	if len(points) == 0 {
		refuse(magcirc.BadValue, elem, "there is no point", "give one or more: LossPoint{Frequency: 50*Hz, Peak: 1.5*tesla, Loss: 19.2e3}")
	}
	list := make([]hyst.LossPoint, len(points))
	frequencies := map[float64]bool{}
	for i, p := range points {
		list[i] = hyst.LossPoint{F: p.Frequency, B: p.Peak, P: p.Loss}
		frequencies[p.Frequency] = true
	}
	excess := len(frequencies) > 2
	s := must(hyst.Separate(list, 0, excess))
	if !excess {
		s.Notes = append(s.Notes, magcirc.Note{Kind: magcirc.Assumed, Elem: elem,
			Text: "two frequencies do not show the excess: it is taken as none, and is among the other parts"})
	}
	return &Separation{s, append([]LossPoint(nil), points...)}
}

func (s *Separation) given() {
	if s == nil || s.parts == nil {
		refuse(magcirc.BadValue, "loss separation", "there is none", "make it with Separate(points...)")
	}
}

// at gives the parts at a frequency and a peak.
func (s *Separation) at(frequency, peak float64) (hysteresis, classical, excess float64) {
	s.given()
	wantPositive("loss separation", "frequency", frequency, "Hz")
	wantPositive("loss separation", "peak", peak, "T")
	return s.parts.Parts(frequency, peak)
}

// Hysteresis is the part kh f B^n at a frequency and a peak.
func (s *Separation) Hysteresis(frequency Hertz, peak Tesla) WattPerCubicMetre {
	h, _, _ := s.at(frequency, peak)
	return h
}

// Classical is the part ke f^2 B^2 by eddy currents, at a frequency and a peak.
func (s *Separation) Classical(frequency Hertz, peak Tesla) WattPerCubicMetre {
	_, c, _ := s.at(frequency, peak)
	return c
}

// Excess is the part kx (f B)^1.5, at a frequency and a peak.
func (s *Separation) Excess(frequency Hertz, peak Tesla) WattPerCubicMetre {
	_, _, x := s.at(frequency, peak)
	return x
}

// Loss is the sum of the parts, at a frequency and a peak.
func (s *Separation) Loss(frequency Hertz, peak Tesla) WattPerCubicMetre {
	h, c, x := s.at(frequency, peak)
	return h + c + x
}

// Exponent is the exponent n of flux density in the hysteresis loss.
func (s *Separation) Exponent() Ratio { s.given(); return s.parts.N }

// Deviation is the largest relative deviation of a point.
func (s *Separation) Deviation() Ratio { s.given(); return s.parts.Worst }

// Notes lists what was assumed.
func (s *Separation) Notes() []Remark { s.given(); return append([]Remark(nil), s.parts.Notes...) }

// MIMEBundle shows each point with its parts.
func (s *Separation) MIMEBundle() map[string]any {
	if s == nil || s.parts == nil {
		return nil
	}
	return s.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (s *Separation) MIMEMetadata() map[string]any {
	if s == nil || s.parts == nil {
		return nil
	}
	return s.table().Metadata()
}

func (s *Separation) table() doc.Table {
	const together = "loss" // one prefix for all
	t := doc.Table{Caption: fmt.Sprintf("loss by its parts, exponent of B %s", phys.FormatDigits(s.parts.N, "", 4)),
		Columns: []doc.Column{{Name: "frequency", Unit: "Hz"}, {Name: "peak", Unit: "T"}, {Name: "measured", Unit: "W/m3", Beside: together},
			{Name: "sum of the parts", Unit: "W/m3", Beside: together}, {Name: "hysteresis", Unit: "W/m3", Beside: together},
			{Name: "classical eddy currents", Unit: "W/m3", Beside: together}, {Name: "excess", Unit: "W/m3", Beside: together}},
		Notes: noteLines(s.parts.Notes)}
	for _, p := range s.points {
		h, c, x := s.parts.Parts(p.Frequency, p.Peak)
		t.Rows = append(t.Rows, []doc.Cell{doc.Num(p.Frequency), doc.Num(p.Peak), doc.Num(p.Loss), doc.Num(h + c + x), doc.Num(h), doc.Num(c), doc.Num(x)})
	}
	return t
}
