package hyst

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// PlayFit is a fitted play law.
type PlayFit struct {
	Law     *Play
	RMS     float64 // over all records, relative to their largest B
	Records []Fitted
	Notes   []magcirc.Note
}

// The dictionary of cells that a fit chooses from.
const (
	frictions = 24 // and one without friction
	shapes    = 16
)

// FitPlay finds play cells that follow records best, in the sense of [FitJilesAtherton]. Flux density is a sum over
// cells of given friction and shape with shares that are not negative; from a dictionary of 25 frictions by 16 shapes
// the shares are found by non-negative least squares, a convex problem with one minimum: no start, no local minima. Most
// shares come out zero.
//
// A family of loops of different heights is needed: frictions above the largest field measured are not known.
//
// Errors: as [FitJilesAtherton].
func FitPlay(records []Record, name string) (*PlayFit, error) {
	f := &jaSearch{records: records, name: name}
	if err := f.prepare(); err != nil {
		return nil, err
	}
	var cells []PlayCell
	var x []float64
	total, reach := math.Inf(1), 2.0
	for ; total > mostMs && reach > 0.1; reach /= 1.4 { // loops that do not saturate ask for soft cells of any Ms
		cells = dictionary(f, reach)
		gram, rhs := f.equations(cells)
		x, total = num.NonNegative(gram, rhs), 0
		for _, w := range x {
			total += w
		}
	}
	var chosen []PlayCell
	for i, w := range x {
		if w > 1e-5*total {
			c := cells[i]
			c.Ms = w
			chosen = append(chosen, c)
		}
	}
	law, err := NewNamedPlay(name, chosen...)
	if err != nil {
		return nil, err
	}
	fit := &PlayFit{Law: law, Records: Follow(law, records)}
	sum := 0.0
	for i := range fit.Records {
		w := records[i].Weight
		if w == 0 {
			w = 1
		}
		sum += w * fit.Records[i].RMS * fit.Records[i].RMS
	}
	fit.RMS = math.Sqrt(sum / f.weight)
	note := func(kind magcirc.NoteKind, text string) {
		fit.Notes = append(fit.Notes, magcirc.Note{Kind: kind, Elem: law.elem(), Text: text})
	}
	text := Statement(fit.RMS, fit.Records)
	if fit.RMS >= poor {
		text += ": the cells of the dictionary follow no closer"
	}
	note(magcirc.Remark, text)
	if len(records) == 1 && records[0].Cyclic {
		note(magcirc.OutOfRange, "one loop alone does not determine the cells: smaller loops may go otherwise. Add loops of other height")
	}
	return fit, nil
}

// dictionary gives the cells to choose from, of 1 A/m each, with shapes up to reach times the largest field strength.
func dictionary(f *jaSearch, reach float64) []PlayCell {
	hc := f.scales().coercivity
	peak, least := 0.0, math.Inf(1)
	for i := range f.records {
		own := 0.0
		for _, h := range f.records[i].H {
			own = math.Max(own, math.Abs(h))
		}
		peak, least = math.Max(peak, own), math.Min(least, own)
	}
	var cells []PlayCell
	lo := math.Min(hc, least) / 15
	kappas, as := ladder(lo, math.Max(math.Min(peak, 8*hc), 2*lo), frictions), ladder(math.Min(least, hc)/8, reach*peak, shapes)
	for i := -1; i < frictions; i++ {
		kappa := 0.0
		if i >= 0 {
			kappa = kappas[i]
		}
		for _, a := range as {
			cells = append(cells, PlayCell{Ms: 1, A: a, Kappa: kappa})
		}
	}
	return cells
}

// equations gives the normal equations of the shares: J = sum of shares times mu0 L(hr/a) at all points.
func (f *jaSearch) equations(cells []PlayCell) (gram *mat.SymDense, rhs []float64) {
	n := len(cells)
	a, b := mat.NewDense(n, f.count, nil), make([]float64, f.count)
	at := 0
	for i := range f.records {
		r := &f.records[i]
		for k := range r.B {
			b[at+k] = (r.B[k] - phys.Mu0*r.H[k]) * f.scale[i]
		}
		for c := range cells {
			row := a.RawRowView(c)[at : at+len(r.B)]
			r.simulate(&Play{cell: cells[c : c+1], ms: 1}, row)
			for k := range row {
				row[k] = (row[k] - phys.Mu0*r.H[k]) * f.scale[i]
			}
		}
		at += len(r.B)
	}
	gram = mat.NewSymDense(n, nil)
	gram.SymOuterK(1, a)
	v := mat.NewVecDense(n, nil)
	v.MulVec(a, mat.NewVecDense(f.count, b))
	return gram, v.RawVector().Data
}

// FitAnhysteretic finds the Langevin law, ms and a in A/m and alpha, that follows points of an anhysteretic curve best:
// deviations of B are weighed alike. rms is what is left, relative to the largest B.
//
// Errors: as [FitJilesAtherton].
func FitAnhysteretic(h, b []float64) (ms, a, alpha, rms float64, err error) {
	r := Record{Name: "anhysteretic curve", H: h, B: b}
	if err := r.check(); err != nil {
		return 0, 0, 0, 0, err
	}
	f := &jaSearch{}
	parameters := func(x []float64) Parameters { return f.parameters([]float64{x[0], x[1], x[1], -16, x[2]}) }
	run := func(x, res []float64) {
		j := &JilesAtherton{p: parameters(x)}
		j.alpha = j.p.Alpha * j.p.Ms / j.p.A
		for i := range h {
			res[i] = (j.Anhysteretic(h[i]) - b[i]) / r.peak()
		}
	}
	top := 0.0
	for i := range h {
		top = math.Max(top, math.Abs(h[i]))
	}
	var best *num.Least
	for _, shape := range [...]float64{0.3, 0.05, 0.01} {
		l := num.LeastSquares(run, []float64{math.Log(1.2 * r.peak() / phys.Mu0), math.Log(shape * top), 0}, len(h), 100, 1e-10)
		if best == nil || l.Sum < best.Sum {
			best = l
		}
	}
	p := parameters(best.X)
	if !(p.Ms < mostMs) {
		return 0, 0, 0, 0, &magcirc.Error{Code: magcirc.NoSolution, Elem: "anhysteretic curve", Quantity: "Ms", Unit: "A/m", Got: p.Ms, Limit: mostMs,
			Msg: fmt.Sprintf("the points do not saturate: the best Ms would be %s", phys.Format(p.Ms, "A/m")), Hint: "add points at higher field"}
	}
	return p.Ms, p.A, p.Alpha, math.Sqrt(best.Sum / float64(len(h))), nil
}
