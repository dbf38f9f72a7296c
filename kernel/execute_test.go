package kernel_test

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
	"ampturn/kernel/stream"
)

func lines(list []any) string {
	var b strings.Builder
	for _, x := range list {
		fmt.Fprint(&b, x)
	}
	return b.String()
}

func TestOrder(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		for code, want := range map[string]string{
			"print hi\n1+1":                       "busy execute_input stream execute_result idle",
			"fail boom":                           "busy execute_input error idle",
			"print a\nfail b":                     "busy execute_input stream error idle",
			"":                                    "busy execute_input idle",
			"print a\nshow text/html <b>\nwarn b": "busy execute_input stream display_data stream idle",
			"print a\nwarn b\nprint c":            "busy execute_input stream stream stream idle",
			"clear wait\nprint x":                 "busy execute_input clear_output stream idle",
			"place d one\nupdate d two":           "busy execute_input display_data update_display_data idle",
		} {
			e := f.Run(code)
			equal(t, fmt.Sprintf("%q", code), e.Types(), want)
			equal(t, "code", e.Output[1].Content["code"], any(code))
			equal(t, "input count", e.Output[1].Int("execution_count"), e.Count())
		}
	})
}

func TestError(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	e := f.Run("1\nfail boom")
	shown := e.Find("error")[0].Content
	for _, c := range []map[string]any{e.Reply.Content, shown} {
		equal(t, "ename", c["ename"], any("ToyFailure"))
		equal(t, "evalue", c["evalue"], any("cell 1, line 2: boom"))
		equal(t, "traceback", len(c["traceback"].([]any)), 2)
	}
	equal(t, "count", e.Count(), 1)
	e = f.Run("panic oh")
	equal(t, "status after a panic in the engine", e.Status(), "error")
	equal(t, "ename", e.Reply.Content["ename"], any("KernelFault"))
	equal(t, "afterwards", f.Run("1+1").Result(), "2")
}

// Only a stored cell takes a number. A silent one tells the last that was taken, which is how a front end asks for it.
func TestCounts(t *testing.T) {
	toy := kerneltest.NewToy()
	f := kerneltest.Memory(t, toy)
	unstored, silent := map[string]any{"store_history": false}, map[string]any{"silent": true}
	for i, c := range []struct {
		code   string
		change map[string]any
		want   int
	}{
		{"", silent, 0}, {"1", nil, 1}, {"fail x", nil, 2}, {"1", unstored, 3}, {"1", silent, 2}, {"1", nil, 3},
	} {
		equal(t, fmt.Sprint("cell ", i), f.RunWith(c.code, c.change).Count(), c.want)
	}
	for i, transient := range []bool{false, false, true, true, false} { // the empty cell is not run
		equal(t, fmt.Sprint("run ", i), toy.Cells[i].Transient, transient)
	}
}

func TestSilent(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		silent := map[string]any{"silent": true, "user_expressions": map[string]string{"a": "1+1"}}
		e := f.RunWith("print x\n1+1\nshow text/plain y", silent)
		equal(t, "messages", e.Types(), "busy idle")
		equal(t, "status", e.Status(), "ok")
		equal(t, "failing: messages", f.RunWith("fail x", silent).Types(), "busy idle")
		equal(t, "empty: status", f.RunWith("", silent).Status(), "ok")
	})
}

func TestExpressions(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	e := f.RunWith("keep = 41", map[string]any{"user_expressions": map[string]string{"good": "keep+1", "bad": "nothing"}})
	got := e.Reply.Content["user_expressions"].(map[string]any)
	good, bad := got["good"].(map[string]any), got["bad"].(map[string]any)
	equal(t, "good", good["data"].(map[string]any)["text/plain"], any("42"))
	equal(t, "bad", bad["status"], any("error"))
	equal(t, "bad's name", bad["ename"], any("UnknownName"))
}

// plain is an engine without Evaluate.
type plain struct{ kernel.Engine }

func TestExpressionsByCells(t *testing.T) {
	f := kerneltest.Memory(t, plain{kerneltest.NewToy()})
	e := f.RunWith("keep = 41", map[string]any{"user_expressions": map[string]string{"x": "keep+1"}})
	x := e.Reply.Content["user_expressions"].(map[string]any)["x"].(map[string]any)
	equal(t, "value", x["data"].(map[string]any)["text/plain"], any("42"))
	equal(t, "count of the next cell", f.Run("1").Count(), 2)
}

// The messaging document gives defaults for all fields but the code.
func TestDefaults(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	e := f.Finish(f.Send(kernel.Shell, "execute_request", map[string]any{"code": "1+1"}))
	equal(t, "result", e.Result(), "2")
	equal(t, "count", e.Count(), 1)
}

func TestPage(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	e := f.Run("page help on x")
	equal(t, "messages", e.Types(), "busy execute_input idle")
	pages := e.Reply.Content["payload"].([]any)
	if len(pages) != 1 {
		t.Fatalf("payload %v", pages)
	}
	page := pages[0].(map[string]any)
	equal(t, "source", page["source"], any("page"))
	equal(t, "text", page["data"].(map[string]any)["text/plain"], any("help on x"))
	equal(t, "payload of another cell", len(f.Run("1").Reply.Content["payload"].([]any)), 0)
}

func TestCellID(t *testing.T) {
	toy := kerneltest.NewToy()
	f := kerneltest.Memory(t, toy)
	f.Finish(f.SendMessage(kernel.Shell, "execute_request", kerneltest.Request("1", nil), nil, map[string]any{"cellId": "abc"}))
	f.Run("2")
	equal(t, "id", toy.Cells[0].ID, "abc")
	equal(t, "no id", toy.Cells[1].ID, "")
	equal(t, "number", toy.Cells[1].Number, 2)
}

