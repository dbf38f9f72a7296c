package dsl

import (
	"fmt"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Part is what a path is made of: [Leg], [Yoke], [Gap], [Winding], [Permeance] or [Magnet]. Parts are values: one
// used in two paths is two parts.
type Part interface {
	part() partKind
	label() string // the name its author gave, or ""
}

// partKind is the word for a part, which is its name as long as nobody gives another.
type partKind string

const (
	legKind     partKind = "leg"
	gapKind     partKind = "gap"
	windingKind partKind = "winding"
	strayKind   partKind = "stray"
	magnetKind  partKind = "magnet"
)

// LegPart is a leg or a yoke: a length of magnetic material.
type LegPart struct {
	name     string
	material *MagneticMaterial
	length   float64
	section  Section
	along    spread  // of the length
	across   spread  // of the section's area
	stretch  float64 // share by which its area differs in a draw
}

// Leg is a length of magnetic material with a section: a leg, a limb, a post, the whole of a ring.
func Leg(material *MagneticMaterial, length Metre, section Section) LegPart {
	if material == nil || material.below == nil {
		refuse(magcirc.BadValue, "Leg", "there is no material", `make it with NewMaterial("lot 12", law)`)
	}
	wantPositive("Leg", "length", length, "m")
	section.given("Leg")
	return LegPart{material: material, length: length, section: section}
}

// Yoke is a [Leg] that lies down: the same part.
func Yoke(material *MagneticMaterial, length Metre, section Section) LegPart {
	return Leg(material, length, section)
}

// As names the leg.
func (l LegPart) As(name string) LegPart { wantName("leg", name); l.name = name; return l }

func (l LegPart) part() partKind { return legKind }
func (l LegPart) label() string  { return l.name }

// MIMEBundle shows the leg in words.
func (l LegPart) MIMEBundle() map[string]any { return words(describe(l)) }

// WindingPart is turns around a path.
type WindingPart struct {
	name     string
	turns    float64
	reversed bool
	encloses float64 // area inside the mean turn, m2; 0: only the metal
}

// Winding is turns around a path. Positive current into its dot drives flux along the path's arrow. One name on
// several paths is one winding whose parts are in series.
func Winding(name string, turns Turns) WindingPart {
	wantName("winding", name)
	wantTurns("winding "+name, turns)
	return WindingPart{name: name, turns: turns}
}

// wantTurns refuses turns that nobody can wind.
func wantTurns(elem string, turns float64) {
	wantFinite(elem, "turns", turns, "")
	switch {
	case turns < 0:
		refuseValue(magcirc.BadValue, elem, "turns", turns, 0, "", "are negative", "give the number of turns and add .Reversed()")
	case turns != float64(int64(turns)) || turns == 0:
		refuseValue(magcirc.BadValue, elem, "turns", turns, 1, "", "are not a whole number above zero", "a winding encloses its path a whole number of times: round with math.Ceil or math.Round")
	}
}

// Reversed winds the other way: positive current into the dot drives flux against the path's arrow.
func (w WindingPart) Reversed() WindingPart { w.reversed = !w.reversed; return w }

// Encloses gives the area inside the mean turn. What of it is not metal is air that carries flux beside the leg: it
// sets the inductance that is left in deep saturation.
func (w WindingPart) Encloses(area SquareMetre) WindingPart {
	wantPositive("winding "+w.name, "enclosed area", area, "m2")
	w.encloses = area
	return w
}

// As names the winding.
func (w WindingPart) As(name string) WindingPart { wantName("winding", name); w.name = name; return w }

func (w WindingPart) part() partKind { return windingKind }
func (w WindingPart) label() string  { return w.name }

// MIMEBundle shows the winding in words.
func (w WindingPart) MIMEBundle() map[string]any { return words(describe(w)) }

// signed is the number of turns, negative for a coil wound the other way.
func (w WindingPart) signed() float64 {
	if w.reversed {
		return -w.turns
	}
	return w.turns
}

// PermeancePart is a stray path of known permeance.
type PermeancePart struct {
	name      string
	permeance float64
	spread    spread
}

// Permeance is a stray path of known permeance, flux per ampere-turn: the inductance of one turn around it.
func Permeance(permeance Henry) PermeancePart {
	wantFinite("Permeance", "permeance", permeance, "H")
	if permeance < 0 {
		refuseValue(magcirc.BadValue, "Permeance", "permeance", permeance, 0, "H", "is negative", "give zero for no stray path")
	}
	if permeance > maxStray {
		refuseValue(magcirc.Implausible, "Permeance", "permeance", permeance, maxStray, "H",
			"is more than air of any usual size carries (10 uH)", "an inductance is divided by the square of its turns")
	}
	return PermeancePart{permeance: permeance}
}

// maxStray is the permeance of 8 m2 of air over 1 m, H: above it a stray path is taken for an inductance.
const maxStray = 10e-6

// As names the stray path.
func (p PermeancePart) As(name string) PermeancePart {
	wantName("stray path", name)
	p.name = name
	return p
}

func (p PermeancePart) part() partKind { return strayKind }
func (p PermeancePart) label() string  { return p.name }

// MIMEBundle shows the stray path in words.
func (p PermeancePart) MIMEBundle() map[string]any { return words(describe(p)) }

// MagnetPart is a permanent magnet in a path.
type MagnetPart struct {
	name     string
	br, mur  float64
	length   float64
	section  Section
	reversed bool
	spread   spread // of the remanence
}

// Magnet is a permanent magnet of remanence Br and recoil permeability mur on its straight recoil line
// B = Br + mu0 mur H, magnetised along the path's arrow. It has no knee here: whether it demagnetises is not judged.
func Magnet(Br Tesla, mur Ratio, length Metre, section Section) MagnetPart {
	wantPositive("Magnet", "remanence Br", Br, "T")
	if Br > maxRemanence {
		refuseValue(magcirc.Implausible, "Magnet", "remanence Br", Br, maxRemanence, "T", "is above that of any magnet (2 T)", "was mT meant?")
	}
	wantFinite("Magnet", "recoil permeability", mur, "")
	if mur < 1 {
		refuseValue(magcirc.BadValue, "Magnet", "recoil permeability", mur, 1, "", "is below that of air (1)", "it is a relative permeability, about 1.05 for rare-earth magnets")
	}
	wantPositive("Magnet", "length", length, "m")
	section.given("Magnet")
	return MagnetPart{br: Br, mur: mur, length: length, section: section}
}

// maxRemanence is above the 1.6 T that Nd2Fe14B could reach as a single crystal at room temperature
// (Coey, Magnetism and Magnetic Materials, 2010, table 11.5).
const maxRemanence = 2.0

// Reversed magnetises against the path's arrow.
func (m MagnetPart) Reversed() MagnetPart { m.reversed = !m.reversed; return m }

// As names the magnet.
func (m MagnetPart) As(name string) MagnetPart { wantName("magnet", name); m.name = name; return m }

func (m MagnetPart) part() partKind { return magnetKind }
func (m MagnetPart) label() string  { return m.name }

// MIMEBundle shows the magnet in words.
func (m MagnetPart) MIMEBundle() map[string]any { return words(describe(m)) }

// direction is +1 for a magnet along the path's arrow, -1 for a reversed one.
func (m MagnetPart) direction() float64 {
	if m.reversed {
		return -1
	}
	return 1
}

// signed is the remanence along the path's arrow.
func (m MagnetPart) signed() float64 { return m.direction() * m.br }

// describe says in words what a part is.
func describe(p Part) string {
	switch p := p.(type) {
	case LegPart:
		return fmt.Sprintf("%s of %s, %s", phys.Format(p.length, "m"), p.material.Name(), p.section.shape.Describe())
	case GapPart:
		text := phys.Format(p.length, "m")
		if p.faces != nil {
			text += ", faces " + p.faces.shape.Describe()
		}
		return text
	case WindingPart:
		text := fmt.Sprintf("%s, %s turns", p.name, phys.Format(p.turns, ""))
		if p.reversed {
			text += ", reversed"
		}
		return text
	case PermeancePart:
		return phys.Format(p.permeance, "H")
	case MagnetPart:
		text := fmt.Sprintf("Br %s, recoil permeability %s, %s long, %s", phys.Format(p.br, "T"), phys.Format(p.mur, ""), phys.Format(p.length, "m"), p.section.shape.Describe())
		if p.reversed {
			text += ", reversed"
		}
		return text
	}
	return string(p.part())
}
