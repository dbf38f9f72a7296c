package kernel

import (
	"context"
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strings"
	"time"
)

type executeRequest struct {
	Code        string            `json:"code"`
	Silent      bool              `json:"silent"`
	Store       *bool             `json:"store_history"`
	Expressions map[string]string `json:"user_expressions"`
	AllowStdin  *bool             `json:"allow_stdin"`
	StopOnError *bool             `json:"stop_on_error"`
}

func (c *executeRequest) store() bool { return !c.Silent && isTrue(c.Store) }

// isTrue gives a switch that is on unless it is turned off.
func isTrue(b *bool) bool { return b == nil || *b }

type executeReply struct {
	Status      string         `json:"status"`
	Count       int            `json:"execution_count"`
	Payload     []any          `json:"payload"`
	Expressions map[string]any `json:"user_expressions"`
}

type executeError struct {
	errorReply
	Count int `json:"execution_count"`
}

type executeInput struct {
	Code  string `json:"code"`
	Count int    `json:"execution_count"`
}

// run is one execute_request on its way.
type run struct {
	*Kernel
	request *request
	content executeRequest
	cellID  string
	deleted []string
	number  int // names the cell; it is taken only if the cell is stored
	started time.Time
	pages   []any   // payload of the reply
	result  *string // text of the result, for the history
}

// execute answers execute_request: runs a cell. If it fails, the cells that have arrived meanwhile are not run.
func (k *Kernel) execute(ctx context.Context, r *request) {
	x := &run{Kernel: k, request: r, number: int(k.count.Load()) + 1, started: time.Now()}
	r.busy()
	x.cellID, x.deleted = cellID(r.message.Metadata)
	if err := r.decode(&x.content); err != nil {
		r.answer(executeError{refusal(err), int(k.count.Load())})
		r.idle()
		return
	}
	fault, interrupted, expressions := x.runCell(ctx)
	if fault == nil {
		x.reply(executeReply{"ok", x.told(), append([]any{}, x.pages...), expressions})
		r.idle()
		return
	}
	var dropped []*request
	if isTrue(x.content.StopOnError) || interrupted {
		x.awaitBurst(ctx)
		dropped = k.cells.take() // before the reply: what is sent after it runs
	}
	x.reply(executeError{fault.reply(), x.told()})
	r.idle()
	for _, d := range dropped {
		k.abort(d, x.number)
	}
}

// told gives the execution count of the reply: the cell's own, or for a silent one the last that was taken.
func (x *run) told() int {
	if x.content.Silent {
		return int(x.count.Load())
	}
	return x.number
}

func (x *run) reply(content any) {
	x.request.reply(content, map[string]string{"started": x.started.UTC().Format("2006-01-02T15:04:05.000000Z")})
}

// runCell runs the cell with its input and output and gives what stopped it, or the values of the expressions.
func (x *run) runCell(ctx context.Context) (fault *Fault, interrupted bool, expressions map[string]any) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	x.Kernel.started(cancel)
	defer x.ended()
	x.record.enter(x.number)
	defer x.record.enter(0)
	if x.content.store() {
		x.count.Store(int64(x.number))
	}
	if !x.content.Silent {
		x.request.publish("execute_input", executeInput{x.content.Code, x.number}) // plain: it cannot fail
	}
	memory := watchMemory(x.opt.Memory, cancel)
	outcome := x.call(ctx)
	fault = outcome.fault()
	if f := memory.stop(x.number); f != nil && fault != nil {
		fault = f
	}
	if x.content.store() {
		x.history.add(entry{x.number, x.content.Code, x.result})
	}
	if fault != nil {
		if !x.content.Silent {
			x.request.publish("error", fault.content()) // plain: it cannot fail
		}
		return fault, outcome.Interrupted, nil
	}
	return nil, false, x.expressions(ctx)
}

