package kernel

import (
	"bytes"
	"fmt"
	"os"
	"regexp"
	"runtime/debug"
	"strconv"
	"strings"
)

// record is a small file beside the connection file that outlives the process: it says which cell runs, and the
// runtime writes there what it ends on. A front end that starts the kernel again does so with the same connection
// file, so the next process can tell why the last one ended. After an orderly end the files are gone.
type record struct {
	state *os.File // fixed-width line: cell that runs, 0 for none
	crash *os.File // report of the runtime
	told  string
}

const (
	stateEnd = ".cell"
	crashEnd = ".crash"
	maxCrash = 1 << 20
)

// openRecord reads what the last process left and starts anew. It gives nil where the files cannot be written; a nil
// record records nothing.
func openRecord(connectionFile string) *record {
	r := &record{told: lastEnd(connectionFile)}
	var err error
	if r.state, err = os.OpenFile(connectionFile+stateEnd, os.O_RDWR|os.O_CREATE|os.O_TRUNC, 0o600); err != nil {
		return nil
	}
	r.enter(0)
	if r.crash, err = os.OpenFile(connectionFile+crashEnd, os.O_RDWR|os.O_CREATE|os.O_TRUNC, 0o600); err != nil {
		r.close()
		return nil
	}
	if err = debug.SetCrashOutput(r.crash, debug.CrashOptions{}); err != nil {
		r.close()
		return nil
	}
	return r
}

// enter notes that a cell runs; 0: none.
func (r *record) enter(number int) {
	if r != nil {
		r.state.WriteAt(fmt.Appendf(nil, "%10d\n", number), 0) // best effort
	}
}

// why tells in a line how the last process ended; empty after an orderly end.
func (r *record) why() string {
	if r == nil {
		return ""
	}
	return r.told
}

// close ends the record in an orderly way.
func (r *record) close() {
	if r == nil {
		return
	}
	for _, f := range []*os.File{r.state, r.crash} {
		if f != nil {
			f.Close()
			os.Remove(f.Name())
		}
	}
	if r.crash != nil {
		debug.SetCrashOutput(nil, debug.CrashOptions{})
	}
}

// lastEnd reads the files of a process that had no orderly end.
func lastEnd(connectionFile string) string {
	b, err := os.ReadFile(connectionFile + stateEnd)
	if err != nil {
		return ""
	}
	where := "between two cells"
	if n, err := strconv.Atoi(strings.TrimSpace(string(b))); err == nil && n > 0 {
		where = fmt.Sprintf("in cell %d", n)
	}
	return "the kernel of this notebook ended " + where + ": " + cause(connectionFile+crashEnd) +
		". Names set before are gone; run the cells again"
}

var (
	outOfMemory = regexp.MustCompile(`cannot allocate (\d+)-byte block`)
	stackLimit  = regexp.MustCompile(`goroutine stack exceeds (\d+)-byte limit`)
	fatalLine   = regexp.MustCompile(`(?m)^(?:fatal error|panic): (.*)$`)
)

// cause reads the report of the runtime.
func cause(path string) string {
	b, err := os.ReadFile(path)
	if err != nil || len(bytes.TrimSpace(b)) == 0 {
		return "it was killed from outside, as the system does when memory runs out"
	}
	b = b[:min(len(b), maxCrash)]
	switch {
	case stackLimit.Match(b):
		return "a function called itself without end and the stack passed its limit of " + size(stackLimit.FindSubmatch(b)[1])
	case outOfMemory.Match(b):
		return size(outOfMemory.FindSubmatch(b)[1]) + " asked for in one allocation"
	case fatalLine.Match(b):
		return string(fatalLine.FindSubmatch(b)[1])
	}
	first, _, _ := strings.Cut(string(b), "\n")
	return first
}

// size gives a number of bytes as a reader says it.
func size(digits []byte) string {
	x, err := strconv.ParseFloat(string(digits), 64)
	if err != nil {
		return string(digits) + " bytes"
	}
	units := []string{"bytes", "kB", "MB", "GB", "TB"}
	i := 0
	for x >= 1000 && i < len(units)-1 {
		x /= 1000
		i++
	}
	return strconv.FormatFloat(x, 'g', 3, 64) + " " + units[i]
}
