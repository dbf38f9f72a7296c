package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"ampturn/dsl/session"
	"ampturn/kernel"
	"ampturn/kernel/kerneltest"
	"ampturn/kernel/notebook"
)

// front gives a front end in memory, joined to a kernel with the whole vocabulary.
func front(t *testing.T) *kerneltest.Front {
	t.Helper()
	e, err := newEngine()
	if err != nil {
		t.Fatal(err)
	}
	f := kerneltest.Memory(t, e)
	f.Wait = time.Minute // of a busy machine
	return f
}

// wantTypes tests the types of a cell's broadcasts in their order.
func wantTypes(t *testing.T, e *kerneltest.Execution, want string) {
	t.Helper()
	if got := e.Types(); got != want {
		t.Errorf("broadcasts %q, want %q: %v", got, want, e.Reply)
	}
}

// TestMessagesOfCells holds the order and content of messages to the messaging document 5.5: busy first, idle last, the
// input before any output, results with the cell's count, an error instead of a result.
func TestMessagesOfCells(t *testing.T) {
	f := front(t)
	e := f.Run("fmt.Println(\"hi\")\n1 + 1")
	wantTypes(t, e, "busy execute_input stream execute_result idle")
	if e.Status() != "ok" || e.Count() != 1 || e.Result() != "2" || e.Text("stdout") != "hi\n" {
		t.Errorf("%v %q %q", e.Reply, e.Result(), e.Text("stdout"))
	}
	for _, code := range []string{`panic("boom")`, "func (", "Gap(0.6)"} {
		e := f.Run(code)
		wantTypes(t, e, "busy execute_input error idle")
		if e.Status() != "error" || e.Reply.Content["ename"] != e.Find("error")[0].Content["ename"] {
			t.Errorf("%s: %v", code, e.Reply)
		}
	}
	if e := f.Run("1"); e.Count() != 5 {
		t.Errorf("count %d after five cells", e.Count())
	}
	wantTypes(t, f.RunWith("fmt.Println(\"hidden\")\n1", map[string]any{"silent": true}), "busy idle")
	if e := f.RunWith("1 + 2", map[string]any{"store_history": false}); e.Result() != "3" {
		t.Errorf("unstored: %q", e.Result())
	}
	if e := f.Run("keep := 41\r\nkeep + 1\r\n"); e.Count() != 6 || e.Result() != "42" {
		t.Errorf("line ends of another system: %d %q", e.Count(), e.Result())
	}
	e = f.RunWith("", map[string]any{"silent": true, "user_expressions": map[string]string{"good": "keep + 1", "bad": "noSuchName"}})
	x := e.Reply.Content["user_expressions"].(map[string]any)
	if good := x["good"].(map[string]any); good["data"].(map[string]any)["text/plain"] != "42" {
		t.Errorf("expression: %v", good)
	}
	if bad := x["bad"].(map[string]any); bad["status"] != "error" {
		t.Errorf("expression of no such name: %v", bad)
	}
	if e := f.Run(`fmt.Print("\xff\xfe bad\n")`); e.Text("stdout") != "\uFFFD bad\n" && !strings.HasSuffix(e.Text("stdout"), " bad\n") {
		t.Errorf("not UTF-8: %q", e.Text("stdout"))
	}
}

// TestBandIsNoNumber: a result with several numbers, given where one is wanted, names those that it has.
func TestBandIsNoNumber(t *testing.T) {
	f := front(t)
	f.Run(`b := WorstCase(func(s *Sample) Henry { return s.Of("x", 8*uH, 5*percent) })`)
	e := f.Run(`Limit("L", b, AtLeast(7*uH), b)`)
	said := e.Reply.Content["evalue"]
	if s, _ := said.(string); !strings.Contains(s, "b is no number; ") || !strings.Contains(s, "b.Min()") || !strings.Contains(s, "b.Max()") {
		t.Errorf("said %v", said)
	}
	e = f.Run(`Limit("L", "8 uH", AtLeast(7*uH))`)
	if s, _ := e.Reply.Content["evalue"].(string); !strings.Contains(s, "cannot use") {
		t.Errorf("a text: %v", s)
	}
}

