package hyst

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc"
	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// Interval is a value with the limits between which it lies with 95 percent confidence, as far as the deviations of the
// fit are independent errors.
type Interval struct{ Value, Low, High float64 }

// Fitted says how the law follows one record.
type Fitted struct {
	Name          string
	RMS           float64   // root mean square of the deviation of B, relative to the record's largest B
	Worst         float64   // the largest deviation, relative
	B             []float64 // T, of the law at the record's field strengths
	Residual      []float64 // T, law less measurement
	Loop          bool      // the figures below are those of a loop: measured, and of the law
	Br, LawBr     float64   // remanence in T
	Hc, LawHc     float64   // coercivity in A/m
	Area, LawArea float64   // J/m3
}

// JAFit is a fitted Jiles-Atherton law.
type JAFit struct {
	Law                *JilesAtherton
	Ms, A, K, Alpha, C Interval
	RMS                float64 // over all records, relative to their largest B
	Records            []Fitted
	Evaluations        int // runs of the law
	Notes              []magcirc.Note
}

// FitSettings of the Jiles-Atherton fit; the zero value means the defaults.
type FitSettings struct {
	Form  Form
	Name  string
	Start *Parameters // instead of the start from the records' own figures
}

// FitJilesAtherton finds the parameters with which a Jiles-Atherton law follows records best: the sum over records of
// the mean square deviation of B relative to the record's largest B is smallest, each record with its weight.
//
// The search runs in ln Ms, ln a, ln k, logit c and logit (alpha Ms/(3a)): every law on the way is one that cannot
// fold (Form1986: c/(1+c) for c).
//
// Several loops of different height, or a loop with the initial curve, determine the parameters; one loop alone does not,
// and the fit says so. The fit says too how far the law can follow: real cores are no Jiles-Atherton laws.
//
// Errors: [magcirc.BadValue] for records that cannot be; [magcirc.OutsideData] for fewer points than parameters.
func FitJilesAtherton(records []Record, set *FitSettings) (*JAFit, error) {
	if set == nil {
		set = &FitSettings{}
	}
	f := &jaSearch{records: records, form: set.Form, name: set.Name}
	if err := f.prepare(); err != nil {
		return nil, err
	}
	start := f.start()
	if set.Start != nil {
		if err := set.Start.check(); err != nil {
			return nil, err
		}
		start = f.coordinates(*set.Start)
	}
	best := num.LeastSquares(f.residuals, start, f.count, 60, 1e-9)
	runs := best.Evaluations
	if set.Start == nil && best.Sum > follows*follows*f.weight {
		for _, other := range f.others(start) {
			l := num.LeastSquares(f.residuals, other, f.count, 60, 1e-9)
			runs += l.Evaluations
			if l.Sum < best.Sum {
				best = l
			}
		}
	}
	return f.conclude(best, runs)
}

// follows is the relative deviation above which other starts are tried too.
const follows = 0.02

// jaSearch is a fit on its way.
type jaSearch struct {
	records []Record
	form    Form
	name    string
	count   int     // points of all records
	weight  float64 // of all records
	scale   []float64
	b       []float64
}

func (f *jaSearch) prepare() error {
	if len(f.records) == 0 {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: "fit", Msg: "there is no loop", Hint: "give one or more: ReadLoop(\"loop.csv\")"}
	}
	most := 0
	for i := range f.records {
		r := &f.records[i]
		if err := r.check(); err != nil {
			return err
		}
		w := r.Weight
		if w == 0 {
			w = 1
		}
		if !(w > 0) || math.IsInf(w, 1) {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: r.elem(), Quantity: "weight", Got: w, Msg: fmt.Sprintf("weight %s is not a positive value", phys.Format(w, ""))}
		}
		f.count += len(r.H)
		f.weight += w
		f.scale = append(f.scale, math.Sqrt(w/float64(len(r.H)))/r.peak())
		most = max(most, len(r.H))
	}
	if f.count < 10 {
		return &magcirc.Error{Code: magcirc.OutsideData, Elem: "fit", Quantity: "points", Got: float64(f.count), Limit: 10,
			Msg: fmt.Sprintf("%d points for five parameters", f.count), Hint: "give 10 or more"}
	}
	f.b = make([]float64, most)
	return nil
}

// residuals runs the law of the coordinates through the records.
func (f *jaSearch) residuals(x, r []float64) {
	law := newJilesAtherton(f.parameters(x))
	at := 0
	for i := range f.records {
		rec := &f.records[i]
		rec.simulate(law, f.b)
		for k, b := range rec.B {
			r[at+k] = (f.b[k] - b) * f.scale[i]
		}
		at += len(rec.B)
	}
}

