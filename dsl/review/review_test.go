package review_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/magcirc"
)

func rule(t *testing.T, kind review.Kind, unit string, first, second float64) review.Rule {
	t.Helper()
	r, err := review.NewRule(kind, unit, first, second)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestRules(t *testing.T) {
	for _, c := range []struct {
		name          string
		kind          review.Kind
		unit          string
		first, second float64
		value         float64
		keeps         bool
		margin        float64
		words         string
	}{
		{"below", review.AtMost, "T", 0.32, 0, 0.3, true, 0.02, "at most 0.32 T"},
		{"magnitude", review.AtMost, "T", 0.32, 0, -0.33, false, -0.01, "at most 0.32 T"},
		{"at the bound", review.AtMost, "T", 0.32, 0, 0.32, true, 0, "at most 0.32 T"},
		{"temperature is not a magnitude", review.AtMost, "degC", 100, 0, -150, true, 250, "at most 100 degC"},
		{"signed from below", review.AtLeast, "degC", 5, 0, -10, false, -15, "at least 5 degC"},
		{"within is signed", review.Within, "T", -0.1, 0.2, -0.15, false, -0.05, "-0.1 T..0.2 T"},
		{"tolerance", review.Tolerance, "H", 630e-6, 0.08, 590e-6, true, 10.4e-6, "630 uH +-8 %"},
		{"outside the tolerance", review.Tolerance, "H", 630e-6, 0.08, 690e-6, false, -9.6e-6, "630 uH +-8 %"},
		{"around a negative value", review.Tolerance, "", -0.6, 0.1, -0.62, true, 0.04, "-0.6 +-10 %"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := rule(t, c.kind, c.unit, c.first, c.second)
			if r.Keeps(c.value) != c.keeps {
				t.Errorf("%g kept: %v", c.value, !c.keeps)
			}
			if got := r.Margin(c.value); math.Abs(got-c.margin) > 1e-12 {
				t.Errorf("margin %g, want %g", got, c.margin)
			}
			if r.String() != c.words {
				t.Errorf("words %q, want %q", r.String(), c.words)
			}
		})
	}
}

func TestRefusedRules(t *testing.T) {
	for _, c := range []struct {
		kind          review.Kind
		first, second float64
		says          string
	}{
		{review.AtMost, -0.1, 0, "judges the magnitude"},
		{review.AtLeast, math.NaN(), 0, "not a number"},
		{review.Within, 0.2, -0.2, "not below the upper one"},
		{review.Tolerance, 1, 0, "outside 0..1000 %"},
		{review.Tolerance, 0, 0.1, "a share of zero"},
		{review.AtMost, math.Inf(1), 0, "not a number"},
		{review.Within, math.Inf(-1), 0.2, "not a number"},
	} {
		_, err := review.NewRule(c.kind, "T", c.first, c.second)
		var e *magcirc.Error
		if !errors.As(err, &e) || e.Code != magcirc.BadValue || !strings.Contains(err.Error(), c.says) {
			t.Errorf("kind %d, %g, %g: %v; want %q", c.kind, c.first, c.second, err, c.says)
		}
	}
}

// TestShareOfTemperature: 10 percent of 25 degC depends on where the scale has its zero.
func TestShareOfTemperature(t *testing.T) {
	if _, err := review.NewRule(review.Tolerance, "degC", 25, 0.1); err == nil || !strings.Contains(err.Error(), "no range of temperature") {
		t.Errorf("got %v", err)
	}
}

// cell runs f as a cell of the notebook.
func cell(key string, failed bool, f func()) {
	session.BeginCell(key, 1)
	f()
	session.EndCell(failed)
}

func limit(t *testing.T, what string, value float64) *review.Verdict {
	v := &review.Verdict{What: what, Value: value, Unit: "T", Rule: rule(t, review.AtMost, "T", 0.32, 0)}
	review.State(v)
	return v
}

