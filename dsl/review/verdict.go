package review

import (
	"fmt"
	"math"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Status is the outcome of a verdict, a requirement or an open point.
type Status int

// The outcomes.
const (
	Open Status = iota
	Pass
	Fail
	Waived
)

// String is the status word.
func (s Status) String() string { return [...]string{"OPEN", "PASS", "FAIL", "WAIVED"}[s] }

// Verdict is one value judged against a rule.
type Verdict struct {
	What        string
	Value       float64
	Unit        string // SI unit of the value; "" for none, "?" where it is not known
	Typed       bool   // the value was typed as a bare number
	Rule        Rule
	Conditions  []string // what the value holds for
	Corner      string
	Uncertainty float64       // of the value, relative; 0: none stated
	Unknown     string        // why the uncertainty is not known; "" where nothing stands against it
	Flip        func() string // says which single input turns it, moved how far; nil: not known

	waived *waiver
	flips  *string
}

// Check refuses a value that is no number.
func (v *Verdict) Check() error {
	if math.IsNaN(v.Value) || math.IsInf(v.Value, 0) {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: fmt.Sprintf("limit %q", v.What), Msg: "the value is not a number", Hint: "look where it was computed", Got: v.Value}
	}
	return nil
}

// Status is the outcome.
func (v *Verdict) Status() Status {
	switch {
	case v.Rule.Keeps(v.Value):
		return Pass
	case v.waived != nil:
		return Waived
	}
	return Fail
}

// Thin says whether a PASS has less margin than its uncertainty.
func (v *Verdict) Thin() bool {
	return v.Status() == Pass && v.Uncertainty*math.Abs(v.Value) > v.Rule.Margin(v.Value)
}

// StatusWords is the status with what belongs to it: "PASS - margin below uncertainty", "WAIVED by A. Smith: ...".
func (v *Verdict) StatusWords() string {
	switch s := v.Status(); {
	case s == Waived:
		return v.waived.words()
	case v.Thin():
		return "PASS - margin below uncertainty"
	case s == Pass && v.Unknown != "":
		return "PASS - uncertainty not known"
	default:
		return s.String()
	}
}

// Where says what the verdict holds for: corner first, then conditions.
func (v *Verdict) Where() string {
	all := v.Conditions
	if v.Corner != "" {
		all = append([]string{v.Corner}, v.Conditions...)
	}
	if v.Typed {
		all = append(all[:len(all):len(all)], "value typed by hand")
	}
	if v.Unit == "?" {
		all = append(all[:len(all):len(all)], "unit not traced")
	}
	if v.Unknown != "" {
		all = append(all[:len(all):len(all)], "uncertainty not known: "+v.Unknown)
	}
	return strings.Join(all, "; ")
}

// Line is the verdict in one line.
//
//	limit "flux density": 0.2996 T, at most 0.32 T, margin 20.4 mT (6.4 %): PASS [overload, hot; L1 at 110 degC, N 13 A]
func (v *Verdict) Line() string {
	unit := known(v.unit())
	s := fmt.Sprintf("limit %q: %s, %s, %s", v.What, phys.Format(v.Value, unit), v.Rule, v.marginWords())
	if v.Thin() {
		s = fmt.Sprintf("limit %q: %s is within %s of the bound %s, less than its uncertainty (%s)", v.What, phys.Format(v.Value, unit),
			phys.FormatDigits(v.Rule.Margin(v.Value), difference(unit), 3), v.Rule, phys.FormatDigits(v.Uncertainty*math.Abs(v.Value), difference(unit), 3))
	} else if v.Uncertainty > 0 {
		s += ", uncertainty " + phys.Format(v.Uncertainty*math.Abs(v.Value), difference(unit))
	}
	s += ": " + v.StatusWords()
	if w := v.Where(); w != "" {
		s += " [" + w + "]"
	}
	return s
}

// flipWords says which single input turns the verdict; it is computed once, and asked again where there was no time for it.
func (v *Verdict) flipWords() string {
	if v.Flip == nil {
		return ""
	}
	if v.flips == nil {
		words := v.Flip()
		if words == "" {
			return ""
		}
		v.flips = &words
	}
	return *v.flips
}

// unit is that of the value, or of its rule where the value's is not known.
func (v *Verdict) unit() string {
	if v.Unit == "?" || v.Unit == "" {
		return v.Rule.Unit
	}
	return v.Unit
}

// marginWords says margin or miss: "margin 20.4 mT (6.4 %)", "missed by 2 uH (25 %)".
func (v *Verdict) marginWords() string {
	m, word := v.Rule.Margin(v.Value), "margin "
	if m < 0 {
		m, word = -m, "missed by "
	}
	s := word + phys.Format(m, difference(known(v.unit())))
	if share := math.Abs(v.Rule.MarginShare(v.Value)); !math.IsNaN(share) {
		s += " (" + phys.FormatDigits(share, "percent", 2) + ")"
	}
	return s
}

// difference is the unit of a difference.
func difference(unit string) string {
	if unit == celsius {
		return "K"
	}
	return unit
}

// Requirement is a demand that waits for its checks.
type Requirement struct {
	What   string
	Rule   Rule
	checks []*Verdict
	waived *waiver
}

// Status is OPEN before the first check, then the worst of them.
func (r *Requirement) Status() Status {
	if len(r.checks) == 0 {
		if r.waived != nil {
			return Waived
		}
		return Open
	}
	worst := Pass
	for _, v := range r.checks {
		switch s := v.Status(); {
		case s == Fail:
			return Fail
		case s == Waived:
			worst = Waived
		}
	}
	return worst
}

// Line is the requirement in one line.
func (r *Requirement) Line() string {
	s := fmt.Sprintf("requirement %q, %s: ", r.What, r.Rule)
	if r.waived != nil && r.Status() == Waived {
		return s + r.waived.words()
	}
	s += r.Status().String()
	if len(r.checks) == 0 {
		return s + " until it is checked"
	}
	return s
}

// waiver is somebody's answer for a verdict that does not pass.
type waiver struct {
	what, reason, who string
}

func (w *waiver) words() string { return fmt.Sprintf("WAIVED by %s: %s", w.who, w.reason) }

// OpenPoint is what nobody has answered yet, and who should.
type OpenPoint struct {
	What, Owner string
	waived      *waiver
}

// Status is OPEN, or WAIVED.
func (p *OpenPoint) Status() Status {
	if p.waived != nil {
		return Waived
	}
	return Open
}

// Line is the open point in one line.
func (p *OpenPoint) Line() string {
	if p.waived != nil {
		return fmt.Sprintf("open point %q, for %s: %s", p.What, p.Owner, p.waived.words())
	}
	return fmt.Sprintf("open point %q: OPEN, for %s", p.What, p.Owner)
}
