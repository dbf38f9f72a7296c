package cell_test

import (
	"context"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/txtar"
)

// TestProbes runs the notebooks of testdata/cells. A file holds probes one after another: "-- name --" begins one, the
// parts of a probe are cells ("in") with what they show ("out") or the text that stops them ("fault", a regular
// expression for the whole message).
func TestProbes(t *testing.T) {
	files, err := filepath.Glob("testdata/cells/*.txtar")
	if err != nil || len(files) == 0 {
		t.Fatal("no probes", err)
	}
	count := 0
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range probes(txtar.Parse(data)) {
			count++
			t.Run(strings.TrimSuffix(filepath.Base(file), ".txtar")+"/"+p.name, func(t *testing.T) { p.run(t, filepath.Base(file) == "units.txtar") })
		}
	}
	t.Logf("%d probes", count)
}

type probe struct {
	name  string
	steps []txtar.File
}

// probes groups the parts of a file: a part called neither in, out nor fault is the name of the next probe.
func probes(a *txtar.Archive) (ps []probe) {
	for _, f := range a.Files {
		switch f.Name {
		case "in", "out", "fault":
			ps[len(ps)-1].steps = append(ps[len(ps)-1].steps, f)
		default:
			ps = append(ps, probe{name: f.Name})
			if len(strings.TrimSpace(string(f.Data))) > 0 {
				ps[len(ps)-1].steps = append(ps[len(ps)-1].steps, txtar.File{Name: "in", Data: f.Data})
			}
		}
	}
	return ps
}

func (p *probe) run(t *testing.T, units bool) {
	n := open(t, units)
	for i := 0; i < len(p.steps); i++ {
		step := p.steps[i]
		if step.Name != "in" {
			t.Fatalf("part %d is %s", i, step.Name)
		}
		out, o := n.run(context.Background(), strings.TrimSuffix(string(step.Data), "\n"))
		want, fault := "", ""
		for i+1 < len(p.steps) && p.steps[i+1].Name != "in" {
			i++
			if p.steps[i].Name == "out" {
				want = string(p.steps[i].Data)
			} else {
				fault = strings.TrimSpace(string(p.steps[i].Data))
			}
		}
		switch {
		case fault == "" && o.Fault != nil:
			t.Errorf("cell %d stopped: %s\n%s\n%s", n.n, strings.Join(o.Fault.Traceback, "\n"), step.Data, n.s.Lowered(n.n))
			return
		case fault != "" && o.Fault == nil:
			t.Errorf("cell %d ran, want %q; shown:\n%s\n%s", n.n, fault, out, n.s.Lowered(n.n))
		case fault != "":
			if ok, err := regexp.MatchString("^(?:"+fault+")$", o.Fault.Text); err != nil || !ok {
				t.Errorf("cell %d stopped with\n  %s\nwant\n  %s %v", n.n, o.Fault.Text, fault, err)
			}
		}
		if out != want {
			t.Errorf("cell %d shows\n%s\nwant\n%s\n%s", n.n, out, want, n.s.Lowered(n.n))
		}
	}
}
