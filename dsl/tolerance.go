package dsl

import (
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/tol"
)

// spread is how far a number of a part may be from its nominal value.
type spread struct {
	half     float64 // half the width: in the number's unit, or where relative as a share of it
	relative bool
	shape    tol.Shape
	chosen   bool // the shape was chosen
	group    string
}

// width is half the width around a nominal value.
func (s spread) width(nominal float64) float64 {
	if s.relative {
		return s.half * math.Abs(nominal)
	}
	return s.half
}

func (s *spread) plusMinus(elem string, half, nominal float64, unit string) {
	wantPositive(elem, "tolerance", half, unit)
	if half >= math.Abs(nominal) && nominal != 0 {
		refuseValue(magcirc.Implausible, elem, "tolerance", half, math.Abs(nominal), unit, "is not below the nominal value", "a share is written .Tolerance(5*percent)")
	}
	s.half, s.relative = half, false
}

func (s *spread) share(elem string, share float64) {
	wantRange(elem, "tolerance", share, 0, 0.99, "")
	s.half, s.relative = share, true
}

func (s *spread) normal() { s.shape, s.chosen = tol.Normal, true }

func (s *spread) together(elem, group string) {
	wantName(elem+" group", group)
	s.group = group
}

// PlusMinus states the tolerance of the gap's length. Draws take every length between the limits as equally likely,
// unless [GapPart.Normal] says otherwise.
//
//	Gap(0.45*mm).PlusMinus(0.02*mm)
func (g GapPart) PlusMinus(length Metre) GapPart {
	g.spread.plusMinus("gap", length, g.length, "m")
	return g
}

// Tolerance states the tolerance of the gap's length as a share of it.
func (g GapPart) Tolerance(share Ratio) GapPart { g.spread.share("gap", share); return g }

// Normal takes the length as normally distributed: the limits are three standard deviations away.
func (g GapPart) Normal() GapPart { g.spread.normal(); return g }

// Together has the tolerance move together with all others of the same group: gaps ground in one pass.
func (g GapPart) Together(group string) GapPart { g.spread.together("gap", group); return g }

// PlusMinus states the tolerance of the leg's length.
func (l LegPart) PlusMinus(length Metre) LegPart {
	l.along.plusMinus("leg", length, l.length, "m")
	return l
}

// Tolerance states the tolerance of the area of the leg's section as a share of it. A gap beside the leg that has no
// faces of its own goes with it.
func (l LegPart) Tolerance(share Ratio) LegPart { l.across.share("leg", share); return l }

// Normal takes the leg's tolerances as normally distributed: the limits are three standard deviations away.
func (l LegPart) Normal() LegPart { l.along.normal(); l.across.normal(); return l }

// Together has the tolerance of the section move together with all others of the same group: legs of one pressing.
func (l LegPart) Together(group string) LegPart { l.across.together("leg", group); return l }

// PlusMinus states the tolerance of the permeance.
func (p PermeancePart) PlusMinus(permeance Henry) PermeancePart {
	p.spread.plusMinus("stray path", permeance, p.permeance, "H")
	return p
}

// Tolerance states the tolerance of the permeance as a share of it.
func (p PermeancePart) Tolerance(share Ratio) PermeancePart {
	p.spread.share("stray path", share)
	return p
}

// Normal takes the permeance as normally distributed: the limits are three standard deviations away.
func (p PermeancePart) Normal() PermeancePart { p.spread.normal(); return p }

// Together has the tolerance move together with all others of the same group.
func (p PermeancePart) Together(group string) PermeancePart {
	p.spread.together("stray path", group)
	return p
}

// PlusMinus states the tolerance of the remanence.
func (m MagnetPart) PlusMinus(Br Tesla) MagnetPart {
	m.spread.plusMinus("magnet", Br, m.br, "T")
	return m
}

// Tolerance states the tolerance of the remanence as a share of it.
func (m MagnetPart) Tolerance(share Ratio) MagnetPart { m.spread.share("magnet", share); return m }

// Normal takes the remanence as normally distributed: the limits are three standard deviations away.
func (m MagnetPart) Normal() MagnetPart { m.spread.normal(); return m }

// Together has the tolerance move together with all others of the same group: magnets of one batch.
func (m MagnetPart) Together(group string) MagnetPart { m.spread.together("magnet", group); return m }

// Normal takes the permeability of the material, whose spread [MagneticMaterial.Tolerance] states, as normally
// distributed: the limits are three standard deviations away.
func (m *MagneticMaterial) Normal() *MagneticMaterial {
	m.given()
	next := *m
	next.lot.normal()
	return &next
}

// Together has the permeability move together with all others of the same group: materials fired together. Legs of one
// material always do.
func (m *MagneticMaterial) Together(group string) *MagneticMaterial {
	m.given()
	next := *m
	next.lot.together("material "+m.Name(), group)
	return &next
}
