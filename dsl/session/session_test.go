package session_test

import (
	"context"
	"slices"
	"testing"

	"ampturn/dsl/session"
)

type picture struct{ data map[string]any }

func (p picture) MIMEBundle() map[string]any   { return p.data }
func (p picture) MIMEMetadata() map[string]any { return map[string]any{"full": 1.25} }

// collect gives the outputs that f sends.
func collect(t *testing.T, f func()) []session.Output {
	t.Helper()
	var got []session.Output
	session.Attach(func(o session.Output) { got = append(got, o) })
	defer session.Attach(nil)
	f()
	return got
}

func TestShow(t *testing.T) {
	got := collect(t, func() {
		session.Show(3)
		session.Show(picture{map[string]any{"image/svg+xml": "<svg/>"}})
		session.Show(picture{nil}) // shows nothing
		session.Place("p", map[string]any{"text/plain": "empty"})
		session.Update("p", map[string]any{"text/plain": "full"})
		session.Write("stderr", "careful\n")
		session.Clear(true)
	})
	if len(got) != 6 {
		t.Fatalf("%d outputs, want 6: %v", len(got), got)
	}
	if got[0].Data["text/plain"] != "3" || got[1].Data["image/svg+xml"] != "<svg/>" || got[1].Metadata["full"] != 1.25 {
		t.Errorf("displays: %v", got[:2])
	}
	if got[2].ID != "p" || got[2].Update || got[3].ID != "p" || !got[3].Update {
		t.Errorf("place and update: %v", got[2:4])
	}
	if got[4].Stream != "stderr" || got[4].Text != "careful\n" || !got[5].Clear || !got[5].Wait {
		t.Errorf("stream and clear: %v", got[4:])
	}
}

func TestNoSinkDropsOutput(t *testing.T) {
	session.Attach(nil)
	session.Show("nobody listens") // must not panic
}

func TestOrderOfHooks(t *testing.T) {
	var log []string
	session.OnReset(func() { log = append(log, "reset") })
	session.OnBegin(func(key string) { log = append(log, "begin "+key) })
	session.OnEnd(func(key string, failed bool) {
		if failed {
			key += " failed"
		}
		log = append(log, "end "+key)
	})
	session.OnPass(func() { log = append(log, "pass") })
	session.OnFinish(func() { log = append(log, "finish") })
	session.Reset()
	session.BeginCell("a", 1)
	session.EndPass()
	session.EndCell(false)
	first := session.Serial()
	session.BeginCell("b", 2)
	if key, n := session.Cell(); key != "b" || n != 2 || session.Serial() == first {
		t.Errorf("cell %q %d, serial %d after %d", key, n, session.Serial(), first)
	}
	session.EndCell(true)
	session.Finish()
	want := []string{"reset", "begin a", "pass", "end a", "begin b", "end b failed", "finish"}
	if !slices.Equal(log, want) {
		t.Errorf("hooks ran as %v, want %v", log, want)
	}
}

func TestContext(t *testing.T) {
	if session.Context().Err() != nil {
		t.Fatal("a session without runner is interrupted")
	}
	ctx, cancel := context.WithCancel(context.Background())
	session.SetContext(ctx)
	defer session.SetContext(context.Background())
	cancel()
	if session.Context().Err() == nil {
		t.Error("the interrupt does not reach the context")
	}
}
