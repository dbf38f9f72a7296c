package notebook

import (
	"bytes"
	"encoding/base64"
	"encoding/json"
	"fmt"
	"strings"
	"sync"

	"ampturn/kernel"
)

// displays puts what cells show into the notebook and remembers which output carries which display id.
type displays struct {
	mu      sync.Mutex
	byID    map[string][]*Output
	clearAt map[*Cell]bool // cells to be cleared when the next output arrives
	closed  bool           // the run is over; what comes now is too late to be written
}

// sink gives the sink of a cell; nil: updates only.
func (d *displays) sink(c *Cell) kernel.Sink {
	return func(o kernel.Output) {
		d.mu.Lock()
		defer d.mu.Unlock()
		switch {
		case d.closed:
			return
		case o.Kind == kernel.Update:
			d.update(o)
			return
		case c == nil:
			return
		}
		switch o.Kind {
		case kernel.Clear:
			d.clear(c, o.Wait)
		case kernel.Stream:
			d.stream(c, o)
		case kernel.Result:
			d.show(c, o, &Output{Kind: Result, Count: c.Count})
		default:
			d.show(c, o, &Output{Kind: Display})
		}
	}
}

// fault adds what stopped a cell.
func (d *displays) fault(c *Cell, f *kernel.Fault) {
	d.mu.Lock()
	defer d.mu.Unlock()
	d.add(c, &Output{Kind: Fault, Fault: f.Name, Text: clean(f.Text), Traceback: cleanAll(f.Traceback)})
}

// close ends the collection: the notebook stays as it is from now on.
func (d *displays) close() {
	d.mu.Lock()
	defer d.mu.Unlock()
	d.closed = true
}

// show adds a display or result. It and the methods below run under the lock.
func (d *displays) show(c *Cell, from kernel.Output, out *Output) {
	out.Data, out.Metadata = settle(from.Data), settle(from.Metadata)
	d.add(c, out)
	if from.ID == "" {
		return
	}
	if d.byID == nil {
		d.byID = map[string][]*Output{}
	}
	d.byID[from.ID] = append(d.byID[from.ID], out)
}

// add appends an output to the cell, after a clear that waited for it.
func (d *displays) add(c *Cell, out *Output) {
	d.clearIfDue(c)
	c.Outputs = append(c.Outputs, out)
}

// stream appends text to the cell: to the output before it, if that is the same stream.
func (d *displays) stream(c *Cell, o kernel.Output) {
	if o.Text == "" {
		return
	}
	name := o.Name
	if name != "stderr" {
		name = "stdout"
	}
	d.clearIfDue(c)
	if n := len(c.Outputs); n > 0 && c.Outputs[n-1].Kind == Stream && c.Outputs[n-1].Name == name {
		c.Outputs[n-1].Text += clean(o.Text)
		return
	}
	c.Outputs = append(c.Outputs, &Output{Kind: Stream, Name: name, Text: clean(o.Text)})
}

// update gives every display of that id a new content.
func (d *displays) update(o kernel.Output) {
	for _, out := range d.byID[o.ID] {
		out.Data, out.Metadata = settle(o.Data), settle(o.Metadata)
	}
}

func (d *displays) clear(c *Cell, wait bool) {
	if !wait {
		c.Outputs = nil
		delete(d.clearAt, c)
		return
	}
	if d.clearAt == nil {
		d.clearAt = map[*Cell]bool{}
	}
	d.clearAt[c] = true
}

func (d *displays) clearIfDue(c *Cell) {
	if d.clearAt[c] {
		c.Outputs = nil
		delete(d.clearAt, c)
	}
}

// settle gives a bundle of what a file can hold: text, JSON values, bytes as base64. A value that JSON cannot hold
// (a number that is not finite, a function) becomes its printed text.
func settle(bundle map[string]any) map[string]any {
	out := make(map[string]any, len(bundle))
	for key, value := range bundle {
		out[clean(key)] = settleValue(value)
	}
	return out
}

func settleValue(value any) any {
	switch v := value.(type) {
	case nil:
		return nil
	case string:
		return clean(v)
	case []byte:
		return base64.StdEncoding.EncodeToString(v)
	}
	var text bytes.Buffer
	enc := json.NewEncoder(&text)
	enc.SetEscapeHTML(false)
	if err := enc.Encode(value); err != nil {
		return clean(fmt.Sprint(value))
	}
	n, err := parseJSON(text.Bytes())
	if err != nil {
		return clean(fmt.Sprint(value))
	}
	return n.plain()
}

// clean replaces what is not UTF-8, so that any output can be written.
func clean(s string) string { return strings.ToValidUTF8(s, "\uFFFD") }

func cleanAll(list []string) []string {
	out := make([]string, len(list))
	for i, s := range list {
		out[i] = clean(s)
	}
	return out
}
