package notebook

import (
	"context"
	"time"

	"ampturn/kernel"
)

// Status says how a cell of a run ended.
type Status int

// How a cell ended.
const (
	NotRun      Status = iota // a cell before it failed, or the run was interrupted
	Done                      // it ran to its end
	Failed                    // it stopped with a fault
	Interrupted               // the context was cancelled while it ran
)

// String gives the word for the status.
func (s Status) String() string {
	return [...]string{"not run", "done", "failed", "interrupted"}[s]
}

// CellReport is what a run tells about one code cell.
type CellReport struct {
	Number  int     // its place among the code cells that have something to run, from 1: "cell 4" in messages
	Of      int     // how many of them there are
	Index   int     // its place in Notebook.Cells, from 0
	First   string  // its first line that is not blank
	Seconds float64 // time that it took, s; never written to a file
	Status  Status
	Fault   *kernel.Fault // Failed, and Interrupted if the engine said more
}

// Report is what a run tells.
type Report struct {
	Cells       []CellReport // in order, the ones not run included
	Failed      *CellReport  // the cell that stopped the run; nil: none
	Interrupted bool         // the context was cancelled
}

// Options of [Run]; the zero value runs quietly.
type Options struct {
	Begin  func(CellReport)  // called before each cell (Status NotRun)
	Cell   func(CellReport)  // called after each cell that ran
	Finish func(kernel.Sink) // called once after the last cell that ran, also after a failure; fills places shown earlier
}

// Run runs all code cells from the top and puts what they show into the notebook. The engine must be fresh.
//
// The first cell that fails ends the run; it and a cancelled ctx leave the cells after it without outputs and count.
// Cells with nothing in them are passed over and get no number. An update of a display by its id reaches every output
// with that id, in earlier cells too; an update for an id that nobody showed is dropped, as front ends do.
// Notebook metadata gets the kernel and language of the engine.
func Run(ctx context.Context, nb *Notebook, engine kernel.Engine, opts Options) *Report {
	nb.nameCells()
	nb.describe(engine.Language())
	report := &Report{Cells: nb.prepare()}
	shown := &displays{}
	defer shown.close()
	last := shown.sink(nil)
	for i := range report.Cells {
		if ctx.Err() != nil {
			break
		}
		cell := &report.Cells[i]
		if opts.Begin != nil {
			opts.Begin(*cell)
		}
		last = runCell(ctx, nb.Cells[cell.Index], cell, engine, shown)
		if opts.Cell != nil {
			opts.Cell(*cell)
		}
		if cell.Status != Done {
			report.Failed = cell
			break
		}
	}
	report.Interrupted = ctx.Err() != nil && !report.complete()
	if opts.Finish != nil {
		opts.Finish(last)
	}
	return report
}

// complete tells whether the run got to its end or to a failure of its own.
func (r *Report) complete() bool {
	if r.Failed != nil {
		return r.Failed.Status == Failed
	}
	return len(r.Cells) == 0 || r.Cells[len(r.Cells)-1].Status == Done
}

// prepare clears the outputs of all cells and lists those to run.
func (nb *Notebook) prepare() []CellReport {
	var list []CellReport
	for i, c := range nb.Cells {
		if c.Kind != Code {
			continue
		}
		c.Outputs, c.Count = nil, 0
		if !c.blank() {
			list = append(list, CellReport{Number: len(list) + 1, Index: i, First: c.FirstLine()})
		}
	}
	for i := range list {
		list[i].Of = len(list)
	}
	return list
}

// runCell runs one cell and notes how it ended. It gives the sink of the cell.
func runCell(ctx context.Context, c *Cell, report *CellReport, engine kernel.Engine, shown *displays) kernel.Sink {
	c.Count = report.Number
	sink := shown.sink(c)
	start := time.Now()
	outcome := engine.Run(ctx, kernel.Cell{ID: c.ID, Number: report.Number, Source: c.Source}, sink)
	if b, ok := engine.(kernel.Background); ok {
		b.Settle(ctx) // what the cell left for later is shown before the next one runs
	}
	report.Seconds = time.Since(start).Seconds()
	report.Fault = outcome.Fault
	switch {
	case outcome.Interrupted:
		report.Status = Interrupted
	case outcome.Fault != nil:
		report.Status = Failed
	default:
		report.Status = Done
	}
	if f := outcome.Fault; f != nil {
		shown.fault(c, f)
	}
	return sink
}

// describe puts the kernel and its language into the metadata, as nbformat names them.
func (nb *Notebook) describe(lang kernel.Language) {
	if nb.Metadata == nil {
		nb.Metadata = map[string]any{}
	}
	nb.Metadata["kernelspec"] = map[string]any{"display_name": "ampturn", "language": "go", "name": "ampturn"}
	info := map[string]any{"name": "go"}
	for key, value := range map[string]string{
		"name":            lang.Name,
		"version":         lang.Version,
		"mimetype":        lang.MIMEType,
		"file_extension":  lang.Extension,
		"pygments_lexer":  lang.Lexer,
		"codemirror_mode": lang.Mirror,
	} {
		if value != "" {
			info[key] = value
		}
	}
	nb.Metadata["language_info"] = info
}
