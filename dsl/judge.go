package dsl

import (
	"fmt"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/review"
	"ampturn/magcirc"
)

// Bound is a limit on a value: [AtMost], [AtLeast], [Within] or [Tolerance].
type Bound struct {
	rule  review.Rule
	typed bool
	made  bool
}

func newBound(kind review.Kind, unit string, first, second float64) Bound {
	text, typed := bare(unit)
	return Bound{rule: must(review.NewRule(kind, plain(text), first, second)), typed: typed, made: true}
}

// plain is a unit text for a verdict: a count of turns is a plain number.
func plain(unit string) string {
	if unit == "turn" {
		return ""
	}
	return unit
}

func (b Bound) given() {
	if !b.made {
		refuse(magcirc.BadValue, "limit", "has no bound", "give AtMost, AtLeast, Within or Tolerance")
	}
}

func (b Bound) across() Bound { return b }

// MIMEBundle shows the bound in words.
func (b Bound) MIMEBundle() map[string]any { b.given(); return words(b.rule.String()) }

// AtMost bounds the magnitude of a value: -0.31 T keeps AtMost(0.32*tesla). A temperature is bounded itself. For a
// signed bound write [Within].
func AtMost(limit Value) Bound { return newBound(review.AtMost, "?", limit, 0) }

// AtMostWithUnits is [AtMost] with the unit of its argument.
func AtMostWithUnits(units []string, limit Value) Bound {
	return newBound(review.AtMost, unitAt(units, 0), limit, 0)
}

// AtLeast bounds a value from below, with its sign.
func AtLeast(limit Value) Bound { return newBound(review.AtLeast, "?", limit, 0) }

// AtLeastWithUnits is [AtLeast] with the unit of its argument.
func AtLeastWithUnits(units []string, limit Value) Bound {
	return newBound(review.AtLeast, unitAt(units, 0), limit, 0)
}

// Within bounds a value from both sides, with its sign.
func Within(low, high Value) Bound { return newBound(review.Within, "?", low, high) }

// WithinWithUnits is [Within] with the units of its arguments.
func WithinWithUnits(units []string, low, high Value) Bound {
	return newBound(review.Within, common(units), low, high)
}

// common is the unit of two bounds: that of the one which has one, for zero has none.
func common(units []string) string {
	first, second := unitAt(units, 0), unitAt(units, 1)
	if text, _ := bare(first); text == "" || text == "?" {
		return second
	}
	return first
}

// Tolerance bounds a value to a share of a nominal one on both sides: Tolerance(630*uH, 8*percent).
func Tolerance(nominal Value, share Ratio) Bound {
	return newBound(review.Tolerance, "?", nominal, share)
}

// ToleranceWithUnits is [Tolerance] with the unit of its nominal value.
func ToleranceWithUnits(units []string, nominal Value, share Ratio) Bound {
	return newBound(review.Tolerance, unitAt(units, 0), nominal, share)
}

// Condition is what a verdict holds for: an operating point, or a circuit with its temperature.
type Condition interface {
	conditions() string
}

func (c *MagneticCircuit) conditions() string { c.given(); return c.state() }

// Verdict is a value judged against a bound.
type Verdict struct {
	kept *review.Verdict
}

// Limit judges a value against a bound, under the conditions that it holds for, and enters the verdict into the
// notebook's table.
//
//	Limit("flux density", op.FluxDensity("centre"), AtMost(0.32*tesla), op)
func Limit(what string, value Value, bound Bound, conditions ...Condition) *Verdict {
	return LimitWithUnits([]string{"", "?"}, what, value, bound, conditions...)
}

// LimitWithUnits is [Limit] with the unit of its value.
func LimitWithUnits(units []string, what string, value Value, bound Bound, conditions ...Condition) *Verdict {
	v := judged(what, value, unitAt(units, 1), bound, conditions)
	review.State(v)
	return &Verdict{v}
}

