package gap

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/geom"
	"ampturn/magcirc/phys"
)

// Corner returns the permeance in H/m, per metre of depth, of one half of a wide block of full width w over a plane at
// the distance l, with the fringing flux of its edge up to the height h of the block's side.
//
//	P' = mu0 [w/(2 l) + (2 - 2 ln 2 + ln(1 + s^2))/pi],   s - atan s = pi h/(2 l)
//
// Inputs: w, l, h in m, positive; others give NaN. Valid: exact for w -> infinity; for two edges within 1e-4 from
// w = 2 l on. For h much above l it becomes mu0 [w/(2 l) + 2/pi (1 + ln(pi h/(4 l)))].
// Source: Schwarz-Christoffel mapping, derived anew; logarithmic form: J. Muhlethaler, J. W. Kolar, A. Ecklebe, 8th
// Int. Conf. on Power Electronics ECCE Asia, 2011.
func Corner(w, l, h float64) float64 {
	if !(w > 0 && l > 0 && h > 0) {
		return math.NaN()
	}
	return phys.Mu0 * (w/(2*l) + edge(h, 2*l))
}

// edge is the fringing permeance over mu0, per metre of depth, of one edge against the middle of a gap g.
func edge(h, g float64) float64 {
	s := sideCoordinate(math.Pi * h / g)
	return (2 - 2*math.Ln2 + math.Log1p(s*s)) / math.Pi
}

// sideCoordinate solves s - atan s = t for s > 0. The function is convex: Newton from above falls to the root.
func sideCoordinate(t float64) float64 {
	s := t + math.Pi/2
	for range 100 {
		step := (s - math.Atan(s) - t) * (1 + s*s) / (s * s)
		if !(step > 1e-15*s) {
			break
		}
		s -= step
	}
	return s
}

// strip is the fringing factor of a long gap g between poles of breadth w and side height h, both edges.
func strip(w, g, h float64) float64 { return 1 + edge(h, g)*g/w }

// Limits and uncertainty of the mapping, from comparing round poles, solved about the axis, with the square of equal
// area, for radii of 1.5 to 50 gaps: the error stays below spread times the share of the fringing in the flux up to
// sides of tallNote radii, below tallSpread times it up to tallEnd radii.
const (
	mapNote    = 0.5 // gap over the shorter side of the face: a note from here on
	mapEnd     = 1.0 // and the end
	tallNote   = 3.0 // height of the side over the radius of the disc of equal area: a note from here on
	tallEnd    = 5.0 // and the end
	ringBend   = 0.5 // breadth of a ring over its mean radius: the end
	spread     = 0.13
	tallSpread = 0.25
)

// Field lines of the mapping that leave the pole's side at the height y land about y beside it: a wall at the span
// takes those from above that height away. Compared with the field between a pole and a wall that no flux crosses, a
// side that ends at the height of the span is right within wallSpread of the fringing for spans from two gaps on.
const (
	wallSpread = 0.1
	wallNote   = 2.0 // span over gap: a note below this
)

// conformalMap multiplies the factors of two planes for a rectangle; a round pole counts as the square of equal area,
// a thin ring as a strip bent round. The window's wall, if known, lies beside the width of a rectangle.
func (s Spec) conformalMap() (Result, error) {
	h, _ := s.side()
	g := s.Length
	low := h // of the side that faces the wall
	if s.Span > 0 {
		low = min(h, s.Span)
	}
	r := Result{
		Validity: fmt.Sprintf("gap up to %g of the shorter side (note from %g); pole sides up to %g radii of the disc of equal area (note from %g)",
			mapEnd, mapNote, tallEnd, tallNote),
		Source: "J. Muhlethaler, J. W. Kolar, A. Ecklebe, 8th Int. Conf. on Power Electronics ECCE Asia, 2011, with the exact Schwarz-Christoffel form"}
	var shorter float64
	switch f := s.Face; f.Shape {
	case geom.Rectangle:
		shorter = min(f.W, f.D)
		r.Factor = strip(f.W, g, low) * strip(f.D, g, h)
	case geom.Round:
		shorter = f.Do * math.Sqrt(math.Pi) / 2
		r.Factor = math.Pow(strip(shorter, g, low), 2)
		h = low
		r.note(magcirc.Remark, s.Elem, "a round pole counts as the square of equal area")
	case geom.Ring:
		w := (f.Do - f.Di) / 2
		if bend := 4 * w / (f.Do + f.Di); bend > ringBend || f.Di < 2*g {
			return Result{}, s.outside("breadth of the ring", fmt.Sprintf("a ring %s broad about a hole of %s is too curved for ConformalMap",
				phys.Format(w, "m"), phys.Format(f.Di, "m")), bend, ringBend)
		}
		shorter = w
		r.Factor = strip(w, g, low)
		r.note(magcirc.Remark, s.Elem, "a ring counts as a straight strip of its breadth")
	default:
		return Result{}, s.outside("shape", "ConformalMap wants the shape of the faces, and only their area is known", 0, 0)
	}
	if err := s.limitMap(&r, g/shorter, h); err != nil {
		return Result{}, err
	}
	s.noteSide(&r)
	if s.Span > 0 {
		r.Uncertainty += wallSpread * (r.Factor - 1) / r.Factor
	}
	if s.Span > 0 && s.Span < wallNote*g {
		r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("the window's wall is only %s beside the pole: compare with FieldSolve", phys.Format(s.Span, "m")))
	}
	return r, nil
}

// limitMap notes or refuses the mapping by the ratio of gap to side and the height h of the pole's side, and states
// its uncertainty, which is that of multiplying two planes.
func (s Spec) limitMap(r *Result, ratio, h float64) error {
	if ratio > mapEnd*(1+1e-9) {
		return s.outside("gap over side", fmt.Sprintf("the gap is %.3g times the shorter side of its face; ConformalMap ends at %g", ratio, mapEnd), ratio, mapEnd)
	}
	tall := s.tallness(h)
	if tall > tallEnd*(1+1e-9) {
		return s.outside("height of the pole's side", fmt.Sprintf("the pole's side of %s is %.3g times its radius; ConformalMap ends at %g",
			phys.Format(h, "m"), tall, tallEnd), tall, tallEnd)
	}
	if ratio > mapNote {
		r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("the gap is %.2g of the shorter side of its face: compare with FieldSolve", ratio))
	}
	r.Uncertainty = s.composition(r.Factor, tall)
	if tall > tallNote {
		r.note(magcirc.OutOfRange, s.Elem, fmt.Sprintf("the pole's side is %.2g times its radius: two planes multiplied give too little fringing", tall))
	}
	return nil
}

// tallness is the height of the pole's side over the radius of the disc of equal area; a ring bent round has no
// height that matters.
func (s Spec) tallness(h float64) float64 {
	if s.Face.Shape == geom.Ring {
		return 0
	}
	return h / math.Sqrt(s.Face.Gross()/math.Pi)
}

// composition is the relative uncertainty of a factor made of two planes: the share of fringing in the flux, times
// what the comparison of round poles with squares of equal area gives.
func (s Spec) composition(factor, tall float64) float64 {
	u := spread
	if tall > tallNote {
		u = tallSpread
	}
	return u * (factor - 1) / factor
}
