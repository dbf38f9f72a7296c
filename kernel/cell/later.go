package cell

import (
	"context"
	"fmt"
	"sync"
	"sync/atomic"
	"time"

	"ampturn/kernel"
)

// Cells and the work that they leave for later share one interpreter, which evaluates one thing at a time: whoever has
// the turn. Work that only waits gives its turn back meanwhile.

// turn is the right to evaluate.
type turn chan struct{}

func newTurn() turn { return make(turn, 1) }

func (t turn) take() { t <- struct{}{} }
func (t turn) give() { <-t }

// work is what a cell left to run after it.
type work struct {
	f       func()
	src     *source
	cell    kernel.Cell
	sink    kernel.Sink
	restore func()
	ctx     context.Context
	cancel  context.CancelFunc

	mu   sync.Mutex
	has  bool // the turn
	lost bool // the turn was taken away from it
}

// later is the work that waits, and that under way.
type later struct {
	mu     sync.Mutex
	queue  []*work
	now    *work
	ended  chan struct{} // closed when none is left; nil: there is none
	holder atomic.Pointer[work]
}

// Later has a function run after the cell that calls it, before or after later cells, one function after another. What it
// shows belongs to the cell that left it. A cell that fails leaves nothing.
func (s *Session) Later(f func()) {
	w := &work{f: f, src: s.src, cell: s.now, restore: func() {}}
	if sink := s.sink.Load(); sink != nil {
		w.sink = *sink
	}
	if s.hooks.Hold != nil {
		w.restore = s.hooks.Hold()
	}
	w.ctx, w.cancel = context.WithCancel(context.Background())
	s.later.mu.Lock()
	defer s.later.mu.Unlock()
	s.later.queue = append(s.later.queue, w)
}

// begin starts what a cell that ended well has left; what a failed one left is dropped. It runs while the cell has its turn.
func (s *Session) begin(src *source, failed bool) {
	l := &s.later
	l.mu.Lock()
	defer l.mu.Unlock()
	if failed {
		kept := l.queue[:0]
		for _, w := range l.queue {
			if w.src == src {
				w.cancel()
			} else {
				kept = append(kept, w)
			}
		}
		l.queue = kept
	}
	if len(l.queue) > 0 && l.ended == nil {
		l.ended = make(chan struct{})
		go s.runLater()
	}
}

// runLater runs the work that waits until none is left.
func (s *Session) runLater() {
	l := &s.later
	for {
		l.mu.Lock()
		l.now = nil
		if len(l.queue) == 0 {
			close(l.ended)
			l.ended = nil
			l.mu.Unlock()
			return
		}
		l.now, l.queue = l.queue[0], l.queue[1:]
		w := l.now
		l.mu.Unlock()
		s.runWork(w)
		w.cancel()
	}
}

// runWork runs one function in a goroutine of its own. If it does not end when it is interrupted, it is left behind.
func (s *Session) runWork(w *work) {
	done := make(chan struct{})
	go s.evaluate(w, done)
	select {
	case <-done:
		return
	case <-w.ctx.Done():
	}
	for {
		w.mu.Lock()
		if w.has {
			s.machine.interrupt()
		}
		w.mu.Unlock()
		select {
		case <-done:
			return
		case <-time.After(patience):
		}
		w.mu.Lock()
		if w.has {
			w.has, w.lost = false, true
			s.stuck, s.stuckCell = done, w.cell.Number
			s.turn.give()
			w.mu.Unlock()
			return
		}
		w.mu.Unlock()
	}
}

