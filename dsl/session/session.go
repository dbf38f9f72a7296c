// Package session links a vocabulary to whoever runs the cells of a notebook: which cell runs, where its output
// goes, when it ended, when the whole run ended. It knows nothing of what the vocabulary says.
//
//	Attach, BeginCell, EndCell, Finish, Reset, SetContext    called by the runner of cells
//	Cell, Serial, Context, Show, Display, Place, Update      called by the vocabulary
//	OnReset, OnBegin, OnEnd, OnPass, OnFinish                for packages that keep state per notebook
//	SetFolder, Sources; ReadFile, Rest                       the files beside the notebook, and what its numbers rest on
//
// One notebook runs in a process at a time; all functions may be called from any goroutine. Without a runner (a
// plain Go program, a test) output is dropped and the context never ends.
package session

import (
	"context"
	"sync"
)

// Output is one thing that a running cell sends out: a display, an update of an earlier display, text of a stream,
// or a request to clear.
type Output struct {
	Data     map[string]any // MIME bundle of a display or an update
	Metadata map[string]any // beside it
	ID       string         // identity of a display that may be updated later; "" for none
	Page     bool           // to be read beside the notebook
	Update   bool           // replaces the data of the display with this ID
	Stream   string         // "stdout" or "stderr": Text belongs to that stream
	Text     string
	Clear    bool // clears the cell's output
	Wait     bool // clears only when the next output comes
}

// state is the one notebook of the process.
var state struct {
	sync.Mutex
	sink   func(Output)
	ctx    context.Context
	key    string
	number int
	serial int
}

var hooks struct {
	reset, pass, finish []func()
	begin               []func(key string)
	end                 []func(key string, failed bool)
}

// Reset begins a fresh notebook: no cell, no outputs of before.
func Reset() {
	state.Lock()
	state.key, state.number = "", 0
	state.serial++
	sources.list = nil
	state.Unlock()
	for _, f := range hooks.reset {
		f()
	}
}

// Attach names the receiver of all output; nil drops it.
func Attach(sink func(Output)) {
	state.Lock()
	defer state.Unlock()
	state.sink = sink
}

// BeginCell tells that a cell begins to run. key is the notebook's own identity of the cell, or a stable substitute;
// number is the execution count that messages quote.
func BeginCell(key string, number int) {
	state.Lock()
	state.key, state.number = key, number
	state.serial++
	state.Unlock()
	for _, f := range hooks.begin {
		f(key)
	}
}

// EndCell tells that the cell which began last has ended, failed or not.
func EndCell(failed bool) {
	key, _ := Cell()
	for _, f := range hooks.end {
		f(key, failed)
	}
}

// EndPass tells that a pass of a loop at the top level of a cell has ended: what holds for "the rest of this pass"
// ends here.
func EndPass() {
	for _, f := range hooks.pass {
		f()
	}
}

// Finish tells that the whole notebook has run: places that wait for the end are filled now.
func Finish() {
	for _, f := range hooks.finish {
		f()
	}
}

// Cell gives the key and the number of the cell that runs, or ran last; "" and 0 outside a notebook.
func Cell() (key string, number int) {
	state.Lock()
	defer state.Unlock()
	return state.key, state.number
}

// Serial counts the runs of cells: two equal values belong to the same run of the same cell.
func Serial() int {
	state.Lock()
	defer state.Unlock()
	return state.serial
}

// SetContext gives the context of the cell that is about to run; it is cancelled on an interrupt.
func SetContext(ctx context.Context) {
	state.Lock()
	defer state.Unlock()
	state.ctx = ctx
}

// Context is cancelled when the running cell is interrupted. Long calls poll it.
func Context() context.Context {
	state.Lock()
	defer state.Unlock()
	if state.ctx == nil {
		return context.Background()
	}
	return state.ctx
}

// OnReset calls f whenever a fresh notebook begins.
func OnReset(f func()) { hooks.reset = append(hooks.reset, f) }

// OnBegin calls f whenever a cell begins.
func OnBegin(f func(key string)) { hooks.begin = append(hooks.begin, f) }

// OnEnd calls f whenever a cell ends.
func OnEnd(f func(key string, failed bool)) { hooks.end = append(hooks.end, f) }

// OnPass calls f at the end of each pass of a loop at the top level of a cell.
func OnPass(f func()) { hooks.pass = append(hooks.pass, f) }

// OnFinish calls f when the whole notebook has run.
func OnFinish(f func()) { hooks.finish = append(hooks.finish, f) }
