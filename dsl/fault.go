package dsl

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Fault is what stops a cell: which part, what is wrong with it, against which limit, and the way out. [Try] gives
// it to a design loop that wants to go on.
type Fault = magcirc.Error

// Remark is what a reader must know about a result that was delivered all the same: a law used beyond its data, a
// formula at the edge of its range, a default that nobody chose.
type Remark = magcirc.Note

// Try runs action and gives the fault that stopped it, or nil. Anything else that stops it (an index out of range,
// an interrupt) is not caught.
//
//	if err := Try(func() { T1.Solve(Currents{"main": 40*amp}) }); err != nil { ... }
func Try(action func()) (err error) {
	if action == nil {
		refuse(magcirc.BadValue, "Try", "there is no function to run", "write Try(func() { ... })")
	}
	defer func() {
		switch cause := recover().(type) {
		case nil:
		case *Fault:
			err = cause
		default:
			panic(cause)
		}
	}()
	action()
	return nil
}

// refuse stops the cell.
func refuse(code magcirc.Code, elem, msg, hint string) {
	panic(&Fault{Code: code, Elem: elem, Msg: msg, Hint: hint})
}

// refuseValue stops the cell for the value of a quantity.
func refuseValue(code magcirc.Code, elem, quantity string, got, limit float64, unit, says, hint string) {
	panic(&Fault{Code: code, Elem: elem, Msg: fmt.Sprintf("%s %s %s", quantity, phys.Format(got, unit), says),
		Hint: hint, Quantity: quantity, Unit: unit, Got: got, Limit: limit})
}

// must gives the value of a computation, or stops the cell with its error. An interrupt passes as it is.
func must[T any](value T, err error) T {
	check(err)
	return value
}

// check stops the cell with an error of the layer below.
func check(err error) {
	if err == nil {
		return
	}
	var f *Fault
	if errors.As(err, &f) {
		panic(f)
	}
	panic(err)
}

// named gives a fault of the layer below the name that its user knows the part by.
func named(elem string, err error) {
	var f *Fault
	if errors.As(err, &f) && f.Elem == "" {
		own := *f
		own.Elem = elem
		panic(&own)
	}
	check(err)
}

// wantFinite refuses what is not a number.
func wantFinite(elem, quantity string, x float64, unit string) {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		refuseValue(magcirc.BadValue, elem, quantity, x, 0, unit, "is not a number", "look where it was computed: a division by zero, a root of a negative")
	}
}

// wantPositive refuses zero, negative values and what is not a number.
func wantPositive(elem, quantity string, x float64, unit string) {
	wantFinite(elem, quantity, x, unit)
	if x <= 0 {
		refuseValue(magcirc.BadValue, elem, quantity, x, 0, unit, "is not above zero", "give a positive value")
	}
}

// wantRange refuses what lies outside low..high, or is not a number.
func wantRange(elem, quantity string, x, low, high float64, unit string) {
	wantFinite(elem, quantity, x, unit)
	if x < low || x > high {
		limit := low
		if x > high {
			limit = high
		}
		refuseValue(magcirc.BadValue, elem, quantity, x, limit, unit,
			fmt.Sprintf("is outside %s..%s", phys.Format(low, unit), phys.Format(high, unit)), "give a value inside")
	}
}

// wantName refuses names that messages and look-ups could not tell apart: empty ones, or with a point or an arrow.
func wantName(what, name string) {
	if strings.TrimSpace(name) != name || name == "" {
		refuse(magcirc.BadValue, what, fmt.Sprintf("name %q is empty or begins or ends with a blank", name), "give it a word")
	}
	if strings.Contains(name, ".") || strings.Contains(name, "->") {
		refuse(magcirc.BadValue, what, fmt.Sprintf("name %q holds a point or an arrow, which separate names", name), "write it without")
	}
}
