package main

import (
	"os"
	"strings"
	"testing"

	"ampturn/dsl/review"
)

// TestReadmeCell runs the cell that a reader meets first: it must work as printed, and hold its limit.
func TestReadmeCell(t *testing.T) {
	text, err := os.ReadFile("README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, found := strings.Cut(string(text), "```go\n")
	cell, _, closed := strings.Cut(rest, "```")
	if !found || !closed || !strings.Contains(cell, "Limit(") {
		t.Fatal("the README has no cell with a limit")
	}
	e := front(t).Run(cell)
	if e.Status() != "ok" {
		t.Fatalf("the cell fails: %v", e.Reply.Content)
	}
	if got := review.Count(); got.Pass != 1 || got.Fail != 0 {
		t.Errorf("verdicts of the cell: %v", got)
	}
}