// evaluate runs the function in its turn and tells in the cell's output what stopped it.
func (s *Session) evaluate(w *work, done chan struct{}) {
	defer close(done)
	s.enter(w)
	defer s.leave(w)
	begun := time.Now()
	s.machine.clear()
	s.raceMark.Store(0)
	s.raceDepth.Store(0)
	s.tooDeep.Store(false)
	defer func() {
		value := recover()
		if s.tooDeep.Load() {
			value = tooDeep{}
		}
		if w.ctx.Err() != nil && value != nil {
			value = interrupted{}
		}
		w.mu.Lock()
		lost := w.lost
		w.mu.Unlock()
		if value != nil && !lost {
			s.stream("stderr", s.workFault(w, value, time.Since(begun)))
		}
	}()
	s.runner.Store(goroutine())
	if w.ctx.Err() != nil {
		panic(interrupted{})
	}
	w.f()
}

// workFault words what stopped work that a cell left.
func (s *Session) workFault(w *work, value any, after time.Duration) string {
	if _, ok := value.(interrupted); ok {
		return fmt.Sprintf("what cell %d left for later was interrupted after %.1f s\n", w.cell.Number, after.Seconds())
	}
	_, text := faultText(value)
	m := s.markNow()
	if m.src == nil {
		m.src = w.src
	}
	return where(m.src, s.point(m, value)) + text + " (in what the cell left for later)\n"
}

// enter takes the turn for a piece of work and makes the session that of its cell.
func (s *Session) enter(w *work) {
	s.turn.take()
	w.mu.Lock()
	w.has = true
	w.mu.Unlock()
	s.later.holder.Store(w)
	s.sink.Store(&w.sink)
	s.now, s.src = w.cell, w.src
	s.now.Ask = nil // its cell has been answered
	w.restore()
	if s.hooks.Context != nil {
		s.hooks.Context(w.ctx)
	}
}

// leave gives the turn back.
func (s *Session) leave(w *work) {
	w.mu.Lock()
	defer w.mu.Unlock()
	if !w.has {
		return
	}
	if s.hooks.Hold != nil {
		w.restore = s.hooks.Hold()
	}
	s.later.holder.Store(nil)
	w.has = false
	s.turn.give()
}

// Aside calls a function that waits and evaluates nothing. Work left for later lets cells run meanwhile; a cell keeps
// its turn.
func (s *Session) Aside(wait func()) {
	w := s.later.holder.Load()
	if w == nil || goroutine() != s.runner.Load() {
		wait()
		return
	}
	mark, top, depth := *s.machine.mark, *s.machine.top, *s.machine.depth
	raceMark, raceDepth := s.raceMark.Load(), s.raceDepth.Load()
	s.leave(w)
	func() {
		defer s.enter(w) // whatever ends the wait: what follows evaluates again
		wait()
	}()
	s.machine.clear()
	*s.machine.mark, *s.machine.top, *s.machine.depth = mark, top, depth
	s.raceMark.Store(raceMark)
	s.raceDepth.Store(raceDepth)
	s.tooDeep.Store(false)
	s.runner.Store(goroutine())
	if w.ctx.Err() != nil {
		panic(interrupted{})
	}
}

// Interrupt ends the work that cells left for later.
func (s *Session) Interrupt() {
	l := &s.later
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, w := range l.queue {
		w.cancel()
	}
	if l.now != nil {
		l.now.cancel()
	}
}

// Settle waits until no work is left. When ctx ends, it interrupts what is.
func (s *Session) Settle(ctx context.Context) {
	for {
		s.later.mu.Lock()
		ended := s.later.ended
		s.later.mu.Unlock()
		if ended == nil {
			return
		}
		select {
		case <-ended:
		case <-ctx.Done():
			s.Interrupt()
			<-ended
		}
	}
}

// takeTurn takes the turn for a cell. An interrupt of the cell that waits ends the work it waits for.
func (s *Session) takeTurn(ctx context.Context) {
	select {
	case s.turn <- struct{}{}:
		return
	case <-ctx.Done():
		s.Interrupt()
	}
	s.turn.take()
}

// Ask has the user type a line, as [kernel.Cell] says.
func (s *Session) Ask(ctx context.Context, prompt string, hidden bool) (string, error) {
	if s.now.Ask == nil {
		return "", kernel.ErrNoInput
	}
	return s.now.Ask(ctx, prompt, hidden)
}