// judged makes a verdict.
func judged(what string, value float64, unit string, bound Bound, conditions []Condition) *review.Verdict {
	if strings.TrimSpace(what) == "" {
		refuse(magcirc.BadValue, "limit", "has no name", `say what is judged: Limit("flux density", ...)`)
	}
	if sampling.Load() > 0 {
		refuse(magcirc.WrongUse, "limit \""+what+"\"", "is judged within a sampled function", "give the number back and judge the band: Limit(..., b.Min(), ..., b)")
	}
	bound.given()
	text, typed := bare(unit)
	text = plain(text)
	if text == "?" && bound.rule.Unit != "?" && bound.rule.Unit != "" {
		text = bound.rule.Unit // the check found no contradiction: the bound's unit is meant
	}
	rule := bound.rule
	if rule.Unit == "?" {
		rule.Unit = text
	}
	if text != rule.Unit && text != "?" && text != "" && rule.Unit != "" {
		refuse(magcirc.Inconsistent, "limit \""+what+"\"", "the value is in "+text+" and its bound in "+rule.Unit, "judge like against like")
	}
	v := &review.Verdict{What: what, Value: value, Unit: text, Typed: typed, Rule: rule}
	check(v.Check())
	for _, c := range conditions {
		if c == nil {
			refuse(magcirc.BadValue, "limit \""+what+"\"", "a condition is missing (nil)", "give the operating point")
		}
		v.Conditions = append(v.Conditions, c.conditions())
	}
	trace(v, conditions)
	return v
}

// trace adds what is known of a value that an operating point or a band gave: the uncertainty that the methods behind it
// bring, and which single input would turn the verdict.
func trace(v *review.Verdict, conditions []Condition) {
	for _, c := range conditions {
		if b, ok := c.(*Band); ok {
			if b.from != nil && v.Value >= b.min && v.Value <= b.max && (v.Unit == b.unit || v.Unit == "?") { // not a Cpk or a yield
				uncertain(v, b.from)
			}
			v.Conditions = append(v.Conditions, b.doubts()...)
			return
		}
	}
	a := conditionAnswer(v.Value, conditions)
	if a == nil {
		return
	}
	if v.Unit == "?" && v.Rule.Unit == "?" {
		v.Unit, v.Rule.Unit = a.unit, a.unit
	}
	uncertain(v, a)
	v.Flip = func() string { return a.flip(v.Rule.Margin) }
}

// uncertain gives a verdict what the methods behind its value leave open. Where that is not known the verdict says so, and
// the document lists it.
func uncertain(v *review.Verdict, a *answer) {
	u, err := a.uncertainty()
	if err != nil {
		v.Unknown = err.Error()
		review.Assume(fmt.Sprintf("limit %q: uncertainty not known, for %s", v.What, v.Unknown), review.OutOfRange, ".Uncertain(share) at the limit")
		return
	}
	v.Uncertainty = u
}

// Uncertain states the uncertainty of the value, relative, in place of the one that the methods behind it bring. A PASS with
// less margin than that says so.
func (v *Verdict) Uncertain(share Ratio) *Verdict {
	v.given()
	wantRange("limit \""+v.kept.What+"\"", "uncertainty", share, 0, 10, "")
	if v.kept.Rule.Unit == "degC" {
		refuse(magcirc.WrongUse, "limit \""+v.kept.What+"\"", "judges a temperature, and a share of one means nothing", "take the uncertainty off the bound: AtMost(95*degC)")
	}
	v.kept.Uncertainty, v.kept.Unknown = share, ""
	return v
}

// Uncertainty is that of the value, relative: as stated by [Verdict.Uncertain], else what the methods behind the value leave
// open; 0 where nothing is known, and the verdict then says so where a method is known to leave something open.
func (v *Verdict) Uncertainty() Ratio { v.given(); return v.kept.Uncertainty }

// Passed says whether the value keeps the bound.
func (v *Verdict) Passed() bool { v.given(); return v.kept.Status() == review.Pass }

// Margin is what is left to the bound, in the value's unit; negative: by how much it misses.
func (v *Verdict) Margin() Value { v.given(); return v.kept.Rule.Margin(v.kept.Value) }

// Status is the word: PASS, FAIL or WAIVED.
func (v *Verdict) Status() string { v.given(); return v.kept.Status().String() }