// TestMessagesOfOutput checks streams, displays, their updates, pages, warnings.
func TestMessagesOfOutput(t *testing.T) {
	f := front(t)
	e := f.Run("Show(SVG(`<svg xmlns=\"http://www.w3.org/2000/svg\"/>`))")
	if d := e.Find("display_data"); len(d) != 1 || d[0].Content["data"].(map[string]any)["image/svg+xml"] == nil {
		t.Errorf("picture: %v", e.Output)
	}
	e = f.Run("a, b := 7, 2\na / b")
	if !strings.Contains(e.Text("stderr"), "whole numbers") {
		t.Errorf("warning: %q", e.Text("stderr"))
	}
	e = f.Run("Clear()")
	wantTypes(t, e, "busy execute_input clear_output idle")
	e = f.Run("Help(Gap)")
	if p := e.Reply.Content["payload"].([]any); len(p) != 1 || p[0].(map[string]any)["source"] != "page" {
		t.Errorf("page: %v", e.Reply)
	}
	e = f.Run(`Help("inductance")`)
	if p := e.Reply.Content["payload"].([]any); len(p) != 1 || !strings.Contains(p[0].(map[string]any)["data"].(map[string]any)["text/plain"].(string), "OperatingPoint.Inductance") {
		t.Errorf("page on a topic: %v", e.Reply)
	}
	e = f.Run("for i := range 20000 {\n\tfmt.Println(\"line\", i)\n}")
	if n := strings.Count(e.Text("stdout"), "\n"); n != 20000 || len(e.Find("stream")) > 50 {
		t.Errorf("%d lines in %d messages", n, len(e.Find("stream")))
	}
}

// TestProgress counts in one display; what is left of a count says where it stopped.
func TestProgress(t *testing.T) {
	f := front(t)
	e := f.Run("p := Progress(2)\np.Step()\nPause(0.15*second)\np.Step()")
	d, u := e.Find("display_data"), e.Find("update_display_data")
	if len(d) != 1 || len(u) == 0 {
		t.Fatalf("displays %v, updates %v", d, u)
	}
	id := func(m *kerneltest.Message) any { return m.Content["transient"].(map[string]any)["display_id"] }
	last := u[len(u)-1]
	if id(last) != id(d[0]) || last.Content["data"].(map[string]any)["text/plain"] != "2 of 2 done" {
		t.Errorf("first %v, last %v", d[0], last)
	}
	e = f.Run("q := Progress(4)\nq.Done(3)\nq.Step()\nr := Progress(9)\nr.Step()")
	u = e.Find("update_display_data")
	if got := u[len(u)-1].Content["data"].(map[string]any)["text/plain"]; got != "stopped at 1 of 9" {
		t.Errorf("%v", got)
	}
	for _, code := range []string{"Progress(0)", "Progress(1.5)", "q.Done(5)"} {
		if e := f.Run(code); e.Status() != "error" {
			t.Errorf("%s is taken", code)
		}
	}
}

// TestLater lets work of a cell show in that cell while another cell is done, one thing at a time.
func TestLater(t *testing.T) {
	f := front(t)
	e := f.Run("n := 1\nLater(func() {\n\tPause(0.3*second)\n\tfmt.Println(\"late\", n)\n})\nLater(func() {\n\tfmt.Println(\"second\", n)\n\tm := []int{}\n\tfmt.Println(m[n])\n})")
	next := f.Run("n = 2\nn")
	if next.Result() != "2" {
		t.Errorf("the cell meanwhile: %v", next.Reply)
	}
	late := func(text string) *kerneltest.Message {
		return f.Await(text, func(m *kerneltest.Message) bool {
			s, _ := m.Content["text"].(string)
			return m.Type() == "stream" && strings.Contains(s, text)
		})
	}
	for _, text := range []string{"late 2", "second 2", "cell 1, line 9: an index is out of range"} {
		if m := late(text); m.Parent["msg_id"] != e.ID {
			t.Errorf("%q belongs to another cell", text)
		}
	}
	// An interrupt ends what goes on without end, between cells and from a cell that waits for its turn.
	f.Run("Later(func() {\n\tfmt.Println(\"begun\")\n\tfor {\n\t}\n})\nLater(func() { fmt.Println(\"never\") })")
	late("begun")
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	if got := f.Run("n").Result(); got != "2" {
		t.Errorf("after the interrupt: %q", got)
	}
	late("what cell 3 left for later was interrupted")
	f.Run("Later(func() {\n\tfmt.Println(\"again\")\n\tfor {\n\t}\n})")
	late("again")
	id := f.Start("n")
	f.Running(id)
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	if e := f.Finish(id); e.Status() != "error" {
		t.Errorf("interrupted while it waited: %v", e.Reply)
	}
	f.Run("Later(func() { fmt.Println(\"dropped\") })\nfunc() { panic(\"x\") }()")
	if got := f.Run("n").Result(); got != "2" {
		t.Errorf("after all: %q", got)
	}
	if m := f.All(func(m *kerneltest.Message) bool {
		s, _ := m.Content["text"].(string)
		return strings.Contains(s, "never") || strings.Contains(s, "dropped")
	}); len(m) > 0 {
		t.Errorf("ran although interrupted or failed: %v", m)
	}
}

