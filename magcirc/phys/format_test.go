package phys_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc/phys"
)

func TestFormat(t *testing.T) {
	rows := []struct {
		x    float64
		unit string
		want string
	}{
		{630e-6, "H", "630 uH"},
		{34e-6, "m2", "34 mm2"},
		{0.32, "T", "0.32 T"},
		{0.0858, "T", "85.8 mT"},
		{1.31, "T", "1.31 T"},
		{0.6, "m", "600 mm"},
		{0.036, "m", "36 mm"},
		{0.07 * 1e-3, "m", "70 um"},
		{9e-4, "m2", "900 mm2"},
		{0.2, "m2", "2000 cm2"},
		{21.4e-6, "m3", "21.4 cm3"},
		{0, "H", "0 H"},
		{0, "m2", "0 m2"},
		{-3.2, "A", "-3.2 A"},
		{442097.06, "1/H", "442100 1/H"},
		{4.6e6, "1/H", "4.6e6 1/H"},
		{4547284.3, "1/H", "4.547e6 1/H"},
		{4547284.3, "A/Wb", "4.547e6 1/H"},
		{310, "A/m", "310 A/m"},
		{42e3, "A/m", "42 kA/m"},
		{62.5e3, "W/m3", "62.5 kW/m3"},
		{1.7241e-8, "ohm m", "17.24 nohm m"},
		{4e6, "A/m2", "4 A/mm2"},
		{110, "degC", "110 degC"},
		{-40, "degC", "-40 degC"},
		{0.25, "percent", "25 %"},
		{0.0853, "percent", "8.53 %"},
		{34, "turn", "34 turns"},
		{1, "turn", "1 turn"},
		{58.7156, "turn", "58.72 turns"},
		{70000, "", "70000"},
		{12345, "", "12345"},
		{12345.6, "", "12350"},
		{0.95, "", "0.95"},
		{8.034293e-8, "m4", "8.034 cm4"},
		{3.5e-9, "", "3.5e-9"},
		{0.0154, "kg", "15.4 g"},
		{6.5, "kg", "6.5 kg"},
		{999.96e-6, "H", "1 mH"},
		{999.94e-6, "H", "999.9 uH"},
		{1e-15, "s", "1 fs"},
		{1e-19, "s", "100e-6 fs"},
		{math.Inf(1), "T", "inf T"},
		{math.NaN(), "H", "NaN H"},
	}
	for _, r := range rows {
		if got := phys.Format(r.x, r.unit); got != r.want {
			t.Errorf("Format(%v, %q) = %q, want %q", r.x, r.unit, got, r.want)
		}
	}
	if got := phys.FormatDigits(630.4e-6, "H", 2); got != "630 uH" {
		t.Errorf("two digits: %q", got)
	}
	if f, u := phys.Scale(630e-6, "H"); f != 1e6 || u != "uH" {
		t.Errorf("Scale: %v %q", f, u)
	}
}

// The printed number times its prefix is the value, to the digits printed.
func TestFormatKeepsTheValue(t *testing.T) {
	units := []string{"H", "T", "A/m", "m", "m2", "m3", "kg", "A/m2", "1/H", "", "s", "W/m3", "percent"}
	rapid.Check(t, func(t *rapid.T) {
		x := math.Pow(10, rapid.Float64Range(-12, 9).Draw(t, "lg"))
		unit := rapid.SampledFrom(units).Draw(t, "unit")
		digits := rapid.IntRange(2, 12).Draw(t, "digits")
		factor, prefixed := phys.Scale(x, unit)
		s := phys.FormatDigits(x, unit, digits)
		n, u, _ := strings.Cut(s, " ")
		var got float64
		if _, err := fmt.Sscan(n, &got); err != nil {
			t.Fatalf("%q: %v", s, err)
		}
		if u != prefixed { // rounding moved it to the next prefix
			factor, _ = phys.Scale(x*1.01, unit)
		}
		if math.Abs(got/factor-x) > 0.51*math.Pow(10, 1-float64(digits))*x {
			t.Fatalf("%q stands for %v", s, x)
		}
	})
}
