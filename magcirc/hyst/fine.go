package hyst

import (
	"math"

	"ampturn/magcirc/internal/num"
)

// The fine table of the Langevin function for play cells: cubics with the exact values and slopes at multiples of 1/64,
// off by 3e-11 at most; from 20 on coth z is 1.
const (
	fineStep = 1.0 / 64
	fineEnd  = 20.0
)

type fineCell struct{ l, c1, c2, c3 float64 }

var fineTable = func() *[int(fineEnd / fineStep)]fineCell {
	var t [int(fineEnd / fineStep)]fineCell
	l0, s0 := num.Langevin(0)
	for i := range t {
		z := float64(i+1) * fineStep
		l1, s1 := num.Langevin(z)
		if i == len(t)-1 {
			l1, s1 = 1-1/z, 1/(z*z)
		}
		c := hermite(0, fineStep, l0, l1, s0, s1)
		t[i] = fineCell{c.l, c.c1, c.c2, c.c3}
		l0, s0 = l1, s1
	}
	return &t
}()

// fine gives L and L' at z from the fine table.
func fine(z float64) (l, slope float64) {
	a := math.Abs(z)
	if !(a < fineEnd) {
		r := 1 / a
		return math.Copysign(1-r, z), r * r
	}
	i := int(a * (1 / fineStep))
	c := &fineTable[i]
	v := a - float64(i)*fineStep
	return math.Copysign(c.l+v*(c.c1+v*(c.c2+v*c.c3)), z), c.c1 + v*(2*c.c2+3*v*c.c3)
}
