package main

import (
	"bytes"
	"context"
	"io"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"ampturn/dsl/manual"
	"ampturn/dsl/start"
	"ampturn/dsl/symbols"
	"ampturn/kernel/batch"
	"ampturn/kernel/notebook"
)

// TestManualRuns runs every block of the manual, and demands that each shows something.
func TestManualRuns(t *testing.T) {
	out, said := runText(t, manual.Name, manual.Notebook)
	for i, c := range out.Cells {
		if c.Kind == notebook.Code && len(c.Outputs) == 0 {
			t.Errorf("cell %d of the manual shows nothing:\n%s", i+1, c.Source)
		}
	}
	if !strings.Contains(said, "written:") {
		t.Error(said)
	}
}

// TestManualNamesAll demands that the manual says something of every name of the vocabulary that is for users.
func TestManualNamesAll(t *testing.T) {
	text := string(manual.Notebook)
	hidden := regexp.MustCompile(`WithUnits$|\.MIME|\.String$`)
	for key := range symbols.Docs() {
		name, ok := strings.CutPrefix(key, "ampturn/dsl.")
		if !ok || hidden.MatchString(name) {
			continue
		}
		owner, member, isMember := strings.Cut(name, ".")
		if !strings.Contains(text, "**"+name+"**") && (!isMember || !strings.Contains(text, "**"+owner+"**") || !strings.Contains(text, member)) {
			t.Errorf("the manual does not have %s; run go generate ./dsl/manual", name)
		}
	}
}

// TestStartingNotebooks runs the notebook of every kind: it opens with its question, ends with verdicts of which none is
// missed, and leaves what nobody checked open, insulation among it.
func TestStartingNotebooks(t *testing.T) {
	for _, kind := range start.Kinds() {
		t.Run(kind, func(t *testing.T) {
			text, _ := start.Like(kind)
			out, said := runText(t, kind+".ipynb", text)
			if first := out.Cells[0]; first.Kind != notebook.Markdown || !regexp.MustCompile(`(?s)^# .*\n\n\*[^*]+\?\*\n`).MatchString(first.Source) {
				t.Errorf("does not open with its question:\n%s", first.Source)
			}
			open := false
			for _, v := range out.Record().Verdicts {
				open = open || v.Status == "OPEN" && strings.Contains(v.What, "insulation")
			}
			if !open || len(out.Record().Verdicts) < 5 || !regexp.MustCompile(`\d PASS, \d OPEN`).MatchString(said) {
				t.Errorf("verdicts: %s %+v", said, out.Record().Verdicts)
			}
		})
	}
}

// runText runs a notebook that must not fail, and reads what it left.
func runText(t *testing.T, name string, text []byte) (*notebook.Notebook, string) {
	t.Helper()
	var said bytes.Buffer
	s := settings()
	s.Out, s.Report, s.Trouble = t.TempDir(), &said, &said
	if code := batch.RunText(context.Background(), name, text, s); code != batch.Fine {
		t.Fatalf("ended with %d\n%s", code, said.String())
	}
	out, err := notebook.Read(s.Out + "/" + name)
	if err != nil {
		t.Fatal(err)
	}
	return out, said.String()
}

// TestPagesInBrowser looks, as at the examples, at the manual, the starting notebooks and a page of what moved.
func TestPagesInBrowser(t *testing.T) {
	out := t.TempDir()
	s := settings()
	s.Out, s.Report, s.Trouble = out, io.Discard, io.Discard
	ctx := context.Background()
	batch.RunText(ctx, manual.Name, manual.Notebook, s)
	t.Run("manual", func(t *testing.T) { look(t, filepath.Join(out, "manual.html"), 60) })
	for _, kind := range start.Kinds() {
		text, _ := start.Like(kind)
		batch.RunText(ctx, kind+".ipynb", text, s)
		t.Run(kind, func(t *testing.T) { look(t, filepath.Join(out, kind+".html"), 12) })
	}
	text, _ := start.Like("flyback")
	batch.RunText(ctx, "revised.ipynb", bytes.ReplaceAll(text, []byte("Gap(1.4*mm)"), []byte("Gap(1.3*mm)")), s)
	if code := batch.Compare(filepath.Join(out, "flyback.ipynb"), filepath.Join(out, "revised.ipynb"), s); code != batch.Differ {
		t.Fatalf("a gap that was changed moves nothing: %d", code)
	}
	t.Run("moved", func(t *testing.T) { look(t, filepath.Join(out, "flyback-revised.html"), 6) })
}
