package kernel_test

import (
	"testing"

	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
)

// joined runs a test on a front end in memory and on one over sockets.
func joined(t *testing.T, test func(t *testing.T, f *kerneltest.Front)) {
	t.Helper()
	t.Run("memory", func(t *testing.T) { test(t, kerneltest.Memory(t, kerneltest.NewToy())) })
	t.Run("sockets", func(t *testing.T) {
		s := kerneltest.Serve(t, kerneltest.NewToy(), nil)
		test(t, kerneltest.Dial(t, s.File, "front"))
	})
}

func equal[T comparable](t *testing.T, what string, got, want T) {
	t.Helper()
	if got != want {
		t.Errorf("%s: got %v, want %v", what, got, want)
	}
}

func TestInfo(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		for _, ch := range []kernel.Channel{kernel.Shell, kernel.Control} {
			id := f.Send(ch, "kernel_info_request", map[string]any{})
			m := f.Reply(id)
			equal(t, "type", m.Type(), "kernel_info_reply")
			equal(t, "status", m.Content["status"], any("ok"))
			equal(t, "protocol", m.Content["protocol_version"], any("5.5"))
			language := m.Content["language_info"].(map[string]any)
			equal(t, "language", language["name"], any("toy"))
			equal(t, "extension", language["file_extension"], any(".toy"))
			e := kerneltest.Execution{Output: f.Published(id)}
			equal(t, "status messages", e.Types(), "busy idle")
		}
	})
}

// The parent header of whatever answers a request is a copy of the request's header (messaging document 5.5,
// "Parent header").
func TestParentHeader(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	e := f.Run("print a\n1+1")
	for _, m := range append(e.Output, e.Reply) {
		equal(t, "session in "+m.Type(), m.Parent["username"], any("front"))
		equal(t, "type in "+m.Type(), m.Parent["msg_type"], any("execute_request"))
	}
}

func TestUnknownRequests(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		for _, ch := range []kernel.Channel{kernel.Shell, kernel.Control} {
			id := f.Send(ch, "no_such_request", map[string]any{})
			e := kerneltest.Execution{Output: f.Published(id)}
			equal(t, "status messages", e.Types(), "busy idle")
		}
		id := f.Send(kernel.Control, "execute_request", kerneltest.Request("1+1", nil))
		e := kerneltest.Execution{Output: f.Published(id)}
		equal(t, "a cell on control", e.Types(), "busy idle")
		equal(t, "afterwards", f.Run("1+1").Result(), "2")
	})
}

func TestMalformedContent(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	for _, c := range []any{
		map[string]any{"code": 42},
		map[string]any{"code": "1", "user_expressions": []int{1}},
		map[string]any{"code": "1", "silent": "yes"},
	} {
		m := f.Ask(kernel.Shell, "execute_request", c)
		equal(t, "status", m.Content["status"], any("error"))
		equal(t, "count", m.Int("execution_count"), 0)
	}
	for _, typ := range []string{"complete_request", "inspect_request", "is_complete_request"} {
		m := f.Ask(kernel.Shell, typ, map[string]any{"code": []int{}})
		equal(t, typ, m.Content["status"], any("error"))
	}
	equal(t, "afterwards", f.Run("1+1").Result(), "2")
}

// Frames that are no message are dropped without an answer on every channel, and the kernel goes on.
func TestGarbageFrames(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		good := f.Frames("execute_request", kerneltest.Request("keep = 1", nil))
		bad := func(change func(f [][]byte) [][]byte) [][]byte {
			return change(append([][]byte(nil), good...))
		}
		junk := map[string][][]byte{
			"empty frame":     {{}},
			"no delimiter":    {[]byte("abc"), []byte("def")},
			"delimiter only":  good[:1],
			"three parts":     good[:5],
			"wrong signature": bad(func(f [][]byte) [][]byte { f[1] = []byte("00"); return f }),
			"no signature":    bad(func(f [][]byte) [][]byte { f[1] = nil; return f }),
			"changed content": bad(func(f [][]byte) [][]byte { f[5] = []byte("{}"); return f }),
			"many frames":     make([][]byte, 500),
			"noise":           {make([]byte, 1<<20)},
		}
		for name, frames := range junk {
			for _, ch := range []kernel.Channel{kernel.Shell, kernel.Control, kernel.Stdin} {
				f.SendFrames(ch, frames...)
			}
			if got := f.Run("keep").Status(); got != "error" {
				t.Errorf("%s: the cell was run", name)
			}
		}
		f.SendFrames(kernel.Shell, good...)
		f.SendFrames(kernel.Shell, good...) // a replay
		equal(t, "cells counted", f.Run("keep").Count(), len(junk)+2)
	})
}

