// Package toy is a small vocabulary for the tests of the cell language: rods and springs.
package toy

import (
	"context"
	"fmt"
	"strings"
	"sync"
	"time"
)

// Quantities.
type (
	Metre       = float64
	SquareMetre = float64
	Second      = float64
	Newton      = float64
)

// Fault is a refusal with a stable name.
type Fault struct {
	Code string
	Msg  string
}

// Error gives the line that a reader sees.
func (f *Fault) Error() string { return f.Msg }

// CodeName names the kind of refusal.
func (f *Fault) CodeName() string { return f.Code }

// Rod is a rod of a length.
type Rod struct {
	Name   string
	Length Metre
}

// NewRod makes a rod of a length.
func NewRod(name string, length Metre) *Rod {
	if length <= 0 || length > 100 {
		panic(&Fault{"OutOfRange", fmt.Sprintf("rod %s: length %g m is not between 0 and 100 m; was mm meant?", name, length)})
	}
	return &Rod{name, length}
}

// MIMEBundle shows the rod.
func (r *Rod) MIMEBundle() map[string]any {
	return map[string]any{"text/plain": fmt.Sprintf("rod %s, %g m", r.Name, r.Length), "text/html": "<b>" + r.Name + "</b>"}
}

// Scaled gives a rod that is longer by a factor.
func (r *Rod) Scaled(by float64) *Rod { return &Rod{r.Name, r.Length * by} }

// Stretch lengthens the rod itself.
func (r *Rod) Stretch(by Metre) { r.Length += by }

// Joined gives the length of all rods together.
func Joined(rods ...*Rod) Metre {
	sum := 0.0
	for _, r := range rods {
		sum += r.Length
	}
	return sum
}

// Handle shows nothing.
type Handle struct{ n int }

// MIMEBundle is nil: a handle shows nothing.
func (h *Handle) MIMEBundle() map[string]any { return nil }

// NewHandle makes a handle.
func NewHandle() *Handle { return &Handle{1} }

// Law gives a force over an elongation.
type Law interface {
	Force(x Metre) Newton
}

// Hooke is a linear law.
func Hooke(k float64) Law { return hooke(k) }

type hooke float64

func (k hooke) Force(x Metre) Newton { return float64(k) * x }

// Work integrates a law to an elongation in n steps.
func Work(law Law, to Metre, n float64) float64 {
	if law == nil {
		panic(&Fault{"NilLaw", "the law is nil"})
	}
	sum, h := 0.0, to/n
	for i := 0; i < int(n); i++ {
		sum += law.Force((float64(i)+0.5)*h) * h
	}
	return sum
}

// SumOf adds the forces of laws at an elongation.
func SumOf(x Metre, laws ...Law) Newton {
	f := 0.0
	for _, l := range laws {
		f += l.Force(x)
	}
	return f
}

// Pair holds two laws.
type Pair struct {
	A, B Law
	K    float64
}

// Force is that of both.
func (p Pair) Force(x Metre) Newton { return p.A.Force(x) + p.B.Force(x) }

// LawOf makes a law of a function.
func LawOf(f func(x Metre) Newton) Law { return lawOf(f) }

type lawOf func(x Metre) Newton

func (f lawOf) Force(x Metre) Newton { return f(x) }

var (
	mu   sync.Mutex
	kept []func(float64) float64
)

// Keep keeps a function.
func Keep(f func(x float64) float64) {
	mu.Lock()
	defer mu.Unlock()
	kept = append(kept, f)
}

// Kept adds what the kept functions give for 1 and forgets them.
func Kept() float64 {
	mu.Lock()
	fs := kept
	kept = nil
	mu.Unlock()
	sum := 0.0
	for _, f := range fs {
		sum += f(1)
	}
	return sum
}

// Integrate calls a function n times.
func Integrate(f func(x float64) float64, n float64) float64 {
	sum := 0.0
	for i := 0.0; i < n; i++ {
		sum += f(i)
	}
	return sum
}

// Parallel calls a function from n goroutines.
func Parallel(n float64, f func(x float64) float64) float64 {
	out := make([]float64, int(n))
	var wg sync.WaitGroup
	for i := range out {
		wg.Add(1)
		go func() { defer wg.Done(); out[i] = f(float64(i)) }()
	}
	wg.Wait()
	sum := 0.0
	for _, x := range out {
		sum += x
	}
	return sum
}

// Try gives the failure of a function that the vocabulary refused.
func Try(f func()) (err error) {
	defer func() {
		if r := recover(); r != nil {
			e, ok := r.(*Fault)
			if !ok {
				panic(r)
			}
			err = e
		}
	}()
	f()
	return nil
}

// Loads maps names to forces.
type Loads map[string]Newton

// Total adds loads.
func Total(l Loads) Newton {
	sum := 0.0
	for _, x := range l {
		sum += x
	}
	return sum
}

// Kind is a kind of joint.
type Kind int

// The joints.
const (
	Welded Kind = iota
	Riveted
)

// Of gives the factor of a joint for a rod.
func (k Kind) Of(r *Rod) float64 { return float64(k+1) * r.Length }

// String names the joint.
func (k Kind) String() string { return [...]string{"welded", "riveted"}[k] }

// Limit states a value.
func Limit(name string, x float64) string { return LimitWithUnits([]string{"?", "?"}, name, x) }

// LimitWithUnits states a value with the units of the arguments.
func LimitWithUnits(units []string, name string, x float64) string {
	return fmt.Sprintf("%s: %g [%s]", name, x, strings.Join(units, "|"))
}

// Show shows.
func Show(x ...any) {}

// Square is x*x.
func Square(x float64) float64 { return x * x }

var ctx = context.Background()

// SetContext sets what [Wait] polls.
func SetContext(c context.Context) { ctx = c }

// Wait waits; it can be interrupted.
func Wait(t Second) {
	select {
	case <-time.After(time.Duration(t * 1e9)):
	case <-ctx.Done():
		panic(&Fault{"Interrupted", "interrupted"})
	}
}

// Boxed gives a value as any.
func Boxed(x any) string { return fmt.Sprintf("%v", x) }
