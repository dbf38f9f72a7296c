package hyst

import (
	"fmt"
	"math"
	"slices"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Loop is a closed loop: computed from a law ([Steady], [SteadyTo], [Minor]) or measured ([NewLoop]).
type Loop struct {
	Name string    // "loop.csv", or the law in words
	H, B []float64 // A/m and T, from the tip of largest H down to that of smallest H and up again; the first point is not repeated

	Cycles int            // cycles that the computation went before it took the loop; 0: measured
	Drift  float64        // change of B at the upper tip over the last of them, relative to the height of the loop
	Notes  []magcirc.Note // what a reader must know

	x, dh, db []float64 // computed: effective field, slopes over it on arrival
	turn      int       // index of the lower tip
	leave     [2]Point  // computed: upper and lower tip with the slopes of the way on
	heat      float64   // dissipated energy where the law knows it, J/m3
	known     bool
}

// NewLoop gives the measured loop through points of field strength h in A/m and flux density b in T, in the order in
// which they were measured over one cycle. It may begin anywhere.
//
// Errors: [magcirc.BadValue] for fewer than 8 points, unequal lengths, no numbers, no turning points, a loop that runs
// clockwise; [magcirc.Implausible] for flux densities above 3 T.
func NewLoop(name string, h, b []float64) (*Loop, error) {
	l := &Loop{Name: name}
	if err := checkLoop(l.elem(), h, b); err != nil {
		return nil, err
	}
	h, b, err := l.close(h, b)
	if err != nil {
		return nil, err
	}
	n := len(h)
	top, low := 0, 0
	for i := range n {
		if h[i] > h[top] {
			top = i
		}
		if h[i] < h[low] {
			low = i
		}
	}
	l.H, l.B = make([]float64, n), make([]float64, n)
	for i := range n {
		l.H[i], l.B[i] = h[(top+i)%n], b[(top+i)%n]
	}
	l.turn = (low - top + n) % n
	if area := l.Area(); area <= 0 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: l.elem(), Quantity: "area", Unit: "J/m3", Got: area,
			Msg:  fmt.Sprintf("it runs clockwise (area %s): no core gives energy", phys.Format(area, "J/m3")),
			Hint: "are H and B exchanged, or is one of them inverted?"}
	}
	return l, nil
}

// close drops a last point that repeats the first, after taking out the drift that lies between them.
func (l *Loop) close(h, b []float64) (_, _ []float64, err error) {
	n := len(h) - 1
	lo, hi := slices.Min(h), slices.Max(h)
	if math.Abs(h[n]-h[0]) > 2e-3*(hi-lo) {
		return h, b, nil
	}
	drift, height := b[n]-b[0], slices.Max(b)-slices.Min(b)
	switch {
	case math.Abs(drift) > 0.1*height:
		return nil, nil, &magcirc.Error{Code: magcirc.BadValue, Elem: l.elem(), Quantity: "B", Unit: "T", Got: b[n], Limit: b[0],
			Msg: fmt.Sprintf("not closed: B is %s at the first point and %s at the last, %s of its height apart",
				phys.Format(b[0], "T"), phys.Format(b[n], "T"), percent(math.Abs(drift)/height)), Hint: "give one steady cycle"}
	case math.Abs(drift) > 0.002*height:
		l.Notes = append(l.Notes, magcirc.Note{Kind: magcirc.Remark, Elem: l.elem(), Text: fmt.Sprintf(
			"B drifts by %s over the cycle (%s of its height): taken out evenly", phys.Format(drift, "T"), percent(math.Abs(drift)/height))})
	}
	straight := make([]float64, n)
	for i := range straight {
		straight[i] = b[i] - drift*float64(i)/float64(n)
	}
	return h[:n], straight, nil
}

// Centred gives the loop moved so that its tips lie opposite each other about zero, with a note of the offsets: what the
// zero of an integrator or of an amplifier added.
func (l *Loop) Centred() *Loop {
	dh, db := (l.H[0]+l.H[l.turn])/2, (l.B[0]+l.B[l.turn])/2
	c := *l
	c.H, c.B = make([]float64, len(l.H)), make([]float64, len(l.B))
	for i := range l.H {
		c.H[i], c.B[i] = l.H[i]-dh, l.B[i]-db
	}
	c.Notes = append(slices.Clone(l.Notes), magcirc.Note{Kind: magcirc.Remark, Elem: l.elem(), Text: fmt.Sprintf(
		"moved by %s and %s to lie about zero", phys.Format(-dh, "A/m"), phys.Format(-db, "T"))})
	return &c
}

func (l *Loop) elem() string {
	if l.Name == "" {
		return "loop"
	}
	return l.Name
}

