package notebook_test

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"ampturn/kernel/notebook"
)

const sample = `//go:build ampturn

// %% [markdown]
// # L1
//
// Does one core hold?

// %% Bias curve {"tags":["slow"]}
a := 0.6*mm
// a comment
// \%% not a mark


// %% [raw]
// raw
`

func TestTextReads(t *testing.T) {
	nb, err := notebook.ParseText("a.go", []byte(sample))
	if err != nil {
		t.Fatal(err)
	}
	type cell struct {
		Kind     notebook.Kind
		Source   string
		Metadata map[string]any
	}
	want := []cell{
		{notebook.Markdown, "# L1\n\nDoes one core hold?", map[string]any{}},
		{notebook.Code, "a := 0.6*mm\n// a comment\n// %% not a mark\n", map[string]any{"title": "Bias curve", "tags": []any{"slow"}}},
		{notebook.Raw, "raw", map[string]any{}},
	}
	var got []cell
	for _, c := range nb.Cells {
		got = append(got, cell{c.Kind, c.Source, c.Metadata})
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
	out, err := nb.Text()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(sample, string(out)); diff != "" {
		t.Errorf("written again (-want +got):\n%s", diff)
	}
}

func TestTextFormsThatAreRead(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"without the first line", "// %%\na\n", []string{"code:a"}},
		{"marks without blanks before", "//%%\na\n//  %% [md]\n// b\n", []string{"code:a", "markdown:b"}},
		{"code before the first mark", "\na\n\n// %%\nb\n", []string{"code:a", "code:b"}},
		{"only the first line", "//go:build ampturn\n", nil},
		{"no mark but the first line", "//go:build ampturn\n\na\n", []string{"code:a"}},
		{"no line break at the end", "// %%\na", []string{"code:a"}},
		{"line ends of another system", "//go:build ampturn\r\n\r\n// %% [markdown]\r\n// a\r\n//\r\n// b\r\n", []string{"markdown:a\n\nb"}},
		{"byte order mark", "\uFEFF// %%\na\n", []string{"code:a"}},
		{"text without slashes", "// %% [markdown]\na\n//b\n", []string{"markdown:a\nb"}},
		{"a word that is no mark", "// %%\n// %%a\n", []string{"code:// %%a"}},
		{"empty cells", "// %%\n\n// %%\n", []string{"code:", "code:"}},
		{"brackets in a title", "// %% [a] x {b}\n1\n", []string{"code:1"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			nb, err := notebook.ParseText("a.go", []byte(c.text))
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, c := range nb.Cells {
				got = append(got, string(c.Kind)+":"+c.Source)
			}
			if diff := cmp.Diff(c.want, got); diff != "" {
				t.Errorf("(-want +got):\n%s", diff)
			}
		})
	}
}

func TestTextRefuses(t *testing.T) {
	for _, c := range []struct{ name, text, want string }{
		{"Go source", "package main\n", `a.go is not a notebook: no line of it is a cell mark "// %%"`},
		{"not UTF-8", "// %%\nab\xff", "a.go is not a notebook: byte 8, a sign that is not UTF-8"},
		{"metadata", "//go:build ampturn\n//ampturn:metadata [1]\n", "a.go is not a notebook: the line //ampturn:metadata does not hold one JSON object"},
	} {
		_, err := notebook.ParseText("a.go", []byte(c.text))
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: got %v, want %s", c.name, err, c.want)
		}
	}
	nb := notebook.New()
	nb.Add(notebook.Markdown, "x").Attachments = map[string]any{"p.png": map[string]any{"image/png": "AAAA"}}
	if _, err := nb.Text(); err == nil || !strings.Contains(err.Error(), "cell 1 carries pictures of its own") {
		t.Errorf("attachments: got %v", err)
	}
}

// TestTextLosesNothing writes random cells as text and reads them back: kinds, sources and metadata are the same.
func TestTextLosesNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		nb := notebook.New()
		piece := rapid.SampledFrom([]string{"a := 1", "// %%", "//%%", "// \\%% x", "//", "", " ", "%%", "\\%%", "\n", "\n\n", "\r", "[markdown]", "µ", "// %% {\"a\":1}", "\t// %%"})
		for range rapid.IntRange(0, 5).Draw(t, "cells") {
			kind := rapid.SampledFrom([]notebook.Kind{notebook.Code, notebook.Markdown, notebook.Raw}).Draw(t, "kind")
			c := nb.Add(kind, strings.Join(rapid.SliceOfN(piece, 0, 6).Draw(t, "source"), rapid.SampledFrom([]string{"", "\n"}).Draw(t, "joint")))
			if rapid.Bool().Draw(t, "titled") {
				c.Metadata["title"] = rapid.SampledFrom([]string{"x", "a b", "[markdown]", "{}", " x", "x\ny", "", "a\\b", "µ", "a\u00a0"}).Draw(t, "title")
			}
			if rapid.Bool().Draw(t, "tagged") {
				c.Metadata["tags"] = []any{rapid.String().Draw(t, "tag")}
			}
		}
		if rapid.Bool().Draw(t, "described") {
			nb.Metadata["authors"] = []any{"<a> & b"}
		}
		text, err := nb.Text()
		if err != nil {
			t.Fatal(err)
		}
		back, err := notebook.ParseText("x.go", text)
		if err != nil {
			t.Fatalf("%v\n%s", err, text)
		}
		if diff := cmp.Diff(nb, back); diff != "" {
			t.Fatalf("(-written +read):\n%s\n%s", diff, text)
		}
	})
}

func TestManyEqualCells(t *testing.T) {
	nb, err := notebook.ParseText("a.go", []byte(strings.Repeat("// %%\n", 50_000)))
	if err != nil {
		t.Fatal(err)
	}
	ids := map[string]bool{}
	for _, c := range nb.Cells {
		ids[c.ID] = true
	}
	if len(ids) != 50_000 {
		t.Errorf("%d ids for 50000 equal cells", len(ids))
	}
}
