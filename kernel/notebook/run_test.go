package notebook_test

import (
	"bytes"
	"context"
	"fmt"
	"math"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"

	"ampturn/kernel"
	"ampturn/kernel/notebook"
)

// scripted is an engine whose cells are lines of commands, so that a test says in the cell what it shows.
type scripted struct {
	ran    []kernel.Cell
	cancel context.CancelFunc
}

func (s *scripted) Complete(string, int) kernel.Completion     { return kernel.Completion{} }
func (s *scripted) Inspect(string, int) (map[string]any, bool) { return nil, false }
func (s *scripted) IsComplete(string) (status, indent string)  { return "complete", "" }
func (s *scripted) Language() kernel.Language {
	return kernel.Language{Name: "go", Version: "1", MIMEType: "text/x-go", Extension: ".go", Lexer: "go"}
}

func (s *scripted) Run(ctx context.Context, c kernel.Cell, out kernel.Sink) kernel.Outcome {
	s.ran = append(s.ran, c)
	for line := range strings.Lines(c.Source) {
		word, rest, _ := strings.Cut(strings.TrimSpace(line), " ")
		data := map[string]any{"text/plain": rest}
		switch word {
		case "out":
			out(kernel.Output{Kind: kernel.Stream, Name: "stdout", Text: rest + "\n"})
		case "err":
			out(kernel.Output{Kind: kernel.Stream, Name: "stderr", Text: rest + "\n"})
		case "result":
			out(kernel.Output{Kind: kernel.Result, Data: data})
		case "place":
			out(kernel.Output{Kind: kernel.Display, ID: rest, Data: map[string]any{"text/plain": "empty"}})
		case "fill":
			out(kernel.Output{Kind: kernel.Update, ID: rest, Data: map[string]any{"text/plain": "filled by cell " + fmt.Sprint(c.Number)}})
		case "clear":
			out(kernel.Output{Kind: kernel.Clear})
		case "clearlater":
			out(kernel.Output{Kind: kernel.Clear, Wait: true})
		case "odd":
			out(kernel.Output{Kind: kernel.Display, Data: map[string]any{"text/plain": "a\xffb", "image/png": []byte{1, 2, 3},
				"application/json": map[string]any{"z": 1.5, "a": []int{1}}, "application/x+json": math.NaN()}})
		case "fail":
			text := fmt.Sprintf("cell %d, line 1: %s", c.Number, rest)
			return kernel.Outcome{Fault: &kernel.Fault{Name: "BadValue", Text: text, Traceback: []string{text, "    " + c.Source, "    ^"}}}
		case "interrupt":
			s.cancel()
			<-ctx.Done()
			return kernel.Outcome{Interrupted: true, Fault: &kernel.Fault{Name: "Interrupted", Text: "interrupted in cell 2"}}
		}
	}
	return kernel.Outcome{}
}

func cells(sources ...string) *notebook.Notebook {
	nb := notebook.New()
	for _, s := range sources {
		kind := notebook.Code
		if text, ok := strings.CutPrefix(s, "# "); ok {
			kind, s = notebook.Markdown, text
		}
		nb.Add(kind, s)
	}
	return nb
}

func run(t *testing.T, nb *notebook.Notebook, opts notebook.Options) *notebook.Report {
	t.Helper()
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	return notebook.Run(ctx, nb, &scripted{cancel: cancel}, opts)
}

// shown lists what a cell shows in one line each.
func shown(c *notebook.Cell) []string {
	var list []string
	for _, o := range c.Outputs {
		switch o.Kind {
		case notebook.Stream:
			list = append(list, o.Name+": "+o.Text)
		case notebook.Fault:
			list = append(list, "fault "+o.Fault+": "+o.Text)
		case notebook.Result:
			list = append(list, fmt.Sprintf("result %d: %v", o.Count, o.Data["text/plain"]))
		default:
			list = append(list, fmt.Sprintf("display: %v", o.Data["text/plain"]))
		}
	}
	return list
}

