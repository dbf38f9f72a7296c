package design

import (
	"context"
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Magnetised gives the field strength in A/m and the flux density in T in a magnet, both along its magnetisation, that
// the circuit around it leaves at a remanence in T.
type Magnetised func(br float64) (h, b float64, err error)

// LoadLine is a permanent magnet in its circuit: what the circuit asks of the magnet at any remanence, and the point
// where that meets the recoil line of the magnet.
//
//	recoil line  B = Br + mu0 mur H        load line  the circuit's (H, B)        working point: on both
type LoadLine struct {
	H, B       []float64 // A/m and T: the load line, by rising remanence; its last pair is the working point
	Coercivity float64   // A/m, negative: where the recoil line meets B = 0
	Remanence  float64   // T
}

// Load follows the load line of a magnet through n points up to its working point.
//
// Inputs: br in T and mur, positive; n >= 2; at with the currents of the windings held.
// Valid: while the magnet stays on its straight recoil line; whether it leaves it at a knee is not judged here.
// Errors: [magcirc.BadValue]; those of at.
// Source: A. E. Fitzgerald, C. Kingsley, S. D. Umans, Electric Machinery, 6th ed., McGraw-Hill 2003, sec. 1.6.
func Load(ctx context.Context, elem string, at Magnetised, br, mur float64, n int) (*LoadLine, error) {
	if !(br > 0 && mur > 0 && n >= 2) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "remanence", Unit: "T", Got: br,
			Msg: fmt.Sprintf("remanence %s and recoil permeability %s must be positive", phys.Format(br, "T"), phys.Format(mur, ""))}
	}
	l := &LoadLine{Remanence: br, Coercivity: -br / (phys.Mu0 * mur)}
	for k := range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		h, b, err := at(br * float64(k+1) / float64(n))
		if err != nil {
			return nil, err
		}
		l.H, l.B = append(l.H, h), append(l.B, b)
	}
	return l, nil
}

// Point is the working point: field strength in A/m and flux density in T along the magnetisation.
func (l *LoadLine) Point() (h, b float64) { return l.H[len(l.H)-1], l.B[len(l.B)-1] }

// PermeanceCoefficient gives
//
//	Pc = -B/(mu0 H)
//
// at the working point: the slope of the load line through the origin, in mu0. +Inf where the circuit leaves the magnet
// no field of its own; it means nothing where currents move the load line off the origin.
func (l *LoadLine) PermeanceCoefficient() float64 {
	h, b := l.Point()
	if h == 0 {
		return math.Inf(1)
	}
	return -b / (phys.Mu0 * h)
}

// EnergyProduct gives -B H at the working point in J/m3: twice the energy that each volume of the magnet keeps up in
// the circuit around it. A magnet is smallest where this is largest.
func (l *LoadLine) EnergyProduct() float64 { h, b := l.Point(); return -b * h }
