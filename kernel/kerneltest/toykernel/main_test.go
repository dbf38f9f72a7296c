package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/conn"
	"ampturn/kernel/kerneltest"
)

// asProgram has the test's own binary act as the program.
const asProgram = "AMPTURN_TOYKERNEL"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		main()
		return
	}
	os.Exit(m.Run())
}

// process is a kernel in its own process.
type process struct {
	*exec.Cmd
	file   *conn.File
	path   string
	stderr bytes.Buffer
	ended  chan struct{}
}

func start(t *testing.T, env ...string) *process {
	t.Helper()
	f, path := kerneltest.NewFile(t, "key")
	return startOn(t, f, path, env...)
}

func startOn(t *testing.T, f *conn.File, path string, env ...string) *process {
	t.Helper()
	p := &process{Cmd: exec.Command(os.Args[0], "kernel", path), file: f, path: path, ended: make(chan struct{})}
	p.Env = append(append(os.Environ(), asProgram+"=1", "JPY_PARENT_PID="+fmt.Sprint(os.Getpid())), env...)
	p.Stderr = &p.stderr
	if err := p.Start(); err != nil {
		t.Fatal(err)
	}
	go func() {
		p.Wait()
		close(p.ended)
	}()
	t.Cleanup(func() {
		p.Process.Kill()
		<-p.ended
	})
	return p
}

// front joins a front end once the kernel listens.
func (p *process) front(t *testing.T) *kerneltest.Front {
	t.Helper()
	for range 500 {
		if hb, err := kerneltest.Heartbeat(p.file); err == nil {
			hb.Conn.Close()
			return kerneltest.Dial(t, p.file, "front")
		}
		time.Sleep(10 * time.Millisecond)
	}
	t.Fatal("the kernel does not listen")
	return nil
}

func (p *process) gone(t *testing.T, within time.Duration) {
	t.Helper()
	select {
	case <-p.ended:
	case <-time.After(within):
		t.Fatalf("still there after %v", within)
	}
}

func TestSIGINT(t *testing.T) {
	p := start(t)
	f := p.front(t)
	f.Run("keep = 41")
	p.Process.Signal(os.Interrupt) // nothing runs: nothing happens
	id := f.Start("loop")
	f.Running(id)
	p.Process.Signal(os.Interrupt)
	if e := f.Finish(id); e.Reply.Content["ename"] != "Interrupted" {
		t.Errorf("%v", e.Reply)
	}
	if got := f.Run("keep+1").Result(); got != "42" {
		t.Errorf("afterwards: %q", got)
	}
}

func TestSIGTERM(t *testing.T) {
	for _, code := range []string{"", "loop"} { // idle, and in the middle of a cell
		p := start(t)
		f := p.front(t)
		f.Run("1")
		var id string
		if code != "" {
			id = f.Start(code)
			f.Running(id)
		}
		p.Process.Signal(syscall.SIGTERM)
		p.gone(t, 10*time.Second)
		if id != "" {
			if e := f.Finish(id); e.Reply.Content["ename"] != "Interrupted" {
				t.Errorf("%s: %v", code, e.Reply)
			}
		}
		if c := p.ProcessState.ExitCode(); c != 0 {
			t.Errorf("exit code %d: %s", c, &p.stderr)
		}
		if left, _ := filepath.Glob(p.path + ".*"); len(left) > 0 {
			t.Errorf("left behind: %v", left)
		}
	}
}

func TestPortTaken(t *testing.T) {
	f, path := kerneltest.NewFile(t, "key")
	l, err := net.Listen(f.Address(f.IOPub))
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	p := startOn(t, f, path)
	p.gone(t, 5*time.Second)
	if p.ProcessState.ExitCode() != 1 || !strings.Contains(p.stderr.String(), "iopub socket") {
		t.Errorf("%v: %s", p.ProcessState, &p.stderr)
	}
}

