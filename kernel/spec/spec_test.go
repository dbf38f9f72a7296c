package spec

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"errors"
	"image/png"
	"io"
	"os"
	"path/filepath"
	"testing"
)

func TestInstallAndRemove(t *testing.T) {
	place := Place{Prefix: t.TempDir()}
	entry := Entry{Binary: "/opt/it s/ampturn"}
	for range 2 { // the second time it is replaced
		dir, err := Install(entry, place)
		if err != nil {
			t.Fatal(err)
		}
		if want := filepath.Join(place.Prefix, "share", "jupyter", "kernels", "ampturn"); dir != want {
			t.Errorf("folder %s, want %s", dir, want)
		}
		checkEntry(t, dir)
	}
	if got := Installed("", []Place{place, {Prefix: t.TempDir()}}); len(got) != 1 {
		t.Errorf("installed %v", got)
	}
	dir, err := Remove("", place)
	if err != nil {
		t.Fatal(err)
	}
	left, err := os.ReadDir(filepath.Dir(dir))
	if err != nil || len(left) > 0 {
		t.Errorf("left behind: %v %v", left, err)
	}
	if _, err := Remove("", place); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("removed twice: %v", err)
	}
}

// checkEntry checks the fields that "Making kernels for Jupyter" names, and the logos.
func checkEntry(t *testing.T, dir string) {
	t.Helper()
	b, err := os.ReadFile(filepath.Join(dir, "kernel.json"))
	if err != nil {
		t.Fatal(err)
	}
	var got struct {
		Argv      []string
		Display   string `json:"display_name"`
		Language  string
		Interrupt string `json:"interrupt_mode"`
	}
	if err := json.Unmarshal(b, &got); err != nil {
		t.Fatal(err)
	}
	want := []string{"/opt/it s/ampturn", "kernel", "{connection_file}"}
	if len(got.Argv) != 3 || got.Argv[0] != want[0] || got.Argv[1] != want[1] || got.Argv[2] != want[2] {
		t.Errorf("argv %q", got.Argv)
	}
	if got.Display != "ampturn" || got.Language != "go" || got.Interrupt != "message" {
		t.Errorf("%+v", got)
	}
	for name, size := range map[string]int{"logo-32x32.png": 32, "logo-64x64.png": 64} {
		b, err := os.ReadFile(filepath.Join(dir, name))
		if err != nil {
			t.Fatal(err)
		}
		img, err := png.Decode(bytes.NewReader(b))
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if s := img.Bounds().Size(); s.X != size || s.Y != size {
			t.Errorf("%s: %v", name, s)
		}
		// The corner is clear, the yoke is not, and the gap lets the background through beside its line.
		at := func(x, y int) uint32 {
			_, _, _, a := img.At(x*size/64, y*size/64).RGBA()
			return a
		}
		if at(0, 0) != 0 || at(34, 12) != 0xffff || at(36, 32) != 0 {
			t.Errorf("%s: alpha %d, %d, %d", name, at(0, 0), at(34, 12), at(36, 32))
		}
	}
	svg, err := os.Open(filepath.Join(dir, "logo-svg.svg"))
	if err != nil {
		t.Fatal(err)
	}
	defer svg.Close()
	for d := xml.NewDecoder(svg); ; {
		if _, err := d.Token(); err == io.EOF {
			break
		} else if err != nil {
			t.Fatal(err)
		}
	}
}

// What another program installed under the name stays.
func TestOthersStay(t *testing.T) {
	place := Place{Prefix: t.TempDir()}
	dir := filepath.Join(place.Prefix, "share", "jupyter", "kernels", "ampturn")
	if err := os.MkdirAll(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	foreign := []byte(`{"argv":["x"],"display_name":"x","language":"x"}`)
	if err := os.WriteFile(filepath.Join(dir, "kernel.json"), foreign, 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := Install(Entry{Binary: "/x"}, place); err == nil {
		t.Error("replaced")
	}
	if _, err := Remove("", place); err == nil {
		t.Error("removed")
	}
	if b, _ := os.ReadFile(filepath.Join(dir, "kernel.json")); !bytes.Equal(b, foreign) {
		t.Errorf("changed to %s", b)
	}
}

func TestInstallRefuses(t *testing.T) {
	place := Place{Prefix: t.TempDir()}
	for _, e := range []Entry{{Binary: "ampturn"}, {}, {Name: "../x", Binary: "/x"}, {Name: "a b", Binary: "/x"}, {Name: "..", Binary: "/x"}} {
		if dir, err := Install(e, place); err == nil {
			t.Errorf("%+v is installed in %s", e, dir)
		}
	}
	for _, name := range []string{"..", "../x", "a/b"} {
		if dir, err := Remove(name, place); err == nil || errors.Is(err, os.ErrNotExist) {
			t.Errorf("%s is looked for in %q: %v", name, dir, err)
		}
	}
}

// "Common directories and file locations" of the Jupyter documentation, data files.
func TestUserData(t *testing.T) {
	for _, c := range []struct {
		system string
		env    map[string]string
		want   string
	}{
		{"linux", nil, "/home/u/.local/share/jupyter"},
		{"linux", map[string]string{"XDG_DATA_HOME": "/d"}, "/d/jupyter"},
		{"linux", map[string]string{"XDG_DATA_HOME": "/d", "JUPYTER_DATA_DIR": "/j"}, "/j"},
		{"darwin", nil, "/home/u/Library/Jupyter"},
		{"darwin", map[string]string{"JUPYTER_PLATFORM_DIRS": "1"}, "/home/u/Library/Application Support/Jupyter"},
		{"windows", map[string]string{"APPDATA": "/a"}, "/a/jupyter"},
	} {
		got, err := userData(c.system, func(k string) string { return c.env[k] }, func() (string, error) { return "/home/u", nil })
		if err != nil || got != filepath.FromSlash(c.want) {
			t.Errorf("%s %v: %s, %v", c.system, c.env, got, err)
		}
	}
	none := func() (string, error) { return "", errors.New("none") }
	if d, err := userData("linux", func(string) string { return "" }, none); err == nil {
		t.Errorf("without a home: %s", d)
	}
}
