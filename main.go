// Command ampturn runs calculation notebooks on magnetic circuits: once from the top, leaving the run notebook and a
// page to read, or live as a Jupyter kernel.
package main

import (
	"context"
	"fmt"
	"os"
	"os/signal"
	"runtime/debug"
	"strings"
	"syscall"

	"github.com/alecthomas/kong"

	"ampturn/dsl/session"
	"ampturn/dsl/si"
	"ampturn/dsl/start"
	"ampturn/dsl/symbols"
	"ampturn/kernel"
	"ampturn/kernel/batch"
	"ampturn/kernel/cell"
	"ampturn/kernel/cell/unit"
	"ampturn/kernel/page"
	"ampturn/magcirc/phys"
	"ampturn/stdlib"
)

// newEngine joins the cell language and the vocabulary for a fresh notebook.
func newEngine() (kernel.Engine, error) {
	session.Reset()
	s, err := cell.New(vocabulary(), cell.Hooks{
		Begin: session.BeginCell, End: func(_ string, failed bool) { session.EndCell(failed) },
		Context: session.SetContext, Pass: session.EndPass, Hold: session.Hold,
		Sink: func(out kernel.Sink) { session.Attach(pass(out)) },
	})
	if err != nil {
		return nil, err
	}
	session.Serve(session.Runner{Ask: s.Ask, Later: s.Later, Aside: s.Aside, Names: names(s), Help: help(s)})
	return s, nil
}

// names lists the names of a notebook for the vocabulary.
func names(s *cell.Session) func() []session.Name {
	return func() []session.Name {
		var list []session.Name
		for _, n := range s.Names() {
			list = append(list, session.Name(n))
		}
		return list
	}
}

// pass hands what the vocabulary shows to a sink.
func pass(out kernel.Sink) func(session.Output) {
	return func(o session.Output) {
		kind := kernel.Display
		switch {
		case o.Page:
			kind = kernel.Page
		case o.Clear:
			kind = kernel.Clear
		case o.Stream != "":
			kind = kernel.Stream
		case o.Update:
			kind = kernel.Update
		}
		out(kernel.Output{Kind: kind, Name: o.Stream, Text: o.Text, Data: o.Data, Metadata: o.Metadata, ID: o.ID, Wait: o.Wait})
	}
}

// packages are what a cell may name besides the vocabulary.
var packages = []string{"bytes", "errors", "fmt", "math", "math/cmplx", "math/rand", "sort", "strconv", "strings", "unicode"}

// vocabulary hands the names, units and documentation of the vocabulary to the cell language.
func vocabulary() *cell.Vocabulary {
	v := &cell.Vocabulary{
		Symbols: symbols.Symbols, Export: symbols.Export(), Docs: symbols.Docs(),
		Open: "ampturn/dsl", Packages: packages, Functions: si.Functions, Format: phys.Format,
		Units: &unit.Table{Words: si.Words, Bare: si.Bare, Aliases: si.Aliases, Value: si.Value, Functions: si.Functions,
			Powers: si.Powers},
		Texts: map[string]func() []string{"Material": shelf},
	}
	for _, s := range si.Symbols {
		v.Units.Symbols = append(v.Units.Symbols, unit.Symbol(s))
	}
	for _, u := range append(si.Units[:len(si.Units):len(si.Units)], si.Constants...) {
		v.Constants = append(v.Constants, cell.Constant(u))
		v.Units.Constants = append(v.Units.Constants, unit.Constant{Name: u.Name, Dim: u.Dim, Value: u.Value})
	}
	return v
}

// shelf lists the names of the materials.
func shelf() []string {
	var names []string
	for _, m := range stdlib.Materials() {
		names = append(names, m.Name)
	}
	return names
}

// version is that of the program as Go has built it; "devel" outside a released one.
func version() string {
	if info, ok := debug.ReadBuildInfo(); ok && info.Main.Version != "" && info.Main.Version != "(devel)" {
		return info.Main.Version
	}
	return "devel"
}

// provenance names the program and the libraries that the numbers rest on.
func provenance() []page.Row {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return nil
	}
	rows := []page.Row{{Name: "program", Value: "ampturn " + info.Main.Version + ", " + info.GoVersion}}
	for _, m := range info.Deps {
		switch m.Path {
		case "github.com/traefik/yaegi", "gonum.org/v1/gonum", "gonum.org/v1/plot":
			rows = append(rows, page.Row{Name: "library", Value: m.Path + " " + m.Version})
		}
	}
	return rows
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	code := batch.Fine
	parser := kong.Must(&commands{}, kong.Name("ampturn"), kong.Description("Calculation notebooks for inductors and transformers."),
		kong.Vars{"kinds": strings.Join(start.Kinds(), ", ")}, kong.BindTo(ctx, (*context.Context)(nil)), kong.Bind(&code))
	run, err := parser.Parse(os.Args[1:])
	if err != nil {
		fmt.Fprintf(os.Stderr, "ampturn: %v; see ampturn --help\n", err)
		os.Exit(batch.Use)
	}
	if err := run.Run(); err != nil {
		fmt.Fprintf(os.Stderr, "ampturn: %v\n", err)
		code = batch.Failed
	}
	os.Exit(code)
}
