package kerneltest

import (
	"strings"

	"ampturn/kernel"
)

// Execution is a cell that a front end ran: its reply and what was broadcast for it, busy to idle.
type Execution struct {
	ID     string
	Reply  *Message
	Output []*Message
}

// Request gives the content of an execute_request with its defaults; change overwrites fields.
func Request(code string, change map[string]any) map[string]any {
	c := map[string]any{
		"code": code, "silent": false, "store_history": true, "user_expressions": map[string]string{},
		"allow_stdin": false, "stop_on_error": true,
	}
	for k, v := range change {
		c[k] = v
	}
	return c
}

// Start sends a cell and gives the request's id.
func (f *Front) Start(code string) string {
	f.t.Helper()
	return f.Send(kernel.Shell, "execute_request", Request(code, nil))
}

// Run runs a cell to its end.
func (f *Front) Run(code string) *Execution {
	f.t.Helper()
	return f.RunWith(code, nil)
}

// RunWith runs a cell with changed fields of the request.
func (f *Front) RunWith(code string, change map[string]any) *Execution {
	f.t.Helper()
	return f.Finish(f.Send(kernel.Shell, "execute_request", Request(code, change)))
}

// Finish waits for the end of a cell.
func (f *Front) Finish(id string) *Execution {
	f.t.Helper()
	return &Execution{id, f.Reply(id), f.Published(id)}
}

// Running waits until a cell has begun.
func (f *Front) Running(id string) {
	f.t.Helper()
	f.Await("start of "+id, func(m *Message) bool { return m.parentID() == id && m.Type() == "execute_input" })
}

// Ask sends a request and waits for its reply.
func (f *Front) Ask(ch kernel.Channel, typ string, content any) *Message {
	f.t.Helper()
	return f.Reply(f.Send(ch, typ, content))
}

// Types lists the types of the broadcasts in order.
func (e *Execution) Types() string {
	var s []string
	for _, m := range e.Output {
		s = append(s, m.Type())
	}
	return strings.Join(s, " ")
}

// Text gives what the cell printed on a stream.
func (e *Execution) Text(name string) string {
	var b strings.Builder
	for _, m := range e.Output {
		if m.Type() == "stream" && m.Content["name"] == name {
			b.WriteString(m.Content["text"].(string))
		}
	}
	return b.String()
}

// Find gives the broadcasts of a type.
func (e *Execution) Find(typ string) []*Message {
	var list []*Message
	for _, m := range e.Output {
		if m.Type() == typ {
			list = append(list, m)
		}
	}
	return list
}

// Result gives the text of the last result; empty without one.
func (e *Execution) Result() string {
	list := e.Find("execute_result")
	if len(list) == 0 {
		return ""
	}
	data, _ := list[len(list)-1].Content["data"].(map[string]any)
	s, _ := data["text/plain"].(string)
	return s
}

// Status gives the status of the reply.
func (e *Execution) Status() string {
	s, _ := e.Reply.Content["status"].(string)
	return s
}

// Count gives the execution count of the reply; -1 without one.
func (e *Execution) Count() int { return e.Reply.Int("execution_count") }

// Int gives a whole number of the content; -1 if there is none.
func (m *Message) Int(field string) int {
	x, ok := m.Content[field].(float64)
	if !ok {
		return -1
	}
	return int(x)
}
