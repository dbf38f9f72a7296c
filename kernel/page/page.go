// Package page turns a notebook that has run into one HTML file.
package page

import (
	"errors"
	"io/fs"

	"ampturn/kernel/notebook"
)

// Row is one line of the page's foot.
type Row struct{ Name, Value string }

// Options of [Render]; the zero value is fine.
type Options struct {
	Title      string // name of the document; empty: the first heading of level 1
	Lang       string // language of the text; empty: "en"
	Provenance []Row  // where the numbers come from: program, libraries, hashes, seeds
	Files      fs.FS  // folder of the notebook, for pictures that its text names; nil: none
}

// Render gives the page.
func Render(nb *notebook.Notebook, opt Options) ([]byte, error) {
	return nil, errors.New("page: not written yet")
}
