package hyst

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Record is a measurement to which a law is fitted: field strengths in A/m and flux densities in T in the order in
// which they were passed.
type Record struct {
	Name   string
	H, B   []float64
	Cyclic bool    // a closed loop in its steady state; otherwise it begins in the demagnetised state
	Weight float64 // of the record among the others; 0: 1
}

// Record gives the loop as a record.
func (l *Loop) Record() Record { return Record{Name: l.Name, H: l.H, B: l.B, Cyclic: true} }

func (r *Record) elem() string {
	if r.Name == "" {
		return "record"
	}
	return r.Name
}

func (r *Record) check() error {
	e := &magcirc.Error{Code: magcirc.BadValue, Elem: r.elem(), Quantity: "points", Got: float64(len(r.H))}
	if len(r.H) != len(r.B) {
		e.Msg, e.Hint = fmt.Sprintf("%d values of H and %d of B", len(r.H), len(r.B)), "each point wants both"
		return e
	}
	if len(r.H) < 4 {
		e.Msg, e.Hint = fmt.Sprintf("%d points determine no law", len(r.H)), "give more"
		return e
	}
	swing := 0.0
	for i := range r.H {
		if math.IsNaN(r.H[i]+r.B[i]) || math.IsInf(r.H[i]+r.B[i], 0) {
			e.Msg = fmt.Sprintf("point %d: H %s, B %s is no point", i+1, phys.Format(r.H[i], "A/m"), phys.Format(r.B[i], "T"))
			return e
		}
		swing = math.Max(swing, math.Abs(r.B[i]))
	}
	if swing == 0 {
		e.Msg = "B is zero all the way"
		return e
	}
	return nil
}

// peak gives the largest |B| in T.
func (r *Record) peak() float64 {
	p := 0.0
	for _, b := range r.B {
		p = math.Max(p, math.Abs(b))
	}
	return p
}

// simulate sets b to the flux densities in T that the law has at the record's field strengths. A closed loop is cycled
// between its tips until they stay, 50 times at most.
func (r *Record) simulate(law Law, b []float64) {
	s := law.Start()
	n, start := len(r.H), 0
	if r.Cyclic {
		low := 0
		for i, h := range r.H {
			if h > r.H[start] {
				start = i
			}
			if h < r.H[low] {
				low = i
			}
		}
		top := law.ByField(&s, r.H[start])
		law.Commit(&s, top)
		for range 50 {
			law.Commit(&s, law.ByField(&s, r.H[low]))
			next := law.ByField(&s, r.H[start])
			law.Commit(&s, next)
			change := math.Abs(next.B - top.B)
			top = next
			if change <= 1e-9*math.Abs(top.B) {
				break
			}
		}
	}
	for k := range n {
		i := start + k
		if i >= n {
			i -= n
		}
		p := law.ByField(&s, r.H[i])
		law.Commit(&s, p)
		b[i] = p.B
	}
}
