package notebook_test

import (
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"ampturn/kernel/notebook"
)

func TestSaveReplacesAsAWhole(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.ipynb")
	for _, text := range []string{"first", "second, longer", ""} {
		if err := notebook.Save(path, []byte(text)); err != nil {
			t.Fatal(err)
		}
		onlyFile(t, dir, "a.ipynb", text)
	}
}

func TestSaveKeepsPermissionsAndLinks(t *testing.T) {
	dir := t.TempDir()
	path, link := filepath.Join(dir, "a.ipynb"), filepath.Join(t.TempDir(), "link.ipynb")
	if err := os.WriteFile(path, []byte("old"), 0o640); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(path, link); err != nil {
		t.Skip(err)
	}
	if err := notebook.Save(link, []byte("new")); err != nil {
		t.Fatal(err)
	}
	onlyFile(t, dir, "a.ipynb", "new")
	info, err := os.Lstat(path)
	if err != nil || info.Mode() != 0o640 {
		t.Errorf("mode %v, %v", info.Mode(), err)
	}
}

func TestSaveFails(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ name, path, want string }{
		{"no folder", filepath.Join(dir, "none", "a.ipynb"), "none/: no such folder; a.ipynb is not written"},
		{"a file as folder", filepath.Join(file, "a.ipynb"), "file/: a part of it is a file, not a folder; a.ipynb is not written"},
		{"a folder as file", dir, " is a folder; it cannot be written as a file"},
	} {
		err := notebook.Save(c.path, []byte("new"))
		var failed *notebook.SaveError
		if !errors.As(err, &failed) || !strings.HasSuffix(err.Error(), c.want) {
			t.Errorf("%s: got %v, want ...%s", c.name, err, c.want)
		}
	}
}

func TestSaveIntoReadOnlyFolder(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.ipynb")
	if err := os.WriteFile(path, []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := os.Chmod(dir, 0o555); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = os.Chmod(dir, 0o755) })
	out := asChild(t, path, "nobody")
	if want := dir + "/: the folder cannot be written; a.ipynb is as it was"; out != want {
		t.Errorf("got %q, want %q", out, want)
	}
	onlyFile(t, dir, "a.ipynb", "old")
}

func TestSaveBeyondTheSizeLimit(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.ipynb")
	if err := os.WriteFile(path, []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	out := asChild(t, path, "limit")
	if want := dir + "/: the file is larger than this system lets a file be; a.ipynb is as it was"; out != want {
		t.Errorf("got %q, want %q", out, want)
	}
	onlyFile(t, dir, "a.ipynb", "old")
}

func TestSaveToAFullDisk(t *testing.T) {
	dir := t.TempDir()
	if err := syscall.Mount("tmpfs", dir, "tmpfs", 0, "size=64k"); err != nil {
		t.Skipf("no tmpfs can be mounted here: %v", err)
	}
	t.Cleanup(func() { _ = syscall.Unmount(dir, 0) })
	path := filepath.Join(dir, "a.ipynb")
	if err := notebook.Save(path, []byte("old")); err != nil {
		t.Fatal(err)
	}
	err := notebook.Save(path, make([]byte, 1<<20))
	if want := dir + "/: no space left; a.ipynb is as it was"; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	onlyFile(t, dir, "a.ipynb", "old")
}

// asChild saves 1 MiB from a process of its own, which has lost the rights or the file size that the case is about, and
// gives the text of its error.
func asChild(t *testing.T, path, loss string) string {
	t.Helper()
	exe, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(exe, "-test.run=^TestChildSaves$")
	cmd.Env = append(os.Environ(), "AMPTURN_CHILD_SAVES="+path, "AMPTURN_CHILD_LOSS="+loss)
	if loss == "nobody" && os.Getuid() == 0 {
		for p := filepath.Dir(filepath.Dir(path)); len(p) > 1; p = filepath.Dir(p) {
			if info, err := os.Stat(p); err == nil && info.Mode()&0o005 != 0o005 && strings.Contains(p, "Test") {
				_ = os.Chmod(p, 0o755)
			}
		}
		bin := filepath.Join(t.TempDir(), "test")
		data, err := os.ReadFile(exe)
		if err == nil {
			err = os.WriteFile(bin, data, 0o755)
		}
		if err != nil {
			t.Fatal(err)
		}
		if err := os.Chmod(filepath.Dir(filepath.Dir(bin)), 0o755); err != nil {
			t.Fatal(err)
		}
		cmd.Path, cmd.Args[0], cmd.Dir = bin, bin, "/"
		cmd.SysProcAttr = &syscall.SysProcAttr{Credential: &syscall.Credential{Uid: 65534, Gid: 65534}}
	}
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("the child: %v\n%s", err, out)
	}
	for line := range strings.Lines(string(out)) {
		if text, ok := strings.CutPrefix(line, "child: "); ok {
			return strings.TrimSpace(text)
		}
	}
	t.Fatalf("the child said nothing:\n%s", out)
	return ""
}

func TestChildSaves(t *testing.T) {
	path := os.Getenv("AMPTURN_CHILD_SAVES")
	if path == "" {
		return // the process of this test is no child
	}
	if os.Getenv("AMPTURN_CHILD_LOSS") == "limit" {
		if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &syscall.Rlimit{Cur: 4096, Max: 4096}); err != nil {
			t.Fatal(err)
		}
	}
	err := notebook.Save(path, make([]byte, 1<<20))
	_, _ = os.Stdout.WriteString("child: " + errorText(err) + "\n")
}

func errorText(err error) string {
	if err == nil {
		return "saved"
	}
	return err.Error()
}

// onlyFile demands that the folder holds that file with that content and nothing else.
func onlyFile(t *testing.T, dir, name, want string) {
	t.Helper()
	list, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	if len(list) != 1 || list[0].Name() != name {
		t.Errorf("the folder holds %v", list)
	}
	got, err := os.ReadFile(filepath.Join(dir, name))
	if err != nil || string(got) != want {
		t.Errorf("%s holds %q (%v), want %q", name, got, err, want)
	}
}
