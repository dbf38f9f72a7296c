package kernel

import (
	"context"
	"encoding/json"
	"time"

	"ampturn/kernel/wire"
)

// lane says where a request is served.
type lane int

const (
	atOnce   lane = iota // by the goroutine that received it: needs no engine
	inTurn               // at once, but on shell behind the cells that wait there
	question             // beside the cells, in order
	cell                 // with the cells, in order
)

// family is how the kernel serves one type of request.
type family struct {
	lane  lane
	serve func(k *Kernel, ctx context.Context, r *request)
}

// families is the table of the requests that the kernel knows.
var families = map[string]family{
	"execute_request":     {cell, (*Kernel).execute},
	"complete_request":    {question, (*Kernel).complete},
	"inspect_request":     {question, (*Kernel).inspect},
	"is_complete_request": {question, (*Kernel).isComplete},
	"kernel_info_request": {inTurn, (*Kernel).info},
	"history_request":     {atOnce, (*Kernel).tellHistory},
	"comm_info_request":   {atOnce, (*Kernel).commInfo},
	"comm_open":           {atOnce, (*Kernel).commOpen},
	"comm_msg":            {atOnce, (*Kernel).commIgnore},
	"comm_close":          {atOnce, (*Kernel).commIgnore},
	"interrupt_request":   {atOnce, (*Kernel).interrupt},
	"shutdown_request":    {atOnce, (*Kernel).shutdown},
	"input_reply":         {atOnce, (*Kernel).inputReply},
}

// request is a message that is being served.
type request struct {
	kernel  *Kernel
	channel Channel
	family  family
	parent  json.RawMessage // its header, for whatever answers it
	from    [][]byte        // identities of who sent it
	typ, id string
	message *wire.Message // nil once it is decoded
	arrived time.Time
}

func newRequest(k *Kernel, ch Channel, m *wire.Message) *request {
	return &request{
		kernel: k, channel: ch, parent: m.Raw, from: m.Identities,
		typ: m.Header.Type, id: m.Header.ID, message: m, arrived: time.Now(),
	}
}

// dispatch serves a request where its family belongs.
func (k *Kernel) dispatch(r *request) {
	f, known := families[r.typ]
	switch {
	case (r.channel == Stdin) != (r.typ == "input_reply"), r.channel == Control && f.lane > inTurn:
		known = false
	}
	if !known {
		k.opt.Log("request %q is not served on this channel", r.typ)
		if r.channel != Stdin {
			r.busy()
			r.idle()
		}
		return
	}
	r.family = f
	switch {
	case f.lane == cell, f.lane == inTurn && r.channel == Shell && !k.cells.empty():
		k.cells.push(r)
	case f.lane == question:
		k.questions.push(r)
	default:
		f.serve(k, context.Background(), r)
	}
}

// decode reads the content of a request into v. If that fails it answers and tells so.
func (r *request) decode(v any) error {
	content := r.message.Content
	r.message = nil // cells are large, and late output keeps the request
	return json.Unmarshal(content, v)
}

// around serves a request that has one reply: busy, reply, idle.
func (r *request) around(content any, serve func() any) {
	r.busy()
	defer r.idle()
	if err := r.decode(content); err != nil {
		r.answer(refusal(err))
		return
	}
	var reply any
	if f := guard(r.typ, func() { reply = serve() }); f != nil {
		r.kernel.opt.Log("%s", f.Text)
		reply = f.reply()
	}
	r.answer(reply)
}

// answer sends the reply of a request: its type is the request's with "reply" for "request".
func (r *request) answer(content any) { r.reply(content, nil) }

func (r *request) reply(content, metadata any) {
	typ := r.typ[:len(r.typ)-len("request")] + "reply"
	r.kernel.send(r.channel, r.from, typ, r.parent, content, metadata)
}

// publish broadcasts a message that belongs to the request.
func (r *request) publish(typ string, content any) error {
	return r.kernel.broadcast(typ, r.parent, content)
}

func (r *request) busy() { r.kernel.status("busy", r.parent) }
func (r *request) idle() { r.kernel.status("idle", r.parent) }

// errorReply is the content of a reply to a request that failed.
type errorReply struct {
	Status    string   `json:"status"`
	Name      string   `json:"ename"`
	Value     string   `json:"evalue"`
	Traceback []string `json:"traceback"`
}

func refusal(err error) errorReply {
	text := "the request is malformed: " + err.Error()
	return errorReply{"error", "BadRequest", text, []string{text}}
}

func (f *Fault) reply() errorReply {
	trace := f.Traceback
	if len(trace) == 0 {
		trace = []string{f.Text}
	}
	return errorReply{"error", f.Name, f.Text, trace}
}
