package hyst_test

import (
	"math"
	"math/rand"
	"os"
	"strconv"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// anyLaw draws a law: Jiles-Atherton in both forms with alpha up to 0.95 of its bound, and play laws.
func anyLaw(t *rapid.T) hyst.Law {
	a := math.Pow(10, rapid.Float64Range(0, 4).Draw(t, "lg a"))
	ms := math.Pow(10, rapid.Float64Range(5, 6.2).Draw(t, "lg Ms"))
	if rapid.IntRange(0, 2).Draw(t, "kind") == 0 {
		n := rapid.IntRange(1, 12).Draw(t, "cells")
		cells := make([]hyst.PlayCell, n)
		for i := range cells {
			cells[i] = hyst.PlayCell{Ms: ms / float64(n), A: a * rapid.Float64Range(0.2, 5).Draw(t, "a"), Kappa: a * rapid.Float64Range(0, 6).Draw(t, "kappa")}
		}
		l, err := hyst.NewPlay(cells...)
		if err != nil {
			t.Fatal(err)
		}
		return l
	}
	p := hyst.Parameters{Ms: ms, A: a, K: a * math.Pow(10, rapid.Float64Range(-1, 1).Draw(t, "lg k/a")), C: rapid.Float64Range(0, 1).Draw(t, "c")}
	p.Alpha = math.Min(0.5, rapid.Float64Range(0, 0.95).Draw(t, "ratio")*3*a/ms)
	if rapid.Bool().Draw(t, "Form1986") {
		p.Form, p.C = hyst.Form1986, p.C*3
	}
	l, err := hyst.NewJilesAtherton(p)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// anyState draws a history and gives the state after it.
func anyState(t *rapid.T, l hyst.Law) hyst.State {
	s := l.Start()
	for range rapid.IntRange(0, 8).Draw(t, "moves") {
		l.Commit(&s, l.ByField(&s, anyField(t, l)))
	}
	return s
}

// anyField draws a field strength from a thousandth of the knee to ten times it, of either sign.
func anyField(t *rapid.T, l hyst.Law) float64 {
	h := l.Knee() * math.Pow(10, rapid.Float64Range(-3, 1).Draw(t, "lg H"))
	if rapid.Bool().Draw(t, "sign") {
		return -h
	}
	return h
}

func TestDrivesAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLaw(t)
		s := anyState(t, l)
		h := anyField(t, l)
		p := l.ByField(&s, h)
		if math.Abs(p.H-h) > 1e-11*math.Abs(h)+1e-13*l.Knee() {
			t.Fatalf("asked for %v A/m, got %v", h, p.H)
		}
		q := l.ByFluxDensity(&s, p.B)
		// B determines H to its own rounding over the slope
		if tol := 1e-11*math.Abs(h) + 1e-12*math.Abs(p.B)/p.Slope() + 1e-9*l.Knee(); math.Abs(q.H-h) > tol {
			t.Fatalf("H %v, by its flux density %v", h, q.H)
		}
		x := l.ByEffective(&s, p.X)
		if math.Abs(x.B-p.B) > 1e-12*math.Abs(p.B)+1e-13 {
			t.Fatalf("B %v, by its effective field %v", p.B, x.B)
		}
		r := rapid.Float64Range(0, 10).Draw(t, "air")
		mix := l.ByMix(&s, r, p.B+phys.Mu0*r*p.H)
		if tol := 1e-11*math.Abs(h) + 1e-12*math.Abs(p.B)/p.Slope() + 1e-9*l.Knee(); math.Abs(mix.H-h) > tol {
			t.Fatalf("H %v, beside air %v", h, mix.H)
		}
	})
}

