package hyst

import (
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// JilesAtherton is a Jiles-Atherton law in either form.
type JilesAtherton struct {
	p Parameters

	// In units of a for fields and Ms for magnetisations:
	alpha float64 // alpha Ms/a
	k     float64 // k/a; Form1986 k (1+c)/a
	c     float64 // reversible share c; Form1986 c/(1+c)
	mu    float64 // Ms/a

	cell  []crossing // Form1992: what a whole cell does to D = M - Man
	etd   []weights  // Form1986: weights of a whole cell, by cell
	rev   []cell     // Form1986: the reversible magnetisation over the cells
	notes []magcirc.Note
}

// crossing takes D over a whole cell upwards: D e - w.
type crossing struct{ e, w float64 }

// NewJilesAtherton gives the Jiles-Atherton law of the parameters. In the effective field x = H + alpha M, with
// Man(x) = Ms L(x/a), L(z) = coth z - 1/z and d the direction of the move,
//
//	Form1992: dM/dx = max(0, d (Man - M))/k + c dMan/dx        (the same as M = (1-c) Mirr + c Man, dMirr/dx = (Man - Mirr)/(k d))
//	Form1986: dM/dx = m/(1 + alpha m), m = [chi/(1 - alpha chi) + c dMan/dx]/(1+c), chi = max(0, d (Man - M))/k
//	H = x - alpha M,   B = mu0 (x + (1-alpha) M)
//
// Where d (Man - M) < 0, after a turning point, M moves reversibly only, so that no slope is negative.
//
// Form1992 is linear in D = M - Man and is solved by its exponential over the intervals of a table at fixed places of
// x/a; Form1986 by an exponential Runge-Kutta step of fourth order over the same intervals, halved where its error
// estimate asks for it. Errors of M: 4e-8 Ms, Form1986 1e-7 Ms.
//
// Valid: quasi-static, isotropic, one axis. Biased minor loops of these equations do not close: they creep towards
// the anhysteretic curve, which real cores do far less ([Minor] reports by how much).
// Errors: [magcirc.BadValue] for k <= 0, c outside 0 to 1 (Form1992) or below 0 (Form1986), Ms <= 0, a <= 0,
// alpha < 0; [magcirc.Implausible]; [magcirc.NoSolution] where the loop folds: below alpha Ms/(3a) = 1 it cannot,
// above the loop is traced and accepted with a note as long as dH/dx > 0.01.
//
// Source: D. C. Jiles and D. L. Atherton, J. Magn. Magn. Mater. 61 (1986) 48-60 (Form1986); D. C. Jiles,
// J. B. Thoelke, M. K. Devine, IEEE Trans. Magn. 28 (1992) 27-35 (Form1992); exponential Runge-Kutta: S. M. Cox and
// P. C. Matthews, J. Comput. Phys. 176 (2002) 430-455. From memory.
func NewJilesAtherton(p Parameters) (*JilesAtherton, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	j := newJilesAtherton(p)
	if err := j.checkFold(); err != nil {
		return nil, err
	}
	return j, nil
}

// newJilesAtherton builds the tables of parameters that are known to be good.
func newJilesAtherton(p Parameters) *JilesAtherton {
	j := &JilesAtherton{p: p, alpha: p.Alpha * p.Ms / p.A, k: p.K / p.A, c: p.C, mu: p.Ms / p.A}
	if p.Form == Form1986 {
		j.k, j.c = j.k*(1+p.C), p.C/(1+p.C)
		j.prepare1986()
	} else {
		j.prepare1992()
	}
	return j
}

// Parameters gives the law's parameters.
func (j *JilesAtherton) Parameters() Parameters { return j.p }

// Notes gives what a reader must know of the law itself.
func (j *JilesAtherton) Notes() []magcirc.Note { return j.notes }

// Describe gives the law in words with its parameters.
func (j *JilesAtherton) Describe() string { return "Jiles-Atherton, " + j.p.String() }

// Knee gives a field strength well into saturation, in A/m.
func (j *JilesAtherton) Knee() float64 { return 8*j.p.A + 3*j.p.K }

// Start gives the demagnetised state.
func (j *JilesAtherton) Start() State { return State{cell: nodes + 1} }

// Commit makes p the committed state.
func (j *JilesAtherton) Commit(s *State, p Point) { s.x, s.m, s.cell = p.x, p.m, p.cell }

// Now gives the committed point with the reversible slope.
func (j *JilesAtherton) Now(s *State) Point {
	_, chi := j.reversible(s.cell, s.x)
	return j.point(s.x, s.m, chi, s.cell)
}

// ByEffective gives the point at effective field x in A/m.
func (j *JilesAtherton) ByEffective(s *State, x float64) Point { return j.reach(s, 0, x/j.p.A) }

// ByField gives the point at field strength h in A/m.
func (j *JilesAtherton) ByField(s *State, h float64) Point { return j.reach(s, -j.alpha, h/j.p.A) }

// ByFluxDensity gives the point at flux density b in T.
func (j *JilesAtherton) ByFluxDensity(s *State, b float64) Point { return j.ByMix(s, 0, b) }

// ByMix gives the point at which B + mu0 r H = b, in T.
func (j *JilesAtherton) ByMix(s *State, r, b float64) Point {
	f := 1 / (1 + r)
	return j.reach(s, j.mu*f-j.alpha, b*f/(phys.Mu0*j.p.A))
}

// point gives the point at reduced effective field x, magnetisation m and slope chi = dm/dx.
func (j *JilesAtherton) point(x, m, chi float64, i int) Point {
	mu0a := phys.Mu0 * j.p.A
	return Point{
		X: j.p.A * x, H: j.p.A * (x - j.alpha*m), B: mu0a * (x + (j.mu-j.alpha)*m),
		DH: 1 - j.alpha*chi, DB: phys.Mu0 * (1 + (j.mu-j.alpha)*chi),
		x: x, m: m, cell: i,
	}
}

// reach gives the point at which x + beta m, in reduced units, is goal: a monotone move, upwards after turning the
// signs of everything where it goes down.
func (j *JilesAtherton) reach(s *State, beta, goal float64) Point {
	x, m, i := s.x, s.m, s.cell
	switch now := x + beta*m; {
	case goal > now:
		x, m, chi, i := j.up(x, m, i, beta, goal)
		return j.point(x, m, chi, i)
	case goal < now:
		x, m, i = -x, -m, mirror(i)
		if i < last && x >= langevin[i+1].z0 { // on a place of the table: the cell ahead, whose cubic is exact there
			i++
		}
		x, m, chi, i := j.up(x, m, i, beta, -goal)
		return j.point(-x, -m, chi, mirror(i))
	}
	return j.Now(s)
}

// up goes upwards from (x, m) in cell i to where x + beta m = goal, and gives that point, dm/dx there and its cell.
func (j *JilesAtherton) up(x, m float64, i int, beta, goal float64) (x1, m1, chi float64, i1 int) {
	l, _ := at(i, x)
	d := m - l
	if d > 0 {
		var done bool
		if x, m, chi, i, done = j.guard(x, m, i, beta, goal); done {
			return x, m, chi, i
		}
		d = 0
	}
	return j.slip(x, d, i, beta, goal)
}

// slip goes upwards with Man above M, d = M - Man <= 0: whole cells while the goal lies beyond them, then into one.
func (j *JilesAtherton) slip(x, d float64, i int, beta, goal float64) (x1, m1, chi float64, i1 int) {
	for ; i < last; i++ {
		next := &langevin[i+1]
		whole := i > first && x == langevin[i].z0
		var end float64
		switch {
		case whole && j.cell != nil:
			end = d*j.cell[i].e - j.cell[i].w
		case beta == 0:
			if goal <= next.z0 {
				return j.into(i, x, d, goal)
			}
			end = j.slide(i, x, d, next.z0, next.z0)
		default:
			var ok bool
			if x1, m1, chi, end, ok = j.within(i, x, d, next.z0, beta, goal); ok {
				return x1, m1, chi, i
			}
			x, d = next.z0, end
			continue
		}
		if next.z0+beta*(next.l+end) >= goal {
			if beta == 0 {
				return j.into(i, x, d, goal)
			}
			x1, m1, chi, _, _ = j.within(i, x, d, next.z0, beta, goal)
			return x1, m1, chi, i
		}
		x, d = next.z0, end
	}
	if beta == 0 {
		return j.into(last, x, d, goal)
	}
	x1, m1, chi, _, _ = j.within(last, x, d, math.Abs(goal)+math.Abs(beta)+1, beta, goal)
	return x1, m1, chi, last
}

// into goes from x to x1 within cell i.
func (j *JilesAtherton) into(i int, x, d, x1 float64) (_, m1, chi float64, i1 int) {
	end := math.Inf(1)
	if i < last {
		end = langevin[i+1].z0
	}
	d = j.slide(i, x, d, end, x1)
	l, a := at(i, x1)
	return x1, l + d, j.slope(d, a), i
}

// within looks for the goal between x and end of cell i by Newton steps in a bracket. Where it lies beyond the end, ok
// is false and dEnd is d there.
func (j *JilesAtherton) within(i int, x, d, end, beta, goal float64) (x1, m1, chi, dEnd float64, ok bool) {
	const eps = 4 * 0x1p-52
	l, a := at(i, x)
	chi = j.slope(d, a)
	lo, hi, closed := x, end, false
	v := x + (goal-x-beta*(l+d))/(1+beta*chi)
	for range 100 {
		switch {
		case v >= hi && !closed:
			v = end
		case !(v > lo && v < hi):
			v = lo + (hi-lo)/2
		}
		dv := j.slide(i, x, d, end, v)
		l, a = at(i, v)
		x1, m1, chi = v, l+dv, j.slope(dv, a)
		f := v + beta*m1 - goal
		if v == end && f < 0 {
			return x1, m1, chi, dv, false
		}
		step := -f / (1 + beta*chi)
		if math.Abs(f) <= eps*(math.Abs(v)+math.Abs(beta)*(math.Abs(l)-dv)) {
			break
		}
		if step*step <= 1e-17*math.Min(1, j.k)*(v-x) && v+step > lo && v+step < end { // what is left is its square
			return v + step, m1 + chi*step, chi, 0, true
		}
		if f > 0 {
			hi, closed = v, true
		} else {
			lo = v
		}
		if v += step; v == x1 || hi-lo <= 0x1p-52*math.Abs(hi) {
			break
		}
	}
	return x1, m1, chi, 0, true
}

// slope gives dm/dx for d = M - Man <= 0 and a = dMan/dx.
func (j *JilesAtherton) slope(d, a float64) float64 {
	if j.etd != nil {
		return j.total(d, a)
	}
	return math.Max(0, -d)/j.k + j.c*a
}

// slide gives d at x1 from d at x, both in cell i and x <= x1 <= end; end is where the move within the cell may end at
// the most.
func (j *JilesAtherton) slide(i int, x, d, end, x1 float64) float64 {
	if j.etd != nil {
		return j.slide1986(i, x, d, end, x1)
	}
	return j.slide1992(i, x, d, x1)
}

// Anhysteretic gives the flux density in T of the curve without memory, M = Ms L((H + alpha M)/a); where that curve
// folds (alpha Ms/(3a) above 1), its upper branch.
func (j *JilesAtherton) Anhysteretic(h float64) float64 {
	z := math.Abs(h) / j.p.A
	x := num.Root(func(x float64) (float64, float64) {
		l, a := num.Langevin(x)
		return x - j.alpha*l - z, math.Max(1-j.alpha*a, 1e-3)
	}, z, z+j.alpha, z+j.alpha, 1e-14)
	l, _ := num.Langevin(x)
	return phys.Mu0 * math.Copysign(math.Abs(h)+j.p.Ms*l, h)
}
