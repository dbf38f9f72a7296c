package dsl

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/design"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// LegState is the state of one leg.
type LegState struct {
	name, conditions string
	b, h, share      float64
}

// worst finds the leg that is driven furthest towards the saturation of its law, nil where there is none.
func (op *OperatingPoint) worst() *LegState {
	var worst *LegState
	for i := range op.circuit.paths {
		p := &op.circuit.paths[i]
		for k, part := range p.parts {
			leg, ok := part.(LegPart)
			if !ok {
				continue
			}
			s := op.state(place{i, k})
			share := design.Nearness(leg.material.law(op.circuit.temperature), s.H, s.B)
			if worst == nil || share > worst.share*(1+1e-6) { // of equal legs the first
				worst = &LegState{name: p.full(op.circuit.name, k), conditions: op.conditions(), b: s.B, h: s.H, share: share}
			}
		}
	}
	return worst
}

// legNotes notes legs that are saturated, or carry more than any material can.
func (op *OperatingPoint) legNotes() []magcirc.Note {
	var notes []magcirc.Note
	for i := range op.circuit.paths {
		p := &op.circuit.paths[i]
		for k, part := range p.parts {
			leg, ok := part.(LegPart)
			if !ok {
				continue
			}
			s, elem := op.state(place{i, k}), p.full(op.circuit.name, k)
			if math.Abs(s.B) > material.MostPolarisation {
				notes = append(notes, magcirc.Note{Kind: magcirc.OutOfRange, Elem: elem,
					Text: phys.Format(s.B, "T") + " is more than any material carries (" + phys.Format(material.MostPolarisation, "T") + "): look at currents, turns and units"})
				continue
			}
			if share := design.Nearness(leg.material.law(op.circuit.temperature), s.H, s.B); share > saturatedShare {
				notes = append(notes, magcirc.Note{Kind: magcirc.Remark, Elem: elem,
					Text: "saturated: " + phys.Format(s.B, "T") + ", " + phys.FormatDigits(share, "percent", 3) + " of its saturation polarisation"})
			}
		}
	}
	return notes
}

// saturatedShare is the share of the saturation polarisation from which a leg is called saturated.
const saturatedShare = 0.95

// Name is the leg's name: "leg T1.centre.leg".
func (l *LegState) Name() string { l.given(); return l.name }

// FluxDensity is the flux density in the leg, along its path's arrow.
func (l *LegState) FluxDensity() Tesla { l.given(); return l.b }

// FieldStrength is the field strength in the leg.
func (l *LegState) FieldStrength() AmperePerMetre { l.given(); return l.h }

// Saturation is the share of the material's saturation polarisation that is reached.
func (l *LegState) Saturation() Ratio { l.given(); return l.share }

// MIMEBundle shows the leg in one line.
func (l *LegState) MIMEBundle() map[string]any {
	if l == nil {
		return nil
	}
	return words(l.text())
}

func (l *LegState) given() {
	if l == nil {
		refuse(magcirc.BadValue, "leg", "there is none", "take it from an operating point: op.Worst()")
	}
}

func (l *LegState) text() string {
	return fmt.Sprintf("%s: %s, %s of saturation (%s)", l.name, phys.Format(l.b, "T"), phys.Format(l.share, "percent"), l.conditions)
}
