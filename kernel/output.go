package kernel

import (
	"context"
	"sync"
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
	done    <-chan struct{}

	mu      sync.Mutex
	result  *string // text of the last result, for the history
	updates []Output
	updated time.Time
	timer   *time.Timer
}

func newOutput(ctx context.Context, r *request, number int) *output {
	o := &output{request: r, number: number, pace: stream.NewPace(messageBurst, messageRate), done: ctx.Done()}
	o.text = stream.NewWriter(o.print, ctx.Done(), &r.kernel.text)
	return o
}

type streamContent struct {
	Name string `json:"name"`
	Text string `json:"text"`
}

func (o *output) print(name, text string) {
	o.pace.Take(1, o.done)
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
	}
	o.flush()
	switch x.Kind {
	case Display:
		o.show("display_data", x)
	case Result:
		o.keep(x)
		o.show("execute_result", x)
	case Clear:
		o.pace.Take(1, o.done)
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
	o.pace.Take(1, o.done)
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

// end sends everything that waits at the end of the cell, with the end of a text that was cut.
func (o *output) end() (result *string) {
	o.text.End()
	o.flushUpdates()
	o.mu.Lock()
	defer o.mu.Unlock()
	return o.result
}