// parameters gives the law's parameters at the coordinates (ln Ms, ln a, ln k, logit c, logit ratio).
func (f *jaSearch) parameters(x []float64) Parameters {
	p := Parameters{Ms: math.Exp(clamp(x[0], 3, 14.6)), A: math.Exp(clamp(x[1], -9, 16)), K: math.Exp(clamp(x[2], -9, 16)), Form: f.form, Name: f.name}
	p.K = clamp(p.K, 1e-6*p.A, 1e6*p.A)
	p.C = logistic(x[3])
	p.Alpha = logistic(x[4]) * 3 * p.A / p.Ms
	if f.form == Form1986 {
		p.C /= 1 - p.C
	}
	return p
}

// coordinates is the inverse of parameters.
func (f *jaSearch) coordinates(p Parameters) []float64 {
	c := p.C
	if f.form == Form1986 {
		c /= 1 + c
	}
	return []float64{math.Log(p.Ms), math.Log(p.A), math.Log(p.K), logit(c), logit(p.Ratio())}
}

func clamp(x, lo, hi float64) float64 { return math.Min(math.Max(x, lo), hi) }

// logistic keeps 1e-7 off its ends, so that the law stays one.
func logistic(x float64) float64 { return 1 / (1 + math.Exp(-clamp(x, -16, 16))) }

func logit(p float64) float64 {
	p = clamp(p, 1e-6, 1-1e-6)
	return math.Log(p / (1 - p))
}

// start gives the coordinates of a law with the records' largest B and coercivity.
func (f *jaSearch) start() []float64 {
	b, h, hc := 0.0, 0.0, 0.0
	for i := range f.records {
		r := &f.records[i]
		b = math.Max(b, r.peak())
		for k := range r.H {
			h = math.Max(h, math.Abs(r.H[k]))
		}
		for k := 1; k < len(r.H); k++ { // between points: a sample beside the crossing may have H = 0
			if a, c := r.B[k-1], r.B[k]; a*c < 0 {
				hc = math.Max(hc, math.Abs(r.H[k-1]+(r.H[k]-r.H[k-1])*a/(a-c)))
			}
		}
	}
	hc = math.Max(hc, h/200)
	return []float64{math.Log(1.2 * b / phys.Mu0), math.Log(hc), math.Log(1.2 * hc), logit(0.2), logit(0.4)}
}

// others gives further starts: softer, less coupled, more reversible.
func (f *jaSearch) others(x []float64) [][]float64 {
	shift := func(a, k, c, ratio float64) []float64 {
		return []float64{x[0], x[1] + a, x[2] + k, logit(c), logit(ratio)}
	}
	return [][]float64{shift(1, 0, 0.5, 0.05), shift(0.7, 1, 0.7, 0.01), shift(-0.5, 0, 0.05, 0.2), shift(1.5, 0.5, 0.1, 0.7), shift(0.5, 1.5, 0.9, 0.4)}
}

// conclude gives the fit at the end of the search.
func (f *jaSearch) conclude(l *num.Least, runs int) (*JAFit, error) {
	p := f.parameters(l.X)
	law, err := NewJilesAtherton(p)
	if err != nil {
		return nil, err
	}
	fit := &JAFit{Law: law, RMS: math.Sqrt(l.Sum / f.weight), Evaluations: runs, Records: Follow(law, f.records)}
	f.intervals(fit, p, l)
	fit.note(f.records)
	return fit, nil
}

// intervals sets the limits of 95 percent confidence, from the covariance in the search's coordinates.
func (f *jaSearch) intervals(fit *JAFit, p Parameters, l *num.Least) {
	cov, ok := l.Covariance()
	const z = 1.96
	spread := func(g ...float64) float64 {
		if !ok {
			return math.Inf(1)
		}
		v := mat.NewVecDense(5, g)
		return z * math.Sqrt(math.Max(0, mat.Inner(v, cov, v)))
	}
	around := func(v, s float64) Interval { return Interval{v, v * math.Exp(-s), v * math.Exp(s)} }
	fit.Ms, fit.A, fit.K = around(p.Ms, spread(1, 0, 0, 0, 0)), around(p.A, spread(0, 1, 0, 0, 0)), around(p.K, spread(0, 0, 1, 0, 0))
	c := func(x float64) float64 {
		v := logistic(x)
		if f.form == Form1986 {
			return v / (1 - v)
		}
		return v
	}
	s := spread(0, 0, 0, 1, 0)
	fit.C = Interval{p.C, c(l.X[3] - s), c(l.X[3] + s)}
	fit.Alpha = around(p.Alpha, spread(-1, 1, 0, 0, 1-p.Ratio())) // ln alpha = ln a - ln Ms + ln ratio
}