func TestNoConnectionFile(t *testing.T) {
	p := startOn(t, nil, filepath.Join(t.TempDir(), "none.json"))
	p.gone(t, 5*time.Second)
	if p.ProcessState.ExitCode() != 1 || !strings.Contains(p.stderr.String(), "connection file") {
		t.Errorf("%v: %s", p.ProcessState, &p.stderr)
	}
}

// The kernel ends when the process that started it is killed: a shell stands between that one and us.
func TestParentDeath(t *testing.T) {
	f, path := kerneltest.NewFile(t, "key")
	shell := exec.Command("sh", "-c", `JPY_PARENT_PID=$$ "$@" & wait`, "sh", os.Args[0], "kernel", path)
	shell.Env = append(os.Environ(), asProgram+"=1")
	if err := shell.Start(); err != nil {
		t.Skip("no shell:", err)
	}
	p := &process{file: f}
	front := p.front(t)
	front.Running(front.Start("loop"))
	shell.Process.Kill()
	shell.Wait()
	for range 500 {
		hb, err := kerneltest.Heartbeat(f)
		if err != nil {
			return
		}
		hb.Conn.Close()
		time.Sleep(10 * time.Millisecond)
	}
	front.Send(kernel.Control, "shutdown_request", map[string]any{})
	t.Error("the kernel outlives its parent by 5 s")
}

// A kernel that is started again on the connection file of one that ended badly says in its first cell what happened.
func TestRestartTellsWhy(t *testing.T) {
	f, path := kerneltest.NewFile(t, "key")
	for _, c := range []struct{ code, want string }{
		{"overflow", "ended in cell 2: a function called itself without end"},
		{"hoard 35184372088832", "ended in cell 2: 35.2 TB asked for in one allocation"}, // 2^45
		{"loop", "ended in cell 2: it was killed from outside"},
	} {
		p := startOn(t, f, path)
		front := p.front(t)
		front.Run("1")
		front.Running(front.Start(c.code))
		if c.code == "loop" {
			p.Process.Kill()
		}
		p.gone(t, 60*time.Second) // a stack of a gigabyte takes its time on a busy machine
		again := startOn(t, f, path)
		front = again.front(t)
		e := front.Run("print hello")
		if got := e.Text("stderr"); !strings.Contains(got, c.want) {
			t.Errorf("%s: %q", c.code, got)
		}
		if got := front.Run("print hello").Text("stderr"); got != "" {
			t.Errorf("told twice: %q", got)
		}
		again.Process.Signal(syscall.SIGTERM)
		again.gone(t, 5*time.Second)
		third := startOn(t, f, path)
		if got := third.front(t).Run("print hello").Text("stderr"); got != "" {
			t.Errorf("after an orderly end: %q", got)
		}
		third.Process.Signal(syscall.SIGTERM)
		third.gone(t, 5*time.Second)
	}
}

func TestTwoFrontEnds(t *testing.T) {
	p := start(t)
	a := p.front(t)
	b := kerneltest.Dial(t, p.file, "other")
	ea, eb := a.Start("print from a"), b.Start("print from b")
	if got := a.Finish(ea).Text("stdout") + b.Finish(eb).Text("stdout"); got != "from a\nfrom b\n" {
		t.Errorf("%q", got)
	}
	// Each sees what the other's cells print.
	a.Published(eb)
	b.Published(ea)
}

// A thousand cells sent at once are answered in order, with four broadcasts each.
func TestRapidCells(t *testing.T) {
	p := start(t)
	f := p.front(t)
	var ids []string
	for range 1000 {
		ids = append(ids, f.Start("1+1"))
	}
	f.Finish(ids[999])
	replies := f.All(func(m *kerneltest.Message) bool { return m.Type() == "execute_reply" })
	for i, m := range replies {
		if m.Parent["msg_id"] != ids[i] || m.Int("execution_count") != i+1 {
			t.Fatalf("reply %d is %v", i, m)
		}
	}
	published := f.All(func(m *kerneltest.Message) bool { return m.Channel == kernel.IOPub && m.Parent["msg_id"] != nil })
	if len(replies) != 1000 || len(published) != 4000 {
		t.Errorf("%d replies, %d broadcasts", len(replies), len(published))
	}
}

