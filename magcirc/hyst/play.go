package hyst

import (
	"fmt"
	"math"
	"slices"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// PlayCell is one cell of the play law: a share of the magnetisation that follows the field with dry friction.
type PlayCell struct {
	Ms    float64 // its share of the saturation magnetisation in A/m
	A     float64 // shape of its reversible curve in A/m
	Kappa float64 // its friction in A/m, >= 0: what its field lags behind H
}

// Play is the energy-based law of play cells.
type Play struct {
	name string
	cell []PlayCell // by rising friction
	ms   float64    // A/m, all cells
	knee float64    // A/m: beyond it every cell is all but saturated
}

// NewPlay gives the play law of the cells. Each cell k has a reversible field that H drags along,
//
//	hr_k <- the nearest to hr_k of [H - kappa_k, H + kappa_k],   M = sum of Ms_k L(hr_k/a_k),   B = mu0 (H + M)
//
// so that the energy mu0 Ms_k (hr L - a ln(sinh(hr/a)/(hr/a))) is stored and mu0 kappa_k |dM_k| is turned to heat. One
// cell driven beyond kappa has coercivity kappa (of M), remanence Ms L(kappa/a) and the loss 4 kappa mu0 M(Hm - kappa)
// per cycle. Minor loops close at once and return points are remembered.
//
// Valid: quasi-static, one axis. Errors: [magcirc.BadValue] for no cell, Ms <= 0, a <= 0, kappa < 0;
// [magcirc.Implausible] for a saturation above 3 T.
// Source: A. Bergqvist, Physica B 233 (1997) 342-347; F. Henrotte, A. Nicolet, K. Hameyer, COMPEL 25 (2006) 71-80.
// From memory.
func NewPlay(cells ...PlayCell) (*Play, error) { return NewNamedPlay("", cells...) }

// NewNamedPlay is [NewPlay] with a name for messages.
func NewNamedPlay(name string, cells ...PlayCell) (*Play, error) {
	p := &Play{name: name, cell: slices.Clone(cells)}
	if len(cells) == 0 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: p.elem(), Msg: "there is no cell", Hint: "give one or more: PlayCell{Ms: 3.8e5, A: 20, Kappa: 12}"}
	}
	for i, c := range cells {
		if err := p.check(i, c); err != nil {
			return nil, err
		}
		p.ms += c.Ms
		p.knee = math.Max(p.knee, 8*c.A+3*c.Kappa)
	}
	if p.ms > mostMs {
		return nil, &magcirc.Error{Code: magcirc.Implausible, Elem: p.elem(), Quantity: "Ms", Unit: "A/m", Got: p.ms, Limit: mostMs,
			Msg:  fmt.Sprintf("the cells together have Ms %s, above that of any material (%s)", phys.Format(p.ms, "A/m"), phys.Format(mostMs, "A/m")),
			Hint: "give each cell its share"}
	}
	slices.SortStableFunc(p.cell, func(a, b PlayCell) int {
		switch {
		case a.Kappa < b.Kappa:
			return -1
		case a.Kappa > b.Kappa:
			return 1
		}
		return 0
	})
	return p, nil
}

func (p *Play) elem() string {
	if p.name == "" {
		return "play law"
	}
	return fmt.Sprintf("play law %q", p.name)
}

func (p *Play) check(i int, c PlayCell) error {
	for _, q := range [...]struct {
		name string
		x    float64
		ok   bool
		rule string
	}{
		{"Ms", c.Ms, c.Ms > 0, "Ms <= 0"},
		{"a", c.A, c.A > 0, "a <= 0"},
		{"kappa", c.Kappa, c.Kappa >= 0, "kappa < 0"},
	} {
		if !q.ok || math.IsInf(q.x, 1) {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: p.elem(), Quantity: q.name, Unit: "A/m", Got: q.x,
				Msg: fmt.Sprintf("cell %d: %s (it is %s)", i+1, q.rule, phys.Format(q.x, "A/m"))}
		}
	}
	return nil
}

// Cells gives the cells, by rising friction.
func (p *Play) Cells() []PlayCell { return slices.Clone(p.cell) }

