package gap

import (
	"fmt"
	"math"

	"ampturn/magcirc"
)

// Limits of the rules of thumb. Up to simpleFactor they are used without remark; up to lastFactor with a note (the
// published examples end there: Hambley's gap of a quarter of the pole's side has 1.46, McLyman's range of designs
// about the same); further the correction is no longer small against the uniform field and the rules are refused.
const (
	simpleFactor = 1.2
	lastFactor   = 1.5
)

// noFringe is F = 1. Its uncertainty is the fringing left out relative to what is counted, by the mapping for a square face
// of equal area: the permeance is up to (1 + uncertainty) times larger.
func (s Spec) noFringe() (Result, error) {
	h, _ := s.side()
	left := math.Pow(strip(math.Sqrt(s.Face.Gross()), s.Length, h), 2)
	r := Result{Factor: 1, Uncertainty: left - 1,
		Validity: "gap much shorter than the sides of its face",
		Source:   "uniform field below the face (any textbook)"}
	if left > simpleFactor {
		r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("fringing left out would raise the permeance about %.2g times", left))
	}
	return r, nil
}

// addTheGap is F = A(sides + g)/A. Checked against the field solution of round poles it gives about half of the
// fringing: the whole correction counts as uncertainty.
func (s Spec) addTheGap() (Result, error) {
	grown, known := s.Face.Grown(s.Length)
	if !known {
		return Result{}, s.outside("shape", "AddTheGap wants the shape of the faces, and only their area is known", 0, 0)
	}
	f := grown.Gross() / s.Face.Gross()
	r := Result{Factor: f, Uncertainty: (f - 1) / f,
		Validity: fmt.Sprintf("fringing factor up to %g, with a note up to %g", simpleFactor, lastFactor),
		Source:   "A. R. Hambley, Electrical Engineering: Principles and Applications, 5th ed. 2011, ch. 15; round: H. C. Roters, Electromagnetic Devices, 1941, ch. 5 (from memory)"}
	return r, s.limitRule(&r)
}

// logRule is F = 1 + g/sqrt(A) ln(2 G/g) with the window's height G. Checked against the field solution of round
// poles it gives two thirds of the fringing and more: half the correction counts as uncertainty.
func (s Spec) logRule() (Result, error) {
	if s.Window == 0 {
		return Result{}, &magcirc.Error{Code: magcirc.WrongUse, Elem: s.Elem, Quantity: "window height", Unit: "m",
			Msg: "LogRule wants the height of the winding window", Hint: "write .Fringe(LogRule.Window(height))"}
	}
	a := s.Face.Gross()
	f := 1 + s.Length/math.Sqrt(a)*math.Log(2*s.Window/s.Length)
	r := Result{Factor: f, Uncertainty: 0.5 * (f - 1) / f,
		Validity: fmt.Sprintf("fringing factor up to %g, with a note up to %g", simpleFactor, lastFactor),
		Source:   "C. W. T. McLyman, Transformer and Inductor Design Handbook, ch. 8 (from memory)"}
	return r, s.limitRule(&r)
}

// limitRule notes or refuses a rule of thumb by its factor.
func (s Spec) limitRule(r *Result) error {
	switch f := r.Factor; {
	case f > lastFactor*(1+1e-9):
		return s.outside("fringing factor", fmt.Sprintf("fringing factor %.3g is beyond %g, where %v ends", f, lastFactor, s.Method), f, lastFactor)
	case f > simpleFactor:
		r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("fringing factor %.3g is near the limit of %v (%g): compare with FieldSolve", f, s.Method, lastFactor))
	}
	return nil
}