func TestRunCollects(t *testing.T) {
	for _, c := range []struct {
		name    string
		sources []string
		want    [][]string
	}{
		{"streams join while none comes between", []string{"out a\nout b\nerr c\nout d"}, [][]string{{"stdout: a\nb\n", "stderr: c\n", "stdout: d\n"}}},
		{"results carry the count", []string{"", "result x", "result y"}, [][]string{nil, {"result 1: x"}, {"result 2: y"}}},
		{"an update reaches an earlier cell", []string{"place v\nplace w", "place v", "fill v"},
			[][]string{{"display: filled by cell 3", "display: empty"}, {"display: filled by cell 3"}, nil}},
		{"an update for nobody is dropped", []string{"fill v"}, [][]string{nil}},
		{"clear now", []string{"out a\nclear\nout b"}, [][]string{{"stdout: b\n"}}},
		{"clear when the next comes", []string{"out a\nclearlater\nout b\nout c"}, [][]string{{"stdout: b\nc\n"}}},
		{"clear with nothing after it", []string{"out a\nclearlater"}, [][]string{{"stdout: a\n"}}},
		{"a failure ends the run", []string{"out a\nfail no", "out b"}, [][]string{{"stdout: a\n", "fault BadValue: cell 1, line 1: no"}, nil}},
		{"not UTF-8", []string{"odd"}, [][]string{{"display: a\uFFFDb"}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			nb := cells(c.sources...)
			run(t, nb, notebook.Options{})
			for i, want := range c.want {
				if diff := cmp.Diff(want, shown(nb.Cells[i])); diff != "" {
					t.Errorf("cell at %d (-want +got):\n%s", i, diff)
				}
			}
		})
	}
}

func TestRunReports(t *testing.T) {
	nb := cells("# title", "\n  a := 1\n", "  \n", "out b\nfail wrong", "out c")
	nb.Cells[4].Outputs = []*notebook.Output{{Kind: notebook.Stream, Name: "stdout", Text: "of an earlier run"}}
	nb.Cells[4].Count = 9
	var begun, ended []string
	line := func(c notebook.CellReport) string {
		return fmt.Sprintf("%d/%d at %d %q %s", c.Number, c.Of, c.Index, c.First, c.Status)
	}
	report := run(t, nb, notebook.Options{
		Begin: func(c notebook.CellReport) { begun = append(begun, line(c)) },
		Cell:  func(c notebook.CellReport) { ended = append(ended, line(c)) },
	})
	if diff := cmp.Diff([]string{`1/3 at 1 "a := 1" not run`, `2/3 at 3 "out b" not run`}, begun); diff != "" {
		t.Errorf("begun (-want +got):\n%s", diff)
	}
	if diff := cmp.Diff([]string{`1/3 at 1 "a := 1" done`, `2/3 at 3 "out b" failed`}, ended); diff != "" {
		t.Errorf("ended (-want +got):\n%s", diff)
	}
	if report.Failed == nil || report.Failed.Number != 2 || report.Failed.Fault.Name != "BadValue" || report.Interrupted {
		t.Errorf("report %+v", report)
	}
	if got := report.Cells[2].Status; got != notebook.NotRun {
		t.Errorf("the cell after the failure is %v", got)
	}
	if c := nb.Cells[4]; c.Outputs != nil || c.Count != 0 {
		t.Errorf("the cell that did not run still shows %v, count %d", shown(c), c.Count)
	}
}

