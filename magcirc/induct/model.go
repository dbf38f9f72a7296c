package induct

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// ReadingSettings are what is known of the windings beside the readings; nil knows nothing.
type ReadingSettings struct {
	Windings []string           // their order in the matrix; nil takes them as the readings name them
	Turns    map[string]float64 // used only where no reading tells a self inductance: it then goes with turns squared
}

// Model is the inductance matrix behind meter readings.
type Model struct {
	Matrix
	Checks     []Check // each reading against the matrix
	Notes      []magcirc.Note
	covariance *mat.Dense // of the entries, in the order of pairs
}

// Check is a reading beside what the matrix gives for it.
type Check struct {
	Reading   Reading
	Model     float64 // H
	Deviation float64 // relative, model over reading less 1
}

// FromReadings gives the inductance matrix that fits meter readings: every entry from as many readings as bear on
// it, weighted by their uncertainties. Nil settings know no turns.
//
//	a reading is   L = i' Lm i   with i = 1 A in the measured windings, -Lss^-1 Ls i in the shorted, 0 in the open
//
// so each step solves a linear least-squares problem for the entries, with the currents of the step before. Aiding
// and opposing give M = (La - Lo)/4; open and shorted give M^2 = Ls (Lp - Lshort), whose sign no reading tells: it is
// taken as positive, with a note.
//
// Errors: [magcirc.NotPositive] where the readings belong to no part, with those that clash; [magcirc.NoSolution]
// where an entry follows from no reading, with the reading that would tell it; [magcirc.BadValue],
// [magcirc.DuplicateName], [magcirc.UnknownName] for readings that are none; [magcirc.NoConvergence].
// Source: inductance meters on coupled coils, textbook practice, e.g. Guru and Hiziroglu, Electric Machinery and
// Transformers, 3rd ed. 2004, ch. 2; the least-squares form is derived here.
func FromReadings(readings []Reading, s *ReadingSettings) (*Model, error) {
	if s == nil {
		s = &ReadingSettings{}
	}
	f, err := newFit(readings, s)
	if err != nil {
		return nil, err
	}
	if err := f.start(); err != nil {
		return nil, err
	}
	if err := f.iterate(); err != nil {
		return nil, err
	}
	return f.model()
}

// Uncertainty gives the standard uncertainty of a quantity of the matrix, such as a coupling or a leakage, that
// follows from those of the readings.
func (m *Model) Uncertainty(of func(m *Matrix) float64) float64 {
	pairs := pairsOf(m.Len())
	gradient := mat.NewVecDense(len(pairs), nil)
	for k, p := range pairs {
		d := 1e-6 * math.Sqrt(m.Self(p[0])*m.Self(p[1]))
		step := func(by float64) float64 {
			l := mat.NewSymDense(m.Len(), nil)
			l.CopySym(m.L)
			l.SetSym(p[0], p[1], l.At(p[0], p[1])+by)
			return of(&Matrix{m.Names, l})
		}
		gradient.SetVec(k, (step(d)-step(-d))/(2*d))
	}
	return math.Sqrt(mat.Inner(gradient, m.covariance, gradient))
}

// fit is the state of the least-squares problem.
type fit struct {
	readings []Reading
	settings *ReadingSettings
	index    map[string]int
	pairs    [][2]int // the unknown entries, i <= j
	m        *Matrix
	turns    []row // what turns say of self inductances that no reading tells
	notes    []magcirc.Note
}

// row is one linear equation of the entries: weights . entries = value, to within sigma.
type row struct {
	weights      []float64
	value, sigma float64
}

func newFit(readings []Reading, s *ReadingSettings) (*fit, error) {
	f := &fit{readings: readings, settings: s, index: map[string]int{}}
	names := slices.Clone(s.Windings)
	for _, r := range readings {
		if err := r.check(); err != nil {
			return nil, err
		}
		for _, n := range r.names() {
			if slices.Contains(names, n) {
				continue
			}
			if s.Windings != nil {
				return nil, &magcirc.Error{Code: magcirc.UnknownName, Elem: fmt.Sprintf("reading %q", r.String()),
					Msg: fmt.Sprintf("there is no winding %q; there are %s", n, strings.Join(names, ", "))}
			}
			names = append(names, n)
		}
	}
	if len(readings) == 0 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "readings", Msg: "there are none"}
	}
	m, err := NewMatrix(names, mat.NewSymDense(len(names), nil))
	if err != nil {
		return nil, err
	}
	f.m, f.pairs = m, pairsOf(len(names))
	for i, n := range names {
		f.index[n] = i
	}
	return f, nil
}

// pairsOf lists the entries of a symmetric matrix.
func pairsOf(n int) (pairs [][2]int) {
	for i := range n {
		for j := i; j < n; j++ {
			pairs = append(pairs, [2]int{i, j})
		}
	}
	return pairs
}

// row is the equation of a reading at the present matrix.
func (f *fit) row(r Reading) (row, error) {
	_, i, err := f.m.seen(r.series(f.index), r.shorted(f.index))
	if err != nil {
		return row{}, err
	}
	w := make([]float64, len(f.pairs))
	for k, p := range f.pairs {
		w[k] = i[p[0]] * i[p[1]]
		if p[0] != p[1] {
			w[k] *= 2
		}
	}
	return row{w, r.Inductance, r.uncertainty()}, nil
}

