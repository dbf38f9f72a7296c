package dsl

import (
	"fmt"
	"math"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/tol"
)

// TestSheet is the limits that a supplier tests a part to: item, connection, method, nominal value, limits with the guard band
// taken off.
type TestSheet struct {
	circuit MagneticCircuit
	gauge   float64
	chosen  bool // the gauge was chosen
	meter   string
	bias    []biasItem
	demands map[string]Bound
}

type biasItem struct {
	winding string
	current float64
}

// assumedGauge is the uncertainty of the meter where nobody states it.
const assumedGauge = 0.01

// TestSpec begins the test specification of the part: inductance of each winding, leakage of each pair, ratios of turns. The
// limits are the worst case of the stated tolerances together with what the methods leave open, or a bound of one's own
// by [TestSheet.Asked]; the guard band, the uncertainty of the meter, is taken off them on both sides.
//
//	T1.TestSpec().Gauge(0.5*percent).Meter(10*kHz, 0.1*volt).Bias("main", 3.2*amp)
func (c *MagneticCircuit) TestSpec() *TestSheet {
	c.model()
	return &TestSheet{circuit: *c.quiet(), gauge: assumedGauge, demands: map[string]Bound{}}
}

// Gauge states the uncertainty of the meter, relative: the guard band.
func (t *TestSheet) Gauge(uncertainty Ratio) *TestSheet {
	t.given()
	wantRange("test specification of "+t.circuit.name, "uncertainty of the meter", uncertainty, 0, 0.5, "")
	next := *t
	next.gauge, next.chosen = uncertainty, true
	return &next
}

// Meter states the frequency and the level at which inductances are measured.
func (t *TestSheet) Meter(frequency Hertz, level Volt) *TestSheet {
	t.given()
	wantPositive("test specification of "+t.circuit.name, "frequency", frequency, "Hz")
	wantPositive("test specification of "+t.circuit.name, "level", level, "V")
	next := *t
	next.meter = phys.Format(frequency, "Hz") + ", " + phys.Format(level, "V")
	return &next
}

// Bias adds the inductance of a winding at a current.
func (t *TestSheet) Bias(winding string, current Ampere) *TestSheet {
	t.given()
	name := t.circuit.windings()[t.circuit.windingOf(winding)]
	wantFinite("test specification of "+t.circuit.name, "bias current", current, "A")
	next := *t
	next.bias = append(append([]biasItem(nil), t.bias...), biasItem{name, current})
	return &next
}

// Asked sets the bound of an item in place of the spread that the model forecasts: "inductance of main".
func (t *TestSheet) Asked(item string, bound Bound) *TestSheet {
	t.given()
	bound.given()
	next := *t
	next.demands = map[string]Bound{}
	for name, b := range t.demands {
		next.demands[name] = b
	}
	next.demands[item] = bound
	var have []string
	for _, i := range next.items() {
		have = append(have, i.what)
		if i.what == item {
			return &next
		}
	}
	refuse(magcirc.UnknownName, "", fmt.Sprintf("the test specification of %s has no item %q", t.circuit.name, item), "it has "+strings.Join(have, ", "))
	return nil
}

func (t *TestSheet) given() {
	if t == nil || t.gauge < 0 || t.circuit.name == "" {
		refuse(magcirc.BadValue, "test specification", "there is none", "make it with T1.TestSpec()")
	}
}

// testItem is one measurement.
type testItem struct {
	what, connection, bias, unit string
	value                        func(op *OperatingPoint) float64
	drive                        Currents
}

// items lists the measurements.
func (t *TestSheet) items() []testItem {
	c := &t.circuit
	all := c.windings()
	var items []testItem
	inductance := func(w string) func(op *OperatingPoint) float64 {
		return func(op *OperatingPoint) float64 { return op.Inductance(w) }
	}
	for _, w := range all {
		items = append(items, testItem{what: "inductance of " + w, connection: connection(w, nil, all), bias: "none", unit: "H", value: inductance(w)})
	}
	for _, b := range t.bias {
		items = append(items, testItem{what: fmt.Sprintf("inductance of %s at %s", b.winding, phys.Format(b.current, "A")), connection: connection(b.winding, nil, all),
			bias: phys.Format(b.current, "A") + " in " + b.winding, unit: "H", value: inductance(b.winding), drive: Currents{b.winding: b.current}})
	}
	for i, w := range all {
		for k, other := range all {
			if i != k {
				items = append(items, testItem{what: "leakage of " + w + ", " + other + " shorted", connection: connection(w, []string{other}, all), bias: "none", unit: "H",
					value: func(op *OperatingPoint) float64 { return op.Leakage(w, other) }})
			}
		}
	}
	return items
}