func TestComplete(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		f.Run("alphaOne = 1\nalphaTwo = 2")
		const code = "𝐚𝐚; alpha" // two characters outside the basic plane: 9 code points, 11 UTF-16 units, 15 bytes
		m := f.Ask(kernel.Shell, "complete_request", map[string]any{"code": code, "cursor_pos": 9})
		if got := m.Content["matches"].([]any); len(got) != 2 || got[0] != "alphaOne" || got[1] != "alphaTwo" {
			t.Errorf("matches %v", got)
		}
		equal(t, "start", m.Int("cursor_start"), 4)
		equal(t, "end", m.Int("cursor_end"), 9)
		meta := m.Content["metadata"].(map[string]any)["_jupyter_types_experimental"].([]any)
		equal(t, "type", meta[0].(map[string]any)["type"], any("variable"))
		for _, cursor := range []int{-1, 1_000_000} {
			m := f.Ask(kernel.Shell, "complete_request", map[string]any{"code": code, "cursor_pos": cursor})
			equal(t, "status", m.Content["status"], any("ok"))
			equal(t, "end", m.Int("cursor_end"), min(max(cursor, 0), 9))
		}
	})
}

func TestInspectAndIsComplete(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	m := f.Ask(kernel.Shell, "inspect_request", map[string]any{"code": "print x", "cursor_pos": 2})
	equal(t, "found", m.Content["found"], any(true))
	equal(t, "text", m.Content["data"].(map[string]any)["text/plain"], any("print: a command"))
	m = f.Ask(kernel.Shell, "inspect_request", map[string]any{"code": "nothing", "cursor_pos": 3})
	equal(t, "found", m.Content["found"], any(false))
	for code, want := range map[string]string{"1": "complete", "x\\": "incomplete", "= 1": "invalid"} {
		m := f.Ask(kernel.Shell, "is_complete_request", map[string]any{"code": code})
		equal(t, code, m.Content["status"], any(want))
		_, indent := m.Content["indent"]
		equal(t, "indent with "+want, indent, want == "incomplete")
	}
}

func TestComms(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	m := f.Ask(kernel.Shell, "comm_info_request", map[string]any{"target_name": "x"})
	equal(t, "comms", len(m.Content["comms"].(map[string]any)), 0)
	id := f.Send(kernel.Shell, "comm_open", map[string]any{"comm_id": "c1", "target_name": "x", "data": map[string]any{}})
	e := kerneltest.Execution{Output: f.Published(id)}
	equal(t, "messages", e.Types(), "busy comm_close idle")
	equal(t, "id", e.Output[1].Content["comm_id"], any("c1"))
	for _, typ := range []string{"comm_msg", "comm_close"} {
		id := f.Send(kernel.Shell, typ, map[string]any{"comm_id": "c2", "data": map[string]any{}})
		e := kerneltest.Execution{Output: f.Published(id)}
		equal(t, "messages", e.Types(), "busy idle")
	}
}

func TestHistory(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	for _, code := range []string{"1+1", "print x", "1+1", "6*7"} {
		f.Run(code)
	}
	f.RunWith("print hidden", map[string]any{"store_history": false})
	f.RunWith("print silent", map[string]any{"silent": true})
	for _, c := range []struct {
		name   string
		change map[string]any
		want   string
	}{
		{"tail", map[string]any{"hist_access_type": "tail", "n": 2}, "[1 3 1+1][1 4 6*7]"},
		{"range", map[string]any{"hist_access_type": "range", "session": 1, "start": 2, "stop": 4}, "[1 2 print x][1 3 1+1]"},
		{"range of the running session", map[string]any{"hist_access_type": "range", "session": 0, "start": 4}, "[0 4 6*7]"},
		{"range of another session", map[string]any{"hist_access_type": "range", "session": 7, "start": 1}, ""},
		{"search", map[string]any{"hist_access_type": "search", "pattern": "1?1"}, "[1 1 1+1][1 3 1+1]"},
		{"search, last", map[string]any{"hist_access_type": "search", "pattern": "1*", "n": 1}, "[1 3 1+1]"},
		{"search, unique", map[string]any{"hist_access_type": "search", "pattern": "*", "unique": true}, "[1 2 print x][1 3 1+1][1 4 6*7]"},
		{"output", map[string]any{"hist_access_type": "tail", "n": 3, "output": true}, "[1 2 [print x <nil>]][1 3 [1+1 2]][1 4 [6*7 42]]"},
	} {
		m := f.Ask(kernel.Shell, "history_request", c.change)
		equal(t, c.name, lines(m.Content["history"].([]any)), c.want)
	}
}
