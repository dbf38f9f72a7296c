package induct

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
)

// term is a winding in a series connection: +1 carries the current into the dot, -1 out of it.
type term struct {
	winding int
	sign    float64
}

func (m *Matrix) terms(windings []int, signs []float64) ([]term, error) {
	if err := m.check(windings); err != nil {
		return nil, err
	}
	if len(windings) == 0 || len(windings) != len(signs) {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "inductance matrix", Got: float64(len(signs)), Limit: float64(len(windings)),
			Msg: fmt.Sprintf("%d windings with %d signs", len(windings), len(signs))}
	}
	terms := make([]term, len(windings))
	for k, w := range windings {
		terms[k] = term{w, math.Copysign(1, signs[k])}
	}
	return terms, nil
}

// seen gives the inductance at the terminals of a series connection with some windings shorted, and the currents in
// all windings per ampere at the terminals.
func (m *Matrix) seen(series []term, shorted []int) (l float64, current []float64, err error) {
	current = make([]float64, m.Len())
	for _, t := range series {
		current[t.winding] += t.sign
	}
	linked := mat.NewVecDense(m.Len(), nil)
	linked.MulVec(m.L, mat.NewVecDense(m.Len(), append([]float64(nil), current...)))
	open := 0.0
	for _, t := range series {
		open += t.sign * linked.AtVec(t.winding)
	}
	if len(shorted) == 0 {
		return open, current, nil
	}
	p, err := m.project(shorted)
	if err != nil {
		return 0, nil, err
	}
	rhs := mat.NewVecDense(len(shorted), nil)
	for k, s := range shorted {
		rhs.SetVec(k, linked.AtVec(s))
	}
	x, _ := p.solve(rhs)
	for k, s := range shorted {
		current[s] -= x.AtVec(k)
	}
	return m.less(open, mat.Dot(rhs, x)), current, nil
}

const epsilon = 0x1p-52

// rounding is what an inductance l in H, made of entries of the matrix, may owe to rounding.
func (m *Matrix) rounding(l float64) float64 { return 16 * float64(m.Len()) * epsilon * math.Abs(l) }

// Within this share of the largest eigenvalue of the matrix scaled to unit diagonal an eigenvalue counts as zero: a
// network solved to 1e-9 knows no better.
const singular = 1e-9

// projector solves with the part of the matrix that belongs to some windings, leaving out the directions of current
// that store no energy.
type projector struct {
	scale   []float64 // 1/sqrt(Lii)
	values  []float64
	vectors *mat.Dense
}

// project takes the part of the matrix of the given windings apart. It refuses an indefinite one.
func (m *Matrix) project(windings []int) (*projector, error) {
	scaled, scale := m.scaled(windings)
	var eigen mat.EigenSym
	if !eigen.Factorize(scaled, true) {
		return nil, &magcirc.Error{Code: magcirc.NoConvergence, Elem: "inductance matrix", Msg: "its eigenvalues were not found"}
	}
	p := &projector{scale: scale, values: eigen.Values(nil), vectors: new(mat.Dense)}
	eigen.VectorsTo(p.vectors)
	if least := p.values[0]; least < -singular*float64(len(windings)) {
		_, d := m.Definite()
		return nil, &magcirc.Error{Code: magcirc.NotPositive, Elem: "inductance matrix", Got: least, Msg: d.Text}
	}
	return p, nil
}

// scaled gives the part of the matrix of the given windings with unit diagonal, and the scale 1/sqrt(Lii).
func (m *Matrix) scaled(windings []int) (*mat.SymDense, []float64) {
	n := len(windings)
	scale := make([]float64, n)
	for k, w := range windings {
		scale[k] = 1
		if d := math.Abs(m.L.At(w, w)); d > 0 {
			scale[k] = 1 / math.Sqrt(d)
		}
	}
	s := mat.NewSymDense(n, nil)
	for a := range n {
		for b := a; b < n; b++ {
			s.SetSym(a, b, m.L.At(windings[a], windings[b])*scale[a]*scale[b])
		}
	}
	return s, scale
}

// solve gives x of least norm with L x = rhs in the directions that store energy, and the share of rhs in the others.
func (p *projector) solve(rhs *mat.VecDense) (x *mat.VecDense, missed float64) {
	n := len(p.values)
	x = mat.NewVecDense(n, nil)
	total, out := 0.0, 0.0
	for k, value := range p.values {
		c := 0.0
		for a := range n {
			c += p.vectors.At(a, k) * p.scale[a] * rhs.AtVec(a)
		}
		total += c * c
		if value <= singular*float64(n) {
			out += c * c
			continue
		}
		for a := range n {
			x.SetVec(a, x.AtVec(a)+p.vectors.At(a, k)*p.scale[a]*c/value)
		}
	}
	if total > 0 {
		missed = math.Sqrt(out / total)
	}
	return x, missed
}
