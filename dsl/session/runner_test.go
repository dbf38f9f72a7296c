package session_test

import (
	"context"
	"errors"
	"testing"
	"time"

	"ampturn/dsl/session"
)

func TestWithoutRunner(t *testing.T) {
	session.Serve(session.Runner{})
	if _, err := session.Ask("? ", false); !errors.Is(err, session.ErrNoInput) {
		t.Errorf("asking: %v", err)
	}
	ran := false
	session.Later(func() { ran = true })
	if !ran {
		t.Error("what is left for later is not run")
	}
	if _, ok := session.Help("x"); ok || session.Names() != nil {
		t.Error("somebody answers")
	}
}

func TestWaitEndsWithTheContext(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	session.SetContext(ctx)
	defer session.SetContext(context.Background())
	if err := session.Wait(time.Millisecond); err != nil {
		t.Error(err)
	}
	time.AfterFunc(10*time.Millisecond, cancel)
	start := time.Now()
	if err := session.Wait(time.Hour); !errors.Is(err, context.Canceled) || time.Since(start) > time.Minute {
		t.Errorf("%v after %v", err, time.Since(start))
	}
}

// TestHold brings back cell, sink and context of work that a cell has left, as a run of its own.
func TestHold(t *testing.T) {
	defer session.Attach(nil)
	var first, second []session.Output
	session.Attach(func(o session.Output) { first = append(first, o) })
	session.BeginCell("a", 1)
	serial := session.Serial()
	back := session.Hold()
	session.EndCell(false)
	session.Attach(func(o session.Output) { second = append(second, o) })
	session.BeginCell("b", 2)
	session.Show("of b")
	back()
	session.Show("of a")
	if key, n := session.Cell(); key != "a" || n != 1 || session.Serial() == serial {
		t.Errorf("cell %s %d, serial %d", key, n, session.Serial())
	}
	if len(first) != 1 || len(second) != 1 || first[0].Data["text/plain"] != "of a" {
		t.Errorf("outputs %v and %v", first, second)
	}
}
