package unit

import "math"

// kind orders what is known of a value's unit, from nothing to too much.
type kind int8

const (
	unset    kind = iota // nothing is assigned yet
	zero                 // 0 without a unit, which fits every unit
	known                // in one unit
	untraced             // of unknown unit, or of several
)

// value is what the check knows of an expression: the unit of the number, or of the numbers that a container, a carrier
// or the result of a function holds.
type value struct {
	kind kind
	quantity
	table bool // a list of bare numbers, which counts as data in SI
}

// Values without further parts.
var (
	nothing = value{}
	fits    = value{kind: zero}
	number  = value{kind: known}
	lost    = value{kind: untraced}
)

// inUnit gives a value in a unit.
func inUnit(q quantity) value { return value{kind: known, quantity: q} }

// plain tells whether v is known to be without a unit.
func (v value) plain() bool { return v.kind == known && v.dim == Number }

// dimensional tells whether v is known and has a unit.
func (v value) dimensional() bool { return v.kind == known && v.dim != Number }

// join gives what is known of a variable that takes both values.
func join(a, b value) value {
	if a.kind > b.kind {
		a, b = b, a
	}
	switch {
	case a.kind == unset:
		return b
	case b.kind != known || a.kind == zero:
		return value{kind: b.kind, quantity: b.quantity, table: b.table && a.table}
	case a.dim != b.dim:
		return lost
	}
	return value{known, alike(a.quantity, b.quantity), a.table && b.table}
}

// alike keeps the text of two quantities of one dimension if both have it.
func alike(a, b quantity) quantity {
	if a.as != b.as {
		a.as = ""
	}
	return a
}

// element gives the value of one element of a container.
func (v value) element() value {
	v.table = false
	return v
}

// product gives x·y, or x/y for sign -1. A temperature on the Celsius scale has no product.
func product(x, y value, sign int) value {
	switch {
	case x.kind == untraced || y.kind == untraced:
		return lost
	case x.kind == unset || y.kind == unset:
		return nothing
	case x.kind == zero && y.kind == zero, x.kind == zero && y.plain(), y.kind == zero && x.plain() && sign > 0:
		return fits
	}
	if x.dim.Point || y.dim.Point {
		return lost
	}
	d, ok := x.dim.mul(y.dim, sign)
	if !ok {
		return lost
	}
	return inUnit(quantity{d, productAs(x, y, sign, d)})
}

// radian marks a number that stands for an angle, pi foremost.
const radian = "rad"

// productAs gives the text under which a product of dimension d was declared: that of the factor that has the
// dimension. A frequency times an angle is no longer in Hz.
func productAs(x, y value, sign int, d Dim) string {
	switch {
	case d == Number:
		if x.as == radian || y.as == radian {
			return radian
		}
		return ""
	case d == frequency && (x.as == radian || y.as == radian):
		if x.as == radian && sign > 0 || y.as == radian && sign > 0 {
			return perSecond
		}
		return ""
	case y.kind == zero || y.dim == Number:
		return x.as
	case (x.kind == zero || x.dim == Number) && sign > 0:
		return y.as
	}
	return ""
}

var frequency = Dim{Half: [5]int8{0, 0, -2}}

const perSecond = "1/s"

// power gives x^p.
func power(x value, p float64) value {
	if x.kind != known {
		return x
	}
	if x.dim.Point || math.IsNaN(p) {
		return lost
	}
	d, ok := x.dim.pow(p)
	if !ok {
		return lost
	}
	return inUnit(quantity{dim: d})
}

// sum gives x+y, or x-y for minus; ok is false where the two cannot be added (v is then that of x, so that a refused
// sum does not hide what follows). A bare number beside a unit belongs to an
// empirical formula and leaves the sum untraced.
func sum(x, y value, minus bool) (v value, ok bool) {
	switch {
	case x.kind == untraced || y.kind == untraced:
		return lost, true
	case x.kind == unset || y.kind == unset:
		return nothing, true
	case x.kind == zero || y.kind == zero:
		return join(x, y).element(), true
	case x.dim == y.dim && x.dim.Point && !minus:
		return x, false
	case x.dim == y.dim:
		q := alike(x.quantity, y.quantity)
		if x.dim.Point {
			q = quantity{dim: x.dim.difference()}
		}
		return inUnit(q), true
	case x.dim == Number || y.dim == Number:
		return lost, true
	case x.dim.difference() == y.dim && x.dim.Point:
		return inUnit(x.quantity), true
	case x.dim == y.dim.difference() && y.dim.Point && !minus:
		return inUnit(y.quantity), true
	}
	return x, false
}

// mayCompare tells whether two values may be compared: one unit, or a bare number beside one.
func mayCompare(x, y value) bool {
	return x.kind != known || y.kind != known || x.dim == y.dim || x.dim == Number || y.dim == Number
}
