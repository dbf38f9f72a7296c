package notebook_test

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/santhosh-tekuri/jsonschema/v6"

	"ampturn/kernel/notebook"
)

// layout is a file in the form that nbformat's own writer gives it (made with nbformat 5.11.1), every kind of cell,
// output and text in it.
const layout = "testdata/layout.ipynb"

func TestLayoutIsThatOfNbformat(t *testing.T) {
	want, err := os.ReadFile(layout)
	if err != nil {
		t.Fatal(err)
	}
	nb, err := notebook.Read(layout)
	if err != nil {
		t.Fatal(err)
	}
	got, err := nb.IPYNB()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(want), string(got)); diff != "" {
		t.Errorf("read and written differ (-file +written):\n%s", diff)
	}
}

func TestReadGivesWholeTexts(t *testing.T) {
	nb, err := notebook.Read(layout)
	if err != nil {
		t.Fatal(err)
	}
	code := nb.Cells[1]
	data := code.Outputs[1].Data
	for _, c := range []struct{ name, got, want string }{
		{"source", code.Source, "a := 0.6*mm\na"},
		{"stream", code.Outputs[0].Text, "one\ntwo\n\fthree\u2028four"},
		{"text/plain", data["text/plain"].(string), "x\ny"},
		{"image/svg+xml", data["image/svg+xml"].(string), "<svg>\n</svg>"},
		{"fault", code.Outputs[3].Fault + "|" + code.Outputs[3].Text, "BadValue|cell 1, line 1: no"},
		{"raw", nb.Cells[2].Source, "raw\r\ntext\n"},
		{"id", nb.Cells[0].ID, "intro"},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %q, want %q", c.name, c.got, c.want)
		}
	}
	if lines, ok := data["application/vnd.x+json"].([]any)[0].([]any); !ok || len(lines) != 2 {
		t.Errorf("a list of texts inside JSON was joined: %v", data["application/vnd.x+json"])
	}
}

