package hyst

import (
	"math"
	"testing"

	"ampturn/magcirc/internal/num"
)

// Both tables against the function itself, which num tests against its continued fraction.
func TestTablesOfLangevin(t *testing.T) {
	var worst, worstFine, worstSlope float64
	for z := 1e-6; z < 1e8; z *= 1.0007 {
		l, s := num.Langevin(z)
		for _, sign := range []float64{-1, 1} {
			c, cs := at(find(sign*z), sign*z)
			f, fs := fine(sign * z)
			worst, worstFine = math.Max(worst, math.Abs(sign*c-l)), math.Max(worstFine, math.Abs(sign*f-l))
			worstSlope = math.Max(worstSlope, math.Max(math.Abs(cs-s), math.Abs(fs-s)))
		}
	}
	if worst > 4e-8 || worstFine > 3e-11 || worstSlope > 3e-6 {
		t.Errorf("largest errors: %.1e, fine %.1e, slopes %.1e", worst, worstFine, worstSlope)
	}
	t.Logf("largest errors: %.1e, fine %.1e, slopes %.1e", worst, worstFine, worstSlope)
}
