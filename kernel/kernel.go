package kernel

import (
	"context"
	"runtime/debug"
	"sync"
	"sync/atomic"
	"time"

	"ampturn/kernel/stream"
	"ampturn/kernel/wire"
)

// Channel names the ways between front ends and kernel.
type Channel int

// The channels. The heartbeat carries no messages.
const (
	Shell   Channel = iota // requests about cells
	Control                // requests that must not wait for a cell
	Stdin                  // questions of a cell to its front end
	IOPub                  // what everybody may see
)

// Link sends frames on a channel. It must not wait.
type Link func(ch Channel, frames [][]byte)

// Options describes a kernel to its front ends. Nil or a zero field means the default.
type Options struct {
	Name    string // of the implementation: "ampturn"
	Version string
	Links   []HelpLink // for the help menu
	Text    *stream.Limits
	Burst   time.Duration                    // how long a front end takes to send all cells at once: 20 ms
	Memory  int64                            // most bytes the process may hold in a cell; 0: by the machine, < 0: any
	Log     func(format string, args ...any) // messages dropped, peers gone; nil: nowhere
}

// HelpLink is an entry of the front end's help menu.
type HelpLink struct {
	Text string `json:"text"`
	URL  string `json:"url"`
}

// Kernel answers the requests of front ends.
//
//	k := kernel.New(engine, link, session, nil)
//	go k.Run(ctx)               // runs cells
//	k.Receive(kernel.Shell, f)  // for each message that comes in
type Kernel struct {
	engine  Engine
	link    Link
	session *wire.Session
	opt     Options
	text    stream.Limits

	cells     *queue // execute requests, one after another
	questions *queue // requests that ask the engine something, beside the cells
	history   history
	inputs    inputs

	count   atomic.Int64 // execution count of the last cell that took a number
	note    atomic.Pointer[string]
	record  *record // set before the first message; nil: none
	mu      sync.Mutex
	running context.CancelFunc // ends the running cell; nil: none

	stop     chan struct{} // closed by Stop
	stopOnce sync.Once
}

// New gives a kernel that sends by link. Its cells run once Run is called.
func New(e Engine, link Link, s *wire.Session, o *Options) *Kernel {
	k := &Kernel{
		engine: e, link: link, session: s,
		cells: newQueue(), questions: newQueue(),
		stop: make(chan struct{}),
	}
	if o != nil {
		k.opt = *o
	}
	if k.opt.Log == nil {
		k.opt.Log = func(string, ...any) {}
	}
	if k.opt.Name == "" {
		k.opt.Name = "ampturn"
	}
	if k.opt.Burst == 0 {
		k.opt.Burst = burst
	}
	if k.opt.Memory == 0 {
		k.opt.Memory = memoryLimit()
	}
	if k.opt.Text != nil {
		k.text = *k.opt.Text
	}
	if k.text.Pace == nil {
		k.text.Pace = stream.NewPace(textBurst, textRate)
	}
	return k
}

// The text that goes to front ends, in bytes and bytes a second: a burst and three seconds of the rate stay below the
// 3*10^6 bytes that a notebook server lets pass in its window of 3 s, with room for what JSON adds.
const (
	textBurst = 800_000
	textRate  = 600_000
)

// Run runs cells and answers questions until ctx ends or the kernel is stopped. A cell that does not end when it is
// interrupted is not waited for by [Serve].
func (k *Kernel) Run(ctx context.Context) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	go func() {
		select {
		case <-k.stop:
			cancel()
		case <-ctx.Done():
		}
	}()
	k.status("starting", nil)
	var wait sync.WaitGroup
	wait.Go(func() { k.questions.each(ctx, func(r *request) { r.family.serve(k, ctx, r) }) })
	k.cells.each(ctx, func(r *request) { r.family.serve(k, ctx, r) })
	wait.Wait()
}

// Stop ends the kernel: no further cell runs, the running one is interrupted.
func (k *Kernel) Stop() { k.stopOnce.Do(func() { close(k.stop) }) }

// Stopped is closed once the kernel has been told to end.
func (k *Kernel) Stopped() <-chan struct{} { return k.stop }

// Receive takes one message of a channel. Messages that are not whole or not signed are dropped. It is safe for use by
// several goroutines and does not wait for a cell.
func (k *Kernel) Receive(ch Channel, frames [][]byte) {
	m, err := k.session.Decode(frames)
	if err != nil {
		k.opt.Log("message dropped: %v", err)
		return
	}
	k.dispatch(newRequest(k, ch, m))
}

// Welcome gives the message for a front end that has subscribed to a topic, or nil.
func (k *Kernel) Welcome(topic []byte) [][]byte {
	return k.welcome(topic)
}

// Note leaves a line that the next cell shows before its own output.
func (k *Kernel) Note(line string) { k.note.Store(&line) }

// guard keeps a panic in the engine or in a handler from ending the process. It reports it as a fault.
func guard(what string, f func()) (fault *Fault) {
	defer func() {
		if p := recover(); p != nil {
			fault = ownFault(what, p, string(debug.Stack()))
		}
	}()
	f()
	return nil
}
