package geom_test

import (
	"errors"
	"math"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/geom"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if math.Abs(got-want) > tol*math.Abs(want) {
		t.Errorf("%s: %v, want %v", what, got, want)
	}
}

func TestAreas(t *testing.T) {
	// Closed forms.
	near(t, "rectangle", geom.Rect(0.0122, 0.015).Gross(), 0.0122*0.015, 1e-15)
	near(t, "disc", geom.Disc(0.02).Gross(), math.Pi*1e-4, 1e-15)
	near(t, "ring", geom.Annulus(0.05, 0.03).Gross(), math.Pi/4*(25e-4-9e-4), 1e-15)
	near(t, "plain", geom.Area(9e-4).Gross(), 9e-4, 0)
	near(t, "stacked", geom.Rect(0.04, 0.05).WithStacking(0.92).Metal(), 0.00184, 1e-12)
	near(t, "stacking not given", geom.Area(9e-4).Metal(), 9e-4, 0)
}

func TestGrown(t *testing.T) {
	// Kothari and Nagrath, Electric Machines, 4th ed. 2010, ex. 2.1: core 4 cm x 4 cm, gap 0.6 mm, B core 1.2 T,
	// B gap by the add-the-gap rule 1.16 T (recomputed 1.164794).
	core := geom.Rect(0.04, 0.04)
	grown, ok := core.Grown(0.6e-3)
	if !ok {
		t.Fatal("a rectangle must grow")
	}
	near(t, "B gap", 1.2*core.Gross()/grown.Gross(), 1.164794, 1e-6)
	disc, _ := geom.Disc(0.01).Grown(0.001)
	near(t, "disc", disc.Do, 0.011, 1e-15)
	ring, _ := geom.Annulus(0.05, 0.0005).Grown(0.001)
	near(t, "closed ring", ring.Gross(), math.Pi/4*0.051*0.051, 1e-14)
	if _, ok := geom.Area(1e-4).Grown(0.001); ok {
		t.Error("a plain area has no outline to grow")
	}
}

func TestValidate(t *testing.T) {
	rows := []struct {
		section geom.Section
		code    magcirc.Code
		message string
	}{
		{geom.Rect(-0.003, 0.015), magcirc.BadValue, `leg T1.centre: width -3 mm is not a positive size`},
		{geom.Rect(0.012, math.NaN()), magcirc.BadValue, `leg T1.centre: depth NaN m is not a positive size`},
		{geom.Rect(12.2, 15), magcirc.Implausible, `leg T1.centre: width 12.2 m is larger than any section. Was 12.2*mm meant?`},
		{geom.Area(250), magcirc.Implausible, `leg T1.centre: area 250 m2 is larger than any section. Was 250*mm2 meant?`},
		{geom.Disc(8e-9), magcirc.Implausible, `leg T1.centre: diameter 8 nm is smaller than any section. Was a unit multiplied twice?`},
		{geom.Annulus(0.01, 0.02), magcirc.BadValue, `leg T1.centre: inner diameter 20 mm is not less than the outer, 10 mm; the outer diameter comes first: Annulus(do, di)`},
		{geom.Disc(0.01).WithStacking(95), magcirc.BadValue, `leg T1.centre: stacking 95 is not between 0 and 1; it is the share of metal in the section: 0.95 for 95 percent`},
	}
	for _, r := range rows {
		err := r.section.Validate("leg T1.centre")
		var e *magcirc.Error
		if !errors.As(err, &e) || e.Code != r.code || e.Error() != r.message {
			t.Errorf("%v:\n got %v\nwant %v %s", r.section, err, r.code, r.message)
		}
	}
	for _, s := range []geom.Section{geom.Rect(0.01, 0.02), geom.Disc(0.01), geom.Annulus(0.02, 0.01), geom.Annulus(0.02, 0), geom.Area(0.2)} {
		if err := s.Validate("leg"); err != nil {
			t.Errorf("%s: %v", s.Describe(), err)
		}
	}
}

func TestDescribe(t *testing.T) {
	if got := geom.Rect(0.0122, 0.015).WithStacking(0.95).Describe(); got != "rectangle 12.2 mm x 15 mm, stacking 0.95" {
		t.Error(got)
	}
	if got := geom.Annulus(0.05, 0.03).Describe(); got != "ring of diameters 50 mm and 30 mm" {
		t.Error(got)
	}
}
