package reluct

import (
	"math"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// leg is a magnetisable element made ready for the solver.
type leg struct {
	law               material.Law
	length, area, air float64
}

// drop gives the mmf drop in A of the leg at flux phi in Wb, and its slope in 1/H.
//
//	phi = B A + mu0 H(B) Air
//
// Without enclosed air B = phi/A. With it B is found by Newton's method in B within a bracket: in B the slope only
// changes from A to A + Air.
func (l *leg) drop(phi float64) (u, slope float64) {
	if l.air == 0 {
		h, dh := l.law.Inverse(phi / l.area)
		return h * l.length, dh * l.length / l.area
	}
	h, dh := l.metal(phi)
	return h * l.length, dh * l.length / (l.area + phys.Mu0*l.air*dh)
}

// metal gives the field strength in A/m at which metal and enclosed air together carry phi, and dH/dB in the metal.
func (l *leg) metal(phi float64) (h, dh float64) {
	if m, ok := l.law.(*memory); ok { // not odd in its flux
		return m.share(phi, l.area, l.air)
	}
	target := math.Abs(phi)
	lo, hi := 0.0, target/l.area
	b := hi
	for range 100 {
		h, dh = l.law.Inverse(b)
		air := phys.Mu0 * l.air * h
		f := b*l.area + air - target
		if math.Abs(f) <= 0x1p-52*target || f == 0 {
			break
		}
		if f > 0 {
			hi = b
		} else {
			lo = b
		}
		next := b - f/(l.area+phys.Mu0*l.air*dh)
		if !(next > lo && next < hi) {
			next = 0.5 * (lo + hi)
		}
		if next == b || next == lo || next == hi {
			break
		}
		b = next
	}
	return math.Copysign(h, phi), dh
}

// carry gives the flux in Wb of the leg at mmf drop u in A, and its slope in H.
func (l *leg) carry(u float64) (phi, slope float64) {
	h := u / l.length
	b, db := l.law.At(h)
	return b*l.area + phys.Mu0*l.air*h, (db*l.area + phys.Mu0*l.air) / l.length
}

// blocks says whether the element lets no flux pass.
func (e *Element) blocks() bool { return e.Kind == Stray && math.IsInf(1/e.Permeance, 1) }

// reluctance gives the constant reluctance in 1/H of a gap, stray path or magnet: 1/P or l/(mu0 mur A).
func (e *Element) reluctance() float64 {
	if e.Kind == Magnet {
		return e.Length / (phys.Mu0 * e.Mur * e.Area)
	}
	return 1 / e.Permeance
}

// mmf gives the equivalent mmf Br l/(mu0 mur) in A of a magnet, which stands in series with its reluctance; 0 for
// the other kinds.
func (e *Element) mmf() float64 {
	if e.Kind != Magnet {
		return 0
	}
	return e.Br * e.Length / (phys.Mu0 * e.Mur)
}

// series is the sum of a branch's elements made ready for the solver.
type series struct {
	linear float64 // reluctance of gaps, stray paths and magnets in 1/H
	magnet float64 // equivalent mmf of the magnets in A
	legs   []leg
	blocks bool // an element lets no flux pass
}

// drop gives the drop of a branch in A at flux phi, magnets counted by their reluctance only, and its slope in 1/H.
func (s *series) drop(phi float64) (u, slope float64) {
	u, slope = s.linear*phi, s.linear
	for i := range s.legs {
		du, dr := s.legs[i].drop(phi)
		u += du
		slope += dr
	}
	return u, slope
}

// secant gives the drop over the flux in 1/H, magnets counted by their reluctance only.
func (s *series) secant(phi float64) float64 {
	u, slope := s.drop(phi)
	if r := u / phi; phi != 0 && finite(r) {
		return r
	}
	return slope
}

// compile makes all branches ready for the solver.
func (n *Network) compile() []series {
	count := 0
	for i := range n.branches {
		count += len(n.branches[i].Elements)
	}
	legs := make([]leg, 0, count)
	all := make([]series, len(n.branches))
	for i := range n.branches {
		from := len(legs)
		s := &all[i]
		for k := range n.branches[i].Elements {
			e := &n.branches[i].Elements[k]
			if e.Kind == Leg {
				legs = append(legs, leg{e.Law, e.Length, e.Area, e.Air})
				continue
			}
			s.blocks = s.blocks || e.blocks()
			s.linear += e.reluctance()
			s.magnet += e.mmf()
		}
		s.legs = legs[from:len(legs):len(legs)]
	}
	return all
}
