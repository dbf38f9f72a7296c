package kerneltest

import (
	"context"
	"errors"
	"fmt"
	"regexp"
	"strconv"
	"strings"
	"sync"
	"time"

	"ampturn/kernel"
)

// Toy is an engine for tests. A cell is a list of lines, each a command with its argument:
//
//	1+2+3, name, "text"   result; sums and products of whole numbers and names
//	name = 41             sets a name
//	print TEXT            a line on stdout; TEXT may be quoted
//	warn TEXT             a line on stderr
//	raw "TEXT"            TEXT as it is
//	repeat N TEXT         TEXT N times and a line end
//	lines N               "line 0" to "line N-1"
//	length "TEXT"         result: its number of bytes
//	fail TEXT             an error
//	panic TEXT            a panic in the engine
//	loop, spin MS         works for ever, or for a time
//	sleep MS              waits
//	ask PROMPT            has a line typed and prints "got ..."
//	secret PROMPT         likewise, hidden
//	show MIME TEXT        a display
//	page TEXT             something to read in the front end's pager
//	place ID TEXT         a display that can be updated
//	update ID TEXT        updates it
//	chunks N SIZE         N displays of SIZE bytes
//	clear, clear wait     drops the outputs so far
//	late MS TEXT          prints a line after the cell has ended
//	hoard N               asks for N bytes of memory
//	grow N                keeps N bytes more every 10 ms
//	overflow              calls itself until the process dies
type Toy struct {
	mu    sync.Mutex
	names map[string]int
	Cells []kernel.Cell // the cells that ran, oldest first
}

// NewToy gives an engine without names.
func NewToy() *Toy { return &Toy{names: make(map[string]int)} }

// Language describes the toy's lines.
func (*Toy) Language() kernel.Language {
	return kernel.Language{
		Name: "toy", Version: "1", MIMEType: "text/plain", Extension: ".toy", Lexer: "text", Mirror: "null",
		Banner: "toy engine for tests",
	}
}

// toyError is an error with the name of its kind.
type toyError struct{ name, text string }

func (e *toyError) Error() string { return e.text }

// Run runs a cell.
func (t *Toy) Run(ctx context.Context, c kernel.Cell, out kernel.Sink) kernel.Outcome {
	t.mu.Lock()
	t.Cells = append(t.Cells, c)
	t.Cells = t.Cells[max(0, len(t.Cells)-100):]
	t.mu.Unlock()
	for i, line := range strings.Split(c.Source, "\n") {
		line = strings.TrimSpace(line)
		if line == "" {
			continue
		}
		err := t.line(ctx, c, line, out)
		if err == nil {
			err = ctx.Err()
		}
		if err == nil {
			continue
		}
		text := fmt.Sprintf("cell %d, line %d: %v", c.Number, i+1, err)
		f := &kernel.Fault{Name: "ToyError", Text: text, Traceback: []string{text, "    " + line[:min(len(line), 80)]}}
		var e *toyError
		if errors.As(err, &e) {
			f.Name = e.name
		}
		interrupted := errors.Is(err, context.Canceled)
		if interrupted {
			f.Name = "Interrupted"
		}
		return kernel.Outcome{Fault: f, Interrupted: interrupted}
	}
	return kernel.Outcome{}
}

// Evaluate gives the value of an expression.
func (t *Toy) Evaluate(_ context.Context, expression string) (map[string]any, *kernel.Fault) {
	v, err := t.value(expression)
	if err != nil {
		return nil, &kernel.Fault{Name: "UnknownName", Text: err.Error()}
	}
	return map[string]any{"text/plain": strconv.Itoa(v)}, nil
}

var assignment = regexp.MustCompile(`^([A-Za-z_]\w*)\s*=\s*(.*)$`)

// line does what one line says.
func (t *Toy) line(ctx context.Context, c kernel.Cell, line string, out kernel.Sink) error {
	if m := assignment.FindStringSubmatch(line); m != nil {
		v, err := t.value(m[2])
		if err == nil {
			t.set(m[1], v)
		}
		return err
	}
	word, rest, _ := strings.Cut(line, " ")
	if f, ok := commands[word]; ok {
		return f(toyCall{ctx, c, out, rest})
	}
	if s, err := strconv.Unquote(line); err == nil {
		return result(out, s)
	}
	v, err := t.value(line)
	if err != nil {
		return err
	}
	return result(out, strconv.Itoa(v))
}

func result(out kernel.Sink, text string) error {
	out(kernel.Output{Kind: kernel.Result, Data: map[string]any{"text/plain": text}})
	return nil
}

func (t *Toy) set(name string, v int) {
	t.mu.Lock()
	defer t.mu.Unlock()
	t.names[name] = v
}

// value computes a sum of products.
func (t *Toy) value(expression string) (int, error) {
	t.mu.Lock()
	defer t.mu.Unlock()
	sum := 0
	for _, term := range strings.Split(expression, "+") {
		product := 1
		for _, factor := range strings.Split(term, "*") {
			factor = strings.TrimSpace(factor)
			v, err := strconv.Atoi(factor)
			if err != nil {
				var ok bool
				if v, ok = t.names[factor]; !ok {
					return 0, &toyError{"UnknownName", fmt.Sprintf("%.80q is neither a number nor a name", factor)}
				}
			}
			product *= v
		}
		sum += product
	}
	return sum, nil
}

// spin works until the time is over or ctx ends.
func spin(ctx context.Context, d time.Duration) error {
	for start := time.Now(); d < 0 || time.Since(start) < d; {
		if err := ctx.Err(); err != nil {
			return err
		}
	}
	return nil
}
