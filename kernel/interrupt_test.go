package kernel_test

import (
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
)

func TestInterrupt(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		f.Run("keep = 41")
		for _, code := range []string{"loop", "sleep 600000", "ask name?", "print a\nloop"} {
			for _, ch := range []kernel.Channel{kernel.Control, kernel.Shell} {
				id := f.Send(kernel.Shell, "execute_request", kerneltest.Request(code, map[string]any{"allow_stdin": true}))
				f.Running(id)
				equal(t, "status", f.Ask(ch, "interrupt_request", map[string]any{}).Content["status"], any("ok"))
				e := f.Finish(id)
				equal(t, code, e.Reply.Content["ename"], any("Interrupted"))
				equal(t, "errors shown", len(e.Find("error")), 1)
			}
		}
		equal(t, "names are kept", f.Run("keep+1").Result(), "42")
	})
}

func TestInterruptWhenIdle(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	for range 5 {
		f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	}
	equal(t, "next cell", f.Run("1+1").Status(), "ok")
}

func TestInterruptDropsTheQueue(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	loop := f.Send(kernel.Shell, "execute_request", kerneltest.Request("loop", map[string]any{"stop_on_error": false}))
	queued := f.Start("1+1")
	f.Running(loop)
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	equal(t, "the cell", f.Finish(loop).Status(), "error")
	equal(t, "the one behind it", f.Finish(queued).Status(), "error")
	equal(t, "a new one", f.Run("1+1").Status(), "ok")
}

// Completion, inspection and the rest answer while a cell runs.
func TestAnswersWhileBusy(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		id := f.Start("loop")
		f.Running(id)
		f.Wait = 2 * time.Second
		cursor := map[string]any{"code": "print", "cursor_pos": 2}
		for typ, content := range map[string]any{
			"complete_request": cursor, "inspect_request": cursor, "is_complete_request": cursor,
			"kernel_info_request": map[string]any{}, "comm_info_request": map[string]any{},
			"history_request": map[string]any{"hist_access_type": "tail", "n": 1},
		} {
			equal(t, typ, f.Ask(kernel.Shell, typ, content).Type(), typ[:len(typ)-len("request")]+"reply")
		}
		f.Ask(kernel.Control, "kernel_info_request", map[string]any{})
		f.Ask(kernel.Control, "interrupt_request", map[string]any{})
		f.Finish(id)
	})
}

func TestInput(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		allow := map[string]any{"allow_stdin": true}
		f.Send(kernel.Stdin, "input_reply", map[string]any{"value": "stale"})
		time.Sleep(100 * time.Millisecond)          // the sockets keep no order between each other
		for _, named := range []bool{true, false} { // some front ends do not say which question they answer
			f.Forget()
			id := f.Send(kernel.Shell, "execute_request", kerneltest.Request("print before\nsecret word? ", allow))
			q := f.Await("question", func(m *kerneltest.Message) bool { return m.Type() == "input_request" })
			equal(t, "channel", q.Channel, kernel.Stdin)
			equal(t, "prompt", q.Content["prompt"], any("word?"))
			equal(t, "password", q.Content["password"], any(true))
			equal(t, "parent", q.Parent["msg_id"], any(id))
			f.SendMessage(kernel.Stdin, "input_reply", map[string]any{"value": "other"}, map[string]any{"msg_id": "another"}, nil)
			var parent any
			if named {
				parent = q.Header
			}
			f.SendMessage(kernel.Stdin, "input_reply", map[string]any{"value": "Ohm Ω"}, parent, nil)
			equal(t, "text", f.Finish(id).Text("stdout"), "before\ngot Ohm Ω\n")
		}
		f.Forget()
		e := f.Run("ask name? ")
		equal(t, "without input", e.Status(), "error")
		if len(f.All(func(m *kerneltest.Message) bool { return m.Type() == "input_request" })) > 0 {
			t.Error("a question went out though the request forbids it")
		}
	})
}

// What a cell printed is seen before its question.
func TestInputComesAfterText(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	f.Send(kernel.Shell, "execute_request", kerneltest.Request("print before\nask name? ", map[string]any{"allow_stdin": true}))
	f.Await("question", func(m *kerneltest.Message) bool { return m.Type() == "input_request" })
	all := f.All(func(m *kerneltest.Message) bool { return m.Type() == "stream" || m.Type() == "input_request" })
	equal(t, "first message", all[0].Type(), "stream")
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
}

func TestShutdown(t *testing.T) {
	for _, ch := range []kernel.Channel{kernel.Control, kernel.Shell} {
		for _, code := range []string{"1+1", "loop"} {
			s := kerneltest.Serve(t, kerneltest.NewToy(), nil)
			f := kerneltest.Dial(t, s.File, "front")
			f.Running(f.Start(code))
			id := f.Send(ch, "shutdown_request", map[string]any{"restart": true})
			m := f.Reply(id)
			equal(t, "status", m.Content["status"], any("ok"))
			equal(t, "restart", m.Content["restart"], any(true))
			e := kerneltest.Execution{Output: f.Published(id)}
			equal(t, "messages", e.Types(), "busy shutdown_reply idle")
			select {
			case err := <-s.Ended:
				equal(t, "end", err, nil)
				s.Ended <- err
			case <-time.After(5 * time.Second):
				t.Fatal("the kernel does not end")
			}
		}
	}
}
