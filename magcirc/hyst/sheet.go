package hyst

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Sheet is what a lamination adds to the quasi-static law when its flux changes.
type Sheet struct {
	Thickness   float64 // d in m
	Resistivity float64 // rho in ohm m
	Excess      float64 // C = sqrt(sigma G V0 S) in A/m (s/T)^(1/2); 0: no excess loss. [Separation.Excess] gives it
}

// Check refuses a sheet that cannot be.
//
// Errors: [magcirc.BadValue], [magcirc.Implausible].
func (s Sheet) Check() error {
	const elem = "lamination"
	for _, q := range [...]struct {
		name, unit string
		x, most    float64
		hint       string
	}{
		{"thickness", "m", s.Thickness, 0.02, "was mm meant?"},
		{"resistivity", "ohm m", s.Resistivity, 1e7, "it is in ohm m: 48 uohm cm is 4.8e-7"},
	} {
		switch {
		case !(q.x > 0):
			return &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: q.name, Unit: q.unit, Got: q.x,
				Msg: fmt.Sprintf("%s %s is not a positive value", q.name, phys.Format(q.x, q.unit))}
		case q.x > q.most:
			return &magcirc.Error{Code: magcirc.Implausible, Elem: elem, Quantity: q.name, Unit: q.unit, Got: q.x, Limit: q.most,
				Msg: fmt.Sprintf("%s %s is that of no lamination (to %s)", q.name, phys.Format(q.x, q.unit), phys.Format(q.most, q.unit)), Hint: q.hint}
		}
	}
	if !(s.Excess >= 0) || math.IsInf(s.Excess, 1) {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: elem, Quantity: "excess coefficient", Got: s.Excess,
			Msg: fmt.Sprintf("excess coefficient %s is negative", phys.Format(s.Excess, ""))}
	}
	return nil
}

// calm is the rate in T/s below which the square root of the excess field is rounded off.
const calm = 1e-3

// Field gives the field strength in A/m that eddy currents take at the rate r = dB/dt in T/s, and its slope over the
// rate: to be added to the field of the quasi-static law at the same B.
//
//	H = d^2 r/(12 rho) + C sign(r) sqrt|r|
//
// Valid: thickness well below the skin depth, so that B is even over it ([Sheet.Notes]). Below 1 mT/s the root is
// rounded off to keep the slope finite.
// Source: G. Bertotti, IEEE Trans. Magn. 24 (1988) 621-630; Hysteresis in Magnetism, 1998 (from memory).
func (s Sheet) Field(rate float64) (h, slope float64) {
	classical := s.Thickness * s.Thickness / (12 * s.Resistivity)
	q := rate*rate + calm*calm
	root := math.Sqrt(math.Sqrt(q)) // |r|^(1/2)
	return classical*rate + s.Excess*rate/root, classical + s.Excess/root*(1-rate*rate/(2*q))
}

// Classical gives the classical eddy loss in W/m3 of a sinusoidal flux density of amplitude b in T at frequency f:
// pi^2 d^2 f^2 b^2/(6 rho).
func (s Sheet) Classical(f, b float64) float64 {
	return math.Pi * math.Pi * s.Thickness * s.Thickness * f * f * b * b / (6 * s.Resistivity)
}

// excessSine is (2 pi)^1.5 times the mean of |cos|^1.5, published as 8.76.
var excessSine = math.Pow(2*math.Pi, 1.5) * math.Gamma(1.25) / (math.Sqrt(math.Pi) * math.Gamma(1.75))

// ExcessLoss gives the excess loss in W/m3 of a sinusoidal flux density: 8.763 C (f b)^1.5.
func (s Sheet) ExcessLoss(f, b float64) float64 { return excessSine * s.Excess * math.Pow(f*b, 1.5) }

// OfWaveform gives both losses in W/m3 of a flux density sampled evenly over one period of 1/f, the last point joining
// the first: d^2/(12 rho) mean (dB/dt)^2 and C mean |dB/dt|^1.5, with B straight between the points.
func (s Sheet) OfWaveform(f float64, b []float64) (classical, excess float64) {
	n := len(b)
	for i := range b {
		rate := math.Abs(b[(i+1)%n]-b[i]) * float64(n) * f
		classical += rate * rate
		excess += math.Pow(rate, 1.5)
	}
	return s.Thickness * s.Thickness / (12 * s.Resistivity) * classical / float64(n), s.Excess * excess / float64(n)
}