func TestRunIsInterrupted(t *testing.T) {
	nb := cells("out a", "interrupt", "out c")
	finished := false
	report := run(t, nb, notebook.Options{Finish: func(kernel.Sink) { finished = true }})
	if !report.Interrupted || report.Failed == nil || report.Failed.Status != notebook.Interrupted || !finished {
		t.Errorf("report %+v, finished %v", report, finished)
	}
	if nb.Cells[2].Count != 0 {
		t.Error("the run went on")
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	engine := &scripted{cancel: cancel}
	if report := notebook.Run(ctx, nb, engine, notebook.Options{}); !report.Interrupted || len(engine.ran) != 0 {
		t.Errorf("cancelled before the start: %+v, ran %d cells", report, len(engine.ran))
	}
	if nb.Cells[0].Outputs != nil {
		t.Error("outputs of the run before are still there")
	}
}

func TestFinishFillsAPlace(t *testing.T) {
	for _, last := range []string{"out x", "fail x"} {
		nb := cells("place verdicts", last)
		run(t, nb, notebook.Options{Finish: func(out kernel.Sink) {
			out(kernel.Output{Kind: kernel.Update, ID: "verdicts", Data: map[string]any{"text/plain": "2 of 2"}})
		}})
		if diff := cmp.Diff([]string{"display: 2 of 2"}, shown(nb.Cells[0])); diff != "" {
			t.Errorf("after %q (-want +got):\n%s", last, diff)
		}
	}
}

func TestOutputAfterTheRunIsNotTaken(t *testing.T) {
	nb := cells("out a")
	var late kernel.Sink
	run(t, nb, notebook.Options{Finish: func(out kernel.Sink) { late = out }})
	late(kernel.Output{Kind: kernel.Stream, Name: "stdout", Text: "late\n"})
	if diff := cmp.Diff([]string{"stdout: a\n"}, shown(nb.Cells[0])); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

func TestOutputFromSeveralGoroutines(t *testing.T) {
	nb := cells("x")
	var wait sync.WaitGroup
	run(t, nb, notebook.Options{Finish: func(out kernel.Sink) {
		for range 8 {
			wait.Go(func() {
				for range 100 {
					out(kernel.Output{Kind: kernel.Stream, Name: "stdout", Text: "."})
					out(kernel.Output{Kind: kernel.Display, ID: "d", Data: map[string]any{"text/plain": "x"}})
					out(kernel.Output{Kind: kernel.Update, ID: "d", Data: map[string]any{"text/plain": "y"}})
				}
			})
		}
		wait.Wait()
	}})
	dots := 0
	for _, line := range shown(nb.Cells[0]) {
		dots += strings.Count(line, ".")
	}
	if dots != 800 {
		t.Errorf("%d of 800 texts arrived", dots)
	}
}

func TestCellsReachTheEngineWithIDAndNumber(t *testing.T) {
	nb := cells("# t", "out a", "out b")
	nb.Cells[1].ID = "mine"
	engine := &scripted{}
	notebook.Run(t.Context(), nb, engine, notebook.Options{})
	want := []kernel.Cell{{ID: "mine", Number: 1, Source: "out a"}, {ID: nb.Cells[2].ID, Number: 2, Source: "out b"}}
	if diff := cmp.Diff(want, engine.ran); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

func ranNotebook(t *testing.T) *notebook.Notebook {
	t.Helper()
	nb := cells("# Überschrift", "place v\nout a\nerr b", "odd", "result x\u2028y\nfill v\nfail z")
	run(t, nb, notebook.Options{})
	return nb
}

func TestRunTwiceSameBytes(t *testing.T) {
	first, err := ranNotebook(t).IPYNB()
	if err != nil {
		t.Fatal(err)
	}
	validate(t, first)
	for range 20 {
		again, err := ranNotebook(t).IPYNB()
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(first, again) {
			t.Fatal("two runs of the same notebook differ")
		}
	}
	nb, err := notebook.ParseIPYNB("x.ipynb", first)
	if err != nil {
		t.Fatal(err)
	}
	run(t, nb, notebook.Options{})
	again, err := nb.IPYNB()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(first), string(again)); diff != "" {
		t.Errorf("a run of the written notebook differs (-first +again):\n%s", diff)
	}
}

func TestRunNamesKernelAndLanguage(t *testing.T) {
	nb := cells("out a")
	nb.Metadata["authors"] = "kept"
	run(t, nb, notebook.Options{})
	want := map[string]any{
		"authors":       "kept",
		"kernelspec":    map[string]any{"display_name": "ampturn", "language": "go", "name": "ampturn"},
		"language_info": map[string]any{"name": "go", "version": "1", "mimetype": "text/x-go", "file_extension": ".go", "pygments_lexer": "go"},
	}
	if diff := cmp.Diff(want, nb.Metadata); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

func TestOddValuesCanBeWritten(t *testing.T) {
	nb := cells("odd")
	run(t, nb, notebook.Options{})
	data := nb.Cells[0].Outputs[0].Data
	if data["image/png"] != "AQID" || data["application/x+json"] != "NaN" {
		t.Errorf("got %v", data)
	}
	if _, err := nb.IPYNB(); err != nil {
		t.Error(err)
	}
}
