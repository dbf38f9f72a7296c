package hyst

import (
	"fmt"
	"math"
	"sort"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Settings of computed loops; the zero value of a field, or nil for all of them, means its default.
type Settings struct {
	Points int // points of a branch, default 300
	Cycles int // most cycles until a loop must be closed, default 20000
}

func (s *Settings) points() int {
	if s == nil || s.Points <= 0 {
		return 300
	}
	return max(s.Points, 12)
}

func (s *Settings) cycles() int {
	if s == nil || s.Cycles <= 0 {
		return 20000
	}
	return s.Cycles
}

const (
	closed = 1e-11 // a loop is steady when its tips change by less over a cycle, relative to its height
	open   = 1e-4  // and is refused when they change by more after the cycles it has
)

// Steady gives the steady loop of a law between -peak and +peak of field strength in A/m: what is left after cycling
// from the demagnetised state.
//
// Errors: [magcirc.BadValue] for a peak that is not positive; [magcirc.NoConvergence] for a loop that is not closed
// after the cycles that the settings allow.
func Steady(law Law, peak float64, set *Settings) (*Loop, error) {
	if !(peak > 0) || peak > 1e9 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "loop", Quantity: "peak field strength", Unit: "A/m", Got: peak,
			Msg: fmt.Sprintf("peak field strength %s is not a positive value", phys.Format(peak, "A/m"))}
	}
	return SteadyBetween(law, law.Start(), -peak, peak, set)
}

// SteadyTo gives the steady loop between -peak and +peak of flux density in T.
//
// Errors: as [Steady]; [magcirc.OutsideValidity] for a flux density that no field strength below 1 MA/m reaches.
func SteadyTo(law Law, peak float64, set *Settings) (*Loop, error) {
	if !(peak > 0) || math.IsInf(peak, 1) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "loop", Quantity: "peak flux density", Unit: "T", Got: peak,
			Msg: fmt.Sprintf("peak flux density %s is not a positive value", phys.Format(peak, "T"))}
	}
	s := law.Start()
	const most = 1e6 // A/m
	if law.ByFluxDensity(&s, peak).H > most {
		reach := law.ByField(&s, most).B
		return nil, &magcirc.Error{Code: magcirc.OutsideValidity, Elem: "loop", Quantity: "peak flux density", Unit: "T", Got: peak, Limit: reach,
			Msg: fmt.Sprintf("peak flux density %s is out of reach: at %s the law has %s", phys.Format(peak, "T"), phys.Format(most, "A/m"), phys.Format(reach, "T"))}
	}
	return settle(law, s, func(s *State, up bool) Point {
		if up {
			return law.ByFluxDensity(s, peak)
		}
		return law.ByFluxDensity(s, -peak)
	}, set)
}

// SteadyBetween gives the steady loop between the field strengths lo and hi in A/m, cycled from state s, which is left
// as it was.
func SteadyBetween(law Law, s State, lo, hi float64, set *Settings) (*Loop, error) {
	if !(hi > lo) || math.IsInf(hi-lo, 1) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "loop", Quantity: "field strength", Unit: "A/m", Got: hi, Limit: lo,
			Msg: fmt.Sprintf("it has no swing from %s to %s", phys.Format(lo, "A/m"), phys.Format(hi, "A/m"))}
	}
	return settle(law, s.Clone(), func(s *State, up bool) Point {
		if up {
			return law.ByField(s, hi)
		}
		return law.ByField(s, lo)
	}, set)
}

