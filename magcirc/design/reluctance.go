package design

import (
	"math"

	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// Reluctance gives the reluctance of one element without flux, in 1/H.
//
//	leg          R = l / (B'(0) A + mu0 Air)
//	gap, stray   R = 1 / P
//	magnet       R = l / (mu0 mur A)
//
// A stray path without permeance has an infinite one.
func Reluctance(e reluct.Element) float64 {
	switch e.Kind {
	case reluct.Leg:
		_, slope := e.Law.At(0)
		return e.Length / (slope*e.Area + phys.Mu0*e.Air)
	case reluct.Magnet:
		return e.Length / (phys.Mu0 * e.Mur * e.Area)
	}
	if e.Permeance == 0 {
		return math.Inf(1)
	}
	return 1 / e.Permeance
}
