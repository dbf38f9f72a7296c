package cell_test

import (
	"context"
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/txtar"

	"ampturn/kernel"
	"ampturn/kernel/cell"
)

// TestExport joins all probes that run to their end into one notebook and writes it as a Go program. The compiler must
// take it, and the program must print what the cells show.
func TestExport(t *testing.T) {
	n := open(t, false)
	var cells []kernel.Cell
	var want strings.Builder
	for _, src := range runningCells(t) {
		shown, o := n.run(context.Background(), src)
		if o.Fault != nil {
			if o.Fault.Name == "InternalError" {
				t.Errorf("%s\n%s", o.Fault.Text, src)
			}
			t.Logf("left out, it does not fit the cells of other probes: %s", o.Fault.Text)
			continue
		}
		cells = append(cells, kernel.Cell{Number: n.n, Source: src})
		for _, line := range strings.SplitAfter(shown, "\n") {
			if !strings.HasPrefix(line, "! ") {
				want.WriteString(line)
			}
		}
	}
	if len(cells) < 50 {
		t.Fatalf("%d cells only", len(cells))
	}
	text, fault := open(t, false).s.Export("of the probes", cells, cell.Harness{})
	if fault != nil {
		t.Fatal(strings.Join(fault.Traceback, "\n"))
	}
	file := filepath.Join(t.TempDir(), "main.go")
	if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	overlay := filepath.Join(t.TempDir(), "overlay.json") // shows the program to the go command in a folder of the module
	here, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	list, err := json.Marshal(map[string]any{"Replace": map[string]string{filepath.Join(here, "zzexported", "main.go"): file}})
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(overlay, list, 0o600); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("go", "run", "-overlay", overlay, "./zzexported")
	var trouble strings.Builder
	cmd.Stderr = &trouble
	got, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v\n%s", err, trouble.String())
	}
	compareLines(t, string(got), want.String(), text)
	t.Logf("%d cells", len(cells))
}

// runningCells gives the cells of all probes without a fault.
func runningCells(t *testing.T) (cells []string) {
	files, err := filepath.Glob("testdata/cells/*.txtar")
	if err != nil {
		t.Fatal(err)
	}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range probes(txtar.Parse(data)) {
			runs := filepath.Base(file) != "units.txtar"
			for _, s := range p.steps {
				runs = runs && s.Name != "fault"
			}
			for _, s := range p.steps {
				if runs && s.Name == "in" {
					cells = append(cells, strings.TrimSuffix(string(s.Data), "\n"))
				}
			}
		}
	}
	return cells
}

func compareLines(t *testing.T, got, want, text string) {
	a, b := strings.Split(got, "\n"), strings.Split(want, "\n")
	for i := range max(len(a), len(b)) {
		x, y := "", ""
		if i < len(a) {
			x = a[i]
		}
		if i < len(b) {
			y = b[i]
		}
		if x != y {
			t.Errorf("line %d: the program prints %q, the cells show %q\nbefore it:\n%s", i+1, x, y, strings.Join(b[max(0, i-6):i], "\n"))
			_ = os.WriteFile(filepath.Join(os.TempDir(), "ampturn-export.txt"), []byte(text), 0o600)
			return
		}
	}
}