func TestCellOwnsItsVerdicts(t *testing.T) {
	session.Reset()
	cell("a", false, func() { limit(t, "B", 0.4) })
	cell("b", false, func() { limit(t, "B hot", 0.3) })
	if got := review.Count(); got != (review.Summary{Pass: 1, Fail: 1}) {
		t.Fatalf("after both cells: %v", got)
	}
	cell("a", false, func() { limit(t, "B", 0.31) }) // run again: replaced, at its old place
	if got := review.Count(); got != (review.Summary{Pass: 2}) {
		t.Errorf("after the rerun: %v", got)
	}
	if rows := review.Table().Rows; rows[0][0].Words != "B" || rows[1][0].Words != "B hot" {
		t.Errorf("order after the rerun: %v, %v", rows[0][0].Words, rows[1][0].Words)
	}
	cell("b", true, func() { limit(t, "B hot", 0.3) }) // a failed cell leaves no verdict
	if got := review.Count(); got != (review.Summary{Pass: 1}) {
		t.Errorf("after the failed cell: %v", got)
	}
}

func TestRequirementIsOpenUntilChecked(t *testing.T) {
	session.Reset()
	r := &review.Requirement{What: "leakage", Rule: rule(t, review.AtMost, "H", 9.5e-6, 0)}
	cell("a", false, func() { review.Demand(r) })
	if r.Status() != review.Open || review.Count().Open != 1 {
		t.Fatalf("unchecked: %v, %v", r.Status(), review.Count())
	}
	check := func(value float64) func() {
		return func() { r.Answer(&review.Verdict{What: r.What, Value: value, Unit: "H", Rule: r.Rule}) }
	}
	cell("b", false, check(8e-6))
	if r.Status() != review.Pass || review.Count() != (review.Summary{Pass: 1}) {
		t.Errorf("checked: %v, %v", r.Status(), review.Count())
	}
	cell("c", false, check(11e-6))
	if r.Status() != review.Fail || review.Count() != (review.Summary{Fail: 1}) { // one name, its worst check
		t.Errorf("one check missed: %v, %v", r.Status(), review.Count())
	}
	cell("b", false, func() {})
	cell("c", false, func() {})
	if r.Status() != review.Open {
		t.Errorf("checks withdrawn: %v", r.Status())
	}
}

func TestWaiver(t *testing.T) {
	session.Reset()
	cell("a", false, func() { limit(t, "B", 0.4); review.Leave(&review.OpenPoint{What: "creepage", Owner: "safety"}) })
	cell("b", false, func() {
		review.Waive("B", "saturates once at start, clamp holds", "A. Smith")
		review.Waive("nothing", "no reason", "nobody")
	})
	if got := review.Count(); got != (review.Summary{Waived: 1, Open: 1}) {
		t.Errorf("waived: %v", got)
	}
	text := review.Table().Text()
	for _, want := range []string{"WAIVED by A. Smith: saturates once", `the waiver of "nothing" by nobody has nothing to waive`} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in\n%s", want, text)
		}
	}
	cell("b", false, func() {}) // the waiver goes with its cell
	if got := review.Count(); got != (review.Summary{Fail: 1, Open: 1}) {
		t.Errorf("waiver withdrawn: %v", got)
	}
}

func TestCornerEndsWithPassAndCell(t *testing.T) {
	session.Reset()
	var in, after, next *review.Verdict
	cell("a", false, func() {
		review.Corner("low line")
		in = limit(t, "B", 0.3)
		session.EndPass()
		after = limit(t, "B", 0.3)
		review.Corner("high line")
	})
	cell("b", false, func() { next = limit(t, "B", 0.3) })
	if in.Corner != "low line" || after.Corner != "" || next.Corner != "" {
		t.Errorf("corners %q, %q, %q", in.Corner, after.Corner, next.Corner)
	}
}

