package diff_test

import (
	"testing"

	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
)

// FuzzOutputs: a text is the same as itself, whatever it holds, and comparing two never panics and does not depend on
// their order.
func FuzzOutputs(f *testing.F) {
	for _, s := range []string{"", "L1 630 uH", "-3.2e-16", `<td data-value="1e-3">1.000</td>`, "1e999 1.2.3 -.5 +-2 %", "M10.01 5L3 3"} {
		f.Add(s, s+" 7")
	}
	f.Fuzz(func(t *testing.T, a, b string) {
		for _, kind := range []string{"text/plain", "text/html", "image/svg+xml"} {
			x := []*notebook.Output{{Kind: notebook.Display, Data: map[string]any{kind: a}}}
			y := []*notebook.Output{{Kind: notebook.Display, Data: map[string]any{kind: b}}}
			if changes, _ := diff.Default.Outputs(x, x); len(changes) > 0 {
				t.Errorf("%s: %q differs from itself: %v", kind, a, changes)
			}
			there, _ := diff.Default.Outputs(x, y)
			back, _ := diff.Default.Outputs(y, x)
			if len(there) != len(back) {
				t.Errorf("%s: %q to %q: %v, back: %v", kind, a, b, there, back)
			}
		}
	})
}