// solve gives the least-squares entries of rows, and which entries they determine: an entry of a direction that no
// row sees is not determined. scale gives the size of each entry.
func (f *fit) solve(rows []row, scale []float64) (entries []float64, determined []bool, covariance *mat.Dense) {
	n := len(f.pairs)
	a := mat.NewDense(max(len(rows), n), n, nil)
	b := mat.NewVecDense(max(len(rows), n), nil)
	for k, r := range rows {
		for c := range n {
			a.Set(k, c, r.weights[c]*scale[c]/r.sigma)
		}
		b.SetVec(k, r.value/r.sigma)
	}
	var svd mat.SVD
	svd.Factorize(a, mat.SVDThin)
	values := svd.Values(nil)
	var u, v mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	entries, determined = make([]float64, n), make([]bool, n)
	covariance = mat.NewDense(n, n, nil)
	for c := range n {
		determined[c] = true
	}
	for k, value := range values {
		known := value > 1e-7*values[0]
		var along float64
		if known {
			along = mat.Dot(u.ColView(k), b) / value
		}
		for c := range n {
			entries[c] += along * v.At(c, k) * scale[c]
			if !known && math.Abs(v.At(c, k)) > 1e-6 {
				determined[c] = false
			}
			for d := range n {
				if known {
					covariance.Set(c, d, covariance.At(c, d)+v.At(c, k)*v.At(d, k)*scale[c]*scale[d]/(value*value))
				}
			}
		}
	}
	return entries, determined, covariance
}

// rows collects the equations of all readings at the present matrix.
func (f *fit) rows() ([]row, error) {
	rows := slices.Clone(f.turns)
	for _, r := range f.readings {
		row, err := f.row(r)
		if err != nil {
			return nil, err
		}
		rows = append(rows, row)
	}
	return rows, nil
}

// iterate repeats the linear problem until the entries stand. A step to a matrix that no part has is shortened.
func (f *fit) iterate() error {
	refused, last := false, math.Inf(1)
	for range 200 {
		rows, err := f.rows()
		if err != nil {
			return f.clash()
		}
		scale := f.scale()
		entries, determined, _ := f.solve(rows, scale)
		if slices.Contains(determined, false) {
			return f.undetermined(determined)
		}
		step, change := make([]float64, len(entries)), 0.0
		for k, p := range f.pairs {
			step[k] = entries[k] - f.m.L.At(p[0], p[1])
			change = max(change, math.Abs(step[k])/scale[k])
		}
		refused = f.move(step)
		if change < 1e-12 || change < 1e-8 && change >= last { // at the rounding of the readings
			return nil
		}
		last = change
	}
	if refused {
		return f.clash()
	}
	return &magcirc.Error{Code: magcirc.NoConvergence, Elem: "readings", Msg: "no matrix was found in 200 steps", Hint: "read each winding open first"}
}

// move takes the step, halved until the matrix is not indefinite unless it was before, and reports whether the full
// step would have made it so.
func (f *fit) move(step []float64) (refused bool) {
	before, _ := f.m.Definite()
	at := func(share float64) {
		for k, p := range f.pairs {
			f.m.L.SetSym(p[0], p[1], f.m.L.At(p[0], p[1])+share*step[k])
		}
	}
	at(1)
	after, _ := f.m.Definite()
	for share := 0.5; before != Indefinite && after == Indefinite && share > 1e-6; share /= 2 {
		refused = true
		at(-share)
		after, _ = f.m.Definite()
	}
	return refused
}

// scale gives sqrt(Li Lj) for each entry.
func (f *fit) scale() []float64 {
	s := make([]float64, len(f.pairs))
	for k, p := range f.pairs {
		s[k] = math.Sqrt(math.Abs(f.m.Self(p[0]) * f.m.Self(p[1])))
	}
	return s
}

// model checks the matrix and sets each reading beside it.
func (f *fit) model() (*Model, error) {
	kind, detail := f.m.Definite()
	if kind == Indefinite {
		return nil, f.clash()
	}
	if kind == Singular {
		f.note(magcirc.Remark, detail.Text)
	}
	rows, err := f.rows()
	if err != nil {
		return nil, err
	}
	m := &Model{Matrix: *f.m}
	_, _, m.covariance = f.solve(rows, f.scale())
	assumed := false
	for _, r := range f.readings {
		l, _, err := f.m.seen(r.series(f.index), r.shorted(f.index))
		if err != nil {
			return nil, err
		}
		c := Check{r, l, l/r.Inductance - 1}
		m.Checks = append(m.Checks, c)
		if math.Abs(l-r.Inductance) > 2*r.uncertainty() {
			f.note(magcirc.Remark, fmt.Sprintf("reading %s lies %s from the model, more than twice its uncertainty",
				r.quoted(), phys.FormatDigits(math.Abs(c.Deviation), "percent", 2)))
		}
		assumed = assumed || r.Uncertainty == 0
	}
	if assumed {
		f.note(magcirc.Assumed, "readings without an uncertainty are taken as good to 1 %")
	}
	m.Notes = f.notes
	return m, nil
}

func (f *fit) note(kind magcirc.NoteKind, text string) {
	f.notes = append(f.notes, magcirc.Note{Kind: kind, Elem: "readings", Text: text})
}
