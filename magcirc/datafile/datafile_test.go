package datafile_test

import (
	"math"
	"strings"
	"testing"

	"ampturn/magcirc/datafile"
)

func TestUnits(t *testing.T) {
	for _, c := range []struct {
		text string
		h, b float64
	}{
		{"H (A/m),B (T)\n100,0.4\n", 100, 0.4},
		{"H [kA/m];B [mT]\n0,1;400\n", 100, 0.4},
		{"# bench 3\n\nB (gauss)\tH (oersted)\n4000\t1\n", 79.57747154594767, 0.4}, // 1 Oe = 1000/(4 pi) A/m
		{"\ufefffield (Oe), flux density (kG)\n 2 , 4 \n", 2 * 79.57747154594767, 0.4},
		{"t (ms),\"H (A/cm)\",\"B (uT)\"\n0,1,4e5\n", 100, 0.4},
		{"H (A/m),J (mT)\n1000,400\n", 1000, 0.4 + 4e-4*math.Pi},
		{"H (A/m),B (T)\r\n100,0.4\r\n", 100, 0.4},
	} {
		p, err := datafile.ReadPoints("bh.csv", strings.NewReader(c.text))
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		if math.Abs(p.H[0]-c.h) > 1e-12*c.h || math.Abs(p.B[0]-c.b) > 1e-12*c.b {
			t.Errorf("%q: H %v, B %v, want %v, %v", c.text, p.H[0], p.B[0], c.h, c.b)
		}
	}
}

func TestRowsAreThoseOfTheFile(t *testing.T) {
	p, err := datafile.ReadPoints("bh.csv", strings.NewReader("# one\nH (A/m),B (T)\n1,2\n2,3\n"))
	if err != nil || p.First != 3 {
		t.Errorf("first row %d, %v; want 3", p.First, err)
	}
	p, err = datafile.ReadPoints("bh.csv", strings.NewReader("H (A/m),B (T)\n1,2\n\n2,3\n"))
	if err != nil || p.First != 0 {
		t.Errorf("first row %d, %v; want 0: a line is left out", p.First, err)
	}
}

func TestRefusals(t *testing.T) {
	for text, want := range map[string]string{
		"H (A/m),B\n1,2\n":              `loop.csv, column 2: no unit in the header "B"; write "B (T)" or "B (mT)"`,
		"H,B (T)\n1,2\n":                `loop.csv, column 1: no unit in the header "H"; write "H (A/m)" or "H (oersted)"`,
		"H (mV),B (T)\n1,2\n":           `loop.csv, column 1: "mV" is no unit of field strength known here; write "H (A/m)" or "H (oersted)"`,
		"t (s),B (T)\n1,2\n":            `loop.csv: there is no column of field strength; it has "t", "B"; write "H (A/m)" or "H (oersted)" in its header`,
		"H (A/m),M (A/m)\n1,2\n":        `loop.csv: there is no column of flux density; it has "H", "M"; write "B (T)" or "B (mT)" in its header`,
		"H (A/m),B (T),B (mT)\n1,2,3\n": "loop.csv, column 3: a second column of flux density; the first is column 2; leave one of them out",
		"H (A/m),B (T)\n1,x2\n":         `loop.csv, row 2, column 2: "x2" is not a number`,
		"H (A/m),B (T)\n1,NaN\n":        `loop.csv, row 2, column 2: "NaN" is not a number`,
		"H (A/m),B (T)\n1,\n":           "loop.csv, row 2, column 2: the value is missing",
		"H (A/m),B (T)\n1\n":            "loop.csv, row 2: 1 values, the header has 2 columns",
		"H (A/m),B (T)\n1,0,0,2\n":      "loop.csv, row 2: 4 values, the header has 2 columns; decimal point, not comma; or write semicolons between the columns",
		"1,2\n3,4\n":                    `loop.csv, row 1: there is no header, only numbers; write names and units above them: "H (A/m), B (T)"`,
		"":                              "loop.csv: is empty",
		"H (A/m),B (T)\n":               "loop.csv: has a header but no values",
		"H (A/m),B (T)\n1,\x00\n":       "loop.csv: row 2: holds bytes that are no text",
	} {
		_, err := datafile.ReadPoints("loop.csv", strings.NewReader(text))
		if err == nil {
			t.Errorf("%q is not refused", text)
		} else if err.Error() != want {
			t.Errorf("%q: %q, want %q", text, err, want)
		}
	}
}

// No bytes make the reader fail otherwise than by an error.
func FuzzRead(f *testing.F) {
	f.Add("H (A/m),B (T)\n1,2\n")
	f.Add("H [kA/m];B [mT]\n0,1;400\n")
	f.Add("# x\n\n\"H\"\t(\n")
	f.Fuzz(func(t *testing.T, text string) {
		p, err := datafile.ReadPoints("f", strings.NewReader(text))
		if err == nil && (len(p.H) != len(p.B) || len(p.H) == 0) {
			t.Errorf("%d and %d values", len(p.H), len(p.B))
		}
	})
}
