package hyst

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// LossPoint is a measured loss under sinusoidal flux.
type LossPoint struct {
	F float64 // frequency in Hz
	B float64 // amplitude of flux density in T
	P float64 // loss, W/m3 or W/kg or W: the same for all points
}

// Separation is a measured loss by where it comes from:
//
//	P = kh f B^n + ke f^2 B^2 + kx (f B)^1.5
type Separation struct {
	Kh, N, Ke, Kx float64
	Worst         float64 // largest relative deviation of a point
	Notes         []magcirc.Note
}

// Separate finds the parts of measured losses. With excess it also looks for the last term; an exponent n other than 0
// is kept, otherwise it is found where the points have two flux densities at least. Points are weighed by their
// relative deviation.
//
// Errors: [magcirc.BadValue] for points that cannot be; [magcirc.OutsideData] where all have one frequency: it does not
// tell the parts apart.
// Source: C. P. Steinmetz 1892 for the first term; G. Bertotti, IEEE Trans. Magn. 24 (1988) 621-630 (from memory).
func Separate(points []LossPoint, n float64, excess bool) (*Separation, error) {
	var fs, bs []float64
	for i, p := range points {
		if !(p.F > 0 && p.B > 0 && p.P > 0) || math.IsInf(p.F+p.B+p.P, 1) {
			return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "loss separation", Got: p.P,
				Msg: fmt.Sprintf("point %d: %s at %s, %s is no loss", i+1, phys.Format(p.P, ""), phys.Format(p.F, "Hz"), phys.Format(p.B, "T"))}
		}
		fs, bs = distinct(fs, p.F), distinct(bs, p.B)
	}
	terms := 2
	if excess {
		terms = 3
	}
	switch {
	case len(fs) == 1:
		return nil, OneFrequency(fs[0], 0)
	case len(fs) < terms:
		return nil, &magcirc.Error{Code: magcirc.OutsideData, Elem: "loss separation", Quantity: "frequencies", Got: float64(len(fs)), Limit: float64(terms),
			Msg: fmt.Sprintf("%d frequencies for %d parts of the loss", len(fs), terms), Hint: fmt.Sprintf("give points at %d frequencies", terms)}
	}
	s := &Separation{N: n}
	if n != 0 {
		s.fit(points, n, terms)
		return s, nil
	}
	s.N = 1.6
	if len(bs) == 1 {
		s.fit(points, s.N, terms)
		s.Notes = append(s.Notes, magcirc.Note{Kind: magcirc.Assumed, Elem: "loss separation",
			Text: fmt.Sprintf("all points have %s: the exponent of B is taken as 1.6", phys.Format(bs[0], "T"))})
		return s, nil
	}
	s.N = golden(func(n float64) float64 { return s.fit(points, n, terms) }, 1, 4)
	s.fit(points, s.N, terms)
	return s, nil
}

// OneFrequency is the refusal to use a loss given at frequency have at another, want (0: any).
func OneFrequency(have, want float64) error {
	other := "at another frequency"
	if want > 0 {
		other = "at " + phys.Format(want, "Hz")
	}
	return &magcirc.Error{Code: magcirc.OutsideData, Elem: "loss separation", Quantity: "frequency", Unit: "Hz", Got: want, Limit: have,
		Msg:  fmt.Sprintf("loss data given at %s, used %s without scaling", phys.Format(have, "Hz"), other),
		Hint: "give points at two frequencies or more"}
}

func distinct(list []float64, x float64) []float64 {
	for _, y := range list {
		if math.Abs(x-y) <= 1e-6*x {
			return list
		}
	}
	return append(list, x)
}

// fit finds the factors for an exponent by least squares of the relative deviations, none below zero, and gives their
// sum of squares.
func (s *Separation) fit(points []LossPoint, n float64, terms int) float64 {
	best := math.Inf(1)
	for drop := range 1 << terms { // the few subsets of terms: those that would turn negative are left out
		keep := make([]int, 0, terms)
		for t := range terms {
			if drop>>t&1 == 0 {
				keep = append(keep, t)
			}
		}
		if len(keep) == 0 {
			continue
		}
		a, b := mat.NewDense(len(points), len(keep), nil), mat.NewVecDense(len(points), nil)
		for i, p := range points {
			term := [3]float64{p.F * math.Pow(p.B, n), p.F * p.F * p.B * p.B, math.Pow(p.F*p.B, 1.5)}
			for c, t := range keep {
				a.Set(i, c, term[t]/p.P)
			}
			b.SetVec(i, 1)
		}
		var x mat.VecDense
		if err := x.SolveVec(a, b); err != nil {
			if _, conditioned := err.(mat.Condition); !conditioned {
				continue
			}
		}
		var k [3]float64
		legal := true
		for c, t := range keep {
			k[t] = x.AtVec(c)
			legal = legal && k[t] >= 0
		}
		if sum, worst := deviation(points, k, n); legal && sum < best*(1-1e-9) {
			best = sum
			s.Kh, s.Ke, s.Kx, s.N, s.Worst = k[0], k[1], k[2], n, worst
		}
	}
	return best
}

func deviation(points []LossPoint, k [3]float64, n float64) (sum, worst float64) {
	for _, p := range points {
		d := (k[0]*p.F*math.Pow(p.B, n)+k[1]*p.F*p.F*p.B*p.B+k[2]*math.Pow(p.F*p.B, 1.5))/p.P - 1
		sum += d * d
		worst = math.Max(worst, math.Abs(d))
	}
	return sum, worst
}

// golden finds the smallest value of f between a and b by the golden section.
func golden(f func(float64) float64, a, b float64) float64 {
	r := (math.Sqrt(5) - 1) / 2
	c, d := b-r*(b-a), a+r*(b-a)
	fc, fd := f(c), f(d)
	for range 80 {
		if fc < fd {
			b, d, fd = d, c, fc
			c = b - r*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = a + r*(b-a)
			fd = f(d)
		}
	}
	return (a + b) / 2
}

// Parts gives the parts of the loss at frequency f and amplitude b, in the unit of the points.
func (s *Separation) Parts(f, b float64) (hysteresis, classical, excess float64) {
	return s.Kh * f * math.Pow(b, s.N), s.Ke * f * f * b * b, s.Kx * math.Pow(f*b, 1.5)
}

// Excess gives the coefficient C of [Sheet] for a separation in W/m3.
func (s *Separation) Excess() float64 { return s.Kx / excessSine }
