package wire

import (
	"fmt"
	"testing"
)

func TestGuardForgetsTheOldest(t *testing.T) {
	g := newGuard(3)
	name := func(i int) []byte { return fmt.Appendf(nil, "%02x%062d", i, 0) }
	for i := range 3 {
		if !g.fresh(name(i)) {
			t.Fatalf("%d is not new", i)
		}
	}
	for i := range 3 {
		if g.fresh(name(i)) {
			t.Errorf("%d is new again", i)
		}
	}
	if !g.fresh(name(3)) || !g.fresh(name(0)) || g.fresh(name(2)) {
		t.Error("not the oldest is forgotten")
	}
	if len(g.seen) != 3 || len(g.ring) != 3 {
		t.Errorf("%d and %d remembered", len(g.seen), len(g.ring))
	}
}
