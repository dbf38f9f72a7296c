package hyst

import (
	"math"

	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// For M above or on the way to Man, D = M - Man obeys the linear equation
//
//	dD/dx = -D/k - (1-c) dMan/dx    (moving upwards)
//	D(x+h) = D exp(-h/k) - (1-c) integral of exp(-(h-t)/k) Man'(x+t) dt
//
// and with the cubic of a cell Man' is quadratic, so that the integral is exact by Filon's rule.

// prepare1992 sets what every whole cell does.
func (j *JilesAtherton) prepare1992() {
	j.cell = make([]crossing, last+1)
	for i := nodes + 1; i <= cells; i++ {
		c, back := &langevin[i], &langevin[mirror(i)]
		h := langevin[i+1].z0 - c.z0
		e, p1, p2, p3 := num.Phi(h / j.k)
		j.cell[i] = crossing{e, j.average(c, 0, h, p1, p2, p3)}
		j.cell[mirror(i)] = crossing{e, j.average(back, 0, h, p1, p2, p3)}
	}
}

// average is (1-c) times the integral of exp(-(h-t)/k) Man' dt over h from v above the lower end of a cell.
func (j *JilesAtherton) average(c *cell, v, h, p1, p2, p3 float64) float64 {
	return (1 - j.c) * h * ((c.c1+v*(2*c.c2+3*c.c3*v))*p1 + h*((2*c.c2+6*c.c3*v)*p2+h*3*c.c3*p3))
}

// slide1992 takes d from x to x1 within cell i.
func (j *JilesAtherton) slide1992(i int, x, d, x1 float64) float64 {
	h := x1 - x
	e, p1, p2, p3 := num.Phi(h / j.k)
	if i == first || i == last { // Man' taken as even: what is left of it is below 1e-7 of Ms
		l0, _ := at(i, x)
		l1, _ := at(i, x1)
		return d*e - (1-j.c)*(l1-l0)*p1
	}
	return d*e - j.average(&langevin[i], x-langevin[i].z0, h, p1, p2, p3)
}

// Work is the integral of H dB in J/m3 on the move from the committed state to its trial p. With B = mu0 (x +
// (1-alpha) M) and H = x - alpha M it needs the integral of M dx, which Form1992 has in closed form:
//
//	reversible: D = M0 - c Man0 - (1-c) Man      then: integral of D dx = -k [D + (1-c) Man] between the ends
//
// Form1986 is integrated by Gauss's rule.
func (j *JilesAtherton) Work(s *State, p Point) float64 {
	if j.p.Form == Form1986 {
		return j.quadrature(s, p)
	}
	x0, m0, i, x1, m1 := s.x, s.m, s.cell, p.x, p.m
	if x1 < x0 {
		x0, m0, i, x1, m1 = -x0, -m0, mirror(i), -x1, -m1
	}
	area := num.LangevinIntegral(x1) - num.LangevinIntegral(x0)
	x, d := x0, 0.0
	l, _ := at(i, x0)
	if m0 > l {
		free := m0 - j.c*l
		if x = j.guardEnd(x0, i, free); x > x1 {
			x = x1
		}
		area += free*(x-x0) - (1-j.c)*(num.LangevinIntegral(x)-num.LangevinIntegral(x0))
		g := find(x)
		l, _ = at(g, x)
	} else {
		d = m0 - l
	}
	if x < x1 {
		l1, _ := at(find(x1), x1)
		area -= j.k * (m1 - l1 - d + (1-j.c)*(l1-l))
	}
	// integral of (x - alpha m)(dx + (mu - alpha) dm), in units of mu0 a^2
	beta := j.mu - j.alpha
	w := (x1*x1-x0*x0)/2 - j.alpha*beta*(m1*m1-m0*m0)/2 + beta*(x1*m1-x0*m0-area) - j.alpha*area
	return phys.Mu0 * j.p.A * j.p.A * w
}

// quadrature integrates H dB from the committed state to p over the cells of the table on the way.
func (j *JilesAtherton) quadrature(from *State, p Point) float64 {
	s, sum := *from, 0.0
	panel := func(next Point) {
		half := (next.X - s.x*j.p.A) / 2
		for q, t := range gaussNode {
			at := j.ByEffective(&s, s.x*j.p.A+half*(1+t))
			sum += gaussWeight[q] * half * at.H * at.DB
		}
	}
	if turn := j.turnEnd(from, p.x); turn != p.x { // the second derivative jumps where the reversible move ends
		j.follow(&s, turn, panel)
	}
	j.follow(&s, p.x, panel)
	return sum
}

// Gauss's rule of five points. Source: Abramowitz and Stegun 1964, table 25.4.
var (
	gaussNode   = [5]float64{-0.9061798459386640, -0.5384693101056831, 0, 0.5384693101056831, 0.9061798459386640}
	gaussWeight = [5]float64{0.2369268850561891, 0.4786286704993665, 0.5688888888888889, 0.4786286704993665, 0.2369268850561891}
)

// turnEnd gives the reduced effective field at which the reversible move from the state towards x ends, x at the
// furthest.
func (j *JilesAtherton) turnEnd(s *State, x float64) float64 {
	x0, m0, i, sign := s.x, s.m, s.cell, 1.0
	if x < x0 {
		x0, m0, i, sign = -x0, -m0, mirror(i), -1
	}
	if l, _ := at(i, x0); m0 <= l {
		return s.x
	}
	r, _ := j.reversible(i, x0)
	return sign * math.Min(sign*x, j.guardEnd(x0, i, m0-r))
}

// guardEnd gives the effective field at which the reversible move up from x ends: L - R = free, with R the reversible
// magnetisation; +Inf where it does not.
func (j *JilesAtherton) guardEnd(x float64, i int, free float64) float64 {
	for ; i <= last; i++ {
		end := math.Inf(1)
		if i < last {
			end = langevin[i+1].z0
			if r, _ := j.reversible(i+1, end); langevin[i+1].l-r <= free {
				x = end
				continue
			}
		} else if r, _ := j.reversible(last, 1e30); 1-r <= free {
			return end
		} else {
			end = 1e30
		}
		return num.Root(func(v float64) (float64, float64) {
			l, a := at(i, v)
			r, b := j.reversible(i, v)
			return l - r - free, a - b
		}, x, end, x, 1e-15)
	}
	return math.Inf(1)
}
