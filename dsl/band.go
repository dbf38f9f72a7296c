package dsl

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"ampturn/dsl/chart"
	"ampturn/dsl/doc"
	"ampturn/dsl/review"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
	"ampturn/magcirc/tol"
)

// Band is a result over tolerances: nominal, smallest and largest value, and what each tolerance does to it.
type Band struct {
	elem              string
	unit              string
	of                *roster
	inputs            []input
	nominal, min, max float64
	atMin, atMax      []float64
	effects           []tol.Effect
	worst             *tol.Band
	drawn             *tol.Distribution
	seed              uint64
	from              *answer // what the nominal value is
}

// state is the circuit of a sample under a drive.
func (s *Sample) state(c *MagneticCircuit, d reluct.Drive) *OperatingPoint {
	next := s.Part(c)
	op := next.solved(d)
	if !next.drawn {
		next.keepAssumptions(op.Notes())
	}
	return op
}

func (b *Band) spreads() bool {
	for _, in := range b.inputs {
		if in.Half > 0 {
			return true
		}
	}
	return false
}

func (b *Band) given() {
	if b == nil || b.elem == "" {
		refuse(magcirc.BadValue, "band", "there is none", "make it with WorstCase(...) or MonteCarlo(...)")
	}
}

// Nom is the result with all tolerances at their nominal values.
func (b *Band) Nom() Value { b.given(); return b.nominal }

// Min is the smallest result.
func (b *Band) Min() Value { b.given(); return b.min }

// Max is the largest result.
func (b *Band) Max() Value { b.given(); return b.max }

// Mean is the mean of the draws of [MonteCarlo].
func (b *Band) Mean() Value { return b.draws("mean").Mean }

// Deviation is the standard deviation of the draws of [MonteCarlo].
func (b *Band) Deviation() Value { return b.draws("deviation").Deviation }

// Quantile is the value below which a share of the draws of [MonteCarlo] lies.
func (b *Band) Quantile(share Ratio) Value {
	d := b.draws("quantile")
	wantRange("quantile", "share", share, 0, 1, "")
	return d.Quantile(share)
}

// Yield is the share of the draws of [MonteCarlo] that keeps a bound.
func (b *Band) Yield(bound Bound) Ratio {
	d := b.draws("yield")
	low, high := b.limits(bound)
	return d.Yield(low, high)
}

// Cpk is the capability index of the draws of [MonteCarlo] against a bound: the distance of the mean from the nearer
// limit in units of three standard deviations. 1.33 is a common demand.
func (b *Band) Cpk(bound Bound) Ratio {
	d := b.draws("Cpk")
	return d.Capability(b.limits(bound))
}

// limits are the bounds of a rule for values of this band's sign.
func (b *Band) limits(bound Bound) (low, high float64) {
	bound.given()
	low, high = bound.rule.Low, bound.rule.High
	if bound.rule.Kind == review.AtMost && b.unit != "degC" {
		low = -high
	}
	return low, high
}

func (b *Band) draws(what string) *tol.Distribution {
	b.given()
	if b.drawn == nil {
		refuse(magcirc.WrongUse, "band", "of a worst case has no "+what, "draw it with MonteCarlo(10000, 1, ...)")
	}
	return b.drawn
}

// conditions says what the band covers.
func (b *Band) conditions() string {
	b.given()
	n := 0
	for _, in := range b.inputs {
		if in.Half > 0 {
			n++
		}
	}
	tolerances := fmt.Sprintf("%d tolerances", n)
	if n == 1 {
		tolerances = "1 tolerance"
	}
	how := "worst case over " + tolerances
	if b.drawn != nil {
		how = fmt.Sprintf("%d draws of %s, seed %d", len(b.drawn.Values), tolerances, b.seed)
	}
	if b.from != nil {
		how += ", " + b.from.op.conditions()
	}
	return how
}

// assume enters what the draws take for granted.
func (b *Band) assume() {
	for _, in := range b.inputs {
		if in.Half > 0 && !in.chosen {
			review.Assume(in.Name+": tolerance without a distribution, taken as uniform", review.Assumed, "add .Normal() to the part, or leave it: uniform spreads more")
		}
	}
}

// MIMEBundle shows the band and what each tolerance does to it.
func (b *Band) MIMEBundle() map[string]any {
	if b == nil || b.elem == "" {
		return nil
	}
	return doc.Join(b.tables()...)
}

// MIMEMetadata gives the numbers in full.
func (b *Band) MIMEMetadata() map[string]any {
	if b == nil || b.elem == "" {
		return nil
	}
	return joinMetadata(b.tables())
}

func (b *Band) tables() []doc.Table {
	t := doc.Table{Caption: b.title(), Columns: []doc.Column{{Name: "result"}, {Name: "value", Unit: b.unit}, {Name: "off nominal"}}}
	add := func(what string, value float64) {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(what), doc.Num(value), doc.Text(b.off(value))})
	}
	add("nominal", b.nominal)
	add("smallest", b.min)
	add("largest", b.max)
	if d := b.drawn; d != nil {
		add("mean", d.Mean)
		t.Rows = append(t.Rows, []doc.Cell{doc.Text("standard deviation"), doc.Num(d.Deviation), doc.Text("")})
		add("0.135 % lie below", d.Quantile(0.00135))
		add("0.135 % lie above", d.Quantile(0.99865))
	}
	if w := b.worst; w != nil {
		how := fmt.Sprintf("all %d corners computed", 1<<len(w.Effects))
		if !w.Exhaustive {
			how = "more tolerances than corners can be computed for: those that the slopes point to, improved one by one"
		}
		t.Notes = append(t.Notes, how)
	}
	for _, n := range b.inside() {
		t.Notes = append(t.Notes, n.Text)
	}
	return []doc.Table{t, b.effectTable()}
}

