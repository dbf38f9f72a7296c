// Package nb is what the text of a lowered cell calls: the few things that compiled Go or the interpreter does not do
// by itself. A notebook that was exported as a Go program imports it; in a running notebook most of it is bound to the
// session instead.
package nb

import (
	"fmt"
	"os"
	"sync"
)

// Shown tells how a value of a notebook is written.
type Shown struct {
	Unit string // as the unit check inferred it: "m", "?" for not traced, "{Vin=V;Core=degC}" for structs
	Type string // the static type as typed
}

// Program is an exported notebook.
type Program struct {
	Shown  []Shown
	Format func(x float64, unit string) string // writes a number with its unit
	Begin  func(key string, number int)        // before each cell
	End    func(failed bool)                   // after each cell
	Pass   func()                              // after each pass of a loop at the top level of a cell
	Finish func()                              // after the last cell
	Cells  []Cell
}

// Cell is one cell of an exported notebook.
type Cell struct {
	Key    string
	Number int
	Run    func()
}

var (
	program Program
	writing sync.Mutex
)

// Main runs an exported notebook: its cells in order, what they show as text on the standard output. A cell that stops
// ends the program with exit code 1 and one line on the standard error.
func Main(p Program) {
	program = p
	failed := false
	for _, c := range p.Cells {
		if !run(c) {
			failed = true
			break
		}
	}
	if p.Finish != nil {
		p.Finish()
	}
	if failed {
		os.Exit(1)
	}
}

func run(c Cell) (ok bool) {
	if program.Begin != nil {
		program.Begin(c.Key, c.Number)
	}
	defer func() {
		if x := recover(); x != nil {
			fmt.Fprintf(os.Stderr, "cell %d: %v\n", c.Number, x)
			ok = false
		}
		if program.End != nil {
			program.End(!ok)
		}
	}()
	c.Run()
	return true
}

// Write writes text of the running cell.
func Write(text string) {
	writing.Lock()
	defer writing.Unlock()
	_, _ = os.Stdout.WriteString(text)
}

// Bundle writes the text of something that a cell shows; nil shows nothing.
func Bundle(data map[string]any) {
	if data == nil {
		return
	}
	text, _ := data["text/plain"].(string)
	Write(text + "\n")
}

// Show writes a value of static type T in the k-th way of the program.
func Show[T any](k int, v T) {
	if b, ok := any(v).(bundler); ok && !isNilPointer(v) {
		Bundle(b.MIMEBundle())
		return
	}
	how := program.Shown[k]
	w := Writer{Format: program.Format}
	Write(w.Text(valueOf(v), typeOf[T](how.Type), how.Unit, true) + "\n")
}

// ShowBundle writes what a value shows of itself.
func ShowBundle(_ int, data map[string]any) { Bundle(data) }

// ShowText writes the text that a value gives itself.
func ShowText(_ int, text string) { Write(text + "\n") }

// Print, Println and Printf write as those of fmt do.
func Print(v ...any) (int, error) { return put(fmt.Sprint(v...)) }

// Println writes as that of fmt does.
func Println(v ...any) (int, error) { return put(fmt.Sprintln(v...)) }

// Printf writes as that of fmt does.
func Printf(format string, v ...any) (int, error) { return put(fmt.Sprintf(format, v...)) }

func put(text string) (int, error) {
	Write(text)
	return len(text), nil
}

// Panic stops a cell.
func Panic(v any) { panic(v) }

// Pass ends a pass of a loop at the top level of a cell.
func Pass() {
	if program.Pass != nil {
		program.Pass()
	}
}