func TestDescriptors(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("descriptors are counted in /proc")
	}
	p := start(t)
	first := p.front(t)
	count := func() int {
		list, err := os.ReadDir(fmt.Sprintf("/proc/%d/fd", p.Process.Pid))
		if err != nil {
			t.Fatal(err)
		}
		return len(list)
	}
	before := count()
	for range 20 {
		f, closeAll := kerneltest.DialFor(t, p.file, "again")
		f.Run("1")
		closeAll()
	}
	for range 200 {
		if count() <= before {
			break
		}
		time.Sleep(10 * time.Millisecond)
	}
	if after := count(); after > before {
		t.Errorf("descriptors: %d, then %d", before, after)
	}
	first.Run("1")
}

const notebook = `
import json, sys
import nbclient, nbformat
nb = nbformat.v4.new_notebook()
nb.cells = [nbformat.v4.new_code_cell(s) for s in [
    "print hello", "keep = 41\nkeep+1", "show image/svg+xml <svg xmlns='http://www.w3.org/2000/svg'/>", "warn x\nprint y"]]
nb.cells.append(nbformat.v4.new_code_cell("fail boom", metadata={"tags": ["raises-exception"]}))
nb.cells.append(nbformat.v4.new_code_cell("lines 5000"))
nbclient.NotebookClient(nb, kernel_name="ampturn-toy", timeout=60).execute()
json.dump([c["outputs"] for c in nb.cells], sys.stdout)
`

// A notebook runs through nbclient and the kernel entry as it is installed.
func TestNBClient(t *testing.T) {
	python := os.Getenv("AMPTURN_PYTHON")
	if python == "" {
		t.Skip("AMPTURN_PYTHON names no Python that has nbclient")
	}
	prefix := t.TempDir()
	binary, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	if out, err := program(t, nil, binary, "install", prefix); err != nil {
		t.Fatalf("install: %v\n%s", err, out)
	}
	env := []string{"JUPYTER_PATH=" + filepath.Join(prefix, "share", "jupyter"), "PYTHONWARNINGS=ignore"}
	out, err := program(t, env, python, "-c", notebook)
	if err != nil {
		t.Fatalf("nbclient: %v\n%s", err, out)
	}
	var cells [][]map[string]any
	if err := json.Unmarshal(out, &cells); err != nil {
		t.Fatalf("%v in %s", err, out)
	}
	get := func(cell, output int, field string) any {
		if cell >= len(cells) || output >= len(cells[cell]) {
			t.Fatalf("no output %d of cell %d in %s", output, cell, out)
		}
		return cells[cell][output][field]
	}
	for _, c := range []struct {
		cell, output int
		field        string
		want         any
	}{
		{0, 0, "text", "hello\n"}, {3, 0, "text", "x\n"}, {3, 0, "name", "stderr"}, {3, 1, "text", "y\n"},
		{4, 0, "ename", "ToyFailure"},
	} {
		if got := get(c.cell, c.output, c.field); got != c.want {
			t.Errorf("cell %d, output %d, %s: %v", c.cell, c.output, c.field, got)
		}
	}
	if got := get(1, 0, "data").(map[string]any)["text/plain"]; got != "42" {
		t.Errorf("result %v", got)
	}
	if _, ok := get(2, 0, "data").(map[string]any)["image/svg+xml"]; !ok {
		t.Error("no picture")
	}
	n := 0
	for i := range cells[5] {
		n += strings.Count(get(5, i, "text").(string), "\n")
	}
	if n != 5000 {
		t.Errorf("%d lines", n)
	}
}

func program(t *testing.T, env []string, name string, args ...string) ([]byte, error) {
	t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), 2*time.Minute)
	defer cancel()
	c := exec.CommandContext(ctx, name, args...)
	c.Env = append(append(os.Environ(), asProgram+"=1"), env...)
	var stderr bytes.Buffer
	c.Stderr = &stderr
	out, err := c.Output()
	if err != nil {
		out = append(out, stderr.Bytes()...)
	}
	return out, err
}
