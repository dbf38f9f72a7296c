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

// The report of the runtime has the stacks, but for what the runtime itself gives up on no sentence: the functions at
// its top tell what it was. Arguments of functions are hexadecimal there.
var (
	endlessCalls = regexp.MustCompile(`(?m)^runtime\.newstack\(`)
	largeBlock   = regexp.MustCompile(`(?m)^runtime\.\(\*mcache\)\.allocLarge\([^,)]*, 0x([0-9a-f]+)`)
	sharedMap    = regexp.MustCompile(`(?m)^internal/runtime/maps\.fatal\(`)
	panicLine    = regexp.MustCompile(`(?m)^panic: (.*)$`)
)

// maxTop is how much of the report is looked at: the stack of the failure comes first.
const maxTop = 8 << 10

// cause reads the report of the runtime.
func cause(path string) string {
	b, err := os.ReadFile(path)
	b = bytes.TrimSpace(b[:min(len(b), maxTop)])
	switch {
	case err != nil || len(b) == 0:
		return "it was killed from outside, as the system does when memory runs out"
	case endlessCalls.Match(b):
		return "a function called itself without end and its stack outgrew the limit"
	case largeBlock.Match(b):
		return size(largeBlock.FindSubmatch(b)[1]) + " asked for in one allocation"
	case sharedMap.Match(b):
		return "several goroutines used one map at the same time"
	case panicLine.Match(b):
		return string(panicLine.FindSubmatch(b)[1])
	}
	first, _, _ := strings.Cut(string(b), "\n")
	return first
}

// size gives a hexadecimal number of bytes as a reader says it.
func size(digits []byte) string {
	n, err := strconv.ParseUint(string(digits), 16, 64)
	if err != nil {
		return "too much"
	}
	return bytesText(float64(n))
}
