package dsl_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	. "ampturn/dsl"
	"ampturn/dsl/session"
)

// The units of a notebook, as far as the tests write them.
const (
	um      = 1e-6
	mm      = 1e-3
	cm      = 1e-2
	mm2     = 1e-6
	cm2     = 1e-4
	uH      = 1e-6
	nH      = 1e-9
	mWb     = 1e-3
	amp     = 1.0
	tesla   = 1.0
	turn    = 1.0
	degC    = 1.0
	percent = 0.01
)

// cell runs f as a cell of a notebook.
func cell(key string, number int, f func()) {
	session.BeginCell(key, number)
	defer session.EndCell(false)
	f()
}

// collect gives the outputs that f sends.
func collect(f func()) []session.Output {
	var got []session.Output
	session.Attach(func(o session.Output) { got = append(got, o) })
	defer session.Attach(nil)
	f()
	return got
}

// text is a result as text.
func text(t *testing.T, v interface{ MIMEBundle() map[string]any }) string {
	t.Helper()
	s, ok := v.MIMEBundle()["text/plain"].(string)
	if !ok || s == "" {
		t.Fatalf("%T shows no text", v)
	}
	return s
}

// refused is the message with which f stops.
func refused(t *testing.T, f func()) *Fault {
	t.Helper()
	err := Try(f)
	if err == nil {
		t.Fatal("is not refused")
	}
	var fault *Fault
	if !errors.As(err, &fault) {
		t.Fatalf("stops with %T", err)
	}
	return fault
}

func near(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if math.Abs(got-want) > rel*math.Abs(want) {
		t.Errorf("%s: %g, want %g within %g %%", what, got, want, 100*rel)
	}
}

// fer is an invented ferrite.
func fer() *MagneticMaterial {
	return NewMaterial("FER-A", Froehlich(2200, 0.49*tesla)).Also(100*degC, Froehlich(2200, 0.39*tesla)).Tolerance(25 * percent)
}

// threeLegs is the circuit of the manual.
func threeLegs() *MagneticCircuit {
	T1 := Magnetic("T1")
	T1.Path("centre", "bottom -> top", Leg(fer(), 36*mm, Rect(12.2*mm, 15*mm)), Gap(0.6*mm), Winding("main", 34*turn))
	T1.Path("left", "top -> bottom", Yoke(fer(), 61*mm, Rect(6*mm, 15*mm)))
	T1.Path("right", "top -> bottom", Yoke(fer(), 61*mm, Rect(6*mm, 15*mm)))
	T1.Path("window", "bottom -> top", Permeance(12*nH))
	return T1
}

func contains(t *testing.T, where, what string) {
	t.Helper()
	if !strings.Contains(where, what) {
		t.Errorf("%q is missing in\n%s", what, where)
	}
}