// Follow gives how a law follows records.
func Follow(law Law, records []Record) []Fitted {
	list := make([]Fitted, len(records))
	for i := range records {
		r := &records[i]
		f := Fitted{Name: r.elem(), B: make([]float64, len(r.H)), Residual: make([]float64, len(r.H))}
		r.simulate(law, f.B)
		sum, peak := 0.0, r.peak()
		for k := range r.B {
			d := f.B[k] - r.B[k]
			f.Residual[k] = d
			sum += d * d
			f.Worst = math.Max(f.Worst, math.Abs(d)/peak)
		}
		f.RMS = math.Sqrt(sum/float64(len(r.B))) / peak
		if measured, err := NewLoop(r.Name, r.H, r.B); r.Cyclic && err == nil {
			if own, err := NewLoop(r.Name, r.H, f.B); err == nil {
				f.Loop = true
				f.Br, f.Hc, f.Area = measured.Remanence(), measured.Coercivity(), measured.Area()
				f.LawBr, f.LawHc, f.LawArea = own.Remanence(), own.Coercivity(), own.Area()
			}
		}
		list[i] = f
	}
	return list
}

// String says how the law follows the record.
func (f *Fitted) String() string {
	s := fmt.Sprintf("%s: deviation %s rms, %s at worst", f.Name, percent(f.RMS), percent(f.Worst))
	if f.Loop {
		s += fmt.Sprintf("; Br %s, Hc %s, area %s", off(f.LawBr, f.Br), off(f.LawHc, f.Hc), off(f.LawArea, f.Area))
	}
	return s
}

func percent(x float64) string { return phys.FormatDigits(x, "percent", 2) }

func off(got, want float64) string {
	return fmt.Sprintf("%+.2g %%", 100*(got/want-1))
}

// Statement says in a sentence how far the law can follow what was measured.
func Statement(rms float64, records []Fitted) string {
	if rms < 1e-6 {
		return "follows the records to their last digits"
	}
	s := "follows the records within " + percent(rms) + " rms of their largest B"
	worst, at := 0.0, -1
	for i := range records {
		if f := &records[i]; f.Loop && math.Abs(f.LawArea/f.Area-1) > worst {
			worst, at = math.Abs(f.LawArea/f.Area-1), i
		}
	}
	if at >= 0 {
		s += fmt.Sprintf("; the loop area is %s off at worst (%s)", off(records[at].LawArea, records[at].Area), records[at].Name)
	}
	switch {
	case rms >= 0.03:
		s += ": the law cannot follow this core closely"
	case worst > 0.1:
		s += ": good for flux, not for losses"
	}
	return s
}

// note adds what a reader must know of the fit.
func (fit *JAFit) note(records []Record) {
	elem := fit.Law.p.elem()
	add := func(kind magcirc.NoteKind, text string) {
		fit.Notes = append(fit.Notes, magcirc.Note{Kind: kind, Elem: elem, Text: text})
	}
	add(magcirc.Remark, Statement(fit.RMS, fit.Records))
	name, widest := "", 1.0
	var loose []string
	for _, q := range [...]struct {
		name string
		i    Interval
		unit string
	}{{"Ms", fit.Ms, "A/m"}, {"a", fit.A, "A/m"}, {"k", fit.K, "A/m"}, {"alpha", fit.Alpha, ""}, {"c", fit.C, ""}} {
		w := q.i.High / q.i.Low
		if w > 1.5 || math.IsNaN(w) {
			loose = append(loose, fmt.Sprintf("%s (%s to %s)", q.name, phys.FormatDigits(q.i.Low, q.unit, 3), phys.FormatDigits(q.i.High, q.unit, 3)))
		}
		if w > widest {
			name, widest = fmt.Sprintf("%s lies between %s and %s", q.name, phys.FormatDigits(q.i.Low, q.unit, 3), phys.FormatDigits(q.i.High, q.unit, 3)), w
		}
	}
	if len(records) == 1 && records[0].Cyclic {
		text := "one loop alone does not determine the parameters"
		if name != "" {
			text += ": " + name + " by this loop's own noise, and other loops may ask for other values"
		}
		add(magcirc.OutOfRange, text+". Add loops of other height, or the initial curve")
	} else if len(loose) > 0 {
		add(magcirc.Remark, "the records leave open "+strings.Join(loose, ", "))
	}
	fit.Notes = append(fit.Notes, fit.Law.notes...)
}