// A trial is a continuous, rising function of its end, also across turning point, end of the reversible move and places
// of the table; its slopes are those that it has.
func TestTrialsAreContinuousAndMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLaw(t)
		s := anyState(t, l)
		now := l.Now(&s)
		x := anyField(t, l)
		if rapid.Bool().Draw(t, "near") { // around the turning point
			x = now.X + 1e-3*x
		}
		step := l.Knee() * math.Pow(10, rapid.Float64Range(-9, -3).Draw(t, "lg step"))
		p, q := l.ByEffective(&s, x), l.ByEffective(&s, x+step)
		w := q.X - p.X
		rise := q.B - p.B
		noise := 1e-14*math.Abs(p.B) + 1e-14
		if rise < phys.Mu0*w*(1-1e-3)-noise {
			t.Fatalf("from %v to %v A/m B rises by %v T, less than air", p.X, q.X, rise)
		}
		if q.H < p.H-1e-13*math.Abs(p.X)-noise/phys.Mu0 {
			t.Fatalf("from %v to %v H goes back from %v to %v", p.X, q.X, p.H, q.H)
		}
		_, f1986 := l.(*hyst.JilesAtherton)
		f1986 = f1986 && l.(*hyst.JilesAtherton).Parameters().Form == hyst.Form1986
		most := math.Max(math.Max(p.DB, q.DB), now.DB)
		if j, ok := l.(*hyst.JilesAtherton); ok {
			most = phys.Mu0 * (1 + j.Parameters().Ms/(3*j.Parameters().A)) // the largest slope that there is
		}
		if play, ok := l.(*hyst.Play); ok {
			most = phys.Mu0
			for _, c := range play.Cells() {
				most += phys.Mu0 * c.Ms / (3 * c.A)
			}
		}
		if tol := noise; rise > most*w*(1+1e-6)+tol {
			t.Fatalf("from %v to %v A/m B jumps by %v T; the largest slope allows %v", p.X, q.X, rise, most*w)
		}
		if f1986 {
			return // its slopes are those of the equation, met to the error of the step
		}
		lo, hi := math.Min(p.DB, q.DB), math.Max(p.DB, q.DB)
		if between := (p.X-now.X)*(q.X-now.X) > 0; between && hi < 1.01*lo && (rise > hi*w*1.02+noise || rise < lo*w*0.98-noise) {
			t.Fatalf("from %v to %v A/m B rises by %v T, its slopes say %v to %v", p.X, q.X, rise, lo*w, hi*w)
		}
	})
}

// A monotone move is the same in one piece and in two.
func TestMovesAdd(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLaw(t)
		s := anyState(t, l)
		h, w := anyField(t, l), rapid.Float64Range(0, 1).Draw(t, "share")
		whole := l.ByField(&s, h)
		from := l.Now(&s)
		half := l.ByField(&s, from.H+w*(h-from.H))
		work := l.Work(&s, half)
		two := s.Clone()
		l.Commit(&two, half)
		end := l.ByField(&two, h)
		tol := 1e-11
		if j, ok := l.(*hyst.JilesAtherton); ok && j.Parameters().Form == hyst.Form1986 {
			tol = 1e-6
		}
		top := 2 * phys.Mu0 * 1e6
		if math.Abs(whole.B-end.B) > tol*top {
			t.Fatalf("B %v in one move, %v in two", whole.B, end.B)
		}
		sum, once := work+l.Work(&two, end), l.Work(&s, whole)
		if scale := math.Abs(once) + math.Abs(work) + l.Knee()*top*1e-1; math.Abs(sum-once) > math.Max(10*tol, 1e-6)*scale {
			t.Fatalf("work %v in one move, %v in two", once, sum)
		}
	})
}

// Steady loops, and closed cycles of any kind, never give energy; the area by the slope-corrected rule is the work of the
// law around the loop.
func TestLoopsNeverGiveEnergy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := anyLaw(t)
		peak := math.Abs(anyField(t, l))
		loop, err := hyst.Steady(l, peak, &hyst.Settings{Cycles: 300000})
		if err != nil {
			t.Fatal(err)
		}
		area := loop.Area()
		if area < -1e-12*peak*loop.Peak() {
			t.Fatalf("area %v J/m3 at %v A/m", area, peak)
		}
		s := l.Start()
		l.Commit(&s, l.ByField(&s, peak))
		for range loop.Cycles + 1 {
			l.Commit(&s, l.ByField(&s, -peak))
			l.Commit(&s, l.ByField(&s, peak))
		}
		down := l.ByField(&s, -peak)
		work := l.Work(&s, down)
		l.Commit(&s, down)
		work += l.Work(&s, l.ByField(&s, peak))
		if math.Abs(work-area) > 2e-4*area+1e-7*peak*loop.Peak() {
			t.Fatalf("area %v J/m3 by the points, %v by the law", area, work)
		}
	})
}

// No slope is negative on random histories; ten thousand moves, or as many as AMPTURN_HISTORIES says.
func TestNoNegativeSlope(t *testing.T) {
	moves := 10000
	if n, err := strconv.Atoi(os.Getenv("AMPTURN_HISTORIES")); err == nil {
		moves = n
	}
	r := rand.New(rand.NewSource(11))
	for done := 0; done < moves; {
		p := truth(r)
		if r.Intn(3) == 0 {
			p.Form = hyst.Form1986
		}
		var l hyst.Law = law(t, p)
		most := phys.Mu0 * (1 + (1-p.Alpha)*p.Ms/(3*p.A)) // no slope is above that of the anhysteretic curve at zero
		s := l.Start()
		for range 50 {
			h := p.A * math.Pow(10, 3*r.Float64()-1.5) * float64(2*r.Intn(2)-1)
			q := l.ByField(&s, h)
			done++
			if !(q.DB >= phys.Mu0*(1-1e-12) && q.DH > 0 && q.DB <= most*(1+1e-9)) {
				t.Fatalf("%v: at %v A/m dB/dx %v, dH/dx %v (largest dB/dx %v)", p, h, q.DB, q.DH, most)
			}
			l.Commit(&s, q)
		}
	}
}