// Describe gives the law in words.
func (p *Play) Describe() string {
	s := fmt.Sprintf("play, %d cells", len(p.cell))
	if len(p.cell) == 1 {
		s = "play, 1 cell"
	}
	return fmt.Sprintf("%s, Ms %s, friction to %s", s, phys.Format(p.ms, "A/m"), phys.Format(p.cell[len(p.cell)-1].Kappa, "A/m"))
}

// Knee gives a field strength well into saturation, in A/m.
func (p *Play) Knee() float64 {
	most := 0.0
	for _, c := range p.cell {
		if c.Ms >= 0.05*p.ms {
			most = math.Max(most, 8*c.A+3*c.Kappa)
		}
	}
	if most == 0 {
		for _, c := range p.cell {
			most = math.Max(most, 8*c.A+3*c.Kappa)
		}
	}
	return most
}

// Anhysteretic gives the flux density in T without friction.
func (p *Play) Anhysteretic(h float64) float64 {
	m := 0.0
	for i := range p.cell {
		l, _ := fine(h / p.cell[i].A)
		m += p.cell[i].Ms * l
	}
	return phys.Mu0 * (h + m)
}

// Start gives the demagnetised state.
func (p *Play) Start() State {
	n := len(p.cell)
	all := make([]float64, 3*n+1)
	return State{hr: all[:n:n], own: all[n : 2*n : 2*n], rest: all[2*n:]}
}

// Now gives the committed point; only cells without friction move in small signals.
func (p *Play) Now(s *State) Point {
	chi := 0.0
	for i := range p.cell {
		if c := &p.cell[i]; c.Kappa == 0 {
			_, a := fine(s.hr[i] / c.A)
			chi += c.Ms / c.A * a
		} else {
			break
		}
	}
	return p.point(s.x, s.m, chi)
}

func (p *Play) point(h, m, chi float64) Point {
	return Point{X: h, H: h, B: phys.Mu0 * (h + m), DH: 1, DB: phys.Mu0 * (1 + chi), x: h, m: m}
}

// ByEffective is [Play.ByField]: a play law has no other field.
func (p *Play) ByEffective(s *State, x float64) Point { return p.ByField(s, x) }

// ByField gives the point at field strength h in A/m.
//
// The cells that a monotone move drags along are those of smallest friction: by its history hr of a cell with more
// friction differs by no more than the friction does. The rest keeps the magnetisation it has.
func (p *Play) ByField(s *State, h float64) Point {
	if h == s.x {
		return p.Now(s)
	}
	d := math.Copysign(1, h-s.x)
	m, chi, i := 0.0, 0.0, 0
	for ; i < len(p.cell); i++ {
		c := &p.cell[i]
		hr := h - d*c.Kappa
		if (hr-s.hr[i])*d <= 0 {
			break
		}
		l, a := fine(hr / c.A)
		m += c.Ms * l
		chi += c.Ms / c.A * a
	}
	return p.point(h, m+s.rest[i], chi)
}

// ByFluxDensity gives the point at flux density b in T.
func (p *Play) ByFluxDensity(s *State, b float64) Point { return p.ByMix(s, 0, b) }

// ByMix gives the point at which B + mu0 r H = b, in T. Between the fields at which the next cell begins to move the
// law is smooth: they are halved first, then Newton's method goes on within a bracket.
func (p *Play) ByMix(s *State, r, b float64) Point {
	goal := b / phys.Mu0
	now := (1+r)*s.x + s.m
	if goal == now {
		return p.Now(s)
	}
	d := math.Copysign(1, goal-now)
	start := func(i int) float64 { return s.hr[i] + d*p.cell[i].Kappa } // where cell i begins to move
	from, to := 0, len(p.cell)                                          // the root lies beyond start(from-1), not beyond start(to)
	for from < to {
		mid := (from + to) / 2
		q := p.ByField(s, start(mid))
		if ((1+r)*q.H+q.m-goal)*d < 0 {
			from = mid + 1
		} else {
			to = mid
		}
	}
	lo, hi := s.x, (goal-s.m)/(1+r) // M moves with H
	if from > 0 {
		lo = start(from - 1)
	}
	if from < len(p.cell) {
		hi = start(from)
	}
	x := lo
	if from == 0 {
		x = hi // nothing moves
	}
	return p.newton(s, r, goal, d, lo, hi, x)
}

