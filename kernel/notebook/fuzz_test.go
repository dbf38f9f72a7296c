package notebook_test

import (
	"bytes"
	"os"
	"testing"

	"github.com/google/go-cmp/cmp"

	"ampturn/kernel/notebook"
)

// FuzzIPYNB demands that no file makes the reader panic, and that what it reads is written so that it reads back as
// the same bytes.
func FuzzIPYNB(f *testing.F) {
	if data, err := os.ReadFile(layout); err == nil {
		f.Add(data)
	}
	f.Add([]byte(`{"nbformat":4,"nbformat_minor":2,"metadata":{},"cells":[{"cell_type":"raw","metadata":{},"source":["a"]}]}`))
	f.Add([]byte(`{"cells":{"a":[{"b":"\ud800"}]}}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		nb, err := notebook.ParseIPYNB("x.ipynb", data)
		if err != nil {
			return
		}
		first, err := nb.IPYNB()
		if err != nil {
			t.Fatal(err)
		}
		nb, err = notebook.ParseIPYNB("x.ipynb", first)
		if err != nil {
			t.Fatalf("what was written is refused: %v\n%s", err, first)
		}
		again, err := nb.IPYNB()
		if err != nil || !bytes.Equal(first, again) {
			t.Fatalf("written again it differs (%v):\n%s", err, cmp.Diff(string(first), string(again)))
		}
	})
}

// FuzzText does the same for percent texts.
func FuzzText(f *testing.F) {
	f.Add([]byte(sample))
	f.Add([]byte("// %% {\"a\": 1} [raw]\n// \\\\%%\n"))
	f.Add([]byte("//go:build ampturn\n//ampturn:metadata {\"a\":{\"b\":1.50}}\n\n// %% x [markdown] {}\n\n\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		nb, err := notebook.ParseText("x.go", data)
		if err != nil {
			return
		}
		text, err := nb.Text()
		if err != nil {
			t.Fatal(err)
		}
		back, err := notebook.ParseText("x.go", text)
		if err != nil {
			t.Fatalf("what was written is refused: %v\n%s", err, text)
		}
		if diff := cmp.Diff(nb, back); diff != "" {
			t.Fatalf("(-read +read again):\n%s\n%s", diff, text)
		}
	})
}