// call has the engine run the cell.
func (x *run) call(ctx context.Context) (outcome Outcome) {
	if strings.TrimSpace(x.content.Code) == "" {
		return Outcome{}
	}
	sink := Sink(func(Output) {})
	flush := func() {}
	if !x.content.Silent {
		out := newOutput(ctx, x.request, x.number)
		sink, flush = out.take, out.flush
		if note := x.note.Swap(nil); note != nil {
			out.take(Output{Kind: Stream, Name: "stderr", Text: *note + "\n"})
		}
		defer func() { x.result, x.pages = out.end() }()
	}
	c := Cell{
		ID: x.cellID, Deleted: x.deleted, Number: x.number, Source: x.content.Code, Transient: !x.content.store(),
		Ask: func(askCtx context.Context, prompt string, hidden bool) (string, error) {
			switch {
			case ctx.Err() != nil: // interrupted, or the cell has ended
				return "", ctx.Err()
			case !isTrue(x.content.AllowStdin):
				return "", ErrNoInput
			}
			flush()
			askCtx, cancel := context.WithCancel(askCtx)
			defer cancel()
			defer context.AfterFunc(ctx, cancel)()
			return x.ask(askCtx, x.request, prompt, hidden)
		},
	}
	if f := guard(fmt.Sprintf("cell %d", x.number), func() { outcome = x.engine.Run(ctx, c, sink) }); f != nil {
		outcome = Outcome{Fault: f}
	}
	return outcome
}

// fault gives what stopped the cell, if anything.
func (o Outcome) fault() *Fault {
	if o.Fault == nil && o.Interrupted {
		return &Fault{Name: "Interrupted", Text: "interrupted"}
	}
	return o.Fault
}

type errorContent struct {
	Name      string   `json:"ename"`
	Value     string   `json:"evalue"`
	Traceback []string `json:"traceback"`
}

func (f *Fault) content() errorContent {
	r := f.reply()
	return errorContent{r.Name, r.Value, r.Traceback}
}

// ownFault is a panic that the engine let through.
func ownFault(what string, p any, stack string) *Fault {
	text := fmt.Sprintf("%s: a fault of the kernel itself: %v", what, p)
	return &Fault{Name: "KernelFault", Text: text, Traceback: append([]string{text}, strings.Split(stack, "\n")...)}
}

// burst is how long after its first cell a front end that sends all cells at once has sent the others.
const burst = 20 * time.Millisecond

// awaitBurst lets the cells that were sent together with a failed one arrive. It delays the failed one's reply, so a
// cell sent after that reply is never taken for one of them.
func (x *run) awaitBurst(ctx context.Context) {
	wait := x.opt.Burst - time.Since(x.request.arrived)
	if wait <= 0 {
		return
	}
	t := time.NewTimer(wait)
	defer t.Stop()
	select {
	case <-t.C:
	case <-ctx.Done():
	}
}

// abort answers a cell that is not run because an earlier one failed. The status is "error": "aborted" is deprecated
// since protocol 5.1.
func (k *Kernel) abort(r *request, failed int) {
	r.busy()
	text := fmt.Sprintf("not run: cell %d failed before it", failed)
	r.answer(executeError{errorReply{"error", "NotRun", text, []string{text}}, int(k.count.Load())})
	r.idle()
}

// expressions evaluates what the front end wants to know after the cell.
func (x *run) expressions(ctx context.Context) map[string]any {
	values := make(map[string]any)
	for _, name := range slices.Sorted(maps.Keys(x.content.Expressions)) {
		data, fault := x.evaluate(ctx, x.content.Expressions[name])
		if fault != nil {
			values[name] = fault.reply()
			continue
		}
		values[name] = struct {
			Status   string         `json:"status"`
			Data     map[string]any `json:"data"`
			Metadata map[string]any `json:"metadata"`
		}{"ok", orEmpty(data), map[string]any{}}
	}
	return values
}

// evaluate gives the value of one expression.
func (x *run) evaluate(ctx context.Context, expression string) (data map[string]any, fault *Fault) {
	f := guard("expression", func() {
		if e, ok := x.engine.(Evaluator); ok {
			data, fault = e.Evaluate(ctx, expression)
			return
		}
		c := Cell{Number: x.number, Source: expression, Transient: true}
		fault = x.engine.Run(ctx, c, func(o Output) {
			if o.Kind == Result {
				data = o.Data
			}
		}).fault()
	})
	if f != nil {
		return nil, f
	}
	return data, fault
}

// cellID gives the notebook's id of a cell and the ids of cells deleted since, which front ends put into the metadata of
// the request; empty: none.
func cellID(metadata []byte) (id string, deleted []string) {
	var m struct {
		Cell    any `json:"cellId"`
		Deleted any `json:"deletedCells"`
	}
	if err := json.Unmarshal(metadata, &m); err != nil {
		return "", nil
	}
	id, _ = m.Cell.(string)
	list, _ := m.Deleted.([]any)
	for _, d := range list {
		if s, ok := d.(string); ok {
			deleted = append(deleted, s)
		}
	}
	return id, deleted
}