func TestThinMargin(t *testing.T) {
	v := &review.Verdict{What: "Lp", Value: 584e-6, Unit: "H", Uncertainty: 0.03, Rule: rule(t, review.Within, "H", 580e-6, 680e-6)}
	if want := "PASS - margin below uncertainty"; v.StatusWords() != want || !strings.HasSuffix(v.Line(), want) {
		t.Errorf("got %q", v.Line())
	}
	if want := `limit "Lp": 584 uH is within 4 uH of the bound 580 uH..680 uH, less than its uncertainty (17.5 uH): PASS - margin below uncertainty`; v.Line() != want {
		t.Errorf("got %s", v.Line())
	}
	v.Uncertainty = 0.005
	if v.StatusWords() != "PASS" {
		t.Errorf("uncertainty below the margin: %q", v.StatusWords())
	}
	v.Value, v.Uncertainty = 570e-6, 0.2
	if v.StatusWords() != "FAIL" {
		t.Errorf("uncertainty must not save a miss: %q", v.StatusWords())
	}
}

func TestPlaceIsFilled(t *testing.T) {
	session.Reset()
	var last session.Output
	n := 0
	session.Attach(func(o session.Output) { last = o; n++ })
	defer session.Attach(nil)
	cell("a", false, review.Place)
	if text := last.Data["text/plain"].(string); !strings.Contains(text, "none yet") {
		t.Errorf("empty place: %q", text)
	}
	id := last.ID
	cell("b", false, func() { limit(t, "B", 0.4) })
	if !last.Update || last.ID != id || !strings.Contains(last.Data["text/plain"].(string), "so far: 1 FAIL") {
		t.Errorf("update after a verdict: %+v", last)
	}
	before := n
	cell("c", false, func() {})
	if n != before {
		t.Error("a cell without verdicts updates the place")
	}
	session.Finish()
	if text := last.Data["text/plain"].(string); !strings.HasPrefix(text, "verdicts: 1 FAIL") {
		t.Errorf("finished: %q", text)
	}
	if html := last.Data["text/html"].(string); !strings.Contains(html, `<td class="fail" style="text-align:left">FAIL</td>`) {
		t.Errorf("status class is missing in %s", html)
	}
}

func TestAssumptions(t *testing.T) {
	session.Reset()
	cell("a", false, func() {
		review.Assume("25 degC", review.Assumed, "At(100*degC)")
		review.Assume("25 degC", review.Assumed, "")
	})
	cell("b", false, func() {
		review.Assume("25 degC", review.Assumed, "")
		review.Assume("law extrapolated", review.Extrapolated, "")
	})
	if got := review.Assumptions(); len(got) != 2 || got[0].Change != "At(100*degC)" || got[1].Text != "law extrapolated" {
		t.Errorf("assumed %v", got)
	}
	cell("b", false, func() {})
	if got := review.Assumptions(); len(got) != 1 {
		t.Errorf("after the rerun %v", got)
	}
}

// TestFoldSaysWhatIsTrue: equal margins are not more margin, and a thin PASS stands above one with less margin.
func TestFoldSaysWhatIsTrue(t *testing.T) {
	at := func(values ...float64) string {
		session.Reset()
		cell("a", false, func() {
			for i, b := range values {
				v := limit(t, "B", b)
				if i == 0 {
					v.Uncertainty = 0.2
				}
			}
		})
		return review.Table().Text()
	}
	for _, c := range []struct {
		values []float64
		says   string
	}{
		{[]float64{0.31, 0.2, 0.1}, "B: 2 more conditions, all with more margin"},
		{[]float64{0.31, 0.31, 0.1}, "B: 2 more conditions, none of them worse"},
		{[]float64{0.3, 0.31}, "B: 1 more condition, not worse"}, // the first is thin, the second has less margin and no doubt
	} {
		if s := at(c.values...); !strings.Contains(s, c.says) {
			t.Errorf("%v: %q is missing in\n%s", c.values, c.says, s)
		}
	}
}
