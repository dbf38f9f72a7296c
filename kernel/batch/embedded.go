package batch

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"path/filepath"
	"strings"

	"ampturn/kernel/notebook"
)

// RunText runs a notebook that the program carries, given as the contents of a file of that name, and leaves its run
// notebook and its page.
func RunText(ctx context.Context, name string, text []byte, s Settings) int {
	nb, err := notebook.Parse(name, text)
	code := Failed
	if err == nil {
		code, err = s.run(ctx, document{nb, name, "."})
	}
	if err != nil {
		fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
	}
	return code
}

// New writes a notebook that the program carries to a new file; a path without an ending becomes an .ipynb. A file that
// is there stays as it is, and the exit code is [Use].
func New(path string, text []byte, s Settings) int {
	switch ext := strings.ToLower(filepath.Ext(path)); ext {
	case ".ipynb", ".go":
	default:
		path += ".ipynb"
	}
	nb, err := notebook.Parse("start.ipynb", text)
	if err == nil {
		err = nb.Create(path)
	}
	switch {
	case errors.Is(err, fs.ErrExist):
		fmt.Fprintf(s.Trouble, "ampturn: %s is there already; choose another name, nothing was written\n", path)
		return Use
	case err != nil:
		fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
		return Failed
	}
	fmt.Fprintf(s.Report, "written: %s; run it with: ampturn run %s\n", path, path)
	return Fine
}