func TestKeepsWhatItDoesNotKnow(t *testing.T) {
	file := `{"nbformat":4,"nbformat_minor":6,"metadata":{"signature":"s"},"later":{"a":[1.50,2]},"cells":[
	 {"cell_type":"code","id":"a","metadata":{"collapsed":true},"source":[],"execution_count":null,"extra":7,
	  "outputs":[{"output_type":"stream","name":"stdout","text":"x","more":{"b":null}}]}]}`
	nb, err := notebook.ParseIPYNB("a.ipynb", []byte(file))
	if err != nil {
		t.Fatal(err)
	}
	out, err := nb.IPYNB()
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"signature": "s"`, `"later": {`, `1.50`, `"collapsed": true`, `"extra": 7`, `"more": {`, `"nbformat_minor": 6`} {
		if !strings.Contains(string(out), want) {
			t.Errorf("%s is lost:\n%s", want, out)
		}
	}
}

func TestOldMinorsGetTheSameIDsEachTime(t *testing.T) {
	for _, minor := range []string{"0", "1", "2", "3", "4"} {
		file := `{"nbformat":4,"nbformat_minor":` + minor + `,"metadata":{},"cells":[
		 {"cell_type":"markdown","metadata":{},"source":"same"},
		 {"cell_type":"markdown","metadata":{},"source":["sa","me"]},
		 {"cell_type":"code","metadata":{},"source":"same","outputs":[],"execution_count":null}]}`
		first, second := upgrade(t, file), upgrade(t, file)
		if !bytes.Equal(first, second) {
			t.Errorf("4.%s: two readings differ", minor)
		}
		validate(t, first)
	}
}

func TestIDsThatCannotStayAreReplaced(t *testing.T) {
	file := `{"nbformat":4,"nbformat_minor":5,"metadata":{},"cells":[
	 {"cell_type":"raw","id":"twice","metadata":{},"source":"a"},
	 {"cell_type":"raw","id":"twice","metadata":{},"source":"b"},
	 {"cell_type":"raw","id":"no blanks","metadata":{},"source":"c"}]}`
	out := upgrade(t, file)
	validate(t, out)
	nb, err := notebook.ParseIPYNB("x.ipynb", out)
	if err != nil {
		t.Fatal(err)
	}
	if nb.Cells[0].ID != "twice" || nb.Cells[1].ID == "twice" || nb.Cells[2].ID == "no blanks" {
		t.Errorf("ids are %q, %q, %q", nb.Cells[0].ID, nb.Cells[1].ID, nb.Cells[2].ID)
	}
}

func upgrade(t *testing.T, file string) []byte {
	t.Helper()
	nb, err := notebook.ParseIPYNB("x.ipynb", []byte(file))
	if err != nil {
		t.Fatal(err)
	}
	out, err := nb.IPYNB()
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func TestNotANotebook(t *testing.T) {
	const head = `{"nbformat":4,"nbformat_minor":5,"metadata":{},"cells":[`
	// The sign ¦ stands at the byte that the message must name; it is taken out before reading.
	for _, c := range []struct{ name, file, want string }{
		{"text", "¦hello", "expected a value for the notebook"},
		{"list", "¦[1]", "expected '{' at the start"},
		{"version 3", `{"nbformat":¦3}`, "it is of nbformat 3; save it once with a front end that writes nbformat 4"},
		{"version 5", `{"nbformat":¦5}`, "it is of nbformat 5, which is newer than 4"},
		{"no version", `¦{"metadata":{}}`, `it has no "nbformat"`},
		{"version text", `{"nbformat":¦"4"}`, `"nbformat" is no whole number`},
		{"no cells", `¦{"nbformat":4,"nbformat_minor":5,"metadata":{}}`, `the notebook has no "cells"`},
		{"cells no list", `{"nbformat":4,"nbformat_minor":5,"metadata":{},"cells":¦{}}`, `"cells" of the notebook is no list`},
		{"comma", head + `{"cell_type":"code","outputs":[] ¦"x":1}]}`, "expected ',' or '}' after the outputs of cell 1"},
		{"half", head + `{"cell_type":"code","outputs":[{"text":"ab¦`, "the file ends inside a text in output 1 of cell 1"},
		{"half list", head + `{"cell_type":"raw"}¦`, "the file ends, expected ',' or ']' after cell 1"},
		{"cut name", head + `{"cell_type"¦`, "the file ends, expected ':' after the name of the cell_type of cell 1"},
		{"trailing comma", head + `],¦}`, `expected a name in '"' in the notebook`},
		{"more", head + `]} ¦x`, "expected the end of the file after the notebook"},
		{"no kind", head + `¦{"metadata":{},"source":""}]}`, `cell 1 has no "cell_type"`},
		{"wrong kind", head + `{"cell_type":¦"heading","metadata":{},"source":""}]}`,
			`the cell_type of cell 1 is "heading"; it can be code, markdown or raw`},
		{"source", head + `{"cell_type":"raw","metadata":{},"source":¦[1]}]}`,
			`"source" of cell 1 is neither a text nor a list of lines`},
		{"output kind", head + `{"cell_type":"code","metadata":{},"source":"","outputs":[{"output_type":¦"pyout"}]}]}`,
			`output 1 of cell 1 is of the unknown type "pyout"`},
		{"count", head + `{"cell_type":"code","metadata":{},"source":"","outputs":[],"execution_count":¦1.5}]}`,
			`"execution_count" of cell 1 is neither a whole number from 0 nor null`},
		{"not UTF-8", head + "{\"cell_type\":\"raw\",\"source\":\"a¦\xff\"", "a text that is not UTF-8 in the source of cell 1"},
		{"line break", head + "{\"cell_type\":\"raw\",\"source\":\"a¦\n", "a line break or control sign inside a text in the source of cell 1"},
		{"escape", head + `{"source":¦"\q"}`, "a text with a wrong escape in the source of cell 1"},
		{"number", `{"nbformat":¦04}`, `"04" is no number in the nbformat of the notebook`},
		{"cells keyed", `{"cells":{"a":¦tru}}`, "expected a value for the cells"},
	} {
		t.Run(c.name, func(t *testing.T) {
			before, after, _ := strings.Cut(c.file, "¦")
			_, err := notebook.ParseIPYNB("design.ipynb", []byte(before+after))
			var bad *notebook.FormatError
			if !errors.As(err, &bad) {
				t.Fatalf("got %v, want a format error", err)
			}
			if want := fmt.Sprintf("design.ipynb is not a notebook: byte %d, %s", len(before), c.want); err.Error() != want {
				t.Errorf("\n got %s\nwant %s", err, want)
			}
		})
	}
	if _, err := notebook.ParseIPYNB("a.ipynb", []byte(" \n")); err == nil || err.Error() != "a.ipynb is not a notebook: the file is empty" {
		t.Errorf("an empty file: %v", err)
	}
}

func TestDeepNestingIsRefused(t *testing.T) {
	_, err := notebook.ParseIPYNB("d.ipynb", []byte(strings.Repeat("[", 1e6)))
	if err == nil || !strings.Contains(err.Error(), "nested more than 500 deep") {
		t.Errorf("got %v", err)
	}
}

func TestReadSaysWhyNot(t *testing.T) {
	_, err := notebook.Read(filepath.Join(t.TempDir(), "none.ipynb"))
	if err == nil || !strings.HasSuffix(err.Error(), "none.ipynb cannot be read: no such file or directory") {
		t.Errorf("got %v", err)
	}
}

func validate(t *testing.T, file []byte) {
	t.Helper()
	compiler := jsonschema.NewCompiler()
	schema, err := compiler.Compile("testdata/nbformat45.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	value, err := jsonschema.UnmarshalJSON(bytes.NewReader(file))
	if err != nil {
		t.Fatal(err)
	}
	if err := schema.Validate(value); err != nil {
		t.Errorf("not nbformat 4.5: %v", err)
	}
}

func TestSchemaRefuses(t *testing.T) {
	schema, err := jsonschema.NewCompiler().Compile("testdata/nbformat45.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	var file map[string]any
	data, err := os.ReadFile(layout)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	if err := schema.Validate(file); err != nil {
		t.Fatalf("the layout file: %v", err)
	}
	delete(file["cells"].([]any)[1].(map[string]any), "outputs")
	if schema.Validate(file) == nil {
		t.Error("a code cell without outputs passed")
	}
}

// TestNbformatAgrees reads what we write with nbformat itself and demands the same bytes from its writer.
func TestNbformatAgrees(t *testing.T) {
	python := os.Getenv("AMPTURN_PYTHON")
	if python == "" {
		t.Skip("AMPTURN_PYTHON names no Python that has nbformat")
	}
	if exec.Command(python, "-c", "import nbformat").Run() != nil {
		t.Skipf("%s has no nbformat", python)
	}
	nb := ranNotebook(t)
	path := filepath.Join(t.TempDir(), "ran.ipynb")
	if err := nb.Write(path); err != nil {
		t.Fatal(err)
	}
	const script = `
import nbformat, sys
text = open(sys.argv[1], encoding="utf-8", newline="").read()
nb = nbformat.reads(text, as_version=4)
nbformat.validate(nb)
again = nbformat.writes(nb)
assert again.rstrip("\n") == text.rstrip("\n"), "the layouts differ"
`
	if out, err := exec.Command(python, "-c", script, path).CombinedOutput(); err != nil {
		t.Errorf("nbformat: %v\n%s", err, out)
	}
}
