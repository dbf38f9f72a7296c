// Package kernel runs cells for front ends: it reads requests, asks an [Engine] and publishes what cells show.
package kernel

import (
	"context"
	"errors"
)

// Kind says what an [Output] is.
type Kind int

// The kinds of output.
const (
	Stream  Kind = iota // text on stdout or stderr
	Display             // something shown; with ID it can be updated later
	Update              // a new content for the display of that ID
	Result              // the value of an expression statement
	Clear               // drop the cell's outputs so far (Wait: when the next one arrives)
	Page                // something to read beside the notebook, such as help; shown when the cell has ended well
)

// Output is one thing that a cell shows. Data maps MIME types to contents (text as string, JSON as any).
type Output struct {
	Kind     Kind
	Name     string // Stream: "stdout" or "stderr"
	Text     string // Stream: the text
	Data     map[string]any
	Metadata map[string]any
	ID       string // Display, Update: the display's id; empty: none
	Wait     bool   // Clear
}

// Sink takes outputs in order. It is safe for calls from several goroutines. It may be called after Run has returned:
// such late outputs still go to the cell that Run was given. A call may wait while front ends catch up.
type Sink func(Output)

// Cell is one piece of source to run.
type Cell struct {
	ID     string // the notebook's id of the cell; empty: none
	Number int    // execution count, from 1; names the cell in messages: "cell 4, line 2"
	Source string
	// Deleted lists the ids of cells that the user has deleted since the last run, where the front end tells it.
	Deleted []string

	// Transient marks source that a front end sends beside the notebook: it takes no number and no history.
	Transient bool
	// Ask has the user type a line and waits for it; hidden keeps it off the screen. It fails with [ErrNoInput]
	// where the front end offers none and with the context's error when ctx ends. Nil: no input.
	Ask func(ctx context.Context, prompt string, hidden bool) (string, error)
}

// ErrNoInput tells that the front end offers no input for the running cell.
var ErrNoInput = errors.New("this front end takes no input here; set the value in the cell")

// Fault is what stopped a cell.
type Fault struct {
	Name      string   // stable name of the kind of failure
	Text      string   // one line: "cell 4, line 2: what; way out"
	Traceback []string // Text, the source line with a mark, the user's own functions
}

// Outcome is how a cell ended.
type Outcome struct {
	Fault       *Fault // nil: it ran to its end
	Interrupted bool
}

// Completion is what fits at a cursor. Start and End count Unicode code points.
type Completion struct {
	Matches    []string
	Types      []string // one per match: "function", "unit", "variable", ...
	Signatures []string
	Start, End int
}

// Language describes the cell language to front ends.
type Language struct {
	Name, Version, MIMEType, Extension, Lexer, Mirror, Banner string
}

// Engine runs and explains cells. Run is called by one goroutine at a time; the others may be called while a cell
// runs.
type Engine interface {
	// Run runs a cell. Cancelling ctx interrupts it. Outputs go to out before Run returns.
	Run(ctx context.Context, c Cell, out Sink) Outcome
	// Complete lists what fits at the cursor, counted in code points.
	Complete(source string, cursor int) Completion
	// Inspect explains the name at the cursor as a MIME bundle; ok tells whether anything is known.
	Inspect(source string, cursor int) (data map[string]any, ok bool)
	// IsComplete tells "complete", "incomplete" (with the indent of the next line), "invalid" or "unknown".
	IsComplete(source string) (status, indent string)
	// Language describes the language.
	Language() Language
}

// Evaluator is an [Engine] that also evaluates single expressions, which front ends send along with a cell. An engine
// without it gets them as transient cells.
type Evaluator interface {
	// Evaluate gives the value of an expression as a MIME bundle, or what stopped it.
	Evaluate(ctx context.Context, expression string) (data map[string]any, fault *Fault)
}

// Closer is an [Engine] that wants to know about the end of the kernel.
type Closer interface {
	// Close is called once, after the last cell has ended or was left behind.
	Close() error
}

// Background is an [Engine] whose cells may leave work that runs after them, between other cells. What it shows goes to
// the sink of the cell that left it.
type Background interface {
	// Interrupt ends such work. It is called when no cell runs.
	Interrupt()
	// Settle waits until none is left; when ctx ends it interrupts what is.
	Settle(ctx context.Context)
}