// TestAskUser asks the front end of the cell, and fails where it offers no input.
func TestAskUser(t *testing.T) {
	f := front(t)
	id := f.Send(kernel.Shell, "execute_request", kerneltest.Request(`fmt.Println("got", Ask("name? "))`, map[string]any{"allow_stdin": true}))
	q := f.Await("question", func(m *kerneltest.Message) bool { return m.Header.Type == "input_request" })
	if q.Content["prompt"] != "name? " || q.Content["password"] != false {
		t.Errorf("%v", q)
	}
	f.SendMessage(kernel.Stdin, "input_reply", map[string]any{"value": "Ohm \u03a9"}, map[string]any{"msg_id": q.Header.ID}, nil)
	if e := f.Finish(id); e.Text("stdout") != "got Ohm \u03a9\n" {
		t.Errorf("%v %q", e.Reply, e.Text("stdout"))
	}
	if e := f.Run(`Ask("name? ")`); e.Status() != "error" || !strings.Contains(e.Reply.Content["evalue"].(string), "set the value in the cell") {
		t.Errorf("without input: %v", e.Reply)
	}
}

// TestInterruptOfCells ends loops, pauses, questions and long compiled calls; names stay.
func TestInterruptOfCells(t *testing.T) {
	f := front(t)
	if e := f.Run("keep := 41\nfer := Material(\"power ferrite PW3a\")\nT1 := Magnetic(\"T1\")\nT1.Ring(\"core\", Leg(fer, 46*mm, Disc(8.9*mm)), Gap(0.45*mm).PlusMinus(0.02*mm), Winding(\"N\", 7*turn))"); e.Status() != "ok" {
		t.Fatal(e.Reply)
	}
	for _, code := range []string{
		"for {\n}", "Pause(600*second)", `Ask("? ")`,
		"MonteCarlo(1e7, 1, T1.InductanceAt(\"N\", Currents{\"N\": 13*amp}))",
		"MonteCarlo(1e7, 1, func(s *Sample) Henry { return s.Part(T1).Solve(Currents{\"N\": 13*amp}).Inductance(\"N\") })",
	} {
		id := f.Send(kernel.Shell, "execute_request", kerneltest.Request(code, map[string]any{"allow_stdin": true}))
		f.Running(id)
		time.Sleep(100 * time.Millisecond)
		f.Ask(kernel.Control, "interrupt_request", map[string]any{})
		start := time.Now()
		e := f.Finish(id)
		if e.Reply.Content["ename"] != "Interrupted" {
			t.Errorf("%s: %v", code, e.Reply)
		}
		if took := time.Since(start); took > 2*time.Second {
			t.Errorf("%s: ended after %v", code, took)
		}
	}
	if got := f.Run("keep + 1").Result(); got != "42" {
		t.Errorf("afterwards: %q", got)
	}
}

