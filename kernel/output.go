package kernel

import (
	"context"
	"sync"
	"sync/atomic"
	"time"

	"ampturn/kernel/stream"
)

// Messages of one cell that go out at once, and how many a second after them: a burst and three seconds of the rate
// stay below the 3000 messages that a notebook server lets pass in its window of 3 s.
const (
	messageBurst = 1000
	messageRate  = 600
)

// refresh is the shortest time between two contents of one display that are sent; only the last of those in between is.
const refresh = 40 * time.Millisecond

// output publishes what a cell shows. It outlives the cell for late output.
type output struct {
	request *request
	number  int
	text    *stream.Writer
	pace    *stream.Pace
	done    atomic.Pointer[<-chan struct{}] // closed: front ends are no longer waited for

	mu      sync.Mutex
	result  *string // text of the last result, for the history
	pages   []any   // payload of the reply
	updates []Output
	updated time.Time
	timer   *time.Timer
}

func newOutput(ctx context.Context, r *request, number int) *output {
	o := &output{request: r, number: number, pace: stream.NewPace(messageBurst, messageRate)}
	o.waitUntil(ctx.Done())
	o.text = stream.NewWriter(o.print, ctx.Done(), &r.kernel.text)
	return o
}

type streamContent struct {
	Name string `json:"name"`
	Text string `json:"text"`
}

func (o *output) waitUntil(done <-chan struct{}) { o.done.Store(&done) }

// wait waits for the turn of one message.
func (o *output) wait() { o.pace.Take(1, *o.done.Load()) }

func (o *output) print(name, text string) {
	o.wait()
	o.request.publish("stream", streamContent{name, text}) // plain strings: it cannot fail
}

// take is the cell's [Sink].
func (o *output) take(x Output) {
	switch x.Kind {
	case Stream:
		if x.Name != "stderr" {
			x.Name = "stdout"
		}
		o.text.Write(x.Name, x.Text)
		return
	case Update:
		o.update(x)
		return
	case Page:
		o.page(x)
		return
	}
	o.flush()
	switch x.Kind {
	case Display:
		o.show("display_data", x)
	case Result:
		o.keep(x)
		o.show("execute_result", x)
	case Clear:
		o.wait()
		o.request.publish("clear_output", struct { // a plain value: it cannot fail
			Wait bool `json:"wait"`
		}{x.Wait})
	}
}

type displayContent struct {
	Data      map[string]any `json:"data"`
	Metadata  map[string]any `json:"metadata"`
	Transient *transient     `json:"transient,omitempty"`
	Count     *int           `json:"execution_count,omitempty"`
}

type transient struct {
	ID string `json:"display_id,omitempty"`
}

// show publishes something with a MIME bundle.
func (o *output) show(typ string, x Output) {
	c := displayContent{Data: orEmpty(x.Data), Metadata: orEmpty(x.Metadata)}
	if typ == "execute_result" {
		c.Count = &o.number
	}
	if typ != "execute_result" || x.ID != "" {
		c.Transient = &transient{x.ID}
	}
	o.wait()
	if err := o.request.publish(typ, c); err != nil {
		o.print("stderr", "what is shown cannot be sent: "+err.Error()+"\n")
	}
}

func orEmpty(m map[string]any) map[string]any {
	if m == nil {
		return map[string]any{}
	}
	return m
}

// pagePayload is the payload that has a front end open its pager (messaging document 5.5, "Payloads").
type pagePayload struct {
	Source string         `json:"source"`
	Data   map[string]any `json:"data"`
	Start  int            `json:"start"`
}

func (o *output) page(x Output) {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.pages = append(o.pages, pagePayload{"page", orEmpty(x.Data), 0})
}

func (o *output) keep(x Output) {
	if s, ok := x.Data["text/plain"].(string); ok {
		o.mu.Lock()
		o.result = &s
		o.mu.Unlock()
	}
}

// update sends a new content of a display, or keeps it until the last one is old enough.
func (o *output) update(x Output) {
	o.text.Flush()
	o.mu.Lock()
	defer o.mu.Unlock()
	wait := refresh - time.Since(o.updated)
	if wait <= 0 && len(o.updates) == 0 {
		o.updated = time.Now()
		o.show("update_display_data", x)
		return
	}
	for i, old := range o.updates {
		if old.ID == x.ID {
			o.updates[i] = x
			return
		}
	}
	o.updates = append(o.updates, x)
	if o.timer == nil {
		o.timer = time.AfterFunc(wait, o.flushUpdates)
	}
}

func (o *output) flushUpdates() {
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.timer != nil {
		o.timer.Stop()
		o.timer = nil
	}
	for _, x := range o.updates {
		o.show("update_display_data", x)
	}
	if len(o.updates) > 0 {
		o.updated = time.Now()
	}
	o.updates = nil
}

// flush sends everything that waits.
func (o *output) flush() {
	o.text.Flush()
	o.flushUpdates()
}

// end sends everything that waits at the end of the cell, with the end of a text that was cut. Late output that follows
// is slowed down as long as the kernel lives.
func (o *output) end() (result *string, pages []any) {
	stopped := o.request.kernel.stop
	o.text.End(stopped)
	o.flushUpdates()
	o.waitUntil(stopped)
	o.mu.Lock()
	defer o.mu.Unlock()
	return o.result, o.pages
}
