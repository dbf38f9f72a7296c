// Package datafile reads tables of measured points: columns with a name and a unit in the header, values in that unit.
//
//	H (A/m), B (T)          header: the unit stands in brackets, round or square
//	7.98, 0.0934            comma, semicolon or tab between the columns; "#" begins a line of remarks
//
//	quantity        names                      units
//	field strength  H, field, field strength   A/m, kA/m, MA/m, A/cm, mA/m, Oe, oersted, kOe
//	flux density    B, flux density            T, mT, uT, G, gauss, kG, kgauss
//	polarisation    J, polarisation            as B; B = J + mu0 H
//
// Everything leaves in A/m and T.
package datafile

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Table is the columns of a file.
type Table struct {
	Name    string      // of the file
	Columns []Column    // as they stand in the header
	Rows    []int       // line of the file of each row, from 1
	Values  [][]float64 // by column and row, in the header's units
}

// Column is a heading.
type Column struct{ Name, Unit string }

// mostLines is the longest file that is read as points of a curve.
const mostLines = 1_000_000

// Read reads a table; name is the file's, for messages.
//
// Errors: [magcirc.BadFile] with row and column for what is no number, missing or too much.
func Read(name string, r io.Reader) (*Table, error) {
	t := &Table{Name: name}
	lines := bufio.NewScanner(r)
	lines.Buffer(nil, 1<<20)
	separator := ""
	for n := 1; lines.Scan(); n++ {
		line := strings.TrimSpace(strings.TrimPrefix(lines.Text(), "\ufeff"))
		switch {
		case n > mostLines:
			return nil, t.bad("has more than %d lines", mostLines)
		case strings.ContainsRune(line, 0):
			return nil, t.bad("row %d: holds bytes that are no text", n)
		case line == "" || line[0] == '#':
			continue
		}
		if t.Columns == nil {
			separator = separatorOf(line)
			if err := t.header(split(line, separator)); err != nil {
				return nil, err
			}
			continue
		}
		if err := t.row(n, split(line, separator)); err != nil {
			return nil, err
		}
	}
	if err := lines.Err(); err != nil {
		return nil, &magcirc.Error{Code: magcirc.BadFile, Elem: name, Msg: "cannot be read: " + err.Error(), Err: err}
	}
	switch {
	case t.Columns == nil:
		return nil, t.bad("is empty")
	case len(t.Rows) == 0:
		return nil, t.bad("has a header but no values")
	}
	return t, nil
}

func (t *Table) bad(format string, args ...any) error {
	return &magcirc.Error{Code: magcirc.BadFile, Elem: t.Name, Msg: fmt.Sprintf(format, args...)}
}

// at is a refusal at a row or column: "loop.csv, column 2: ...".
func (t *Table) at(place, msg, hint string) error {
	return &magcirc.Error{Code: magcirc.BadFile, Elem: t.Name + ", " + place, Msg: msg, Hint: hint}
}

func separatorOf(line string) string {
	for _, s := range [...]string{"\t", ";"} {
		if strings.Contains(line, s) {
			return s
		}
	}
	return ","
}

func split(line, separator string) []string {
	list := strings.Split(line, separator)
	for i := range list {
		list[i] = strings.Trim(strings.TrimSpace(list[i]), `"`)
	}
	return list
}

// header takes "H (A/m)" apart. A first line of numbers only is a file without header.
func (t *Table) header(words []string) error {
	numbers := 0
	for _, w := range words {
		if _, err := strconv.ParseFloat(w, 64); err == nil {
			numbers++
		}
	}
	if numbers == len(words) {
		return t.at("row 1", "there is no header, only numbers", `write names and units above them: "H (A/m), B (T)"`)
	}
	for _, w := range words {
		name, unit := w, ""
		if i := strings.IndexAny(w, "(["); i >= 0 {
			name = strings.TrimSpace(w[:i])
			unit = strings.TrimSpace(strings.TrimRight(w[i+1:], ")] "))
		}
		t.Columns = append(t.Columns, Column{name, unit})
	}
	t.Values = make([][]float64, len(words))
	return nil
}

func (t *Table) row(n int, words []string) error {
	if len(words) != len(t.Columns) {
		hint := ""
		if len(words) == 2*len(t.Columns) {
			hint = "decimal point, not comma; or write semicolons between the columns"
		}
		return t.at(fmt.Sprintf("row %d", n), fmt.Sprintf("%d values, the header has %d columns", len(words), len(t.Columns)), hint)
	}
	for i, w := range words {
		x, err := strconv.ParseFloat(w, 64)
		if err != nil { // with semicolons or tabs a comma may be the decimal point
			x, err = strconv.ParseFloat(strings.Replace(w, ",", ".", 1), 64)
		}
		if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
			what := strconv.Quote(w) + " is not a number"
			if w == "" {
				what = "the value is missing"
			}
			return t.at(fmt.Sprintf("row %d, column %d", n, i+1), what, "")
		}
		t.Values[i] = append(t.Values[i], x)
	}
	t.Rows = append(t.Rows, n)
	return nil
}

