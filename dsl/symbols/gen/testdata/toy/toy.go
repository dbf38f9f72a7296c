// Package toy is a small vocabulary.
package toy

import (
	"fmt"
	"math"

	"ampturn/dsl/symbols/gen/testdata/far"
)

type (
	// Metre is a length.
	Metre  = float64
	Second = float64 // Second is a time.
)

// Failure is what stops a cell.
type Failure = far.Failure

// Code is the kind of a [Failure].
type Code = far.Code

// Exact constants.
const (
	Third  = 1.0 / 3
	Tiny   = 1e-320
	Huge   = 1e5000
	Big    = 1 << 100
	Name   = "toy"
	Yes    = true
	Typed  = Shade(2)
	Letter = 'x'
	HalfPi = math.Pi / 2
)

// Shade is a choice.
type Shade int

// String names the shade.
func (s Shade) String() string { return fmt.Sprint(int(s)) }

// Rod is a rod.
type Rod struct {
	Length Metre // from end to end
	inner  *far.Inner
	sizes  []int
}

// At gives the length.
func (r *Rod) At(t Second) Metre { return r.Length + t }

// Part is sealed.
type Part interface {
	fmt.Stringer
	part(in *far.Inner) int
}

// Beam is a [Part].
type Beam struct{}

// String names it.
func (Beam) String() string { return "beam" }

func (Beam) part(in *far.Inner) int { return in.N }

// Law is open; every method kind of a wrapper occurs.
type Law interface {
	At(x Metre) (Second, error)
	Many(format string, xs ...Metre)
	Give(f func(Metre) Second) *Rod
	String() string
}

// NewRod makes a rod.
func NewRod(length Metre, laws ...Law) *Rod { return &Rod{Length: length, inner: new(far.Inner)} }

// Stop gives a failure.
func Stop() *Failure { return nil }

func helper[T any](x T) T { return x }

var count = helper(3)
