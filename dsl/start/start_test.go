package start_test

import (
	"slices"
	"testing"

	"ampturn/dsl/start"
)

func TestLike(t *testing.T) {
	if kinds := start.Kinds(); len(kinds) < 4 || !slices.IsSorted(kinds) {
		t.Errorf("kinds: %v", kinds)
	}
	for kind, want := range map[string]bool{"flyback": true, "buck": true, "buck-inductor": true, "c": false, "": false, "kinds": false, "../start": false} {
		if _, ok := start.Like(kind); ok != want {
			t.Errorf("%q: %v, want %v", kind, ok, want)
		}
	}
	for _, kind := range start.Kinds() {
		if text, ok := start.Like(kind); !ok || len(text) < 1000 {
			t.Errorf("%s: %d bytes", kind, len(text))
		}
	}
}
