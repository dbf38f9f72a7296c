package dsl

import (
	"ampturn/magcirc"
	"ampturn/magcirc/geom"
)

// Section is the cross-section of a leg or of a gap's faces: [Rect], [Disc], [Annulus] or [Area].
type Section struct {
	shape geom.Section
}

// Rect is a rectangular section of the given width and depth.
func Rect(width, depth Metre) Section {
	wantPositive("Rect", "width", width, "m")
	wantPositive("Rect", "depth", depth, "m")
	return Section{geom.Rect(width, depth)}
}

// Disc is a round section of the given diameter.
func Disc(diameter Metre) Section {
	wantPositive("Disc", "diameter", diameter, "m")
	return Section{geom.Disc(diameter)}
}

// Annulus is the section between two circles of the given diameters.
func Annulus(outer, inner Metre) Section {
	wantPositive("Annulus", "outer diameter", outer, "m")
	wantPositive("Annulus", "inner diameter", inner, "m")
	if inner >= outer {
		refuseValue(magcirc.BadValue, "Annulus", "inner diameter", inner, outer, "m", "is not below the outer one", "the outer diameter comes first")
	}
	return Section{geom.Annulus(outer, inner)}
}

// Area is a section of which only the area is known. A gap with such faces counts as a round one of that area, for no
// shape has less flux beside it.
func Area(area SquareMetre) Section {
	wantPositive("Area", "area", area, "m2")
	return Section{geom.Area(area)}
}

// Stacking gives the share of metal in a laminated or taped section, above 0 and at most 1: the flux density is that
// in the metal, the outline stays.
func (s Section) Stacking(share Ratio) Section {
	wantRange("Stacking", "share of metal", share, 1e-3, 1, "")
	s.shape = s.shape.WithStacking(share)
	return s
}

// Metal is the area that carries flux: the outline's area times the stacking.
func (s Section) Metal() SquareMetre { return s.shape.Metal() }

// Gross is the area of the outline.
func (s Section) Gross() SquareMetre { return s.shape.Gross() }

// MIMEBundle shows the section in words.
func (s Section) MIMEBundle() map[string]any { return words(s.shape.Describe()) }

// given refuses the section that nobody made: Section{}.
func (s Section) given(elem string) {
	if s.shape.Gross() <= 0 {
		refuse(magcirc.BadValue, elem, "section has no area", "make it with Rect, Disc, Annulus or Area")
	}
}
