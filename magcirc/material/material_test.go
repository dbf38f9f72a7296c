package material_test

import (
	"fmt"
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc"
	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
)

// lot is a ferrite at 25 and 100 degC.
func lot(t testing.TB) *material.Material {
	m, err := material.New("lot 12", must(material.NewFroehlich(2200, 0.49))).Also(100, must(material.NewFroehlich(3000, 0.39)))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// Between the data, B at equal H runs in a straight line over temperature.
func TestInterpolatesOverTemperature(t *testing.T) {
	m := lot(t)
	third, err := m.Also(60, must(material.NewFroehlich(2700, 0.45)))
	if err != nil {
		t.Fatal(err)
	}
	if got := third.Temperatures(); !reflect.DeepEqual(got, []float64{25, 60, 100}) || len(m.Temperatures()) != 2 {
		t.Errorf("temperatures %v, before %v", got, m.Temperatures())
	}
	rapid.Check(t, func(t *rapid.T) {
		temperature := rapid.Float64Range(25, 100).Draw(t, "T")
		h := math.Pow(10, rapid.Float64Range(-1, 5).Draw(t, "lg H"))
		law, notes, err := third.Law(temperature)
		if err != nil || len(notes) > 0 {
			t.Fatal(err, notes)
		}
		lo, hi := 25.0, 60.0
		if temperature > 60 {
			lo, hi = 60, 100
		}
		cold, _, _ := third.Law(lo)
		hot, _, _ := third.Law(hi)
		b0, _ := cold.At(h)
		b1, _ := hot.At(h)
		want := b0 + (temperature-lo)/(hi-lo)*(b1-b0)
		if b, _ := law.At(h); math.Abs(b-want) > 1e-13*want {
			t.Fatalf("at %v degC, %v A/m: %v, want %v", temperature, h, b, want)
		}
	})
}

func TestBeyondTheTemperatures(t *testing.T) {
	m := lot(t)
	law, notes, err := m.Law(115)
	if err != nil || len(notes) != 1 || notes[0].Kind != magcirc.Extrapolated ||
		notes[0].String() != `material "lot 12": 115 degC is 15 K beyond its data (25 degC to 100 degC); the law is extrapolated in a straight line` {
		t.Errorf("%v %v", notes, err)
	}
	b25, _ := must(material.NewFroehlich(2200, 0.49)).At(500)
	b100, _ := must(material.NewFroehlich(3000, 0.39)).At(500)
	if b, _ := law.At(500); math.Abs(b-(b25+90.0/75*(b100-b25))) > 1e-14 {
		t.Errorf("extrapolated to %v", b)
	}
	_, _, err = m.Law(140)
	refused(t, err, magcirc.OutsideData,
		`material "lot 12": 140 degC is 40 K beyond its data (25 degC to 100 degC); add the law there with Also(140*degC, ...), or say Extrapolate()`)
	if _, notes, err := m.Extrapolate().Law(140); err != nil || len(notes) != 1 {
		t.Errorf("with leave: %v %v", notes, err)
	}
	_, _, err = m.Extrapolate().Law(500)
	refused(t, err, magcirc.OutsideData,
		`material "lot 12": extrapolated to 500 degC from 25 degC and 100 degC the law no longer rises at 110 A/m; add data nearer to it`)
	if _, notes, err := m.Law(4.9); err == nil {
		t.Errorf("20.1 K below: %v", notes)
	}
	if _, notes, err := m.Law(5); err != nil || len(notes) != 1 {
		t.Errorf("20 K below: %v %v", notes, err)
	}
}

func TestOneLaw(t *testing.T) {
	m := material.New("quick", must(material.NewLinear(2200)))
	if _, notes, err := m.Law(25); err != nil || notes != nil {
		t.Error(notes, err)
	}
	if _, notes, err := m.Law(40); err != nil || len(notes) != 1 || notes[0].Text != "40 degC is 15 K beyond its data (25 degC); the law is taken as it is" {
		t.Error(notes, err)
	}
	_, _, err := m.Law(100)
	refused(t, err, magcirc.OutsideData, `material "quick": 100 degC is 75 K beyond its data (25 degC); add the law there with Also(100*degC, ...), or say Extrapolate()`)
	if law, _, err := m.Extrapolate().Law(100); err != nil || law.Describe() != "linear, mu_r 2200" {
		t.Error(law, err)
	}
}

func TestMaterialRefusals(t *testing.T) {
	m := lot(t)
	law := must(material.NewLinear(2))
	_, err := m.Also(100, law)
	refused(t, err, magcirc.DuplicateName, `material "lot 12": it has a law at 100 degC already`)
	_, err = m.Also(-300, law)
	refused(t, err, magcirc.BadValue, `material "lot 12": no material is at -300 degC; temperatures are in degC`)
	_, err = m.Also(60, nil)
	refused(t, err, magcirc.BadValue, `material "lot 12": there is no law for 60 degC`)
	_, _, err = material.New("empty", nil).Law(25)
	refused(t, err, magcirc.WrongUse, `material "empty": it has no law`)
}

func TestChangesGiveNewMaterials(t *testing.T) {
	m := lot(t)
	if m.Tolerance(0.25).Spread() != 0.25 || m.Spread() != 0 {
		t.Error("tolerance")
	}
	m.Extrapolate()
	if _, _, err := m.Law(140); err == nil {
		t.Error("leave to extrapolate leaked into the old material")
	}
}

func TestBeyondTheCurve(t *testing.T) {
	law := must(material.NewCurve([]float64{50, 1200}, []float64{0.25, 0.49}))
	m := material.NewAt("lot 12", 100, law)
	note, yes := material.Beyond("leg T1.centre", m, 100, law, -1.31)
	if !yes || note.String() != `leg T1.centre: 1.31 T is beyond the data of "lot 12" (to 0.49 T at 100 degC); above it B rises with mu0 only. Add points` {
		t.Error(note)
	}
	if _, yes := material.Beyond("leg T1.centre", m, 100, law, 0.4); yes {
		t.Error("0.4 T is within the data")
	}
	// Beside a formula, the blend covers what the data cover.
	both, _ := m.Also(25, must(material.NewFroehlich(2200, 0.49)))
	warm, _, _ := both.Law(62.5)
	hmax, bmax := warm.Range()
	if b, _ := warm.At(1200); hmax != 1200 || bmax != b {
		t.Errorf("range %v, %v", hmax, bmax)
	}
	// The mean of Froehlich's 0.4284 T and the curve's 0.49 T.
	if got := phys.Format(bmax, "T"); got != "0.4592 T" {
		t.Error(got)
	}
}

func ExampleMaterial_Law() {
	cold, _ := material.NewFroehlich(2200, 0.49)
	hot, _ := material.NewFroehlich(3000, 0.39)
	fer, _ := material.New("lot 12", cold).Also(100, hot)
	law, notes, _ := fer.Law(110)
	fmt.Println(law.Describe())
	fmt.Println(notes[0])
	// Output:
	// extrapolated to 110 degC from 25 degC (Froehlich-Kennelly, mu_i 2200, Bs 0.49 T) and 100 degC (Froehlich-Kennelly, mu_i 3000, Bs 0.39 T)
	// material "lot 12": 110 degC is 10 K beyond its data (25 degC to 100 degC); the law is extrapolated in a straight line
}