func TestStopOnError(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		for _, first := range []string{"sleep 100\nfail boom", "fail boom"} { // slow, and faster than the burst comes
			ids := []string{f.Start(first)}
			for range 3 {
				ids = append(ids, f.Start("print never"))
			}
			info := f.Send(kernel.Shell, "kernel_info_request", map[string]any{})
			count := f.Finish(ids[0]).Count()
			for _, id := range ids[1:] {
				e := f.Finish(id)
				equal(t, "status", e.Status(), "error")
				equal(t, "messages", e.Types(), "busy idle")
				equal(t, "count", e.Count(), count)
				equal(t, "text", e.Reply.Content["evalue"], any(fmt.Sprintf("not run: cell %d failed before it", count)))
			}
			equal(t, "kernel_info behind them", f.Reply(info).Content["status"], any("ok"))
		}
	})
}

// Of cells sent in one go, those that are still under way when the first has failed are not run either.
func TestStopOnErrorAwaitsTheBurst(t *testing.T) {
	f, _ := kerneltest.MemoryKernel(t, kerneltest.NewToy(), &kernel.Options{Burst: 500 * time.Millisecond})
	first := f.Start("fail boom")
	f.Await("error", func(m *kerneltest.Message) bool { return m.Type() == "error" })
	second := f.Start("print never")
	f.Finish(first)
	equal(t, "second", f.Finish(second).Status(), "error")
	equal(t, "third", f.Run("1").Status(), "ok")
}

// On shell, kernel_info passes a running cell but not one that waits.
func TestInfoKeepsItsTurn(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	f.Start("sleep 100")
	second := f.Start("1+1")
	info := f.Send(kernel.Shell, "kernel_info_request", map[string]any{})
	f.Reply(info)
	if len(f.All(func(m *kerneltest.Message) bool { return m.Type() == "execute_reply" && m.Parent["msg_id"] == second })) == 0 {
		t.Error("kernel_info was answered before the cell that was sent before it")
	}
}

// A cell sent after the reply of a failed one runs, however soon it comes.
func TestRunsAfterError(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		for i := range 30 {
			f.Run("fail x")
			if e := f.Run("1+1"); e.Status() != "ok" {
				t.Fatalf("round %d: %v", i, e.Reply)
			}
			f.Forget()
		}
	})
}

func TestStopOnErrorFalse(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	a := f.Send(kernel.Shell, "execute_request", kerneltest.Request("sleep 50\nfail x", map[string]any{"stop_on_error": false}))
	b := f.Start("1+1")
	equal(t, "first", f.Finish(a).Status(), "error")
	equal(t, "second", f.Finish(b).Status(), "ok")
}

func TestLateOutput(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		first := f.Run("late 150 afterwards")
		second := f.Run("1+1")
		m := f.Await("late output", func(m *kerneltest.Message) bool { return m.Type() == "stream" })
		equal(t, "its cell", m.Parent["msg_id"], any(first.ID))
		equal(t, "text", m.Content["text"], any("afterwards\n"))
		equal(t, "the other cell", second.Text("stdout"), "")
	})
}

func TestTextIsGathered(t *testing.T) {
	joined(t, func(t *testing.T, f *kerneltest.Front) {
		e := f.Run("lines 20000")
		var want strings.Builder
		for i := range 20000 {
			fmt.Fprintf(&want, "line %d\n", i)
		}
		if e.Text("stdout") != want.String() {
			t.Error("lines are lost or out of order")
		}
		if n := len(e.Find("stream")); n > 100 {
			t.Errorf("%d messages for 20000 lines", n)
		}
		e = f.Run(`raw "\xff\xfe bad\n"`)
		equal(t, "not UTF-8", e.Text("stdout"), "\uFFFD bad\n")
	})
}

func TestLongTextIsCut(t *testing.T) {
	f, _ := kerneltest.MemoryKernel(t, kerneltest.NewToy(), &kernel.Options{Text: &stream.Limits{Lines: 10, Tail: 30}})
	got := f.Run("lines 1000").Text("stdout")
	for _, want := range []string{"line 0\n", "line 9\n\n... output is cut here", "lines (", "line 998\nline 999\n"} {
		if !strings.Contains(got, want) {
			t.Errorf("no %q in %q", want, got)
		}
	}
	equal(t, "the next cell", f.Run("lines 3").Text("stdout"), "line 0\nline 1\nline 2\n")
}

// The first of many updates and the last arrive; those between may be left out.
func TestUpdatesAreThinned(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	var b strings.Builder
	b.WriteString("place p 0\n")
	for i := range 3000 {
		fmt.Fprintf(&b, "update p %d\n", i+1)
	}
	e := f.Run(b.String())
	u := e.Find("update_display_data")
	if len(u) < 2 || len(u) > 500 {
		t.Fatalf("%d updates sent", len(u))
	}
	equal(t, "last", u[len(u)-1].Content["data"].(map[string]any)["text/plain"], any("3000"))
	equal(t, "id", u[0].Content["transient"].(map[string]any)["display_id"], any("p"))
}

func TestFirstOutputIsSoon(t *testing.T) {
	f := kerneltest.Memory(t, kerneltest.NewToy())
	id := f.Start("print early\nsleep 2000")
	f.Running(id)
	begun := time.Now()
	f.Await("output", func(m *kerneltest.Message) bool { return m.Type() == "stream" })
	if d := time.Since(begun); d > time.Second {
		t.Errorf("first output after %v", d)
	}
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	f.Finish(id)
}