// TestAnswersWhileACellRuns asks for completions and explanations beside an endless cell, in code points.
func TestAnswersWhileACellRuns(t *testing.T) {
	f := front(t)
	f.Run("alphaOne, alphaTwo := 1, 0.6*mm\nfer := Material(\"power ferrite PW3a\")\nT1 := Magnetic(\"T1\")\n" +
		"T1.Ring(\"core\", Leg(fer, 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding(\"N\", 7*turn))\nop := T1.Solve()")
	id := f.Start("for {\n}")
	f.Running(id)
	complete := func(code string) (matches []string, from int) {
		r := f.Ask(kernel.Shell, "complete_request", map[string]any{"code": code, "cursor_pos": len([]rune(code))})
		for _, m := range r.Content["matches"].([]any) {
			matches = append(matches, m.(string))
		}
		return matches, r.Int("cursor_start")
	}
	for _, c := range []struct {
		code, want string
		from       int
	}{
		{"_ = \"\U0001d41a\U0001d41a\"; alpha", "alphaOne alphaTwo", 10},
		{`op.Flux("`, "core", 9}, {`op.Inductance("`, "N", 15}, {`T1.GapFor("core.g`, "core.gap", 11}, {`T1.Solve(Currents{"`, "N", 19},
		{`Material("power ferrite PW3a`, "power ferrite PW3a", 10}, {"fmt.Printl", "Println", 4}, {"op.Induct", "Inductance", 3},
		{`x := "co`, "", 6}, {`// op.Flux("`, "", 12},
	} {
		got, from := complete(c.code)
		if strings.Join(got, " ") != c.want || from != c.from {
			t.Errorf("%s: %v from %d, want %s from %d", c.code, got, from, c.want, c.from)
		}
	}
	if got, _ := complete("Gap("); len(got) < 2 || got[0] != "alphaTwo" || got[1] != "cm" {
		t.Errorf("an argument in metres: %v", got[:min(5, len(got))])
	}
	explain := func(code string) string {
		r := f.Ask(kernel.Shell, "inspect_request", map[string]any{"code": code, "cursor_pos": len([]rune(code)), "detail_level": 0})
		s, _ := r.Content["data"].(map[string]any)["text/plain"].(string)
		return s
	}
	for code, want := range map[string]string{"Gap": "length in m", "op.Flux(": "result in Wb", "alphaTwo": "in m", "mm": "millimetre"} {
		if got := explain(code); !strings.Contains(got, want) {
			t.Errorf("%s: %q, want %q", code, got, want)
		}
	}
	r := f.Ask(kernel.Shell, "is_complete_request", map[string]any{"code": "for i := range 3 {"})
	if r.Content["status"] != "incomplete" || r.Content["indent"] != "\t" {
		t.Errorf("%v", r)
	}
	if r := f.Ask(kernel.Control, "kernel_info_request", map[string]any{}); r.Content["language_info"].(map[string]any)["pygments_lexer"] != "go" {
		t.Errorf("%v", r)
	}
	f.Ask(kernel.Control, "interrupt_request", map[string]any{})
	f.Finish(id)
}

// TestNames lists names with type, unit and value.
func TestNames(t *testing.T) {
	f := front(t)
	f.Run("length := 0.6*mm\nn := 3\nfunc area(w, d Metre) SquareMetre { return w * d }")
	e := f.Run("later := 2*amp\nNames()")
	for _, row := range []string{"length  float64", "m     600 um", "n       int", "area    func(w Metre, d Metre) SquareMetre", "m2", "later   float64", "2 A"} {
		if !strings.Contains(e.Result(), row) {
			t.Errorf("no %q in\n%s", row, e.Result())
		}
	}
}

// TestRestartedKernel kills the kernel in a cell: one that is started again on the same connection file says in its first
// cell what happened, and works.
func TestRestartedKernel(t *testing.T) {
	f, path := kerneltest.NewFile(t, "key")
	begin := func() (*exec.Cmd, *kerneltest.Front) {
		p := exec.Command(ampturn(t), "kernel", path)
		p.Env = append(os.Environ(), "JPY_PARENT_PID=")
		if err := p.Start(); err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = p.Process.Kill(); _ = p.Wait() })
		for range 3000 {
			if hb, err := kerneltest.Heartbeat(f); err == nil {
				_ = hb.Conn.Close()
				front := kerneltest.Dial(t, f, "front")
				front.Wait = time.Minute
				return p, front
			}
			time.Sleep(10 * time.Millisecond)
		}
		t.Fatal("the kernel does not listen")
		return nil, nil
	}
	p, fr := begin()
	if e := fr.Run("func deep(n int) int { return deep(n+1) + 1 }\ndeep(0)"); e.Reply.Content["ename"] != "TooDeep" {
		t.Errorf("endless recursion: %v", e.Reply)
	}
	if e := fr.Run("huge := make([]float64, 8000000000)\nlen(huge)"); e.Status() != "error" {
		t.Errorf("64 GB: %v", e.Reply)
	}
	if got := fr.Run("6*7").Result(); got != "42" {
		t.Errorf("after them: %q", got)
	}
	fr.Running(fr.Start("for {\n}"))
	_ = p.Process.Kill()
	_ = p.Wait()
	_, fr = begin()
	e := fr.Run("6*7")
	if got := e.Text("stderr"); !strings.Contains(got, "ended in cell 4: it was killed from outside") || e.Result() != "42" {
		t.Errorf("%q, %q", got, e.Result())
	}
}

