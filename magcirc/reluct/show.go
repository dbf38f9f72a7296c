package reluct

import "strconv"

// show prints a quantity for a message.
func show(x float64, unit string) string {
	s := strconv.FormatFloat(x, 'g', 4, 64)
	if unit != "" {
		s += " " + unit
	}
	return s
}
