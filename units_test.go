package main

import (
	"context"
	"fmt"
	"os"
	"strings"
	"testing"

	"golang.org/x/tools/txtar"

	"ampturn/kernel"
)

// TestUnitsOfVocabulary runs cells in the whole vocabulary. Those with a mark //! must be refused before anything runs, with
// that text; the others must pass and show, for each mark //=, that text. Cases "on L1" begin with the cell "setup".
func TestUnitsOfVocabulary(t *testing.T) {
	text, err := os.ReadFile("testdata/cells/units/vocabulary.txtar")
	if err != nil {
		t.Fatal(err)
	}
	files := txtar.Parse(text).Files
	setup := ""
	for _, c := range files {
		if c.Name == "setup" {
			setup = string(c.Data)
			continue
		}
		cells := strings.Split(string(c.Data), "---\n")
		if strings.HasPrefix(c.Name, "on L1: ") {
			cells = append([]string{setup}, cells...)
		}
		t.Run(c.Name, func(t *testing.T) {
			engine, err := newEngine()
			if err != nil {
				t.Fatal(err)
			}
			for i, cell := range cells {
				runMarked(t, engine, i+1, cell)
			}
		})
	}
}

// runMarked runs one cell and compares what it says with its marks.
func runMarked(t *testing.T, engine kernel.Engine, number int, cell string) {
	t.Helper()
	var shown []string
	var stderr strings.Builder
	out := engine.Run(context.Background(), kernel.Cell{ID: fmt.Sprint(number), Number: number, Source: cell}, func(o kernel.Output) {
		if o.Kind == kernel.Stream && o.Name == "stderr" {
			stderr.WriteString(o.Text)
		}
		if s, ok := o.Data["text/plain"].(string); ok {
			shown = append(shown, s)
		}
	})
	var refusals, values []string
	for i, line := range strings.Split(cell, "\n") {
		if _, mark, ok := strings.Cut(line, "//!"); ok {
			refusals = append(refusals, fmt.Sprintf("cell %d, line %d: %s", number, i+1, strings.TrimSpace(mark)))
		}
		if _, mark, ok := strings.Cut(line, "//="); ok {
			values = append(values, strings.TrimSpace(mark))
		}
	}
	switch {
	case len(refusals) > 0 && out.Fault == nil:
		t.Errorf("not refused: %s", refusals[0])
	case len(refusals) > 0 && !strings.HasPrefix(out.Fault.Text, refusals[0]):
		t.Errorf("refused with %q, want %q", out.Fault.Text, refusals[0])
	case len(refusals) == 0 && out.Fault != nil:
		t.Errorf("refused: %s\n%s", out.Fault.Text, cell)
	}
	if len(refusals) == 0 && strings.Contains(stderr.String(), "note:") {
		t.Logf("%s", stderr.String())
	}
	at := 0
	for _, want := range values {
		for at < len(shown) && shown[at] != want {
			at++
		}
		if at == len(shown) {
			t.Errorf("%q is not shown (in order) by %q", want, shown)
			return
		}
	}
}
