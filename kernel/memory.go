package kernel

import (
	"context"
	"fmt"
	"math"
	"os"
	"runtime/debug"
	"runtime/metrics"
	"strconv"
	"strings"
	"sync"
	"time"
)

// memoryEvery is how often a running cell's memory is looked at.
const memoryEvery = 100 * time.Millisecond

// memoryShare is the part of the machine's free memory that the kernel takes for itself before it stops a cell.
const memoryShare = 0.8

// memoryWatch stops a cell before the system would kill the whole process for its memory.
type memoryWatch struct {
	limit  int64
	cancel context.CancelFunc

	mu    sync.Mutex
	timer *time.Timer // nil: stopped
	held  int64       // what the process held when the cell was stopped; 0: it was not
}

// watchMemory watches a cell until stop is called. A limit of 0 or less watches nothing.
func watchMemory(limit int64, cancel context.CancelFunc) *memoryWatch {
	w := &memoryWatch{limit: limit, cancel: cancel}
	if limit > 0 {
		w.mu.Lock()
		defer w.mu.Unlock()
		w.timer = time.AfterFunc(memoryEvery, w.look)
	}
	return w
}

func (w *memoryWatch) look() {
	held := memoryHeld()
	w.mu.Lock()
	defer w.mu.Unlock()
	switch {
	case w.timer == nil:
	case held > w.limit:
		w.held = held
		w.cancel()
	default:
		w.timer.Reset(memoryEvery)
	}
}

// stop ends the watch and tells, if it stopped the cell, what to say about it.
func (w *memoryWatch) stop(number int) *Fault {
	w.mu.Lock()
	defer w.mu.Unlock()
	if w.timer != nil {
		w.timer.Stop()
		w.timer = nil
	}
	if w.held == 0 {
		return nil
	}
	debug.FreeOSMemory()
	return &Fault{Name: "OutOfMemory", Text: fmt.Sprintf("cell %d: stopped at %s of memory, the limit is %s; "+
		"keep fewer values, or smaller ones", number, bytesText(float64(w.held)), bytesText(float64(w.limit)))}
}

// memoryHeld gives the bytes that the process has from the system.
func memoryHeld() int64 {
	s := []metrics.Sample{{Name: "/memory/classes/total:bytes"}, {Name: "/memory/classes/heap/released:bytes"}}
	metrics.Read(s)
	return int64(s[0].Value.Uint64() - s[1].Value.Uint64())
}

// memoryLimit gives the limit of a process on this machine: a share of what is free now, or of what its container may
// hold. 0: not known.
func memoryLimit() int64 {
	free := min(memoryFree("/proc/meminfo"), containerLimit("/sys/fs/cgroup/memory.max"))
	if free == math.MaxInt64 {
		return 0
	}
	return int64(memoryShare * float64(free))
}

// memoryFree reads the memory available to new programs (proc(5), MemAvailable).
func memoryFree(path string) int64 {
	b, err := os.ReadFile(path)
	if err != nil {
		return math.MaxInt64
	}
	for line := range strings.Lines(string(b)) {
		f := strings.Fields(line)
		if len(f) == 3 && f[0] == "MemAvailable:" && f[2] == "kB" {
			if n, err := strconv.ParseInt(f[1], 10, 64); err == nil && n < math.MaxInt64/1024 {
				return n * 1024
			}
		}
	}
	return math.MaxInt64
}

// containerLimit reads the limit of a control group; "max" is none.
func containerLimit(path string) int64 {
	b, err := os.ReadFile(path)
	if err != nil {
		return math.MaxInt64
	}
	n, err := strconv.ParseInt(strings.TrimSpace(string(b)), 10, 64)
	if err != nil || n <= 0 {
		return math.MaxInt64
	}
	return n
}

// bytesText gives a number of bytes as a reader says it.
func bytesText(x float64) string {
	units := []string{"bytes", "kB", "MB", "GB", "TB"}
	i := 0
	for x >= 1000 && i < len(units)-1 {
		x /= 1000
		i++
	}
	return strconv.FormatFloat(x, 'g', 3, 64) + " " + units[i]
}
