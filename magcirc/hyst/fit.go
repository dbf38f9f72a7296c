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
type Interval struct {
	Value, Low, High float64
	Open             bool // the records do not determine it: the limits say nothing
}

// open says whether limits are none: not finite, or six decades apart.
func (i Interval) open() bool {
	return math.IsNaN(i.Low+i.High) || math.IsInf(i.High, 0) || !(i.High <= 1e6*i.Low)
}

// words gives the limits in words.
func (i Interval) words(name, unit string) string {
	if i.Open {
		return name + " is not determined"
	}
	return fmt.Sprintf("%s lies between %s and %s", name, phys.FormatDigits(i.Low, unit, 3), phys.FormatDigits(i.High, unit, 3))
}

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
	Starts             int // searches, each from a start of its own
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
// fold (Form1986: c/(1+c) for c). It begins at up to eight places that a grid over the scales of the records finds most
// promising, always the same ones, and ends with the first that leaves nothing but noise, else with the best of all.
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
	starts := f.starts
	if set.Start != nil {
		if err := set.Start.check(); err != nil {
			return nil, err
		}
		starts = func() [][]float64 { return [][]float64{f.coordinates(*set.Start)} }
	}
	var best *num.Least
	runs, tried := 0, 0
	for _, x := range starts() {
		l := num.LeastSquares(f.residuals, x, f.count, 60, 1e-9)
		runs += l.Evaluations
		tried++
		if best == nil || l.Sum < best.Sum {
			best = l
		}
		if f.settled(l) {
			break
		}
	}
	return f.conclude(best, tried, runs)
}

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

// conclude gives the fit at the end of the search.
func (f *jaSearch) conclude(l *num.Least, tried, runs int) (*JAFit, error) {
	p := f.parameters(l.X)
	law, err := NewJilesAtherton(p)
	if err != nil {
		return nil, err
	}
	fit := &JAFit{Law: law, RMS: math.Sqrt(l.Sum / f.weight), Starts: tried, Evaluations: runs, Records: Follow(law, f.records)}
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
	around := func(v, s float64) Interval {
		i := Interval{Value: v, Low: v * math.Exp(-s), High: v * math.Exp(s)}
		i.Open = i.open()
		return i
	}
	fit.Ms, fit.A, fit.K = around(p.Ms, spread(1, 0, 0, 0, 0)), around(p.A, spread(0, 1, 0, 0, 0)), around(p.K, spread(0, 0, 1, 0, 0))
	c := func(x float64) float64 {
		v := logistic(x)
		if f.form == Form1986 {
			return v / (1 - v)
		}
		return v
	}
	s := spread(0, 0, 0, 1, 0)
	fit.C = Interval{Value: p.C, Low: c(l.X[3] - s), High: c(l.X[3] + s)}
	fit.C.Open = !(logistic(l.X[3]+s)-logistic(l.X[3]-s) < 0.98)  // nearly all that it can be
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
	d := got/want - 1
	if math.IsNaN(d) || math.IsInf(d, 0) {
		return "not comparable"
	}
	sign := "+"
	if d < 0 {
		sign = "-"
	}
	return sign + percent(math.Abs(d))
}

// poor is the relative deviation above which a law does not follow a core.
const poor = 0.03

// Statement says in a sentence how far a law follows what was measured.
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
	if rms < poor && worst > 0.1 {
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
	text := Statement(fit.RMS, fit.Records)
	if fit.RMS >= poor {
		text += fmt.Sprintf(": the closest that %s found, which is not close; other parameters may follow better, or the law does not suit what was measured", searches(fit.Starts))
	}
	add(magcirc.Remark, text)
	widest, at := 1.0, ""
	var loose []string
	for _, q := range [...]struct {
		name string
		i    Interval
		unit string
	}{{"Ms", fit.Ms, "A/m"}, {"a", fit.A, "A/m"}, {"k", fit.K, "A/m"}, {"alpha", fit.Alpha, ""}, {"c", fit.C, ""}} {
		w := q.i.High / q.i.Low
		if q.i.Open {
			w = math.Inf(1)
		}
		if w > 1.5 {
			loose = append(loose, q.i.words(q.name, q.unit))
		}
		if w > widest {
			widest, at = w, q.i.words(q.name, q.unit)
		}
	}
	if len(records) == 1 && records[0].Cyclic {
		text := "one loop alone does not determine the parameters"
		if widest > 1.01 { // else the loop has no noise
			text += ": " + at + " by this loop's own noise, and other loops may ask for other values"
		}
		add(magcirc.OutOfRange, text+". Add loops of other height, or the initial curve")
	} else if len(loose) > 0 {
		add(magcirc.Remark, "what the records leave open: "+strings.Join(loose, ", "))
	}
	fit.Notes = append(fit.Notes, fit.Law.notes...)
}

func searches(n int) string {
	if n == 1 {
		return "one search"
	}
	return fmt.Sprintf("%d searches", n)
}
