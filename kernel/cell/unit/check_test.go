package unit_test

import (
	"go/ast"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"golang.org/x/tools/txtar"
)

// cases reads a file of cases: name and cells.
func cases(t testing.TB, file string) []txtar.File {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("../../../testdata/cells/units", file))
	if err != nil {
		t.Fatal(err)
	}
	return txtar.Parse(text).Files
}

// cells splits a case.
func cells(f txtar.File) []string { return strings.Split(string(f.Data), "---\n") }

// TestWrong demands a refusal at each mark, at its place and with its text, and no other.
func TestWrong(t *testing.T) {
	all := cases(t, "wrong.txtar")
	if len(all) < 80 {
		t.Errorf("%d cases, want 80", len(all))
	}
	for _, c := range all {
		t.Run(c.Name, func(t *testing.T) {
			n := newNotebook(t)
			marks := 0
			for _, cell := range cells(c) {
				r := n.run(cell)
				for i, line := range strings.Split(cell, "\n") {
					for _, mark := range strings.Split(line, "//!")[1:] {
						marks++
						place, text, _ := strings.Cut(strings.TrimSpace(mark), " => ")
						n.demand(r, i+1, place, text)
					}
				}
				for _, d := range r.Diagnostics {
					if !strings.HasPrefix(d.Text, "seen: ") {
						t.Errorf("line %d: not expected: %s", n.fset.Position(d.Pos).Line, d.Text)
					}
				}
			}
			if marks == 0 {
				t.Error("no mark")
			}
		})
	}
}

// demand looks for a refusal of a line and marks it as seen.
func (n *notebook) demand(r checked, line int, place, text string) {
	n.t.Helper()
	for i, d := range r.Diagnostics {
		if n.fset.Position(d.Pos).Line == line && n.quote(d.Pos, d.End) == place && strings.Contains(d.Text, text) {
			r.Diagnostics[i].Text = "seen: " + d.Text
			return
		}
	}
	n.t.Errorf("line %d: no refusal of %q with %q", line, place, text)
	for _, d := range r.Diagnostics {
		n.t.Logf("line %d: %q: %s", n.fset.Position(d.Pos).Line, n.quote(d.Pos, d.End), d.Text)
	}
}

// TestRight demands silence, and the unit text of each marked expression.
func TestRight(t *testing.T) {
	all := cases(t, "right.txtar")
	if len(all) < 80 {
		t.Errorf("%d cases, want 80", len(all))
	}
	for _, c := range all {
		t.Run(c.Name, func(t *testing.T) {
			n := newNotebook(t)
			for _, cell := range cells(c) {
				r := n.run(cell)
				for _, d := range r.Diagnostics {
					t.Errorf("line %d: %s", n.fset.Position(d.Pos).Line, d.Text)
				}
				for i, line := range strings.Split(cell, "\n") {
					if _, want, ok := strings.Cut(line, "//="); ok {
						n.shown(r, i+1, strings.TrimSpace(want))
					}
				}
			}
		})
	}
}

// shown demands the unit text of the expression statement of a line.
func (n *notebook) shown(r checked, line int, want string) {
	n.t.Helper()
	for _, s := range r.stmts {
		if e, ok := s.(*ast.ExprStmt); ok && n.fset.Position(e.Pos()).Line == line {
			if got := r.Text(e.X); got != want {
				n.t.Errorf("line %d: unit %q, want %q", line, got, want)
			}
			return
		}
	}
	n.t.Errorf("line %d: no expression statement", line)
}
