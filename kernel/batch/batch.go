// Package batch runs notebooks without a front end: each from its top in a fresh engine, leaving the run notebook and
// a page to read, and telling how it went in a line per cell.
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
	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// Exit codes of a run.
const (
	Fine   = 0 // no limit was missed
	Failed = 1 // a cell failed or was interrupted, or a file could not be read or written
	Use    = 2 // wrong use
	Missed = 3 // a limit was missed
)

// Settings of a run.
type Settings struct {
	Out        string                            // folder of what is written
	Engine     func() (kernel.Engine, error)     // a fresh engine
	Finish     func(kernel.Sink)                 // called after the last cell: fills what waited for the end
	Tally      func() (line string, missed bool) // the notebook's judgement in words, and whether it misses a limit
	Provenance []page.Row                        // what the page's foot says of program and libraries
	Report     io.Writer                         // a line per cell
	Trouble    io.Writer                         // what went wrong
}

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

// one runs one notebook. The exit code counts even where the error is nil.
func one(ctx context.Context, path string, s Settings) (int, error) {
	nb, err := notebook.Read(path)
	if err != nil {
		return Failed, err
	}
	if err := os.MkdirAll(s.Out, 0o755); err != nil {
		return Failed, fmt.Errorf("%s: the folder cannot be made: %w", s.Out, errors.Unwrap(err))
	}
	engine, err := s.Engine()
	if err != nil {
		return Failed, err
	}
	fmt.Fprintf(s.Report, "%s\n", path)
	report := notebook.Run(ctx, nb, engine, notebook.Options{Cell: func(c notebook.CellReport) { s.tell(c) }, Finish: s.Finish})
	if err := s.write(nb, path); err != nil {
		return Failed, err
	}
	return s.close(report, path)
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
func (s Settings) write(nb *notebook.Notebook, path string) error {
	rows := append([]page.Row{
		{Name: "notebook", Value: filepath.Base(path)},
		{Name: "hash of the cells (SHA-256)", Value: nb.Hash()},
	}, s.Provenance...)
	html, err := page.Render(nb, page.Options{Provenance: rows, Files: os.DirFS(filepath.Dir(path))})
	if err != nil {
		return fmt.Errorf("%s: the page cannot be made: %w", path, err)
	}
	if err := nb.Write(filepath.Join(s.Out, stem(path)+".ipynb")); err != nil {
		return err
	}
	return notebook.Save(filepath.Join(s.Out, stem(path)+".html"), html)
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
