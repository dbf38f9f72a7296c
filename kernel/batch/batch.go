// Package batch runs notebooks without a front end: each from its top in a fresh engine, leaving the run notebook and
// a page to read, and telling how it went in a line per cell ([Run]). It compares a fresh run with what is saved ([Verify])
// and two revisions with each other ([Compare]).
package batch

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"ampturn/kernel"
	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// Exit codes of a run.
const (
	Fine   = 0 // no limit was missed
	Failed = 1 // a cell failed or was interrupted, or a file could not be read or written
	Use    = 2 // wrong use
	Missed = 3 // a limit was missed
	Differ = 4 // a fresh run differs from what is saved, or two revisions differ
)

// Settings of a run.
type Settings struct {
	Out        string                            // folder of what is written
	Files      string                            // folder of the data files; "": that of the notebook
	Engine     func() (kernel.Engine, error)     // a fresh engine
	Folder     func(dir string)                  // tells the engine's cells the folder of the data files
	Finish     func(kernel.Sink)                 // called after the last cell: fills what waited for the end
	Tally      func() (line string, missed bool) // the notebook's judgement in words, and whether it misses a limit
	Verdicts   func() []notebook.Verdict         // the notebook's judgement row by row
	Sources    func() []Source                   // data files and seeds that the run has used
	Provenance []page.Row                        // what the page's foot says of program and libraries
	Tolerance  diff.Tolerance                    // how far apart two runs may be
	Format     diff.Format                       // writes a number with its unit
	Report     io.Writer                         // a line per cell
	Trouble    io.Writer                         // what went wrong
}

// Source is something beside the cells that the numbers rest on.
type Source struct {
	Kind, Name, Value string
}

// dataFile is the Kind of a file, with the SHA-256 of its bytes as Value.
const dataFile = "data file"

// Run runs notebooks one after another and gives the exit code: the failure of one outranks a limit missed by another.
func Run(ctx context.Context, paths []string, s Settings) int {
	if err := distinct(paths); err != nil {
		fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
		return Use
	}
	code := Fine
	for _, path := range paths {
		got, err := one(ctx, path, s)
		if err != nil {
			fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
		}
		if got == Failed || code == Fine {
			code = got
		}
		if ctx.Err() != nil {
			break
		}
	}
	return code
}

// distinct refuses notebooks whose outputs would have the same name.
func distinct(paths []string) error {
	seen := map[string]string{}
	for _, p := range paths {
		if q, ok := seen[stem(p)]; ok {
			return fmt.Errorf("%s and %s would both write %s.html; run them with two --out folders", q, p, stem(p))
		}
		seen[stem(p)] = p
	}
	return nil
}

// stem is a notebook's name without folder and ending.
func stem(path string) string {
	return strings.TrimSuffix(filepath.Base(path), filepath.Ext(path))
}

// document is a notebook to run, with its name in messages and the folder of its data files.
type document struct {
	nb        *notebook.Notebook
	path, dir string
}

// open reads a notebook.
func (s Settings) open(path string) (document, error) {
	nb, err := notebook.Read(path)
	if err != nil {
		return document{}, err
	}
	dir := s.Files
	if dir == "" {
		dir = filepath.Dir(path)
	}
	return document{nb, path, dir}, nil
}

// one runs one notebook. The exit code counts even where the error is nil.
func one(ctx context.Context, path string, s Settings) (int, error) {
	d, err := s.open(path)
	if err != nil {
		return Failed, err
	}
	return s.run(ctx, d)
}

// run runs a notebook and leaves what it gives.
func (s Settings) run(ctx context.Context, d document) (int, error) {
	if err := os.MkdirAll(s.Out, 0o755); err != nil {
		return Failed, fmt.Errorf("%s: the folder cannot be made: %w", s.Out, errors.Unwrap(err))
	}
	fmt.Fprintf(s.Report, "%s\n", d.path)
	report, err := s.execute(ctx, d, s.tell, s.Finish)
	if err != nil {
		return Failed, err
	}
	if err := s.write(d); err != nil {
		return Failed, err
	}
	return s.close(report, d.path)
}

// execute runs all cells in a fresh engine.
func (s Settings) execute(ctx context.Context, d document, tell func(notebook.CellReport), finish func(kernel.Sink)) (*notebook.Report, error) {
	if s.Folder != nil {
		s.Folder(d.dir)
	}
	engine, err := s.Engine()
	if err != nil {
		return nil, err
	}
	return notebook.Run(ctx, d.nb, engine, notebook.Options{Cell: tell, Finish: finish}), nil
}

// tell writes the line of a cell, and what stopped it.
func (s Settings) tell(c notebook.CellReport) {
	first := []rune(c.First)
	if len(first) > 60 {
		first = append(first[:57], '.', '.', '.')
	}
	fmt.Fprintf(s.Report, "  %2d/%-2d %7.3f s  %-11s  %s\n", c.Number, c.Of, c.Seconds, c.Status, string(first))
	if c.Fault != nil {
		for _, line := range c.Fault.Traceback {
			fmt.Fprintln(s.Trouble, line)
		}
		if len(c.Fault.Traceback) == 0 {
			fmt.Fprintln(s.Trouble, c.Fault.Text)
		}
	}
}

// write leaves the run notebook and the page. The page is made before anything is written.
func (s Settings) write(d document) error {
	html, err := s.page(d)
	if err != nil {
		return fmt.Errorf("%s: the page cannot be made: %w", d.path, err)
	}
	if err := d.nb.Write(filepath.Join(s.Out, stem(d.path)+".ipynb")); err != nil {
		return err
	}
	return notebook.Save(filepath.Join(s.Out, stem(d.path)+".html"), html)
}

// close tells how the notebook ended and gives the exit code.
func (s Settings) close(report *notebook.Report, path string) (int, error) {
	written := fmt.Sprintf("%s and .html", filepath.Join(s.Out, stem(path)+".ipynb"))
	switch {
	case report.Interrupted:
		fmt.Fprintf(s.Report, "  interrupted; what ran is in %s\n", written)
		return Failed, nil
	case report.Failed != nil:
		fmt.Fprintf(s.Report, "  cell %d failed, the cells after it did not run; see %s\n", report.Failed.Number, written)
		return Failed, nil
	}
	line, missed := s.Tally()
	fmt.Fprintf(s.Report, "  %s; written: %s\n", line, written)
	if missed {
		return Missed, nil
	}
	return Fine, nil
}
