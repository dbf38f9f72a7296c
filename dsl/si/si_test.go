package si_test

import (
	"go/constant"
	"go/token"
	"math"
	"strings"
	"testing"

	"ampturn/dsl/si"
	"ampturn/magcirc/phys"
)

// TestUnits demands that names are unique, values are exact decimal constants and every unit is documented.
func TestUnits(t *testing.T) {
	seen := map[string]bool{}
	for _, u := range append(si.Units[:len(si.Units):len(si.Units)], si.Constants...) {
		if seen[u.Name] {
			t.Errorf("%s is listed twice", u.Name)
		}
		seen[u.Name] = true
		if v := constant.MakeFromLiteral(u.Value, token.FLOAT, 0); v.Kind() != constant.Float && v.Kind() != constant.Int {
			t.Errorf("%s: %q is no decimal constant", u.Name, u.Value)
		}
		if u.Doc == "" {
			t.Errorf("%s has no doc", u.Name)
		}
	}
	for _, name := range strings.Fields(`um mm cm mm2 cm2 m2 mm3 cm3 m3 cm4 ns us ms Hz kHz MHz uV mV kV uA mA kA mohm kohm megohm
		nH uH mH pF nF uF mF uT mT nWb uWb mWb mW kW VA kVA uJ mJ uVs A2s gram kg percent deg arcmin degC gauss oersted
		mil inch metre second hour volt amp ohm henry farad tesla weber watt joule kelvin newton turn mu0 pi`) {
		if !seen[name] {
			t.Errorf("%s is missing", name)
		}
	}
}

// TestValues compares values that are not powers of ten with their definitions.
func TestValues(t *testing.T) {
	want := map[string]float64{
		"deg": math.Pi / 180, "arcmin": math.Pi / 10800, "oersted": 1000 / (4 * math.Pi), "gauss": 1e-4,
		"inch": 25.4e-3, "mil": 25.4e-6, "hour": 3600, "mu0": phys.Mu0, "pi": math.Pi, "percent": 0.01,
	}
	for _, u := range append(si.Units[:len(si.Units):len(si.Units)], si.Constants...) {
		w, ok := want[u.Name]
		if !ok {
			continue
		}
		if got, _ := constant.Float64Val(constant.MakeFromLiteral(u.Value, token.FLOAT, 0)); got != w {
			t.Errorf("%s = %v, want %v", u.Name, got, w)
		}
	}
}