func (v *Verdict) given() {
	if v == nil || v.kept == nil {
		refuse(magcirc.BadValue, "verdict", "there is none", "make it with Limit(...)")
	}
}

// MIMEBundle shows the verdict in one line.
func (v *Verdict) MIMEBundle() map[string]any {
	if v == nil || v.kept == nil {
		return nil
	}
	return verdictLine(v.kept.Line(), v.kept.Status())
}

// MIMEMetadata gives the numbers in full.
func (v *Verdict) MIMEMetadata() map[string]any {
	if v == nil || v.kept == nil {
		return nil
	}
	return map[string]any{"ampturn": map[string]any{"what": v.kept.What, "value": v.kept.Value, "margin": v.Margin(), "status": v.kept.Status().String(), "corner": v.kept.Corner}}
}

func verdictLine(line string, status review.Status) map[string]any {
	return doc.Bundle(line, doc.Line("verdict "+strings.ToLower(status.String()), line), "")
}

// Requirement is a demand that waits for its checks; it is OPEN until the first one.
type Requirement struct {
	kept  *review.Requirement
	bound Bound
}

// Require states a demand.
//
//	leak := Require("leakage, S shorted, 65 kHz", AtMost(9.5*uH))
//	leak.Check(op.Leakage("P", "S"), op)
func Require(what string, bound Bound) *Requirement {
	if strings.TrimSpace(what) == "" {
		refuse(magcirc.BadValue, "requirement", "has no name", `say what is required: Require("leakage", ...)`)
	}
	bound.given()
	r := &Requirement{kept: &review.Requirement{What: what, Rule: bound.rule}, bound: bound}
	review.Demand(r.kept)
	return r
}

// Check judges a value against the requirement, under the conditions that it holds for.
func (r *Requirement) Check(value Value, conditions ...Condition) *Verdict {
	return r.CheckWithUnits([]string{"?"}, value, conditions...)
}

// CheckWithUnits is [Requirement.Check] with the unit of its value.
func (r *Requirement) CheckWithUnits(units []string, value Value, conditions ...Condition) *Verdict {
	if r == nil || r.kept == nil {
		refuse(magcirc.BadValue, "requirement", "there is none", "make it with Require(...)")
	}
	v := judged(r.kept.What, value, unitAt(units, 0), r.bound, conditions)
	r.kept.Answer(v)
	return &Verdict{v}
}

// MIMEBundle shows the requirement and its status in one line.
func (r *Requirement) MIMEBundle() map[string]any {
	if r == nil || r.kept == nil {
		return nil
	}
	return verdictLine(r.kept.Line(), r.kept.Status())
}

// Point is an open point of the document.
type Point struct {
	kept *review.OpenPoint
}

// OpenPoint states what nobody has answered yet, and who should: it counts as OPEN.
func OpenPoint(what, owner string) *Point {
	if strings.TrimSpace(what) == "" || strings.TrimSpace(owner) == "" {
		refuse(magcirc.BadValue, "open point", "has no name or no owner", `write OpenPoint("creepage", "safety engineer")`)
	}
	p := &Point{&review.OpenPoint{What: what, Owner: owner}}
	review.Leave(p.kept)
	return p
}

// MIMEBundle shows the open point in one line.
func (p *Point) MIMEBundle() map[string]any {
	if p == nil || p.kept == nil {
		return nil
	}
	return verdictLine(p.kept.Line(), p.kept.Status())
}

// Corner names the case that the verdicts which follow belong to, up to the end of this pass of the loop or of the
// cell.
func Corner(name string) { review.Corner(name) }

// Waive records that somebody answers for a limit, a requirement or an open point that does not pass.
func Waive(name, reason, who string) {
	if strings.TrimSpace(name) == "" || strings.TrimSpace(reason) == "" || strings.TrimSpace(who) == "" {
		refuse(magcirc.BadValue, "Waive", "wants a name, a reason and who answers for it", `write Waive("leakage", "clamp rated for 12 uH", "A. Smith")`)
	}
	review.Waive(name, reason, who)
}

// Verdicts marks the place of the table of all verdicts; the finished run fills it, so that the reader meets the
// answer first.
func Verdicts() { review.Place() }