func checkLoop(elem string, h, b []float64) error {
	e := &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "points", Got: float64(len(h)), Limit: 8}
	switch {
	case len(h) != len(b):
		e.Msg, e.Hint = fmt.Sprintf("%d values of H and %d of B", len(h), len(b)), "each point wants both"
		return e
	case len(h) < 8:
		e.Msg, e.Hint = fmt.Sprintf("%d points make no loop", len(h)), "give 8 or more over one cycle"
		return e
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range h {
		if math.IsNaN(h[i]+b[i]) || math.IsInf(h[i]+b[i], 0) {
			e.Msg = fmt.Sprintf("point %d: H %s, B %s is no point", i+1, phys.Format(h[i], "A/m"), phys.Format(b[i], "T"))
			return e
		}
		if j := math.Abs(b[i] - phys.Mu0*h[i]); j > 3 {
			e.Code, e.Quantity, e.Unit, e.Got, e.Limit = magcirc.Implausible, "B", "T", b[i], 3
			e.Msg = fmt.Sprintf("point %d: B %s is above that of any material (3 T)", i+1, phys.Format(b[i], "T"))
			e.Hint = "are these mT, or are H and B exchanged?"
			return e
		}
		lo, hi = math.Min(lo, h[i]), math.Max(hi, h[i])
	}
	if !(hi > lo) {
		e.Quantity, e.Unit, e.Got = "H", "A/m", hi
		e.Msg = fmt.Sprintf("H is %s all the way: there are no turning points", phys.Format(hi, "A/m"))
		return e
	}
	return nil
}

func (l *Loop) span() (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, b := range l.B {
		lo, hi = math.Min(lo, b), math.Max(hi, b)
	}
	return lo, hi
}

// PeakField gives half the swing of H in A/m.
func (l *Loop) PeakField() float64 { return (l.H[0] - l.H[l.turn]) / 2 }

// Peak gives half the swing of B in T.
func (l *Loop) Peak() float64 {
	lo, hi := l.span()
	return (hi - lo) / 2
}

// Area gives the energy in J/m3 that a cycle turns to heat: the integral of H dB around the loop. Where the law knows
// its dissipation it is that; else the points' slopes correct the rule (cubics of H and B between points), and measured
// points are joined by straight lines.
func (l *Loop) Area() float64 {
	if l.known {
		return l.heat
	}
	n, sum := len(l.H), 0.0
	for i := range n {
		j := (i + 1) % n
		sum += (l.H[i] + l.H[j]) / 2 * (l.B[j] - l.B[i])
		if l.x != nil {
			sum += l.bend(i, j)
		}
	}
	return sum
}

// bend is what cubics of H and B over x add to the straight line from point i to j: with p = w dH/dx, q = w dB/dx
//
//	[(H0-H1)(q0-q1) + (B1-B0)(p0-p1)]/10 + (p1 q0 - p0 q1)/60
func (l *Loop) bend(i, j int) float64 {
	w := l.x[j] - l.x[i]
	p0, q0, p1, q1 := w*l.dh[i], w*l.db[i], w*l.dh[j], w*l.db[j]
	switch i {
	case 0:
		p0, q0 = w*l.leave[0].DH, w*l.leave[0].DB
	case l.turn:
		p0, q0 = w*l.leave[1].DH, w*l.leave[1].DB
	}
	return ((l.H[i]-l.H[j])*(q0-q1)+(l.B[j]-l.B[i])*(p0-p1))/10 + (p1*q0-p0*q1)/60
}

// Crossings gives where the falling and the rising branch cross the axes: B at H = 0 in T, H at B = 0 in A/m, by straight
// lines between points; NaN for a branch that does not cross.
func (l *Loop) Crossings() (brDown, brUp, hcDown, hcUp float64) {
	n := len(l.H)
	brDown, hcDown = cross(l.H, l.B, 0, l.turn, n), cross(l.B, l.H, 0, l.turn, n)
	brUp, hcUp = cross(l.H, l.B, l.turn, n, n), cross(l.B, l.H, l.turn, n, n)
	return brDown, brUp, hcDown, hcUp
}

// cross gives y where x crosses zero between the points from and to of the closed list.
func cross(x, y []float64, from, to, n int) float64 {
	for i := from; i < to; i++ {
		a, b := x[i], x[(i+1)%n]
		if a == 0 {
			return y[i]
		}
		if a*b < 0 {
			return y[i] + (y[(i+1)%n]-y[i])*a/(a-b)
		}
	}
	return math.NaN()
}

// Remanence gives B in T at H = 0: half the distance of the branches there.
func (l *Loop) Remanence() float64 {
	down, up, _, _ := l.Crossings()
	return (down - up) / 2
}

// Coercivity gives H in A/m at B = 0: half the distance of the branches there.
func (l *Loop) Coercivity() float64 {
	_, _, down, up := l.Crossings()
	return (up - down) / 2
}
