package chart

import (
	"math"
	"strconv"

	"gonum.org/v1/plot"
)

// ticks marks an axis at 1, 2 or 5 times a power of ten, five to eight marks.
type ticks struct{}

func (ticks) Ticks(low, high float64) []plot.Tick {
	step, digits := pace(high - low)
	var marks []plot.Tick
	for k := math.Ceil(low/step - 1e-9); k*step <= high+1e-9*step; k++ {
		v := k * step
		marks = append(marks, plot.Tick{Value: v, Label: strconv.FormatFloat(v+0, 'f', digits, 64)})
	}
	return marks
}

// pace gives the distance of marks over a span and the decimals that they need.
func pace(span float64) (step float64, digits int) {
	power := math.Floor(math.Log10(span / 5))
	for _, m := range []float64{1, 2, 5, 10} {
		step = m * math.Pow(10, power)
		if span/step <= 8 {
			if m == 10 {
				power++
			}
			break
		}
	}
	if power < 0 {
		digits = int(-power)
	}
	return step, digits
}

// widen opens a range to round marks; a range of no width is opened around its value.
func widen(low, high float64) (float64, float64) {
	if low == high {
		d := math.Abs(low) / 10
		if d == 0 {
			d = 1
		}
		low, high = low-d, high+d
	}
	step, _ := pace(high - low)
	return math.Floor(low/step+1e-9) * step, math.Ceil(high/step-1e-9) * step
}