// Over a closed cycle the heat of play cells is the integral of H dB, by Gauss's rule between the fields at which the next
// cell begins to move; stored energy returns to what it was.
func TestPlayHeatIsLoopArea(t *testing.T) {
	r := rand.New(rand.NewSource(5))
	for range 50 {
		n := 1 + r.Intn(10)
		cells := make([]hyst.PlayCell, n)
		for i := range cells {
			cells[i] = hyst.PlayCell{Ms: 5e4, A: 5 + 50*r.Float64(), Kappa: 40 * r.Float64()}
		}
		l, err := hyst.NewPlay(cells...)
		if err != nil {
			t.Fatal(err)
		}
		hi, lo := 20+100*r.Float64(), 15-100*r.Float64()
		s := l.Start()
		l.Commit(&s, l.ByField(&s, hi))
		l.Commit(&s, l.ByField(&s, lo))
		l.Commit(&s, l.ByField(&s, hi))
		heat, stored := l.Dissipated(&s), l.Stored(&s)
		area := 0.0
		for _, end := range []float64{lo, hi} {
			area += integral(l, &s, end, cells)
			l.Commit(&s, l.ByField(&s, end))
		}
		lost := l.Dissipated(&s) - heat
		if math.Abs(area-lost) > 1e-9*lost {
			t.Errorf("heat %v J/m3, integral of H dB %v", lost, area)
		}
		if math.Abs(l.Stored(&s)-stored) > 1e-12*stored {
			t.Errorf("stored energy %v, one cycle later %v", stored, l.Stored(&s))
		}
		loop, err := hyst.SteadyBetween(l, l.Start(), lo, hi, nil)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "area of the loop", loop.Area(), lost, 1e-12)
	}
}

// integral gives the integral of H dB from the state to a field, with panels (short beside the places of the table of L) that end where cells of a steady loop begin
// to move: 2 kappa behind the tip.
func integral(l hyst.Law, s *hyst.State, end float64, cells []hyst.PlayCell) float64 {
	from := l.Now(s).H
	d := math.Copysign(1, end-from)
	ends := []float64{from, end}
	for _, c := range cells {
		if h := from + 2*d*c.Kappa; (end-h)*d > 0 {
			ends = append(ends, h)
		}
	}
	sortBy(ends, d)
	sum := 0.0
	for i := 1; i < len(ends); i++ {
		const panels = 200
		for k := range panels {
			a := ends[i-1] + (ends[i]-ends[i-1])*float64(k)/panels
			b := ends[i-1] + (ends[i]-ends[i-1])*float64(k+1)/panels
			for q, x := range []float64{-0.9061798459386640, -0.5384693101056831, 0, 0.5384693101056831, 0.9061798459386640} {
				p := l.ByField(s, (a+b)/2+(b-a)/2*x)
				sum += []float64{0.2369268850561891, 0.4786286704993665, 0.5688888888888889, 0.4786286704993665, 0.2369268850561891}[q] * (b - a) / 2 * p.H * p.DB
			}
		}
	}
	return sum
}

func sortBy(x []float64, d float64) {
	for i := range x {
		for j := i; j > 0 && (x[j-1]-x[j])*d > 0; j-- {
			x[j-1], x[j] = x[j], x[j-1]
		}
	}
}

// Play cells remember return points: after a minor loop of any depth the path goes on as if it had not been.
func TestPlayReturnPointMemory(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var l hyst.Law
		for {
			if p, ok := anyLaw(t).(*hyst.Play); ok {
				l = p
				break
			}
		}
		s := l.Start()
		k := l.Knee()
		l.Commit(&s, l.ByField(&s, k))
		h := rapid.Float64Range(-0.9, 0.9).Draw(t, "turn") * k
		l.Commit(&s, l.ByField(&s, h))
		before := l.Now(&s)
		back := rapid.Float64Range(0, 1).Draw(t, "back")
		l.Commit(&s, l.ByField(&s, h+back*(k-h)))
		l.Commit(&s, l.ByField(&s, h))
		if after := l.Now(&s); math.Abs(after.B-before.B) > 1e-13 {
			t.Fatalf("B %v before the minor loop, %v after", before.B, after.B)
		}
	})
}
