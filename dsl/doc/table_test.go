package doc_test

import (
	"math"
	"strings"
	"testing"

	"ampturn/dsl/doc"
)

func sample() doc.Table {
	return doc.Table{
		Caption: "T1 at 25 degC, main 3.2 A",
		Columns: []doc.Column{{Name: "path"}, {Name: "flux", Unit: "Wb"}, {Name: "share"}},
		Rows: [][]doc.Cell{
			{doc.Text("centre"), doc.Num(48.123456e-6), doc.Num(1)},
			{doc.Text("left <yoke>"), doc.Num(-2.4e-6), doc.Num(0.05)},
			{doc.Text("window"), doc.Num(0)},
		},
		Notes: []string{"beyond the data"},
	}
}

func TestTextAlignsAtThePoint(t *testing.T) {
	want := strings.Join([]string{
		"T1 at 25 degC, main 3.2 A",
		"path         flux (uWb)    share",
		"-----------  ----------  -------",
		"centre           48.12   1.000",
		"left <yoke>      -2.400  0.05000",
		"window            0",
		"note: beyond the data",
	}, "\n")
	if got := sample().Text(); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// Columns that are compared share a prefix: 90 mT beside 1.2 T is read as 0.09 T.
func TestComparedColumnsShareAPrefix(t *testing.T) {
	table := func(beside string) string {
		return doc.Table{Columns: []doc.Column{{Name: "measured", Unit: "T", Beside: beside}, {Name: "law", Unit: "T", Beside: beside}},
			Rows: [][]doc.Cell{{doc.Num(1.2), doc.Num(0.09)}}}.Text()
	}
	if s := table("Br"); !strings.Contains(s, "law (T)") || !strings.Contains(s, "0.09") {
		t.Error(s)
	}
	if s := table(""); !strings.Contains(s, "law (mT)") {
		t.Error(s)
	}
}

func TestHTML(t *testing.T) {
	got := sample().HTML()
	for _, want := range []string{
		`<table class="at">` + "\n" + `<caption>T1 at 25 degC, main 3.2 A</caption>`,
		`<th scope="col" class="num">flux (uWb)</th>`,
		`<td class="num" data-value="4.8123456e-05">48.12` + "\u2007</td>", // the full value stays with the number
		`<td style="text-align:left">left &lt;yoke&gt;</td>`,
		`<p class="note">beyond the data</p>`,
	} {
		if !strings.Contains(got, want) {
			t.Errorf("%q is missing in\n%s", want, got)
		}
	}
}

func TestMetadataIsFull(t *testing.T) {
	m := sample().Metadata()["ampturn"].(map[string]any)
	if got := m["rows"].([]any)[0].([]any)[1]; got != 48.123456e-6 {
		t.Errorf("flux in the metadata: %v", got)
	}
	if got := m["columns"].([]any)[1]; got != "flux Wb" {
		t.Errorf("header in the metadata: %v", got)
	}
}

func TestNumber(t *testing.T) {
	for _, c := range []struct {
		x      float64
		digits int
		want   string
	}{
		{0, 4, "0"}, {1, 4, "1.000"}, {9.9996, 4, "10.00"}, {-0.31415926, 4, "-0.3142"}, {123456.7, 4, "1.235e5"}, {123456, 4, "123456"}, {9999.6, 4, "10000"},
		{1.23456e-5, 4, "1.235e-5"}, {1e7, 3, "1.00e7"}, {math.Inf(-1), 4, "-inf"}, {math.NaN(), 4, "not a number"},
	} {
		if got := doc.Number(c.x, c.digits); got != c.want {
			t.Errorf("Number(%g, %d) = %q, want %q", c.x, c.digits, got, c.want)
		}
	}
}

func TestMixedColumnPrintsEachUnit(t *testing.T) {
	table := doc.Table{Columns: []doc.Column{{Name: "value", Mixed: true}},
		Rows: [][]doc.Cell{{doc.Quantity(630e-6, "H")}, {doc.Quantity(0.32, "T")}}}
	for _, want := range []string{"630 uH", "0.32 T"} {
		if got := table.Text(); !strings.Contains(got, want) {
			t.Errorf("%q is missing in\n%s", want, got)
		}
	}
}

// A reluctance has no prefix: its column is printed in a power of ten, with four digits and the points below each other.
func TestColumnInAPowerOfTen(t *testing.T) {
	table := doc.Table{Columns: []doc.Column{{Name: "gap"}, {Name: "reluctance", Unit: "1/H"}},
		Rows: [][]doc.Cell{{doc.Text("a"), doc.Num(6417345)}, {doc.Text("b"), doc.Num(12751773)}, {doc.Text("c"), doc.Num(417e3)}}}
	want := strings.Join([]string{
		"gap  reluctance (1e6 1/H)",
		"---  --------------------",
		"a                  6.417",
		"b                 12.75",
		"c                  0.4170",
	}, "\n")
	if got := table.Text(); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if got := table.HTML(); !strings.Contains(got, `data-value="6.417345e+06">6.417`) {
		t.Errorf("the full value is lost:\n%s", got)
	}
}

// TestPowersOfTenStandRight: beside a number with an exponent a plain one is not pushed to the left.
func TestPowersOfTenStandRight(t *testing.T) {
	residuals := doc.Table{Columns: []doc.Column{{Name: "what"}, {Name: "value"}}, Rows: [][]doc.Cell{
		{doc.Text("sum"), doc.Num(0)}, {doc.Text("residual"), doc.Num(1.5616e-16)}, {doc.Text("iterations"), doc.Num(4)}}}
	want := strings.Join([]string{
		"what            value",
		"----------  ---------",
		"sum                 0",
		"residual    1.562e-16",
		"iterations      4.000",
	}, "\n")
	if got := residuals.Text(); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if page := residuals.HTML(); !strings.Contains(page, `data-value="0">0</td>`) {
		t.Errorf("blanks behind the zero:\n%s", page)
	}
}

// TestCountsAreWhole: a column of whole numbers without a unit shows no decimals; one with a fraction among them, and
// quantities, keep theirs.
func TestCountsAreWhole(t *testing.T) {
	column := func(unit string, values ...float64) string {
		table := doc.Table{Columns: []doc.Column{{Name: "x", Unit: unit}}}
		for _, v := range values {
			table.Rows = append(table.Rows, []doc.Cell{doc.Num(v)})
		}
		return strings.Join(strings.Fields(table.Text()), " ")
	}
	for _, c := range []struct{ got, want string }{
		{column("", 20, 7, 1250), "20 7 1250"},
		{column("turn", 20, 34), "20 34"},
		{column("", 20, 7.5), "20.00 7.500"},
		{column("A", 20, 7), "20.00 7.000"},
		{column("", math.NaN(), 7), "not a number 7.000"},
		{column("", math.Copysign(0, -1), 1), "0 1"},
	} {
		if !strings.HasSuffix(c.got, c.want) {
			t.Errorf("%q does not end in %q", c.got, c.want)
		}
	}
}