// connection says where the meter is and what happens to the other windings: on a part with several limbs a winding that is
// forgotten changes the reading.
func connection(at string, shorted, all []string) string {
	var open []string
	for _, w := range all {
		if w != at && (len(shorted) == 0 || w != shorted[0]) {
			open = append(open, w)
		}
	}
	s := "meter at " + at
	if len(shorted) > 0 {
		s += "; short " + strings.Join(shorted, ", ")
	}
	if len(open) > 0 {
		s += "; leave open " + strings.Join(open, ", ")
	}
	return s
}

// forecast is the range of an item over the tolerances, widened by what the methods leave open; equal ends where no tolerance
// is stated. unknown says why it is not widened where the methods' share is not known.
func (t *TestSheet) forecast(item testItem) (nominal, low, high float64, unknown string) {
	c := &t.circuit
	d := c.driveOf(nil)
	if item.drive != nil {
		d = c.driveOf([]Drive{item.drive})
	}
	op := c.solved(d)
	a := &answer{op: op, value: item.value(op), ask: item.value}
	spreads := c.spreads()
	if len(spreads) == 0 {
		return a.value, a.value, a.value, ""
	}
	w := must(tol.WorstCase(session.Context(), a.again(spreads), below(spreads)))
	u, err := a.uncertainty()
	if err != nil {
		unknown = "; without what the methods leave open, which is not known: " + err.Error()
	}
	u *= math.Abs(a.value)
	return a.value, w.Min - u, w.Max + u, unknown
}

// guarded takes the guard band off limits, and refuses what is left if that is less than a third.
func (t *TestSheet) guarded(item testItem, nominal, low, high float64) (float64, float64) {
	guard := t.gauge * math.Abs(nominal)
	l, h := low+guard, high-guard
	if half := (high - low) / 2; h-l < (high-low)/3 {
		share := func(x float64) string { return "+-" + phys.FormatDigits(x/math.Abs(nominal), "percent", 2) }
		refuse(magcirc.OutsideValidity, item.what+" of "+t.circuit.name, fmt.Sprintf("limit %s minus gauge %s leaves a %s window", share(half), share(guard), share(math.Max(0, half-guard))), "widen the limit or improve the gauge")
	}
	return l, h
}

// rowOf is the line of one item; false where the model knows nothing of it.
func (t *TestSheet) rowOf(item testItem) ([]doc.Cell, bool) {
	nominal, low, high, unknown := t.forecast(item)
	if math.Abs(nominal) < 1e-12 {
		return nil, false
	}
	source := "forecast of the tolerances" + unknown
	if b, ok := t.demands[item.what]; ok {
		low, high, source = b.rule.Low, b.rule.High, "asked: "+b.rule.String()
		if nominal < low || nominal > high {
			source += "; the model's nominal value lies outside"
		}
	}
	meter := t.meter
	if meter == "" {
		meter = "to be agreed"
	}
	method := meter + "; bias " + item.bias + "; " + phys.Format(t.circuit.temperature, "degC")
	row := []doc.Cell{doc.Text(item.what), doc.Text(item.connection), doc.Text(method), doc.Quantity(nominal, item.unit)}
	guard := t.gauge * math.Abs(nominal)
	switch {
	case low == high:
		return append(row, doc.Text("no tolerance stated"), doc.Text("no tolerance stated"), doc.Text(""), doc.Text("")), true
	case math.IsInf(low, -1):
		row = append(row, doc.Text("none"), doc.Quantity(high-guard, item.unit))
	case math.IsInf(high, 1):
		row = append(row, doc.Quantity(low+guard, item.unit), doc.Text("none"))
	default:
		l, h := t.guarded(item, nominal, low, high)
		row = append(row, doc.Quantity(l, item.unit), doc.Quantity(h, item.unit))
	}
	return append(row, doc.Quantity(guard, item.unit), doc.Text(source)), true
}