// SkinDepth gives the skin depth in m at frequency f and relative permeability mur.
func (s Sheet) SkinDepth(f, mur float64) float64 {
	return math.Sqrt(s.Resistivity / (math.Pi * f * phys.Mu0 * mur))
}

// Notes says when the sheet is too thick for its frequency: above half a skin depth flux is no longer even over it.
func (s Sheet) Notes(f, mur float64) []magcirc.Note {
	depth := s.SkinDepth(f, mur)
	if s.Thickness <= 0.5*depth {
		return nil
	}
	return []magcirc.Note{{Kind: magcirc.OutOfRange, Elem: "lamination", Text: fmt.Sprintf(
		"thickness %s is %s of the skin depth %s (%s, relative permeability %s): above 0.5 flux crowds to the surface and the classical loss is overstated",
		phys.Format(s.Thickness, "m"), phys.FormatDigits(s.Thickness/depth, "", 2), phys.FormatDigits(depth, "m", 2), phys.Format(f, "Hz"), phys.FormatDigits(mur, "", 3))}}
}

// Split is the loss of a cycle by where it comes from, in J/m3.
type Split struct{ Hysteresis, Classical, Excess float64 }

// Total gives their sum in J/m3.
func (s Split) Total() float64 { return s.Hysteresis + s.Classical + s.Excess }

// Dynamic gives the loop of a lamination under sinusoidal flux density of amplitude peak in T at frequency f: the steady
// quasi-static loop of the law with the field of the eddy currents added, and the loss of a cycle in its parts.
//
// Valid: as [Sheet.Field]; thicker sheets give a note. Errors: those of [SteadyTo] and [Sheet.Check];
// [magcirc.BadValue] for a frequency that is not positive.
func Dynamic(law Law, sheet Sheet, peak, f float64, set *Settings) (*Loop, Split, error) {
	if err := sheet.Check(); err != nil {
		return nil, Split{}, err
	}
	if !(f > 0) || math.IsInf(f, 1) {
		return nil, Split{}, &magcirc.Error{Code: magcirc.BadValue, Elem: "loop", Quantity: "frequency", Unit: "Hz", Got: f,
			Msg: fmt.Sprintf("frequency %s is not a positive value", phys.Format(f, "Hz"))}
	}
	still, err := SteadyTo(law, peak, set)
	if err != nil {
		return nil, Split{}, err
	}
	l := &Loop{Name: still.Name, Cycles: still.Cycles, Drift: still.Drift, Notes: still.Notes, turn: still.turn,
		H: make([]float64, len(still.H)), B: still.B}
	for i, b := range still.B { // B = peak cos(2 pi f t), falling first
		rate := 2 * math.Pi * f * math.Sqrt(math.Max(0, peak*peak-b*b))
		if i < still.turn {
			rate = -rate
		}
		h, _ := sheet.Field(rate)
		l.H[i] = still.H[i] + h
	}
	split := Split{still.Area(), sheet.Classical(f, peak) / f, sheet.ExcessLoss(f, peak) / f}
	l.heat, l.known = split.Total(), true
	l.Notes = append(l.Notes, sheet.Notes(f, still.Peak()/still.PeakField()/phys.Mu0)...)
	return l, split, nil
}

// Rayleigh is the law of weak fields, B = mu H + nu H^2 from the demagnetised state.
type Rayleigh struct {
	Mu float64 // initial permeability in H/m
	Nu float64 // Rayleigh's constant in T m2/A2
}

// Loop gives the loop between -peak and peak of field strength in A/m: B = (mu + nu Hm) H +- nu (Hm^2 - H^2)/2.
//
// Peak (mu + nu Hm) Hm, remanence nu Hm^2/2, area 4 nu Hm^3/3.
// Valid: fields well below the coercivity. Source: Lord Rayleigh, Phil. Mag. 23 (1887) 225-245 (from memory).
func (r Rayleigh) Loop(peak float64, set *Settings) *Loop {
	n := set.points()
	l := &Loop{Name: "Rayleigh loop", heat: 4 * r.Nu * peak * peak * peak / 3, known: true, turn: n}
	for i := range 2 * n {
		h, d := peak*math.Cos(math.Pi*float64(i)/float64(n)), 1.0
		if i >= n {
			d = -1
		}
		l.H = append(l.H, h)
		l.B = append(l.B, (r.Mu+r.Nu*peak)*h+d*r.Nu*(peak*peak-h*h)/2)
	}
	return l
}
