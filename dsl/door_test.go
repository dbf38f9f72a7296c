package dsl_test

import (
	"reflect"
	"testing"

	. "ampturn/dsl"
)

// TestNilDoors calls every method of every pointer type on nil with empty arguments: it must be refused by a Fault or
// answer, never stop with a nil pointer.
func TestNilDoors(t *testing.T) {
	for _, nobody := range []any{
		(*MagneticMaterial)(nil), (*MagneticCircuit)(nil), (*OperatingPoint)(nil), (*InductanceMatrix)(nil), (*EquivalentCircuit)(nil),
		(*TeeCircuit)(nil), (*BiasCurve)(nil), (*GapComparison)(nil), (*LegState)(nil), (*Figure)(nil), (*TableView)(nil),
		(*Verdict)(nil), (*Requirement)(nil), (*Point)(nil), (*Fragment)(nil),
		(*Loop)(nil), (*CurveData)(nil), (*JAFit)(nil), (*PlayFit)(nil), (*History)(nil),
	} {
		v := reflect.ValueOf(nobody)
		for i := range v.NumMethod() {
			name := v.Type().String() + "." + v.Type().Method(i).Name
			t.Run(name, func(t *testing.T) {
				method := v.Method(i)
				var in []reflect.Value
				for k := range method.Type().NumIn() {
					if !method.Type().IsVariadic() || k < method.Type().NumIn()-1 {
						in = append(in, reflect.Zero(method.Type().In(k)))
					}
				}
				if err := Try(func() { method.Call(in) }); err == nil && method.Type().NumOut() == 1 && method.Type().Out(0).Kind() == reflect.Float64 {
					t.Error("answers a number")
				}
			})
		}
	}
}

// TestNotesAndCurves asks what the manual names and no other test does.
func TestNotesAndCurves(t *testing.T) {
	T1 := threeLegs()
	op := T1.At(110 * degC).Solve(Currents{"main": 40 * amp})
	if len(op.Notes()) == 0 || len(op.Matrix().Notes()) == 0 {
		t.Error("110 degC gives no note")
	}
	contains(t, text(t, T1.Solve(Currents{"main": 400 * amp})), "leg T1.centre.leg: saturated: ")
	linear := Magnetic("T2")
	linear.Ring("core", Leg(NewMaterial("iron", Linear(4000)), 100*mm, Area(100*mm2)), Winding("N", 100*turn))
	contains(t, text(t, linear.Solve(Currents{"N": 1 * amp})), "leg T2.core.leg: 5.027 T is more than any material carries")
	curve := T1.BiasCurve("main", 0, 6*amp)
	two := Plot(curve, T1.At(100*degC).BiasCurve("main", 0, 6*amp).As("hot"))
	contains(t, text(t, two), "25 degC: current from 0 A to 6 A")
	contains(t, text(t, two), "hot: current from 0 A to 6 A")
	if len(curve.Notes()) == 0 {
		t.Error("the curve has no note on the gap")
	}
	contains(t, text(t, Basis(curve)), "Newton")
	contains(t, text(t, Basis(T1.Fringing("gap"))), "Varga")
	contains(t, text(t, Basis(op.Matrix())), "differentiation")
	contains(t, text(t, Basis(FromReadings(Reading{At: "P", Inductance: 1 * uH}))), "least squares")
	contains(t, text(t, T1.With(Length("gap", 0.5*mm)).BiasCurve("main", 0, 1).As("x")), "centre.gap 500 um")
	for _, m := range []map[string]any{op.MIMEMetadata(), T1.Fringing("gap").MIMEMetadata(), op.Balance().MIMEMetadata(), op.Matrix().MIMEMetadata()} {
		if m["ampturn"] == nil {
			t.Error("no metadata")
		}
	}
}