// ratios are the lines of the ratios of voltage that the model gives. Where two windings share their flux they are those of
// turns, and limits at half a turn of the larger winding tell every turn; elsewhere the tolerances of the part widen them.
// Windings without coupling have none.
func (t *TestSheet) ratios() [][]doc.Cell {
	all := t.circuit.windings()
	op := t.circuit.solved(t.circuit.driveOf(nil))
	var rows [][]doc.Cell
	for i, w := range all {
		for _, other := range all[i+1:] {
			if op.Mutual(w, other) == 0 {
				continue
			}
			n1, n2 := t.circuit.turnsOn(w), t.circuit.turnsOn(other)
			what, dots, source := "ratio of turns ", "in phase", "half a turn of the larger winding"
			if op.Mutual(w, other) < 0 {
				dots = "opposed"
			}
			of := func(op *OperatingPoint) float64 { return math.Abs(1 / op.EquivalentCircuit(other, w).Ratio()) }
			ratio := of(op)
			low, high := ratio, ratio
			if math.Abs(ratio*n2/n1-1) > 1e-6 {
				var unknown string
				_, low, high, unknown = t.forecast(testItem{value: of})
				what, source = "ratio of voltages ", "forecast of the tolerances and "+source+unknown
			}
			half := 0.5 / math.Max(n1, n2)
			rows = append(rows, []doc.Cell{doc.Text(what + w + " : " + other + ", polarity"), doc.Text("voltage at " + w + "; leave all others open; dots " + dots), doc.Text("ratio meter"),
				doc.Quantity(ratio, ""), doc.Quantity(low*(1-half), ""), doc.Quantity(high*(1+half), ""), doc.Text(""), doc.Text(source)})
		}
	}
	return rows
}

// turnsOn is the number of turns of a winding over all its paths.
func (c *MagneticCircuit) turnsOn(winding string) float64 {
	sum := 0.0
	for i := range c.paths {
		for k, part := range c.paths[i].parts {
			if w, ok := part.(WindingPart); ok && c.paths[i].names[k] == winding {
				sum += w.turns
			}
		}
	}
	return sum
}

// MIMEBundle shows the specification as a table.
func (t *TestSheet) MIMEBundle() map[string]any {
	if t == nil || t.circuit.name == "" {
		return nil
	}
	return t.table().Bundle()
}

// MIMEMetadata gives the numbers in full.
func (t *TestSheet) MIMEMetadata() map[string]any {
	if t == nil || t.circuit.name == "" {
		return nil
	}
	return t.table().Metadata()
}

func (t *TestSheet) table() doc.Table {
	d := doc.Table{Caption: "test specification of " + t.circuit.state() + ", meter uncertain by " + phys.Format(t.gauge, "percent"),
		Columns: []doc.Column{{Name: "item"}, {Name: "connection"}, {Name: "frequency, level, bias, temperature"}, {Name: "nominal", Mixed: true}, {Name: "low", Mixed: true}, {Name: "high", Mixed: true},
			{Name: "guard band", Mixed: true}, {Name: "limits from"}}}
	var none []string
	for _, item := range t.items() {
		row, ok := t.rowOf(item)
		if !ok {
			none = append(none, item.what)
			continue
		}
		d.Rows = append(d.Rows, row)
	}
	if len(none) > 0 {
		d.Notes = append(d.Notes, "not in the model, for its windings share one path: "+strings.Join(none, "; ")+". Add Permeance paths between them, or measure samples")
	}
	d.Rows = append(d.Rows, t.ratios()...)
	for _, open := range []string{"resistance of each winding", "insulation resistance and dielectric withstand"} {
		d.Rows = append(d.Rows, []doc.Cell{doc.Text(open), doc.Text(""), doc.Text("by the project plan"), doc.Text("OPEN"), doc.Text("OPEN"), doc.Text("OPEN"), doc.Text(""), doc.Text("not computed here")})
	}
	if limbs := t.circuit.woundPaths(); limbs > 1 {
		d.Notes = append(d.Notes, fmt.Sprintf("windings lie on %d limbs: a winding that is left shorted or connected changes every other reading", limbs))
	}
	if !t.chosen {
		review.Assume("meter of the test specification of "+t.circuit.name+" uncertain by 1 %", review.Assumed, t.circuit.name+".TestSpec().Gauge(0.5*percent)")
	}
	return d
}

// woundPaths counts the paths with windings.
func (c *MagneticCircuit) woundPaths() int {
	n := 0
	for i := range c.paths {
		for _, part := range c.paths[i].parts {
			if part.part() == windingKind {
				n++
				break
			}
		}
	}
	return n
}
