package cell_test

import (
	"bufio"
	"fmt"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"testing"
	"time"
)

const passes = 1_000_000

// pythonLoop prints seconds for each line that it reads.
const pythonLoop = `
import sys, time
def loop():
    s = 0.0
    for i in range(%d):
        s += i*0.5
    return s
for line in sys.stdin:
    begun = time.perf_counter()
    loop()
    print(time.perf_counter() - begun, flush=True)
`

// TestLoopAgainstPython runs s += float64(i)*0.5 in a cell and in CPython, in turn. The best of the cell takes at most
// twice as long as the best of CPython, which multiplies an integer and a float without a conversion; the ratio can fail
// only where AMPTURN_SPEED is set, which promises that nothing else runs.
func TestLoopAgainstPython(t *testing.T) {
	if testing.Short() {
		t.Skip("times need a quiet machine")
	}
	python := os.Getenv("AMPTURN_PYTHON")
	if python == "" {
		python = "python3"
	}
	if _, err := exec.LookPath(python); err != nil {
		t.Skip("no Python to compare with: ", err)
	}
	cmd := exec.Command(python, "-c", fmt.Sprintf(pythonLoop, passes))
	in, err := cmd.StdinPipe()
	if err != nil {
		t.Fatal(err)
	}
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	defer func() { _ = in.Close(); _ = cmd.Wait() }()
	n := open(t, false)
	cell := fmt.Sprintf("s := 0.0\nfor i := 0; i < %d; i++ {\n\ts += float64(i) * 0.5\n}", passes)
	own, theirs := time.Hour.Seconds(), time.Hour.Seconds()
	answers := bufio.NewReader(out)
	for range 15 {
		if _, err := fmt.Fprintln(in, "go"); err != nil {
			t.Fatal(err)
		}
		answer, err := answers.ReadString('\n')
		if err != nil {
			t.Fatal(err)
		}
		x, err := strconv.ParseFloat(strings.TrimSpace(answer), 64)
		if err != nil {
			t.Fatal(err)
		}
		theirs = min(theirs, x)
		begun := time.Now()
		n.must(cell)
		own = min(own, time.Since(begun).Seconds())
	}
	if got, want := n.must("s"), fmt.Sprintf("%.4g\n", 0.5*(passes-1)*passes/2); got != want {
		t.Errorf("the sum is %s, want %s", got, want)
	}
	t.Logf("cell %.1f ns a pass, CPython %.1f ns: ratio %.2f", own/passes*1e9, theirs/passes*1e9, own/theirs)
	if os.Getenv("AMPTURN_SPEED") != "" && own > 2*theirs {
		t.Errorf("the cell takes %.2f times as long as CPython", own/theirs)
	}
}
