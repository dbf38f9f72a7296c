package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// largeNotebook runs into pictures of some hundred kilobytes.
const largeNotebook = `// %%
fer := NewMaterial("ferrite", Froehlich(2200, 0.49*tesla))
T1 := Magnetic("T1")
T1.Ring("core", Leg(fer, 97*mm, Rect(12*mm, 15*mm)), Gap(0.6*mm), Winding("main", 34*turn))
for i := range 12 {
	Show(T1.With(Length("core.gap", float64(i+1)*0.1*mm)).BiasCurve("main", 0, 40*amp))
}
`

// outFolder lays an old run notebook into an out folder and a notebook to run beside it.
func outFolder(t *testing.T) (dir, out string) {
	t.Helper()
	dir = t.TempDir()
	out = filepath.Join(dir, "out")
	for _, err := range []error{os.WriteFile(filepath.Join(dir, "big.go"), []byte(largeNotebook), 0o644), os.Mkdir(out, 0o755)} {
		if err != nil {
			t.Fatal(err)
		}
	}
	return dir, out
}

// runInto runs the notebook as a user types it, after a command of a shell, and demands exit code 1, the message, and the
// old run notebook as it was.
func runInto(t *testing.T, dir, before, want string) {
	t.Helper()
	old := filepath.Join(dir, "out", "big.ipynb")
	if before != "" {
		before += "; "
	}
	cmd := exec.Command("/bin/sh", "-c", before+`exec "$0" run --out out big.go`, ampturn(t))
	cmd.Dir = dir
	said, _ := cmd.CombinedOutput() // the exit code is looked at below
	if code := cmd.ProcessState.ExitCode(); code != 1 {
		t.Errorf("exit code %d, want 1", code)
	}
	if !strings.Contains(string(said), want) {
		t.Errorf("%q is not said:\n%s", want, said)
	}
	if text, err := os.ReadFile(old); err != nil || string(text) != "old" {
		t.Errorf("big.ipynb holds %.20q (%v)", text, err)
	}
	if list, err := os.ReadDir(filepath.Dir(old)); err != nil || len(list) != 1 {
		t.Errorf("the folder holds %v (%v)", list, err)
	}
}

func writeOld(t *testing.T, out string) {
	t.Helper()
	if err := os.WriteFile(filepath.Join(out, "big.ipynb"), []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
}

// TestFullDisk runs a notebook into a disk of 64 kB, or, where none can be mounted, under a limit of 64 kB for files.
func TestFullDisk(t *testing.T) {
	dir, out := outFolder(t)
	if err := syscall.Mount("tmpfs", out, "tmpfs", 0, "size=64k"); err != nil {
		t.Logf("no tmpfs can be mounted here (%v): a limit for files stands in", err)
		writeOld(t, out)
		runInto(t, dir, "ulimit -f 128", "out/: the file is larger than this system lets a file be; big.ipynb is as it was") // in blocks of 512 bytes
		return
	}
	t.Cleanup(func() { _ = syscall.Unmount(out, 0) })
	writeOld(t, out)
	runInto(t, dir, "", "out/: no space left; big.ipynb is as it was")
}

// TestFileLimit runs a notebook under a limit for the size of files.
func TestFileLimit(t *testing.T) {
	dir, out := outFolder(t)
	writeOld(t, out)
	runInto(t, dir, "ulimit -f 128", "out/: the file is larger than this system lets a file be; big.ipynb is as it was")
}

// TestReadOnlyFolder runs a notebook into a folder that nobody can write: root's rights end at a read-only mount, those
// of others at the folder's permissions.
func TestReadOnlyFolder(t *testing.T) {
	dir, out := outFolder(t)
	if os.Getuid() != 0 {
		writeOld(t, out)
		if err := os.Chmod(out, 0o555); err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = os.Chmod(out, 0o755) })
	} else {
		if err := syscall.Mount("tmpfs", out, "tmpfs", 0, "size=64k"); err != nil {
			t.Skipf("root can write any folder here, and nothing can be mounted: %v", err)
		}
		t.Cleanup(func() { _ = syscall.Unmount(out, 0) })
		writeOld(t, out)
		if err := syscall.Mount("tmpfs", out, "tmpfs", syscall.MS_REMOUNT|syscall.MS_RDONLY, ""); err != nil {
			t.Fatal(err)
		}
	}
	runInto(t, dir, "", "out/: the folder cannot be written; big.ipynb is as it was")
}
