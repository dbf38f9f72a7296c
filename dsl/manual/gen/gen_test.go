package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// vocabulary is a small one with all that names can be.
const vocabulary = `package v

// Gap is an air gap; see [Leg].
func Gap(length float64) *Part { return nil }

// GapWithUnits is a twin.
func GapWithUnits(u []string, length float64) *Part { return nil }

// Part is a part.
type Part struct{ hidden int }

// As names it.
func (p *Part) As(name string) *Part { return p }

// MIMEBundle shows it.
func (p *Part) MIMEBundle() map[string]any { return nil }

// Reading is what a meter shows.
type Reading struct {
	At string // the winding
}

// Leg is a leg.
const Leg = 1
`

func names(t *testing.T) map[string]*name {
	t.Helper()
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "v.go"), []byte(vocabulary), 0o600); err != nil {
		t.Fatal(err)
	}
	all, err := readNames(dir)
	if err != nil {
		t.Fatal(err)
	}
	return all
}

func TestNames(t *testing.T) {
	all := names(t)
	if len(all) != 4 {
		t.Errorf("names: %v", open(all))
	}
	for key, want := range map[string]string{
		"Gap":     "**Gap** &ensp; `Gap(length float64) *Part`\\\nGap is an air gap; see Leg.\n\n",
		"Part":    "**Part** &ensp; `type Part`\\\nPart is a part.\n\n**Part.As** &ensp; `As(name string) *Part`\\\nAs names it.\n\n",
		"Reading": "**Reading**\n\n```\ntype Reading struct {\n\tAt string // the winding\n}\n```\n\nReading is what a meter shows.\n\n",
		"Leg":     "**Leg** &ensp; `Leg`\\\nLeg is a leg.\n\n",
	} {
		if n := all[key]; n == nil || n.entry() != want {
			t.Errorf("%s:\n%q\nwant\n%q", key, n.entry(), want)
		}
	}
}

func TestChapter(t *testing.T) {
	all := names(t)
	var b book
	if err := b.chapter("# Gaps\n\nA word.\n\n```go\nGap(1)\nGap(2)\n```\n\n```\nplain\n```\n\n@names Gap Part\n", all); err != nil {
		t.Fatal(err)
	}
	b.rest(all)
	data, err := b.ipynb()
	if err != nil {
		t.Fatal(err)
	}
	var nb struct {
		Cells []struct {
			Type   string   `json:"cell_type"`
			Source []string `json:"source"`
		}
	}
	if err := json.Unmarshal(data, &nb); err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, c := range nb.Cells {
		got = append(got, c.Type+": "+strings.Join(c.Source, ""))
	}
	for i, want := range []string{"markdown: ## Gaps\n\nA word.", "code: Gap(1)\nGap(2)", "markdown: ```\nplain\n```", "markdown: **The names of this chapter**\n\n**Gap**", "markdown: ## Further names"} {
		if i >= len(got) || !strings.HasPrefix(got[i], want) {
			t.Fatalf("cell %d:\n%q\nwant\n%q", i+1, got, want)
		}
	}
	if last := got[len(got)-1]; !strings.Contains(last, "**Leg**") || !strings.Contains(last, "**Reading**") || strings.Contains(last, "**Gap**") {
		t.Errorf("what no chapter took: %q", last)
	}
}

func TestChapterRefused(t *testing.T) {
	for text, want := range map[string]string{"@names Gaps": "no name Gaps", "```go\nx": "the fence has no end"} {
		var b book
		if err := b.chapter(text, names(t)); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v, want %q", text, err, want)
		}
	}
}