func (b *Band) off(value float64) string {
	if b.nominal == 0 || value == b.nominal || b.unit == "degC" {
		return ""
	}
	return phys.FormatDigits((value-b.nominal)/math.Abs(b.nominal), "percent", 3)
}

func (b *Band) title() string {
	what := "result"
	if b.from != nil {
		what = b.from.what
	}
	return what + ", " + b.conditions()
}

// effectTable shows each tolerance with the result at its limits alone.
func (b *Band) effectTable() doc.Table {
	t := doc.Table{Caption: "each tolerance alone", Columns: []doc.Column{{Name: "tolerance"}, {Name: "value"}, {Name: "distribution"},
		{Name: "result at lower limit", Unit: b.unit}, {Name: "at upper limit", Unit: b.unit}, {Name: "smallest result at"}, {Name: "largest at"}}}
	for _, e := range b.effects {
		for n, i := range e.Inputs {
			in := b.inputs[i]
			how := in.Shape.String()
			if in.Group != "" {
				how += ", with " + in.Group
			}
			row := []doc.Cell{doc.Text(in.Name), doc.Text(in.tolerance()), doc.Text(how), doc.Text(""), doc.Text(""),
				doc.Text(phys.Format(b.atMin[i], in.Unit)), doc.Text(phys.Format(b.atMax[i], in.Unit))}
			if n == 0 {
				row[3], row[4] = doc.Num(e.Low), doc.Num(e.High)
			}
			t.Rows = append(t.Rows, row)
		}
	}
	return t
}

// Plot draws the histogram of the draws of [MonteCarlo].
//
//	band.Plot().LimitAcross("required", AtLeast(8*uH))
func (b *Band) Plot() *Figure {
	edges, counts := b.draws("histogram").Histogram()
	return &Figure{lines: chart.Histogram(b.title(), axis{Label: b.quantity(), Unit: b.unit}, edges, counts)}
}

// Tornado draws what each tolerance alone does to the result, the strongest first.
func (b *Band) Tornado() *Figure {
	b.given()
	f := &Figure{bars: &chart.Bars{Title: "each tolerance alone: " + b.title(), Axis: axis{Label: b.quantity(), Unit: b.unit}, Middle: b.nominal}}
	for _, e := range strongest(b.effects, b.nominal) {
		name := b.inputs[e.Inputs[0]].Name
		if len(e.Inputs) > 1 {
			name = b.inputs[e.Inputs[0]].Group
		}
		f.bars.Names = append(f.bars.Names, name)
		f.bars.From = append(f.bars.From, math.Min(e.Low, e.High))
		f.bars.Values = append(f.bars.Values, math.Max(e.Low, e.High))
	}
	return f
}

func (b *Band) quantity() string {
	if b.from != nil {
		return string(b.from.kind)
	}
	return quantity(b.unit, "result")
}

// strongest sorts effects by their swing, the largest first; equal ones keep their order.
func strongest(effects []tol.Effect, nominal float64) []tol.Effect {
	sorted := slices.Clone(effects)
	slices.SortStableFunc(sorted, func(a, b tol.Effect) int {
		return cmp.Compare(b.Swing(nominal), a.Swing(nominal))
	})
	return sorted
}

var cornerBasis = basisRow{"worst case", "every corner of the limits, and each tolerance alone", "definition", "results that rise or fall throughout with each tolerance"}

var slopeBasis = basisRow{"worst case", "the corner that the slopes point to, improved one tolerance at a time", "definition", "more than 12 tolerances; results that rise or fall throughout with each of them"}

var drawBasis = basisRow{"draws", "independent draws, uniform or normal between the limits; numbers from a mixing function of seed, draw and tolerance",
	"G. L. Steele, D. Lea, C. H. Flood, OOPSLA 2014 (SplitMix)", "tolerances that are independent, or move together in named groups"}

func (b *Band) basis() []basisRow {
	b.given()
	rows := []basisRow{drawBasis}
	if b.worst != nil {
		rows = []basisRow{slopeBasis}
		if b.worst.Exhaustive {
			rows = []basisRow{cornerBasis}
		}
	}
	if b.from != nil {
		rows = append(rows, b.from.op.basis()...)
	}
	return rows
}

// Notes lists what a reader must know about the result: at nominal values, and of its range.
func (b *Band) Notes() []Remark {
	b.given()
	if b.from == nil {
		return b.inside()
	}
	return append(b.from.op.Notes(), b.inside()...)
}

// inside notes that the corners of a worst case do not hold its extremes.
func (b *Band) inside() []Remark {
	if b.worst == nil || !b.worst.Inside {
		return nil
	}
	return []Remark{{Kind: magcirc.OutOfRange, Elem: "worst case of " + b.quantity(),
		Text: "an extreme lies with a tolerance between its limits: the range can be larger than shown; MonteCarlo looks between the limits"}}
}

// doubts are the notes on the range that go with a verdict on it.
func (b *Band) doubts() []string {
	var words []string
	for _, n := range b.inside() {
		words = append(words, n.Text)
	}
	return words
}
