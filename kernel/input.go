package kernel

import (
	"context"
	"encoding/json"
	"sync"
)

// inputs holds the questions that wait for a front end's user.
type inputs struct {
	mu      sync.Mutex
	waiting []*input
}

type input struct {
	id     string // of the input_request
	answer chan string
}

// ask sends a question to the front end that sent the request and waits for the answer.
func (k *Kernel) ask(ctx context.Context, r *request, prompt string, hidden bool) (string, error) {
	in := &input{answer: make(chan string, 1)}
	k.inputs.mu.Lock() // an answer must find the question, however fast it is
	id, err := k.send(Stdin, r.from, "input_request", r.parent, struct {
		Prompt   string `json:"prompt"`
		Password bool   `json:"password"`
	}{prompt, hidden}, nil)
	if err == nil {
		in.id = id
		k.inputs.waiting = append(k.inputs.waiting, in)
	}
	k.inputs.mu.Unlock()
	if err != nil {
		return "", err
	}
	defer k.inputs.drop(in)
	select {
	case s := <-in.answer:
		return s, nil
	case <-ctx.Done():
		return "", ctx.Err()
	}
}

func (w *inputs) drop(in *input) {
	w.mu.Lock()
	defer w.mu.Unlock()
	for i, x := range w.waiting {
		if x == in {
			w.waiting = append(w.waiting[:i], w.waiting[i+1:]...)
			return
		}
	}
}

// inputReply takes an answer. Some front ends leave out which question it is for: then it is for the oldest one. An
// answer without a question is dropped.
func (k *Kernel) inputReply(_ context.Context, r *request) {
	var parent struct {
		ID string `json:"msg_id"`
	}
	var c struct {
		Value string `json:"value"`
	}
	if err := json.Unmarshal(r.message.Parent, &parent); err != nil {
		k.opt.Log("input_reply: %v", err)
		return
	}
	if err := r.decode(&c); err != nil {
		k.opt.Log("input_reply: %v", err)
		return
	}
	k.inputs.mu.Lock()
	defer k.inputs.mu.Unlock()
	for _, in := range k.inputs.waiting {
		if parent.ID == "" || parent.ID == in.id {
			select {
			case in.answer <- c.Value:
			default: // answered already
			}
			return
		}
	}
	k.opt.Log("input_reply without a question")
}
