package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"ampturn": main})
}

// TestCommand runs the scripts of testdata/script: the command as a user types it, files, messages, exit codes.
func TestCommand(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir: "testdata/script",
		Cmds: map[string]func(ts *testscript.TestScript, neg bool, args []string){
			"exits":  exits,
			"change": change,
		},
	})
}

// exits runs a command and checks its exit code: exits 3 ampturn run a.go.
func exits(ts *testscript.TestScript, _ bool, args []string) {
	err := ts.Exec(args[1], args[2:]...)
	code := "0"
	if err != nil {
		code = strings.TrimPrefix(err.Error(), "exit status ")
	}
	if code != args[0] {
		ts.Fatalf("ended with %s, expected %s", code, args[0])
	}
}

// ampturn gives the command under test, as a link to the test's own binary.
func ampturn(t *testing.T) string {
	t.Helper()
	exe, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	bin := filepath.Join(t.TempDir(), "ampturn")
	if err := os.Symlink(exe, bin); err != nil {
		t.Fatal(err)
	}
	return bin
}

// change writes a copy of a file in which the first match of a pattern is another text: change in out pattern text. It
// fails where nothing matches.
func change(ts *testscript.TestScript, _ bool, args []string) {
	old := ts.ReadFile(args[0])
	at := regexp.MustCompile(args[2]).FindStringIndex(old)
	if at == nil {
		ts.Fatalf("%s: nothing matches %s", args[0], args[2])
	}
	if err := os.WriteFile(ts.MkAbs(args[1]), []byte(old[:at[0]]+args[3]+old[at[1]:]), 0o600); err != nil {
		ts.Fatalf("%v", err)
	}
}

// TestInterrupt stops a notebook in the middle of an endless cell: it says so, ends with 1, and the file that was
// there before still opens.
func TestInterrupt(t *testing.T) {
	dir := t.TempDir()
	nb := filepath.Join(dir, "endless.go")
	if err := os.WriteFile(nb, []byte("// %%\na := 1\na\n\n// %%\nfor {\n\ta++\n}\n\n// %%\na\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(ampturn(t), "run", "--out", filepath.Join(dir, "out"), nb)
	var said strings.Builder
	cmd.Stdout, cmd.Stderr = &said, &said
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	time.Sleep(1500 * time.Millisecond)
	if err := cmd.Process.Signal(os.Interrupt); err != nil {
		t.Fatal(err)
	}
	done := make(chan error, 1)
	go func() { done <- cmd.Wait() }()
	select {
	case <-done:
	case <-time.After(20 * time.Second):
		_ = cmd.Process.Kill()
		t.Fatal("did not end after the interrupt")
	}
	if code := cmd.ProcessState.ExitCode(); code != 1 {
		t.Errorf("exit code %d, want 1\n%s", code, said.String())
	}
	if !strings.Contains(said.String(), "interrupted in cell 2") {
		t.Errorf("the interrupt is not told:\n%s", said.String())
	}
	out, err := os.ReadFile(filepath.Join(dir, "out", "endless.ipynb"))
	if err != nil || !strings.Contains(string(out), `"cells"`) {
		t.Errorf("what ran before is not kept: %v", err)
	}
}
