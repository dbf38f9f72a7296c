package dsl_test

import (
	"strings"
	"testing"

	. "ampturn/dsl"
)

// TestShelf: a material of the shelf goes into a circuit like one of one's own, and its results say what it is.
func TestShelf(t *testing.T) {
	fer := Material("power ferrite PW3a")
	near(t, "its data sheet's point at 1200 A/m, 100 degC", fer.FluxDensity(1200, 100*degC), 0.39, 1e-9)
	c := Magnetic("T1")
	c.Ring("core", Leg(fer, 97*mm, Rect(12*mm, 15*mm)), Gap(0.6*mm), Winding("main", 34*turn))
	op := c.At(100 * degC).Solve(Currents{"main": 1 * amp})
	contains(t, text(t, op), "representative of its class; replace by your supplier's data")
	contains(t, text(t, Materials()), "power ferrite PW3a")
	contains(t, text(t, Materials()), "25, 100")
	contains(t, text(t, Materials()), "PW2b; PW3a")
	if lines := strings.Count(text(t, Materials()), "\n"); lines > 20 {
		t.Errorf("the shelf fills %d lines", lines)
	}
	contains(t, text(t, Materials("power ferrite")), "IEC 61332")
	contains(t, text(t, fer), "mu_i at 100 degC is taken as at 25 degC")
	contains(t, text(t, Materials("NiZn")), "nickel-zinc ferrite 80")
	if all := text(t, Materials("NiZn")); strings.Contains(all, "power ferrite") {
		t.Errorf("asked for NiZn:\n%s", all)
	}
	contains(t, refused(t, func() { Materials("copper") }).Error(), "holds nothing of copper")
	far := refused(t, func() { Material("power ferite PW3a") })
	contains(t, far.Error(), `there is no "power ferite PW3a"; nearest to it are "power ferrite PW3a"`)
}