// newton finds the field between lo and hi, hi further along d, at which (1+r) H + M is the goal. Beyond the knees on
// both sides the law is all but straight, and Newton's steps would leap from one to the other: the knees cut the
// bracket first, and a step that leaves half of it for the third time is replaced by halving.
func (p *Play) newton(s *State, r, goal, d, lo, hi, x float64) Point {
	const eps = 4 * 0x1p-52
	for _, knee := range [...]float64{-d * p.knee, d * p.knee} {
		if (knee-lo)*d > 0 && (hi-knee)*d > 0 {
			if q := p.ByField(s, knee); ((1+r)*q.H+q.m-goal)*d < 0 {
				lo, x = knee, knee
			} else {
				hi = knee
			}
		}
	}
	var q Point
	width, slow := math.Abs(hi-lo), 0
	for range 200 {
		q = p.ByField(s, x)
		f := (1+r)*q.H + q.m - goal
		if math.Abs(f) <= eps*(math.Abs((1+r)*q.H)+math.Abs(q.m)) {
			break
		}
		if f*d > 0 {
			hi = x
		} else {
			lo = x
		}
		slow++
		if w := math.Abs(hi - lo); w <= 0.5*width {
			width, slow = w, 0
		}
		next := x - f/(r+q.DB/phys.Mu0)
		inside := (next-lo)*d > 0 && (hi-next)*d > 0
		if inside && math.Abs(next-x) <= 0x1p-52*math.Abs(x) {
			break
		}
		if !inside || slow >= 3 && math.Abs(next-x) > 1e-3*width {
			next, slow = lo+(hi-lo)/2, 0
		}
		if next == x || next == lo || next == hi {
			break
		}
		x = next
	}
	return q
}

// Commit makes q the committed state.
func (p *Play) Commit(s *State, q Point) {
	moved := 0
	p.move(s, q.H, func(i int, hr, m float64) {
		s.heat += phys.Mu0 * p.cell[i].Kappa * math.Abs(m-s.own[i])
		s.hr[i], s.own[i] = hr, m
		moved = i + 1
	})
	for i := moved - 1; i >= 0; i-- {
		s.rest[i] = s.own[i] + s.rest[i+1]
	}
	s.x, s.m = q.H, s.rest[0]
}

// move shows the cells that a move to h drags along, with their field and magnetisation after it.
func (p *Play) move(s *State, h float64, see func(i int, hr, m float64)) {
	if h == s.x {
		return
	}
	d := math.Copysign(1, h-s.x)
	for i := range p.cell {
		c := &p.cell[i]
		hr := h - d*c.Kappa
		if (hr-s.hr[i])*d <= 0 {
			break
		}
		l, _ := fine(hr / c.A)
		see(i, hr, c.Ms*l)
	}
}

// Work is the integral of H dB in J/m3 on the move from the committed state to its trial q: what air and cells store
// and what becomes heat.
//
//	mu0 (H1^2 - H0^2)/2 + sum of mu0 [hr M - Ms a ln(sinh(hr/a)/(hr/a))] between the ends + mu0 kappa |dM|
func (p *Play) Work(s *State, q Point) float64 {
	w := (q.H*q.H - s.x*s.x) / 2
	p.move(s, q.H, func(i int, hr, m float64) {
		c := &p.cell[i]
		w += c.stored(hr, m) - c.stored(s.hr[i], s.own[i]) + c.Kappa*math.Abs(m-s.own[i])
	})
	return phys.Mu0 * w
}

// stored is the energy of a cell over mu0.
func (c *PlayCell) stored(hr, m float64) float64 {
	return hr*m - c.Ms*c.A*num.LangevinIntegral(hr/c.A)
}

// Stored is the energy density in J/m3 that air and cells hold.
func (p *Play) Stored(s *State) float64 {
	w := s.x * s.x / 2
	for i := range p.cell {
		w += p.cell[i].stored(s.hr[i], s.own[i])
	}
	return phys.Mu0 * w
}

// Dissipated is the heat in J/m3 that all committed moves have made.
func (p *Play) Dissipated(s *State) float64 { return s.heat }
