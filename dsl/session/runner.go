package session

import (
	"context"
	"errors"
	"time"
)

// Runner is what whoever runs the cells offers to the vocabulary. A nil field is not offered.
type Runner struct {
	// Ask has the user type a line; hidden keeps it off the screen.
	Ask func(ctx context.Context, prompt string, hidden bool) (string, error)
	// Later has a function run after the cell.
	Later func(f func())
	// Aside runs a function that waits; other cells may run meanwhile where that is possible.
	Aside func(wait func())
	// Names lists the names that the notebook has.
	Names func() []Name
	// Help explains a name as a MIME bundle.
	Help func(name string) (data map[string]any, ok bool)
}

// Name is a name of the notebook, with its type, its unit ("" for none) and its value in words.
type Name struct {
	Name, Type, Unit, Value string
	Cell                    int // that declared it
}

var (
	runner Runner
	live   bool
)

// Serve names what the runner of the cells offers. Call it before the first cell.
func Serve(r Runner) {
	state.Lock()
	defer state.Unlock()
	runner = r
}

func offered() Runner {
	state.Lock()
	defer state.Unlock()
	return runner
}

// ErrNoInput tells that nobody can be asked.
var ErrNoInput = errors.New("nobody can be asked here; set the value in the cell")

// Ask has the user type a line and waits for it.
func Ask(prompt string, hidden bool) (string, error) {
	ask := offered().Ask
	if ask == nil {
		return "", ErrNoInput
	}
	return ask(Context(), prompt, hidden)
}

// Later has a function run after the running cell, with its output in that cell; without a runner it runs at once.
func Later(f func()) {
	if later := offered().Later; later != nil {
		later(f)
		return
	}
	f()
}

// Wait waits for a time, or until the running cell is interrupted: then it gives the error of its context.
func Wait(d time.Duration) error {
	ctx := Context()
	wait := func() {
		t := time.NewTimer(d)
		defer t.Stop()
		select {
		case <-t.C:
		case <-ctx.Done():
		}
	}
	if aside := offered().Aside; aside != nil {
		aside(wait)
	} else {
		wait()
	}
	return ctx.Err()
}

// Names lists the names that the notebook has.
func Names() []Name {
	if names := offered().Names; names != nil {
		return names()
	}
	return nil
}

// Help explains a name.
func Help(name string) (data map[string]any, ok bool) {
	if help := offered().Help; help != nil {
		return help(name)
	}
	return nil, false
}

// SetLive tells whether somebody looks on while cells run. It holds for all notebooks of the process.
func SetLive(on bool) {
	state.Lock()
	defer state.Unlock()
	live = on
}

// Live tells whether somebody looks on, so that a long call may tell how far it is.
func Live() bool {
	state.Lock()
	defer state.Unlock()
	return live
}

// Hold notes which cell runs and where its output goes. The function that it gives brings that back, for work that a
// cell has left for later; what is made then belongs to no run of a cell before.
func Hold() (back func()) {
	state.Lock()
	defer state.Unlock()
	key, number, sink, ctx := state.key, state.number, state.sink, state.ctx
	return func() {
		state.Lock()
		defer state.Unlock()
		state.key, state.number, state.sink, state.ctx = key, number, sink, ctx
		state.serial++
	}
}
