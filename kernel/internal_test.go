package kernel

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestHistoryIsBounded(t *testing.T) {
	var h history
	for i := range maxHistory + 10 {
		h.add(entry{number: i, source: "x"})
	}
	if len(h.entries) != maxHistory || h.entries[0].number != 10 || h.bytes != maxHistory {
		t.Errorf("%d entries from %d, %d bytes", len(h.entries), h.entries[0].number, h.bytes)
	}
	h.add(entry{number: 7000, source: strings.Repeat("y", maxHistoryBytes+1)})
	if len(h.entries) != 1 || h.entries[0].number != 7000 {
		t.Errorf("%d entries kept beside a huge one", len(h.entries))
	}
	h.add(entry{number: 7001, source: "z"})
	if len(h.entries) != 1 || h.entries[0].number != 7001 || h.bytes != 1 {
		t.Errorf("%d entries, %d bytes", len(h.entries), h.bytes)
	}
}

func TestGlob(t *testing.T) {
	for _, c := range []struct {
		pattern, text string
		want          bool
	}{
		{"", "", true}, {"", "a", false}, {"*", "", true}, {"*", "any\nlines", true}, {"a?c", "aµc", true}, {"a?c", "ac", false},
		{"*b*", "abc", true}, {"*b", "abc", false}, {"1?2*", "1+2+3", true}, {"a*b*c", "axxbyyc", true}, {"a*b*c", "axxcyyb", false},
		{"**a**", "a", true}, {"[a]", "a", false},
	} {
		if got := glob(c.pattern, c.text); got != c.want {
			t.Errorf("%q on %q: %v", c.pattern, c.text, got)
		}
	}
}

// Reports as the runtime of Go 1.26 wrote them, shortened.
func TestCause(t *testing.T) {
	path := filepath.Join(t.TempDir(), "crash")
	for want, report := range map[string]string{
		"killed from outside":   "",
		"called itself":         "\nruntime stack:\nruntime.throw({0x62f554?, 0x420205?})\n\t/panic.go:1229\nruntime.newstack()\n\t/stack.go",
		"68.7 GB asked for":     "\nruntime stack:\nruntime.throw({0x1, 0xd})\nruntime.(*mcache).allocLarge(0x7f?, 0x1000000000, 0x1)\n\t/x",
		"used one map":          "\ngoroutine 7 [running]:\ninternal/runtime/maps.fatal({0x1, 0x1})\n",
		"assignment to nil map": "panic: assignment to nil map\n\ngoroutine 1 [running]:\n",
		"something new":         "something new\nmore",
	} {
		if err := os.WriteFile(path, []byte(report), 0o600); err != nil {
			t.Fatal(err)
		}
		if got := cause(path); !strings.Contains(got, want) {
			t.Errorf("%q: %q", report, got)
		}
	}
}

func TestMemoryFiles(t *testing.T) {
	path := filepath.Join(t.TempDir(), "m")
	for text, want := range map[string]int64{
		"MemTotal: 9 kB\nMemAvailable:    2048 kB\n": 2048 * 1024, "MemTotal: 9 kB\n": math.MaxInt64, "": math.MaxInt64,
	} {
		if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		if got := memoryFree(path); got != want {
			t.Errorf("%q: %d", text, got)
		}
	}
	for text, want := range map[string]int64{"max\n": math.MaxInt64, "1048576\n": 1048576, "0": math.MaxInt64} {
		if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		if got := containerLimit(path); got != want {
			t.Errorf("%q: %d", text, got)
		}
	}
	if memoryFree(path+"none") != math.MaxInt64 || containerLimit(path+"none") != math.MaxInt64 {
		t.Error("a limit without a file")
	}
}