// TestLongSweepTellsHowFarItIs lets a compiled computation of more than a second count in a display while somebody looks
// on, and in none otherwise.
func TestLongSweepTellsHowFarItIs(t *testing.T) {
	const circuit = "T1 := Magnetic(\"T1\")\nT1.Ring(\"core\", Leg(NewMaterial(\"lot 12\", Froehlich(2200, 0.4*tesla)), 46*mm, Disc(8.9*mm)), Gap(0.45*mm).PlusMinus(0.02*mm), Winding(\"N\", 7*turn))"
	const long = "k := 0\nMonteCarlo(12, 1, func(s *Sample) Henry {\n\tif k++; k > 1 {\n\t\tPause(0.12*second)\n\t}\n\treturn s.Part(T1).Solve(Currents{\"N\": 13*amp}).Inductance(\"N\")\n})"
	for _, live := range []bool{true, false} {
		session.SetLive(live)
		defer session.SetLive(false)
		f := front(t)
		if e := f.Run(circuit); e.Status() != "ok" {
			t.Fatal(e.Reply)
		}
		e := f.Run(long)
		if e.Status() != "ok" {
			t.Fatal(e.Reply)
		}
		bars, updates := e.Find("display_data"), e.Find("update_display_data")
		if !live {
			if len(bars)+len(updates) > 0 {
				t.Errorf("nobody looks on: %v", bars)
			}
			continue
		}
		if len(bars) != 1 || len(updates) == 0 {
			t.Fatalf("displays %v, updates %v", bars, updates)
		}
		last := updates[len(updates)-1].Content
		if text := last["data"].(map[string]any)["text/plain"]; text != "MonteCarlo: 12 of 12 done" {
			t.Errorf("at the end: %v", text)
		}
		if own, _ := last["metadata"].(map[string]any)["ampturn"].(map[string]any); own["progress"] != true {
			t.Errorf("not marked as progress: %v", last["metadata"])
		}
	}
}

// TestCompletionEverywhere asks for completions and explanations at places all over the cells of the examples, cut off
// there and whole: nothing panics, and what is offered begins with what is typed.
func TestCompletionEverywhere(t *testing.T) {
	e, err := newEngine()
	if err != nil {
		t.Fatal(err)
	}
	paths, err := filepath.Glob("notebooks-examples/*.ipynb")
	if err != nil || len(paths) == 0 {
		t.Fatal(paths, err)
	}
	asked, offered := 0, 0
	for _, path := range paths {
		nb, err := notebook.Read(path)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range nb.Cells {
			if c.Kind != notebook.Code {
				continue
			}
			text := []rune(c.Source)
			for at := asked % 11; at <= len(text); at += 11 {
				for _, source := range []string{c.Source, string(text[:at])} {
					got := e.Complete(source, at)
					if got.Start > at || got.End != at {
						t.Fatalf("%s at %d: replaces %d to %d", source, at, got.Start, got.End)
					}
					for _, m := range got.Matches {
						if !strings.HasPrefix(m, string(text[got.Start:at])) {
							t.Fatalf("%s at %d: %s is offered", source, at, m)
						}
					}
					e.Inspect(source, at)
					e.IsComplete(source)
					asked++
					offered += len(got.Matches)
				}
			}
		}
	}
	if asked < 500 || offered < asked {
		t.Errorf("asked %d times, offered %d names", asked, offered)
	}
}
