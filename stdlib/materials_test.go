package stdlib

import (
	"errors"
	"math"
	"strings"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

func TestEveryMaterialHasALawAndASource(t *testing.T) {
	rows := Materials()
	if len(rows) < 15 {
		t.Fatalf("%d materials", len(rows))
	}
	for _, r := range rows {
		if r.Class == "" || r.Source == "" || r.Note == "" || r.Law == "" {
			t.Errorf("%s: a row without class, source, note or law: %+v", r.Name, r)
		}
		m, err := Material(r.Name)
		if err != nil {
			t.Fatal(err)
		}
		if m.Spread() != r.Tolerance || m.Name() != r.Name {
			t.Errorf("%s: tolerance %v, %v", r.Name, m.Spread(), r.Tolerance)
		}
		for _, temperature := range r.Temperatures {
			law, notes, err := m.Law(temperature)
			if err != nil || len(notes) == 0 || notes[0].String() != `material "`+r.Name+`": `+Representative {
				t.Errorf("%s at %v: %v %v", r.Name, temperature, notes, err)
				continue
			}
			for _, h := range []float64{1, 50, 1000} {
				b, slope := law.At(h)
				if back, _ := law.Inverse(b); slope < phys.Mu0 || math.Abs(back-h) > 1e-9*h {
					t.Errorf("%s: B %v, slope %v, back %v at %v", r.Name, b, slope, back, h)
				}
			}
		}
	}
}

// The laws carry the figures of their rows.
func TestFiguresOfTheShelf(t *testing.T) {
	at := func(name string, temperature, h float64) (b, mur float64) {
		t.Helper()
		m, err := Material(name)
		if err != nil {
			t.Fatal(err)
		}
		law, _, err := m.Law(temperature)
		if err != nil {
			t.Fatal(err)
		}
		b, slope := law.At(h)
		return b, slope / phys.Mu0
	}
	for _, r := range []struct {
		name            string
		t, h, b, within float64
	}{
		{"power ferrite PW3a", 25, 1200, 0.49, 1e-9},  // data sheet points at 10 kHz
		{"power ferrite PW3a", 100, 1200, 0.39, 1e-9}, // the same
		{"power ferrite PW3b", 100, 1200, 0.41, 1e-9},
		{"nickel-zinc ferrite 80", 25, 5000, 0.31, 1e-9},
		{"grain-oriented steel 0.30 mm", 25, 36, 1.5, 1e-12}, // Fitzgerald ex. 1.8
	} {
		if b, _ := at(r.name, r.t, r.h); math.Abs(b-r.b) > r.within {
			t.Errorf("%s: %v T at %v A/m, want %v", r.name, b, r.h, r.b)
		}
	}
	if _, mur := at("power ferrite PW3a", 25, 0); math.Abs(mur-2200) > 1e-6 {
		t.Errorf("mu_i %v", mur)
	}
	// The table's own columns of 80 and 50 percent of mu_i, kA/m, as its maker computes them: 3.68 and 7.81, 7.21
	// and 14.0, 2.25 and 3.95.
	for _, r := range []struct {
		name     string
		mui      float64
		h80, h50 float64
	}{{"Fe-Si-Al powder 60", 60, 3680, 7810}, {"Fe-Si powder 60", 60, 7210, 14000}, {"Ni-Fe-Mo powder 125", 125, 2250, 3950}} {
		if _, mur := at(r.name, 25, r.h80); math.Abs(mur/r.mui-0.8) > 0.003 {
			t.Errorf("%s: %v of mu_i at %v", r.name, mur/r.mui, r.h80)
		}
		if _, mur := at(r.name, 25, r.h50); math.Abs(mur/r.mui-0.5) > 0.003 {
			t.Errorf("%s: %v of mu_i at %v", r.name, mur/r.mui, r.h50)
		}
	}
}

func TestUnknownMaterial(t *testing.T) {
	_, err := Material("power ferite PW3a")
	var e *magcirc.Error
	if !errors.As(err, &e) || e.Code != magcirc.UnknownName ||
		e.Error() != `shelf of materials: there is no "power ferite PW3a"; nearest to it are "power ferrite PW3a", "power ferrite PW3b", "power ferrite PW2b". Materials() lists them all` {
		t.Error(err)
	}
	for typed, want := range map[string]string{"PW3b": "power ferrite PW3b", "Power Ferrite PW3A": "power ferrite PW3a", "fe-si-al 60": "Fe-Si-Al powder 60"} {
		if got := nearest(typed, shelf().order, 1)[0]; got != `"`+want+`"` {
			t.Errorf("%s: nearest is %s, want %s", typed, got, want)
		}
	}
}

func TestFaultyTable(t *testing.T) {
	head, _, _ := strings.Cut(materialsCSV, "\n")
	for row, want := range map[string]string{
		"x,c,25,curve,,,,,,1 0.2; 2 0.1,s,n":      "line 2: curve x, point 2: B falls from 0.2 T to 0.1 T while H rises; a magnetisation curve cannot fall",
		"x,c,25,spline,,,,,,,s,n":                 `line 2: there is no law "spline"`,
		"x,c,warm,saturation,2200,,,0.4,,,s,n":    `line 2: column temperature_degC: "warm" is no number`,
		"x,c,25,curve,,,,,,one two,s,n":           `line 2: point "one two" is no pair of numbers`,
		"x,c,25,saturation point,2200,,0,0.4,,,,": "line 2: Langevin law: field strength of the point 0 A/m is not a positive value",
	} {
		if _, err := readMaterials(head + "\n" + row + "\n"); err == nil || err.Error() != want {
			t.Errorf("%s:\n got %v\nwant %s", row, err, want)
		}
	}
}

// TestSuggestionsByKind: a grade that no letter resembles gets the kinds of the shelf, one that names its kind the names of that.
func TestSuggestionsByKind(t *testing.T) {
	for typed, says := range map[string]string{
		"X7":               `there is no "X7"; the shelf holds classes, no makers' grades: power ferrite, `,
		"ferrite, grade 9": `of its kind are "`,
		"MnZn":             `of its kind are "`,
	} {
		_, err := Material(typed)
		if err == nil || !strings.Contains(err.Error(), says) {
			t.Errorf("%s: %v", typed, err)
		}
		if err != nil && typed != "X7" && strings.Contains(err.Error(), "powder") {
			t.Errorf("%s: powders are of another kind: %v", typed, err)
		}
	}
	for name, want := range map[string][2]string{"power ferrite PW3 flat": {"power ferrite", "PW3 flat"}, "Fe-Si powder 26": {"Fe-Si powder", "26"}, "air": {"air", ""}} {
		if kind, grade := (MaterialRow{Name: name}).Kind(); kind != want[0] || grade != want[1] {
			t.Errorf("%s: %q, %q", name, kind, grade)
		}
	}
}