// settle cycles s between its tips until they stay, and takes the loop.
func settle(law Law, s State, tip func(s *State, up bool) Point, set *Settings) (*Loop, error) {
	top := tip(&s, true)
	law.Commit(&s, top)
	drift, cycles := math.Inf(1), 0
	for drift > closed && cycles < set.cycles() {
		low := tip(&s, false)
		law.Commit(&s, low)
		next := tip(&s, true)
		law.Commit(&s, next)
		drift = math.Max(math.Abs(next.B-top.B)/(next.B-low.B), math.Abs(next.H-top.H)/(next.H-low.H))
		top = next
		cycles++
	}
	if !(drift <= open) {
		return nil, &magcirc.Error{Code: magcirc.NoConvergence, Elem: law.Describe(), Quantity: "drift", Got: drift, Limit: open,
			Msg:  fmt.Sprintf("loop not closed after %d cycles: drift %s", cycles, phys.FormatDigits(drift, "percent", 2)),
			Hint: "allow more cycles; Jiles-Atherton loops creep towards the anhysteretic curve"}
	}
	l := take(law, &s, tip, set)
	l.Cycles, l.Drift = cycles, drift
	if drift > 1e-8 {
		l.Notes = append(l.Notes, magcirc.Note{Kind: magcirc.Remark, Elem: l.elem(),
			Text: fmt.Sprintf("after %d cycles the loop still drifts by %s of its height per cycle", cycles, phys.FormatDigits(drift, "percent", 2))})
	}
	return l, nil
}

// take goes once around from the upper tip, which s is at, and keeps the points.
func take(law Law, s *State, tip func(s *State, up bool) Point, set *Settings) *Loop {
	l := &Loop{Name: law.Describe()}
	e, energetic := law.(Energetic)
	before := 0.0
	if energetic {
		before = e.Dissipated(s)
	}
	l.leave[0] = law.Now(s)
	l.add(l.leave[0])
	l.branch(law, s, tip(s, false), set.points())
	l.turn = len(l.H) - 1
	l.leave[1] = law.Now(s)
	l.branch(law, s, tip(s, true), set.points())
	end := len(l.H) - 1 // the upper tip again: its slopes on arrival are those of the closed loop's first point
	l.dh[0], l.db[0] = l.dh[end], l.db[end]
	l.H, l.B, l.x, l.dh, l.db = l.H[:end], l.B[:end], l.x[:end], l.dh[:end], l.db[:end]
	if energetic {
		l.heat, l.known = e.Dissipated(s)-before, true
	}
	if n, ok := law.(interface{ Notes() []magcirc.Note }); ok {
		l.Notes = append(l.Notes, n.Notes()...)
	}
	return l
}

func (l *Loop) add(p Point) {
	l.H, l.B, l.x = append(l.H, p.H), append(l.B, p.B), append(l.x, p.X)
	l.dh, l.db = append(l.dh, p.DH), append(l.db, p.DB)
}

// branch goes from the state to its trial end. A third of the points lies by equal angles of B, a third by equal angles
// of H, both denser at the tips, and a third by equal steps of asinh(H/Hc), denser about zero; H = 0 and B = 0 are
// among them.
func (l *Loop) branch(law Law, s *State, end Point, n int) {
	from := law.Now(s)
	points := make([]Point, 0, n+3)
	scale := (math.Abs(from.H) + math.Abs(end.H)) / 50
	if from.H*end.H < 0 {
		points = append(points, law.ByField(s, 0))
	}
	if from.B*end.B < 0 {
		zero := law.ByFluxDensity(s, 0)
		points = append(points, zero)
		scale = math.Max(math.Abs(zero.H), 1e-3*scale)
	}
	third := n / 3
	u0, u1 := math.Asinh(from.H/scale), math.Asinh(end.H/scale)
	for k := 1; k < third; k++ {
		even := float64(k) / float64(third)
		w := (1 - math.Cos(math.Pi*even)) / 2
		points = append(points, law.ByField(s, from.H+w*(end.H-from.H)), law.ByFluxDensity(s, from.B+w*(end.B-from.B)),
			law.ByField(s, scale*math.Sinh(u0+even*(u1-u0))))
	}
	d := end.X - from.X
	sort.SliceStable(points, func(a, b int) bool { return (points[a].X-points[b].X)*d < 0 })
	at := from.X
	for _, p := range points {
		if (p.X-at)*d > 0 && (end.X-p.X)*d > 0 {
			l.add(p)
			at = p.X
		}
	}
	l.add(end)
	law.Commit(s, end)
}

// Family gives the steady loops to each of the peaks of field strength in A/m.
func Family(law Law, peaks []float64, set *Settings) ([]*Loop, error) {
	loops := make([]*Loop, len(peaks))
	for i, h := range peaks {
		l, err := Steady(law, h, set)
		if err != nil {
			return nil, err
		}
		loops[i] = l
	}
	return loops, nil
}