// quantity is what a column may hold.
type quantity struct {
	word  string // for messages
	names []string
	units map[string]float64
	write string // example of a header
}

const oersted = 1e3 / (4 * math.Pi) // A/m

var (
	tesla = map[string]float64{"T": 1, "mT": 1e-3, "uT": 1e-6, "µT": 1e-6, "μT": 1e-6, "tesla": 1, "gauss": 1e-4, "G": 1e-4, "Gs": 1e-4,
		"kG": 0.1, "kgauss": 0.1, "Wb/m2": 1, "Vs/m2": 1}
	ampere = map[string]float64{"A/m": 1, "kA/m": 1e3, "MA/m": 1e6, "mA/m": 1e-3, "A/cm": 100, "oersted": oersted, "Oe": oersted, "kOe": 1e3 * oersted, "mOe": 1e-3 * oersted}

	field        = quantity{"field strength", []string{"h", "field", "field strength"}, ampere, `"H (A/m)" or "H (oersted)"`}
	density      = quantity{"flux density", []string{"b", "flux density", "induction"}, tesla, `"B (T)" or "B (mT)"`}
	polarisation = quantity{"polarisation", []string{"j", "polarisation", "polarization"}, tesla, `"J (T)" or "J (mT)"`}
)

// find gives the column of a quantity and the factor to its SI unit; -1 where there is none.
func (t *Table) find(q quantity) (column int, factor float64, err error) {
	column = -1
	for i, c := range t.Columns {
		for _, name := range q.names {
			if !strings.EqualFold(c.Name, name) {
				continue
			}
			if column >= 0 {
				return 0, 0, t.at(fmt.Sprintf("column %d", i+1), fmt.Sprintf("a second column of %s; the first is column %d", q.word, column+1), "leave one of them out")
			}
			column = i
		}
	}
	if column < 0 {
		return -1, 0, nil
	}
	c, place := t.Columns[column], fmt.Sprintf("column %d", column+1)
	if c.Unit == "" {
		return 0, 0, t.at(place, fmt.Sprintf("no unit in the header %q", c.Name), "write "+q.write)
	}
	factor, ok := q.units[c.Unit]
	if !ok {
		return 0, 0, t.at(place, fmt.Sprintf("%q is no unit of %s known here", c.Unit, q.word), "write "+q.write)
	}
	return column, factor, nil
}

// Points are field strengths in A/m and flux densities in T.
type Points struct {
	Name  string
	H, B  []float64
	First int // line of the first point in the file, 0 where lines between the points were left out
}

// ReadPoints reads a table with a column of field strength and one of flux density or polarisation.
//
// Errors: [magcirc.BadFile].
func ReadPoints(name string, r io.Reader) (*Points, error) {
	t, err := Read(name, r)
	if err != nil {
		return nil, err
	}
	return t.Points()
}

// Points gives the points of the table.
//
// Errors: [magcirc.BadFile] for a missing column, a column twice, a unit that is missing or unknown.
func (t *Table) Points() (*Points, error) {
	h, perH, err := t.find(field)
	if err != nil {
		return nil, err
	}
	b, perB, err := t.find(density)
	if err != nil {
		return nil, err
	}
	air := 0.0
	if b < 0 {
		if b, perB, err = t.find(polarisation); err != nil {
			return nil, err
		}
		air = phys.Mu0
	}
	switch {
	case h < 0:
		return nil, t.missing(field)
	case b < 0:
		return nil, t.missing(density)
	}
	p := &Points{Name: t.Name, H: make([]float64, len(t.Rows)), B: make([]float64, len(t.Rows)), First: t.Rows[0]}
	for i, line := range t.Rows {
		p.H[i] = t.Values[h][i] * perH
		p.B[i] = t.Values[b][i]*perB + air*p.H[i]
		if line != t.Rows[0]+i {
			p.First = 0
		}
	}
	return p, nil
}

func (t *Table) missing(q quantity) error {
	names := make([]string, len(t.Columns))
	for i, c := range t.Columns {
		names[i] = strconv.Quote(c.Name)
	}
	return &magcirc.Error{Code: magcirc.BadFile, Elem: t.Name, Msg: fmt.Sprintf("there is no column of %s; it has %s", q.word, strings.Join(names, ", ")),
		Hint: "write " + q.write + " in its header"}
}
