package diff_test

import (
	"math/rand"
	"slices"
	"strings"
	"testing"

	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
)

func display(data map[string]any, meta map[string]any) *notebook.Output {
	return &notebook.Output{Kind: notebook.Display, Data: data, Metadata: meta}
}

func plain(s string) *notebook.Output { return display(map[string]any{"text/plain": s}, nil) }

func full(s string, value float64) *notebook.Output {
	return display(map[string]any{"text/plain": s}, map[string]any{"ampturn": map[string]any{"value": value, "unit": ""}})
}

func residual(value float64, unit string) *notebook.Output {
	return display(map[string]any{}, map[string]any{"ampturn": map[string]any{"columns": []any{"what", "value" + unit}, "rows": []any{[]any{"sum", value}}}})
}

// TestOutputs: an empty want is the same; else the first change in words.
func TestOutputs(t *testing.T) {
	for _, c := range []struct {
		name     string
		old, now *notebook.Output
		want     string
	}{
		{"same", plain("L 630 uH"), plain("L 630 uH"), ""},
		{"blanks", plain("L   630 uH"), plain("L 630 uH\n"), ""},
		{"within", plain("1.0000001"), plain("1.0000002"), ""},
		{"beyond", plain("L 630.1 uH"), plain("L 630.2 uH"), "L: saved 630.1, now 630.2"},
		{"word", plain("L 630 uH"), plain("L 630 mH"), `line 1: saved "L 630 uH", now "L 630 mH"`},
		{"name with a digit", plain("L1 630"), plain("L2 630"), `line 1: saved "L1 630", now "L2 630"`},
		{"sign", plain("x -3"), plain("x 3"), "x: saved -3, now 3"},
		{"range of words", plain("1-3"), plain("1-3"), ""},
		{"what rounding leaves of zero", plain("sum 1.562e-16"), plain("sum 0"), ""},
		{"a small quantity in full", display(map[string]any{}, map[string]any{"ampturn": map[string]any{"value": 1e-13, "unit": "F"}}),
			display(map[string]any{}, map[string]any{"ampturn": map[string]any{"value": 1.1e-13, "unit": "F"}}), "value in full: saved 1e-13, now 1.1e-13"},
		{"a residual in full", full("4e-13", 4e-13), full("2e-13", 2e-13), ""},
		{"a residual in a table", residual(4e-13, ""), residual(2e-13, ""), ""},
		{"a small quantity in a table", residual(4e-13, " F"), residual(2e-13, " F"), "row 1, value F in full: saved 4e-13, now 2e-13"},
		{"last place hides nothing", full("9.953 uH", 9.9531e-6), full("9.954 uH", 9.9531e-6), "saved 9.953, now 9.954"},
		{"between two prints", full("9.953 uH", 9.9535e-6), full("9.954 uH", 9.95350000001e-6), ""},
		{"between two prints of the row", display(map[string]any{"text/html": `<td data-value="2.4995e-06">2.499</td>`, "text/plain": "2.499"}, nil),
			display(map[string]any{"text/html": `<td data-value="2.4995000001e-06">2.500</td>`, "text/plain": "2.500"}, nil), ""},
		{"full value in a table", display(map[string]any{"text/html": `<td data-value="2.41e-06">2.410</td>`}, nil),
			display(map[string]any{"text/html": `<td data-value="2.4101e-06">2.410</td>`}, nil), "saved 2.41e-06, now 2.4101e-06"},
		{"coordinate", display(map[string]any{"image/svg+xml": `<path d="M10.01 5L3 3"/>`}, nil), display(map[string]any{"image/svg+xml": `<path d="M10.02 5L3 3"/>`}, nil), ""},
		{"moved line", display(map[string]any{"image/svg+xml": `<path d="M10.01 5L3 3"/>`}, nil), display(map[string]any{"image/svg+xml": `<path d="M10.01 5L3 4"/>`}, nil), "picture, a coordinate: saved 3, now 4"},
		{"other element", display(map[string]any{"image/svg+xml": `<path d="M10 5"/>`}, nil), display(map[string]any{"image/svg+xml": `<line d="M10 5"/>`}, nil), "picture: saved 1 elements"},
		{"bitmap", display(map[string]any{"image/png": "AAAA"}, nil), display(map[string]any{"image/png": "AAAB"}, nil), "image/png: saved"},
		{"forms", display(map[string]any{"text/plain": "a", "text/html": "a"}, nil), plain("a"), "forms: saved"},
		{"kind", &notebook.Output{Kind: notebook.Result, Data: map[string]any{}}, plain("a"), "kind of output"},
		{"stream", &notebook.Output{Kind: notebook.Stream, Name: "stdout", Text: "1"}, &notebook.Output{Kind: notebook.Stream, Name: "stdout", Text: "2"}, "saved 1, now 2"},
		{"fault", &notebook.Output{Kind: notebook.Fault, Fault: "A", Text: "x"}, &notebook.Output{Kind: notebook.Fault, Fault: "B", Text: "x"}, `line 1: saved "A: x", now "B: x"`},
	} {
		changes, _ := diff.Default.Outputs([]*notebook.Output{c.old}, []*notebook.Output{c.now})
		got := ""
		if len(changes) > 0 {
			got = changes[0].String()
		}
		if c.want == "" && got != "" || c.want != "" && !strings.HasPrefix(got, c.want) {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

// TestAnyChangedDigitIsFound changes one digit of one number anywhere in a text of random numbers.
func TestAnyChangedDigitIsFound(t *testing.T) {
	random := rand.New(rand.NewSource(5))
	for range 2000 {
		var b strings.Builder
		for range 5 {
			b.WriteString("gap ")
			for i := range 4 {
				if i == 1 {
					b.WriteByte('.')
				}
				b.WriteByte(byte('1' + random.Intn(9)))
			}
			b.WriteByte(' ')
		}
		old := b.String()
		at := random.Intn(len(old))
		for old[at] < '0' || old[at] > '9' {
			at = random.Intn(len(old))
		}
		digit := byte('0' + (int(old[at]-'0')+1+random.Intn(8))%10)
		now := old[:at] + string(digit) + old[at+1:]
		if changes, n := diff.Default.Outputs([]*notebook.Output{plain(old)}, []*notebook.Output{plain(now)}); (len(changes) != 1 || n != 5) && digit != old[at] {
			t.Fatalf("%q -> %q: %v, %d numbers", old, now, changes, n)
		}
	}
}

func code(id, source string, count int, outputs ...*notebook.Output) *notebook.Cell {
	return &notebook.Cell{Kind: notebook.Code, ID: id, Source: source, Count: count, Outputs: outputs}
}

func TestStale(t *testing.T) {
	good := &notebook.Notebook{Cells: []*notebook.Cell{code("a", "a := 1", 1), code("e", " ", 0), code("b", "a", 7, plain("1"))}}
	if got := diff.Stale(good); len(got) != 0 {
		t.Errorf("a notebook in order: %v", got)
	}
	good.SetRecord(notebook.Record{})
	if got := diff.Stale(good); len(got) != 0 {
		t.Errorf("a notebook as recorded: %v", got)
	}
	good.Cells[2].Source = "a + 0"
	if got := diff.Stale(good); len(got) != 1 || !strings.Contains(got[2][0], "changed after the run") {
		t.Errorf("a cell changed: %v", got)
	}
	good.Cells[2].Outputs = []*notebook.Output{plain("2")} // run again by a front end
	if got := diff.Stale(good); len(got) != 0 {
		t.Errorf("a cell changed and run again: %v", got)
	}
	bad := &notebook.Notebook{Cells: []*notebook.Cell{code("a", "a := 1", 4), code("b", "a", 3), code("c", "a", 0, plain("1")), code("d", "a", 0),
		code("e", "a", 6, &notebook.Output{Kind: notebook.Result, Count: 5, Data: map[string]any{"text/plain": "1"}})}}
	got := diff.Stale(bad)
	for n, want := range map[int]string{2: "before cell 1", 3: "no execution count", 4: "not run", 5: "of run [5]"} {
		if len(got[n]) != 1 || !strings.Contains(got[n][0], want) {
			t.Errorf("cell %d: %v, want %q", n, got[n], want)
		}
	}
}

func TestHidden(t *testing.T) {
	nb := &notebook.Notebook{Cells: []*notebook.Cell{code("a", "2*N", 1), code("b", "if N == 3 {}", 2), code("c", "func f() {}\nN := 3.0", 3)}}
	for fault, want := range map[string]string{
		"cell 1, line 1: undefined: N": "N is set in cell 3, but used in cell 1",
		"cell 1, line 1: undefined: f": "f is set in cell 3, but used in cell 1",
		"cell 1, line 1: undefined: M": "M is set in no cell of the notebook; the cell that set it was changed or deleted",
		"cell 1: length is too long":   "",
	} {
		if got := diff.Hidden(nb, 1, fault); got != want {
			t.Errorf("%s: %q, want %q", fault, got, want)
		}
	}
}

func value(x float64) *float64 { return &x }

func TestRevisions(t *testing.T) {
	revision := func(verdicts []notebook.Verdict, cells ...*notebook.Cell) *notebook.Notebook {
		nb := &notebook.Notebook{Cells: cells}
		nb.SetRecord(notebook.Record{Verdicts: verdicts, Files: []notebook.Named{{Name: "bh.csv", Value: strings.Repeat("a", 64)}}})
		return nb
	}
	shows := func(expression string, x float64) *notebook.Output {
		return display(map[string]any{"text/plain": "x"}, map[string]any{"ampturn": map[string]any{"expression": expression, "value": x, "unit": "H"}})
	}
	table := func(x float64) *notebook.Output {
		return display(map[string]any{"text/plain": "x"}, map[string]any{"ampturn": map[string]any{"expression": "op",
			"columns": []any{"path", "flux Wb"}, "rows": []any{[]any{"core", x}, []any{"left", 2.0}}}})
	}
	old := revision([]notebook.Verdict{
		{What: "L", Value: value(9e-6), Unit: "H", Limit: "at least 8 uH", Margin: value(1e-6), Status: "PASS"},
		{What: "B", Corner: "hot", Value: value(0.3), Unit: "T", Limit: "at most 0.32 T", Status: "PASS"},
		{What: "B", Corner: "cold", Value: value(0.2), Unit: "T", Limit: "at most 0.32 T", Status: "PASS"},
		{What: "gone", Status: "OPEN"},
	}, code("a", "x := 1\ny := 2\nz := 3", 1), code("b", "L()\nM()\nop", 2, shows("L()", 9e-6), shows("M()", 3e-6), table(1)), code("c", "old", 3))
	now := revision([]notebook.Verdict{
		{What: "B", Corner: "hot", Value: value(0.33), Unit: "T", Limit: "at most 0.32 T", Status: "FAIL"},
		{What: "B", Corner: "cold", Value: value(0.2), Unit: "T", Limit: "at most 0.31 T", Status: "PASS"},
		{What: "L", Value: value(9e-6 * (1 + 1e-9)), Unit: "H", Limit: "at least 8 uH", Margin: value(1e-6), Status: "PASS"},
		{What: "new", Status: "OPEN"},
	}, code("a2", "x := 1\ny := 5\nz := 3", 1), code("b", "L()\nM()\nop", 2, shows("L()", 9e-6), shows("M()", 6e-6), table(1.5)))
	if same := diff.Default.Revisions(old, old, nil); !same.None() {
		t.Errorf("a notebook against itself: %+v", same)
	}
	r := diff.Default.Revisions(old, now, nil)
	names := func(list []diff.Moved) []string {
		var all []string
		for _, m := range list {
			all = append(all, strings.Trim(m.Name+": "+m.Old+" -> "+m.New+" "+strings.Join(m.Lines, " "), " "))
		}
		return all
	}
	for _, c := range []struct {
		what      string
		got, want []string
	}{
		{"verdicts", names(r.Verdicts), []string{"B [hot]: 0.3 T PASS -> 0.33 T FAIL", "B [cold]: 0.2 T PASS -> 0.2 T PASS", "new:  -> OPEN", "gone: OPEN ->"}},
		{"values", names(r.Values), []string{"cell 2: M(): 3e-06 H -> 6e-06 H", "cell 2: op, core, flux: 1 Wb -> 1.5 Wb"}},
		{"inputs", names(r.Inputs), []string{"cell 1:  ->  - y := 2 + y := 5", "cell 3:  ->  - old"}},
	} {
		if !slices.Equal(c.got, c.want) {
			t.Errorf("%s:\n%q\nwant\n%q", c.what, c.got, c.want)
		}
	}
	if !strings.Contains(r.Verdicts[1].Note, "limit at most 0.32 T -> at most 0.31 T") {
		t.Errorf("the limit that moved: %q", r.Verdicts[1].Note)
	}
}

// TestProgressIsNoResult: a display that told how far a cell was, which a run without a reader does not show, counts for
// nothing.
func TestProgressIsNoResult(t *testing.T) {
	counted := display(map[string]any{"text/plain": "400 of 400 done"}, map[string]any{"ampturn": map[string]any{"progress": true}})
	if got, _ := diff.Default.Outputs([]*notebook.Output{counted, plain("L 630 uH")}, []*notebook.Output{plain("L 630 uH")}); len(got) > 0 {
		t.Errorf("%v", got)
	}
	if got, _ := diff.Default.Outputs([]*notebook.Output{counted}, []*notebook.Output{plain("L 630 uH")}); len(got) == 0 {
		t.Error("a missing result is not found")
	}
}
