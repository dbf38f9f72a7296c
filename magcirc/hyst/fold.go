package hyst

import (
	"fmt"
	"math"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// leastSlope is the smallest dH/dx = 1 - alpha dM/dx with which a law is accepted; at zero its loop folds.
const leastSlope = 0.01

// checkFold makes sure that the loop does not fold.
//
// dM/dx never exceeds the largest of dMan/dx, Ms/(3a), so that alpha Ms/(3a) < 1 is sufficient: D = M - Man is zero
// where a reversible move ends and afterwards an average of -Man' (Form1992); in Form1986 D rises wherever dM/dx =
// 1/alpha > Man', so that dM/dx cannot pass that value. The bound is not necessary: above it the loops are traced.
func (j *JilesAtherton) checkFold() error {
	ratio := j.p.Ratio()
	if ratio < 1 {
		return nil
	}
	h, least := j.trace()
	shown := phys.FormatDigits(ratio, "", 3)
	if least <= leastSlope {
		return &magcirc.Error{Code: magcirc.NoSolution, Elem: j.p.elem(), Quantity: "alpha Ms/(3a)", Got: ratio, Limit: 1,
			Msg:  fmt.Sprintf("the loop folds at %s (alpha Ms/(3a) = %s)", phys.Format(h, "A/m"), shown),
			Hint: "lower alpha or raise a"}
	}
	j.notes = append(j.notes, magcirc.Note{Kind: magcirc.OutOfRange, Elem: j.p.elem(), Text: fmt.Sprintf(
		"alpha Ms/(3a) = %s is above 1, where a loop may fold; traced from %s to %s it does not (dH/dx at least %s)",
		shown, phys.FormatDigits(j.smallest(), "A/m", 2), phys.FormatDigits(j.largest(), "A/m", 2), phys.FormatDigits(least, "", 2))})
	return nil
}

func (j *JilesAtherton) smallest() float64 { return 0.1 * j.p.K }
func (j *JilesAtherton) largest() float64 {
	return 10 * (j.Knee() + j.p.Alpha*j.p.Ms)
}

// trace runs loops between plus and minus growing effective fields and gives the smallest dH/dx met and the field
// strength there.
func (j *JilesAtherton) trace() (h, least float64) {
	least = math.Inf(1)
	for x := j.smallest(); ; x *= 1.5 {
		top := math.Min(x, j.largest()) / j.p.A
		s := j.Start()
		for _, end := range [...]float64{top, -top, top} {
			j.follow(&s, end, func(p Point) {
				if p.DH < least {
					h, least = math.Abs(p.H), p.DH
				}
			})
		}
		if x >= j.largest() {
			return h, least
		}
	}
}

// follow moves to the reduced effective field end and shows the points at the nodes of the table on the way.
func (j *JilesAtherton) follow(s *State, end float64, see func(Point)) {
	step := 1
	if end < s.x {
		step = -1
	}
	for i := s.cell; ; i += step {
		n := i + (step+1)/2 // the node ahead
		if n <= first || n > last || (langevin[n].z0-end)*float64(step) >= 0 {
			break
		}
		p := j.reach(s, 0, langevin[n].z0)
		see(p)
		j.Commit(s, p)
	}
	p := j.reach(s, 0, end)
	see(p)
	j.Commit(s, p)
}
