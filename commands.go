package main

import (
	"context"
	"fmt"
	"os"
	"runtime/debug"
	"strings"
	"time"

	"ampturn/dsl/manual"
	"ampturn/dsl/review"
	"ampturn/dsl/session"
	"ampturn/dsl/start"
	"ampturn/kernel"
	"ampturn/kernel/batch"
	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
	"ampturn/kernel/spec"
	"ampturn/magcirc/phys"
)

// commands is the command line.
type commands struct {
	Run     runCommand     `cmd:"" help:"Run notebooks from the top in a fresh kernel; write the run notebook and a self-contained HTML page."`
	Verify  verifyCommand  `cmd:"" help:"Run notebooks again and compare with the outputs saved in them."`
	Compare compareCommand `cmd:"" help:"Tell what moved between two run notebooks: verdicts, values, inputs."`
	New     newCommand     `cmd:"" help:"Write a notebook to start from."`
	Manual  manualCommand  `cmd:"" help:"Write the manual as a notebook and a page; all of its examples run meanwhile."`
	Export  exportCommand  `cmd:"" help:"Write a notebook as one Go program, which go run accepts in a clone of the source."`
	Install installCommand `cmd:"" help:"Register the kernel with Jupyter."`
	Remove  removeCommand  `cmd:"" help:"Take the kernel's entry out of Jupyter again."`
	Kernel  kernelCommand  `cmd:"" help:"Serve a Jupyter front end; Jupyter calls this."`
}

type runCommand struct {
	Notebooks []string `arg:"" name:"notebook" help:"An .ipynb (nbformat 4) or a .go text in percent cells."`
	Out       string   `help:"Folder for the run notebook and the page." default:"out" placeholder:"DIR"`
	Files     string   `help:"Folder of the data files, if they are not beside the notebook." placeholder:"DIR"`
}

func (c *runCommand) Run(ctx context.Context, code *int) error {
	s := settings()
	s.Out, s.Files = c.Out, c.Files
	*code = batch.Run(ctx, c.Notebooks, s)
	return nil
}

type verifyCommand struct {
	Notebooks []string `arg:"" name:"notebook" help:"A run notebook (.ipynb with outputs)."`
	Files     string   `help:"Folder of the data files, if they are not beside the notebook." placeholder:"DIR"`
	Tolerance float64  `help:"Largest difference of two numbers, as a share of the larger one." default:"1e-6" placeholder:"SHARE"`
}

func (c *verifyCommand) Run(ctx context.Context, code *int) error {
	s := settings()
	s.Files = c.Files
	if s.Tolerance.Relative = c.Tolerance; !(c.Tolerance >= 0 && c.Tolerance < 1) {
		return wrongUse(code, "the tolerance is a share from 0 to 1, such as 1e-6")
	}
	*code = batch.Verify(ctx, c.Notebooks, s)
	return nil
}

type compareCommand struct {
	Old string `arg:"" help:"A run notebook."`
	New string `arg:"" help:"The run notebook of a later revision."`
	Out string `help:"Folder for a page of what moved; without it the text only." placeholder:"DIR"`
}

func (c *compareCommand) Run(code *int) error {
	s := settings()
	s.Out = c.Out
	*code = batch.Compare(c.Old, c.New, s)
	return nil
}

type newCommand struct {
	Name string `arg:"" help:"File to write: NAME.ipynb, or NAME.go for a text. An existing file is left alone."`
	Like string `help:"Kind of part: ${kinds}." default:"buck-inductor" placeholder:"KIND"`
}

func (c *newCommand) Run(code *int) error {
	text, ok := start.Like(c.Like)
	if !ok {
		return wrongUse(code, fmt.Sprintf("there is no notebook like %q; there are %s", c.Like, strings.Join(start.Kinds(), ", ")))
	}
	*code = batch.New(c.Name, text, settings())
	return nil
}

type manualCommand struct {
	Out string `help:"Folder for the notebook and the page." default:"out" placeholder:"DIR"`
}

func (c *manualCommand) Run(ctx context.Context, code *int) error {
	s := settings()
	s.Out = c.Out
	*code = batch.RunText(ctx, manual.Name, manual.Notebook, s)
	return nil
}

type place struct {
	User   bool   `help:"For this user only (the default)." xor:"place"`
	Prefix string `help:"Below DIR, as DIR/share/jupyter/kernels/ampturn." placeholder:"DIR" xor:"place"`
}

type (
	installCommand struct{ place }
	removeCommand  struct{ place }
	kernelCommand  struct {
		Connection string `arg:"" help:"The connection file that Jupyter wrote."`
	}
)

func (c *installCommand) Run() error {
	binary, err := os.Executable()
	if err != nil {
		return err
	}
	dir, err := spec.Install(spec.Entry{Binary: binary}, spec.Place{Prefix: c.Prefix})
	if err != nil {
		return err
	}
	fmt.Printf("the kernel ampturn is registered in %s\n", dir)
	return nil
}

func (c *removeCommand) Run() error {
	dir, err := spec.Remove("ampturn", spec.Place{Prefix: c.Prefix})
	if err != nil {
		return err
	}
	fmt.Printf("%s is removed\n", dir)
	return nil
}

// started is when a kernel has started and its front end waits for the user.
const started = 300 * time.Millisecond

func (c *kernelCommand) Run(ctx context.Context) error {
	engine, err := newEngine()
	if err != nil {
		return err
	}
	session.SetLive(true)
	time.AfterFunc(started, debug.FreeOSMemory) // what only the start needed goes back to the system
	return kernel.Serve(context.WithoutCancel(ctx), c.Connection, engine, &kernel.Options{Version: version()})
}

// wrongUse says what is wrong with the command line.
func wrongUse(code *int, text string) error {
	fmt.Fprintf(os.Stderr, "ampturn: %s\n", text)
	*code = batch.Use
	return nil
}

// settings join the vocabulary and the runner of notebooks.
func settings() batch.Settings {
	return batch.Settings{
		Engine: newEngine, Folder: session.SetFolder, Tally: tally, Verdicts: verdicts, Sources: sources, Provenance: provenance(),
		Tolerance: diff.Default, Format: phys.Format, Report: os.Stdout, Trouble: os.Stderr,
		Finish: func(out kernel.Sink) { session.Attach(pass(out)); session.Finish() },
	}
}

func tally() (string, bool) {
	s := review.Count()
	return s.String(), s.Fail > 0
}

// verdicts hands the notebook's verdicts to the runner, which knows them as names, numbers and words.
func verdicts() []notebook.Verdict {
	var list []notebook.Verdict
	for _, e := range review.Entries() {
		list = append(list, notebook.Verdict{What: e.What, Corner: e.Corner, Where: e.Where, Value: notebook.Finite(e.Value), Unit: e.Unit,
			Limit: e.Limit, Margin: notebook.Finite(e.Margin), Status: e.Status})
	}
	return list
}

// sources hands what the numbers rest on to the runner.
func sources() []batch.Source {
	var list []batch.Source
	for _, s := range session.Sources() {
		list = append(list, batch.Source(s))
	}
	return list
}
