package main

import (
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"ampturn/dsl/session"
	"ampturn/kernel"
	"ampturn/kernel/batch"
	"ampturn/kernel/cell"
	"ampturn/kernel/notebook"
)

type exportCommand struct {
	Notebook string `arg:"" help:"An .ipynb (nbformat 4) or a .go text in percent cells."`
	Out      string `help:"File of the program; without it the program is written to the standard output." placeholder:"FILE"`
}

func (c *exportCommand) Run(code *int) error {
	text, err := export(c.Notebook)
	if err == nil && c.Out == "" {
		_, err = os.Stdout.WriteString(text)
	} else if err == nil {
		err = os.WriteFile(c.Out, []byte(text), 0o644)
	}
	if err != nil {
		*code = batch.Failed
	}
	return err
}

// export gives a notebook as a Go program, which the go command accepts inside this module.
func export(path string) (string, error) {
	nb, err := notebook.Read(path)
	if err != nil {
		return "", err
	}
	session.Reset()
	s, err := cell.New(vocabulary(), cell.Hooks{Pass: session.EndPass})
	if err != nil {
		return "", err
	}
	text, fault := s.Export(filepath.Base(path), codeCells(nb), cell.Harness{
		Imports: map[string]string{"p_session": "ampturn/dsl/session", "p_phys": "ampturn/magcirc/phys", "p_os": "os"},
		Setup: []string{
			"p_session.Reset()",
			"p_session.SetFolder(" + strconv.Quote(filepath.ToSlash(filepath.Dir(path))) + ") // the data files; another folder is the argument of the program",
			"if len(p_os.Args) > 1 {\n\tp_session.SetFolder(p_os.Args[1])\n}",
			`p_session.Attach(func(o p_session.Output) {
				if o.Stream == "stdout" {
					p_nb.Write(o.Text)
				} else if o.Stream == "" && !o.Clear {
					p_nb.Bundle(o.Data)
				}
			})`,
		},
		Program: []string{
			"Format: p_phys.Format", "Begin: p_session.BeginCell", "End: p_session.EndCell", "Pass: p_session.EndPass",
			"Finish: p_session.Finish",
		},
	})
	if fault != nil {
		return "", fmt.Errorf("%s: %s", path, strings.Join(fault.Traceback, "\n"))
	}
	return text, nil
}

// codeCells gives the cells of a notebook that have something to run, numbered as a run from the top does.
func codeCells(nb *notebook.Notebook) (cells []kernel.Cell) {
	for _, c := range nb.Cells {
		if c.Kind == notebook.Code && strings.TrimSpace(c.Source) != "" {
			cells = append(cells, kernel.Cell{ID: c.ID, Number: len(cells) + 1, Source: c.Source})
		}
	}
	return cells
}
