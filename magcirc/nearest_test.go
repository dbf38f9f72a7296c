package magcirc_test

import (
	"testing"

	"ampturn/magcirc"
)

// TestDistance: counts done by hand.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "", 0}, {"main", "main", 0}, {"MAIN", "main", 0}, {"main", "", 4}, {"mian", "main", 2}, {"centre", "center", 2}, {"gap", "gap2", 1}, {"uH", "µH", 1}, {"sitting", "kitten", 3}} {
		if got := magcirc.Distance(c.a, c.b); got != c.want {
			t.Errorf("%q, %q: %d, want %d", c.a, c.b, got, c.want)
		}
		if back := magcirc.Distance(c.b, c.a); back != c.want {
			t.Errorf("%q, %q the other way: %d", c.a, c.b, back)
		}
	}
}
