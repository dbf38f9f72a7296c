package hyst_test

import (
	"math"
	"testing"
	"time"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/internal/num"
)

// rungeKutta is Form1992 by the classical method of fourth order in H, n steps a sample: what the exponential map stands
// beside.
type rungeKutta struct{ p hyst.Parameters }

func (r *rungeKutta) slope(h, m, d float64) float64 {
	l, dl := num.Langevin((h + r.p.Alpha*m) / r.p.A)
	man, dman := r.p.Ms*l, r.p.Ms/r.p.A*dl
	x := math.Max(0, d*(man-m))/r.p.K + r.p.C*dman // (1-c)(Man - Mirr) = Man - M
	return x / (1 - r.p.Alpha*x)
}

func (r *rungeKutta) move(h, m, to float64, n int) float64 {
	step, d := (to-h)/float64(n), math.Copysign(1, to-h)
	for range n {
		a := r.slope(h, m, d)
		b := r.slope(h+step/2, m+step/2*a, d)
		c := r.slope(h+step/2, m+step/2*b, d)
		e := r.slope(h+step, m+step*c, d)
		m += step / 6 * (a + 2*b + 2*c + e)
		h += step
	}
	return m
}

// loopSamples are 128 samples of a cycle of H, evenly in its angle.
func loopSamples(peak float64) []float64 {
	h := make([]float64, 128)
	for i := range h {
		h[i] = peak * math.Cos(2*math.Pi*float64(i)/float64(len(h)))
	}
	return h
}

// The exponential map is at least three times as fast as Runge-Kutta steps that come as near to the truth, sample by
// sample driven by H; both timed here, the best of several runs.
func TestFasterThanRungeKutta(t *testing.T) {
	if raceDetector {
		t.Skip("times mean nothing under the race detector")
	}
	l := law(t, ferrite)
	r := &rungeKutta{ferrite}
	for _, peak := range []float64{30, 100, 400} {
		h := loopSamples(peak)
		start := l.Start()
		l.Commit(&start, l.ByField(&start, peak))
		m0 := magnetisation(l.Now(&start))
		run := func(n int) []float64 { // Runge-Kutta
			m, out := m0, make([]float64, len(h))
			for i := range h {
				m = r.move(h[i], m, h[(i+1)%len(h)], n)
				out[i] = m
			}
			return out
		}
		ours := func(out []float64) {
			s := start.Clone()
			for i := range h {
				p := l.ByField(&s, h[(i+1)%len(h)])
				l.Commit(&s, p)
				out[i] = magnetisation(p)
			}
		}
		truth, got := run(20000), make([]float64, len(h))
		ours(got)
		own := apart(got, truth) / ferrite.Ms
		n := 1
		for ; n < 4096 && apart(run(n), truth)/ferrite.Ms > math.Max(own, 1e-6); n *= 2 {
		}
		slow, fast := best(func() { run(n) }), best(func() { ours(got) })
		t.Logf("to %v A/m: error of M %.1e Ms in %v a sample; Runge-Kutta with %d steps a sample %.1e Ms in %v: ratio %.1f",
			peak, own, fast/128, n, apart(run(n), truth)/ferrite.Ms, slow/128, float64(slow)/float64(fast))
		if own > 1e-7 {
			t.Errorf("to %v A/m: error %.1e Ms", peak, own)
		}
		if float64(slow) < 3*float64(fast) {
			t.Errorf("to %v A/m: only %.1f times as fast", peak, float64(slow)/float64(fast))
		}
	}
}

func magnetisation(p hyst.Point) float64 { return p.B/(4e-7*math.Pi) - p.H }

func apart(a, b []float64) float64 {
	most := 0.0
	for i := range a {
		most = math.Max(most, math.Abs(a[i]-b[i]))
	}
	return most
}

// best gives the shortest time of 20 runs.
func best(f func()) time.Duration {
	least := time.Hour
	for range 20 {
		begin := time.Now()
		f()
		least = min(least, time.Since(begin))
	}
	return least
}
