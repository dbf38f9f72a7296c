// Package notebook reads, runs and writes notebook files.
//
// Two forms hold a notebook: the .ipynb form (nbformat 4.5; 4.0 to 4.4 are read and become 4.5), which carries outputs,
// and the .go form, a text in the percent cell convention, which carries none and reads well in reviews:
//
//	//go:build ampturn
//
//	// %% [markdown]
//	// # L1, output choke
//
//	// %%
//	a := 0.6*mm
//
// What this package does not know in an .ipynb file (metadata, attachments, further fields) is kept and written back.
//
//	nb, err := notebook.Read("design.ipynb")
//	report, err := notebook.Run(ctx, nb, engine, notebook.Options{})
//	err = nb.Write("out/design.ipynb")
//
// Same notebook, same engine, same bytes: nothing that is written knows the time, the machine or the order of a map.
package notebook

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// Kind says what a [Cell] holds.
type Kind string

// The kinds of cell, by their names in nbformat.
const (
	Code     Kind = "code"
	Markdown Kind = "markdown"
	Raw      Kind = "raw"
)

// Notebook is a list of cells with what is known about the whole.
type Notebook struct {
	Cells    []*Cell
	Metadata map[string]any // kernelspec, language_info, authors, ...; numbers are json.Number
	Minor    int            // nbformat 4.Minor that is written: 5 or more
	Extra    map[string]any // fields of the file beyond nbformat, kept
}

// Cell is one cell. Outputs and Count belong to code cells, Attachments (pictures that the text names) to the others.
type Cell struct {
	Kind        Kind
	ID          string // 1 to 64 of the signs A-Z a-z 0-9 - _, unique in the notebook
	Source      string
	Metadata    map[string]any
	Attachments map[string]any
	Outputs     []*Output
	Count       int // execution count; 0: not run
	Extra       map[string]any
}

// OutputKind says what an [Output] is.
type OutputKind string

// The kinds of output, by their names in nbformat.
const (
	Stream  OutputKind = "stream"
	Display OutputKind = "display_data"
	Result  OutputKind = "execute_result"
	Fault   OutputKind = "error"
)

// Output is one thing that a cell has shown. Data maps MIME types to contents: text as one string, JSON as values.
type Output struct {
	Kind      OutputKind
	Name      string // Stream: "stdout" or "stderr"
	Text      string // Stream: the text. Fault: the one line of the failure
	Data      map[string]any
	Metadata  map[string]any
	Count     int      // Result: execution count of its cell
	Fault     string   // Fault: stable name of the kind of failure
	Traceback []string // Fault
	Extra     map[string]any
}

// FormatError says why a file is not a notebook, and where.
type FormatError struct {
	File string // name of the file, without its folder
	Byte int    // offset from 0 of the fault in the file; -1: none
	Text string // "expected ',' or '}' after the outputs of cell 7"
}

// Error gives the line that a reader sees.
func (e *FormatError) Error() string {
	if e.Byte < 0 {
		return fmt.Sprintf("%s is not a notebook: %s", e.File, e.Text)
	}
	return fmt.Sprintf("%s is not a notebook: byte %d, %s", e.File, e.Byte, e.Text)
}

// New gives an empty notebook.
func New() *Notebook { return &Notebook{Minor: minor, Metadata: map[string]any{}} }

// Add appends a cell of the given kind and source and gives it an id made from both.
func (nb *Notebook) Add(kind Kind, source string) *Cell {
	c := &Cell{Kind: kind, Source: source, Metadata: map[string]any{}}
	nb.Cells = append(nb.Cells, c)
	nb.nameCells()
	return c
}

// Read reads a notebook file: .go as a percent text, everything else as .ipynb.
//
// Errors: [*FormatError] where the file is no notebook; else what opening or reading met, in one line.
func Read(path string) (*Notebook, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("%s cannot be read: %w", path, cause(err))
	}
	return Parse(filepath.Base(path), data)
}

// Parse reads a notebook from the contents of the file of that name.
func Parse(name string, data []byte) (*Notebook, error) {
	if isText(name) {
		return ParseText(name, data)
	}
	return ParseIPYNB(name, data)
}

// Bytes gives the notebook in the form that the file's name asks for.
func (nb *Notebook) Bytes(name string) ([]byte, error) {
	if isText(name) {
		return nb.Text()
	}
	return nb.IPYNB()
}

// Write writes the notebook to a file by [Save]: either the whole new notebook is there afterwards, or the old file.
func (nb *Notebook) Write(path string) error {
	data, err := nb.Bytes(path)
	if err != nil {
		return fmt.Errorf("%s: %w", filepath.Base(path), err)
	}
	return Save(path, data)
}

// Hash gives the SHA-256 of kinds and sources of all cells, as hex digits: equal for notebooks that say the same,
// whatever their outputs.
func (nb *Notebook) Hash() string {
	h := sha256.New()
	for _, c := range nb.Cells {
		fmt.Fprintf(h, "%s %d\n%s\n", c.Kind, len(c.Source), c.Source)
	}
	return hex.EncodeToString(h.Sum(nil))
}

// FirstLine gives the first line of the cell that is not blank, without its blanks: a name for the cell in a list.
func (c *Cell) FirstLine() string {
	for line := range strings.Lines(c.Source) {
		if t := strings.TrimSpace(line); t != "" {
			return t
		}
	}
	return ""
}

// blank tells whether the cell has nothing to run.
func (c *Cell) blank() bool { return strings.TrimSpace(c.Source) == "" }

func isText(name string) bool { return strings.EqualFold(filepath.Ext(name), ".go") }

// nameCells gives an id to each cell that has none, or one that is not allowed or taken: the first 8 hex digits of a
// hash of kind, source and place among equals, so that the same cells get the same ids.
func (nb *Notebook) nameCells() {
	taken := make(map[string]bool, len(nb.Cells))
	for _, c := range nb.Cells {
		if !validID(c.ID) || taken[c.ID] {
			c.ID = ""
			continue
		}
		taken[c.ID] = true
	}
	equals := map[string]int{} // how many cells of that kind and source have been named
	for _, c := range nb.Cells {
		for content := string(c.Kind) + "\n" + c.Source; c.ID == ""; equals[content]++ {
			sum := sha256.Sum256(fmt.Appendf(nil, "%d %s", equals[content], content))
			if id := hex.EncodeToString(sum[:4]); !taken[id] {
				c.ID, taken[id] = id, true
			}
		}
	}
}

func validID(id string) bool {
	if len(id) == 0 || len(id) > 64 {
		return false
	}
	for _, r := range id {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_':
		default:
			return false
		}
	}
	return true
}
