package induct

import (
	"fmt"
	"math"

	"ampturn/magcirc"
)

// Circuit is an equivalent circuit of two windings, all others open: a series inductance at the first, then the
// magnetising inductance across an ideal transformer of ratio first to second.
//
//	   Series           ratio : 1
//	o---LLLL---+-------, ,-------o
//	           |       ) (
//	       Magnetising ) (
//	o----------+-------' '-------o
//
// T is the other usual form, the same network with the leakage on both sides.
type Circuit struct {
	Series      float64 // H, seen at the first winding with the second shorted
	Magnetising float64 // H, on the first winding's side
	Ratio       float64 // effective turns ratio first : second; negative where the dots oppose
	T           TForm
}

// TForm is the circuit of three inductances with an ideal transformer Ratio : 1 at its second terminals.
type TForm struct {
	First       float64 // H, in series with the first winding
	Magnetising float64 // H, on the first winding's side
	Second      float64 // H, in series with the second winding, on its own side of the transformer
	Ratio       float64
}

// EquivalentCircuit gives the circuit of windings p and s, both by their index.
//
//	Series = Lp - M^2/Ls    Magnetising = M^2/Ls = k^2 Lp    Ratio = M/Ls = k sqrt(Lp/Ls)
//
// Its T form has the ratio sqrt(Lp/Ls) with the sign of M, which divides the leakage evenly:
//
//	First = (1-|k|) Lp    Magnetising = |k| Lp    Second = (1-|k|) Ls
//
// [Matrix.TForm] gives it for a ratio of one's own, such as the turns ratio.
//
// Errors: [magcirc.NoSolution] for windings that are not coupled; [magcirc.UnknownName]; [magcirc.NotPositive] for
// self inductances that are not positive.
func (m *Matrix) EquivalentCircuit(p, s int) (Circuit, error) {
	if err := m.pair(p, s); err != nil {
		return Circuit{}, err
	}
	lp, ls, mutual := m.Self(p), m.Self(s), m.Mutual(p, s)
	series, err := m.Leakage(p, []int{s})
	if err != nil {
		return Circuit{}, err
	}
	t, err := m.TForm(p, s, math.Copysign(math.Sqrt(lp/ls), mutual))
	return Circuit{Series: series, Magnetising: mutual * mutual / ls, Ratio: mutual / ls, T: t}, err
}

// TForm gives the T form of windings p and s for the ratio p : s of its ideal transformer.
//
//	First = Lp - ratio M    Magnetising = ratio M    Second = Ls - M/ratio
//
// Valid: any ratio but 0; an inductance that comes out negative is right as a part of the circuit, though no coil
// is like that. A difference below the rounding of the matrix is given as 0.
func (m *Matrix) TForm(p, s int, ratio float64) (TForm, error) {
	if err := m.pair(p, s); err != nil {
		return TForm{}, err
	}
	if ratio == 0 || math.IsNaN(ratio) || math.IsInf(ratio, 0) {
		return TForm{}, &magcirc.Error{Code: magcirc.BadValue, Elem: "equivalent circuit", Quantity: "ratio", Got: ratio, Msg: fmt.Sprintf("ratio %v is none", ratio)}
	}
	mutual := m.Mutual(p, s)
	return TForm{First: m.less(m.Self(p), ratio*mutual), Magnetising: ratio * mutual, Second: m.less(m.Self(s), mutual/ratio), Ratio: ratio}, nil
}

// less gives a - b, 0 where that is only rounding of the matrix.
func (m *Matrix) less(a, b float64) float64 {
	if d := a - b; math.Abs(d) > m.rounding(a) {
		return d
	}
	return 0
}

// pair refuses windings without an equivalent circuit.
func (m *Matrix) pair(p, s int) error {
	if err := m.check([]int{p, s}); err != nil {
		return err
	}
	elem := fmt.Sprintf("windings %s and %s", m.Names[p], m.Names[s])
	switch {
	case p == s:
		return &magcirc.Error{Code: magcirc.WrongUse, Elem: elem, Msg: "an equivalent circuit wants two windings"}
	case !(m.Self(p) > 0 && m.Self(s) > 0):
		return &magcirc.Error{Code: magcirc.NotPositive, Elem: elem, Msg: "a self inductance is not positive"}
	case m.Mutual(p, s) == 0:
		return &magcirc.Error{Code: magcirc.NoSolution, Elem: elem, Msg: "they are not coupled, so they have no common equivalent circuit"}
	}
	return nil
}
