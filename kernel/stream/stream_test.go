package stream

import (
	"fmt"
	"strings"
	"sync"
	"testing"
	"time"
)

// sink collects messages.
type sink struct {
	mu   sync.Mutex
	list []string
}

func (s *sink) emit(name, text string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.list = append(s.list, name[3:]+":"+text)
}

func (s *sink) all() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	return strings.Join(s.list, "|")
}

// still is limits whose timers do not fire within a test.
func still(l Limits) *Limits {
	l.First, l.Every = time.Hour, time.Hour
	return &l
}

func TestOrderAndGathering(t *testing.T) {
	var s sink
	w := NewWriter(s.emit, nil, still(Limits{}))
	for _, x := range []string{"a", "b", "!c", "!d", "e"} {
		if rest, isErr := strings.CutPrefix(x, "!"); isErr {
			w.Write("stderr", rest)
		} else {
			w.Write("stdout", x)
		}
	}
	if got := s.all(); got != "" {
		t.Errorf("sent too soon: %q", got)
	}
	w.Flush()
	w.Flush()
	w.Write("stdout", "f")
	w.End(nil)
	if got, want := s.all(), "out:ab|err:cd|out:e|out:f"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestTimer(t *testing.T) {
	sent := make(chan string, 10)
	w := NewWriter(func(_, text string) { sent <- text }, nil, &Limits{First: time.Millisecond, Every: time.Millisecond})
	for _, text := range []string{"first", "second"} {
		w.Write("stdout", text)
		select {
		case got := <-sent:
			if got != text {
				t.Errorf("got %q, want %q", got, text)
			}
		case <-time.After(5 * time.Second):
			t.Fatalf("%s is not sent", text)
		}
	}
}

// A character whose bytes come in two writes is one character; bytes that are none are shown as U+FFFD.
func TestCharacters(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"µ|", "µ"}, {"\xc2|\xb5", "µ"}, {"\xf0\x9d|\x90\x9a", "𝐚"}, {"a\xf0|\x9d|\x90|\x9ab", "a𝐚b"},
		{"\xff\xfe x", "\uFFFD x"}, {"\xc2|", "\uFFFD"}, {"\xc2|x", "\uFFFDx"}, {"a\x80", "a\uFFFD"},
	} {
		var s sink
		w := NewWriter(s.emit, nil, still(Limits{}))
		for _, p := range strings.Split(c.in, "|") {
			w.Write("stdout", p)
		}
		w.End(nil)
		if got := s.all(); got != "out:"+c.want {
			t.Errorf("%q: got %q", c.in, got)
		}
	}
}

func TestChunks(t *testing.T) {
	var s sink
	w := NewWriter(s.emit, nil, still(Limits{Chunk: 8}))
	w.Write("stdout", "12345\n7")      // below the size of a message: waits
	w.Write("stdout", "8\nµµµµµµµµ\n") // two bytes each
	w.End(nil)
	if got, want := s.all(), "out:12345\n|out:78\n|out:µµµµ|out:µµµµ|out:\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestFold(t *testing.T) {
	for in, want := range map[string]string{
		"":                          "",
		"no return\n":               "no return\n",
		"a\r\nb\r\n":                "a\r\nb\r\n",
		"x\n10 %\r20 %\r100 %":      "x\n100 %",
		"x\n100 %\r5":               "x\n500 %", // what a screen shows
		"10 %\r20 %\r30 %\n":        "10 %\r30 %\n",
		"\r1\r2\r3":                 "\r3",
		"x\nlong\rab\rc\nd":         "x\ncbng\nd",
		"x\n\x1b[1mred\rblue":       "x\n\x1b[1mred\rblue",
		"x\nwait\r":                 "x\nwait\r",
		"x\nµµ\rab":                 "x\nab",
		"x\n1\r2\n3\r4\n":           "x\n2\n4\n",
		"one\rtwo":                  "one\rtwo",
		"first\rsecond\nthird\r4th": "first\rsecond\n4thrd",
	} {
		if got := Fold(in); got != want {
			t.Errorf("%q: got %q, want %q", in, got, want)
		}
	}
}

// Past the limits the beginning has been shown, the end follows at the end, and the counts tell what is between.
func TestCut(t *testing.T) {
	for _, limit := range []Limits{{Lines: 100, Tail: 50}, {Bytes: 790, Tail: 50}} {
		var s sink
		w := NewWriter(s.emit, nil, still(limit))
		for i := range 1000 {
			w.Write("stdout", fmt.Sprintf("line %d\n", i))
		}
		w.End(nil)
		got := s.all()
		for _, want := range []string{"line 98\n", "line 99\n\n... output is cut here, after 100 lines and 790 bytes",
			"\nline 998\nline 999\n", "... 895 lines (8055 bytes) are left out here\nline 995\n"} {
			if !strings.Contains(got, want) {
				t.Errorf("%+v: no %q in %q", limit, want, got)
			}
		}
		if strings.Contains(got, "line 100\n") || len(got) > 1200 {
			t.Errorf("%d bytes sent: %q", len(got), got)
		}
	}
}

func TestCutCharacters(t *testing.T) {
	var s sink
	w := NewWriter(s.emit, nil, still(Limits{Bytes: 5, Tail: 5}))
	w.Write("stdout", "µµµµµµµµ")
	w.End(nil)
	if got := s.all(); !strings.HasPrefix(got, "out:µµ\n") || strings.ContainsRune(got, '\uFFFD') {
		t.Errorf("got %q", got)
	}
}

// The text of one cell stays within the burst and the rate: what passes in any window is bounded by the servers' limit.
func TestPace(t *testing.T) {
	now := time.Unix(0, 0)
	p := NewPace(100, 10)
	p.now = func() time.Time { return now }
	p.sleep = func(d time.Duration, _ <-chan struct{}) { now = now.Add(d) }
	p.Take(60, nil)
	p.Take(40, nil)
	if d := now.Sub(time.Unix(0, 0)); d != 0 {
		t.Errorf("the burst took %v", d)
	}
	p.Take(5, nil)
	p.Take(20, nil)
	if d := now.Sub(time.Unix(0, 0)); d != 2500*time.Millisecond { // (125-100)/10 s
		t.Errorf("25 units above the burst took %v", d)
	}
	now = now.Add(time.Hour)
	before := now
	p.Take(100, nil)
	if now != before {
		t.Error("the burst does not come back")
	}
	var none *Pace
	none.Take(1e9, nil)
}

func TestPaceEndsWithDone(t *testing.T) {
	p := NewPace(1, 0.001)
	p.Take(1, nil)
	done := make(chan struct{})
	close(done)
	begun := time.Now()
	p.Take(1, done)
	if d := time.Since(begun); d > 10*time.Second {
		t.Errorf("waited %v", d)
	}
}

func TestConcurrentWriters(t *testing.T) {
	var s sink
	w := NewWriter(s.emit, nil, &Limits{First: time.Microsecond, Every: time.Microsecond})
	var wait sync.WaitGroup
	for g := range 8 {
		wait.Go(func() {
			for i := range 500 {
				w.Write("stdout", fmt.Sprintf("<%d %d>", g, i))
			}
		})
	}
	wait.Wait()
	w.End(nil)
	got := strings.ReplaceAll(strings.ReplaceAll(s.all(), "|", ""), "out:", "")
	for g := range 8 {
		at := 0
		for i := range 500 {
			next := strings.Index(got[at:], fmt.Sprintf("<%d %d>", g, i))
			if next < 0 {
				t.Fatalf("writer %d: text %d is lost or out of order", g, i)
			}
			at += next
		}
	}
}
