package reluct

import (
	"math"

	"ampturn/magcirc/phys"
)

// show prints a quantity for a message.
func show(x float64, unit string) string {
	if unit == "" && x == math.Trunc(x) && math.Abs(x) < 1e6 {
		return phys.FormatDigits(x, "", 7)
	}
	return phys.Format(x, unit)
}
