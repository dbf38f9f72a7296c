// Gen writes package symbols: what the runner of cells must know of the packages that a cell can use.
//
//	go run ./gen -out . -open ampturn/dsl fmt math ...
//
// From one type check of each package it writes
//
//   - PATH.go: the symbol table of the package with a wrapper type for each interface, in the form an interpreter takes
//     (yaegi, interp.Exports);
//   - export/PATH: export data for the type check of cells, without positions, function bodies and unexported fields;
//   - docs.json: the doc comments of the package -open, and the first sentences of those of the others.
//
// It fails on anything in -open that a cell could not use or the table not express: exported variables, generics,
// unexported types in signatures, types of packages outside the table that have no alias in -open. From the other packages
// it leaves such members out.
package main

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strings"
)

func main() {
	out := flag.String("out", ".", "directory of package symbols")
	open := flag.String("open", "", "import path of the vocabulary")
	name := flag.String("package", "symbols", "name of the written package")
	flag.Parse()
	if flag.NArg() == 0 {
		flag.Usage()
		os.Exit(2)
	}
	files, err := generate(*open, *name, flag.Args())
	if err == nil {
		err = write(*out, files)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

// generate makes the files of package symbols, by their name.
func generate(open, name string, others []string) (map[string][]byte, error) {
	paths := append([]string{}, others...)
	if open != "" {
		paths = append([]string{open}, paths...)
	}
	build, err := list(paths)
	if err != nil {
		return nil, err
	}
	table := map[string]bool{}
	for _, path := range paths {
		table[path] = true
	}
	files := map[string][]byte{}
	docs := map[string]string{}
	for _, path := range paths {
		p, err := build.load(path, table)
		if err != nil {
			return nil, err
		}
		if path == open {
			p.whole = true
			if faults := inexpressible(p.full, table); len(faults) > 0 {
				return nil, fmt.Errorf("%s cannot be offered to cells:\n  %s", path, strings.Join(faults, "\n  "))
			}
		}
		if err := p.emit(name, files, docs); err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
	}
	files["docs.json"] = docsJSON(docs)
	return files, nil
}

// emit adds the files and doc comments of one package.
func (p *loaded) emit(name string, files map[string][]byte, docs map[string]string) error {
	if err := p.strip(); err != nil {
		return err
	}
	source, err := p.symbols(name)
	if err != nil {
		return err
	}
	files[fileName(p.path)+".go"] = source
	data, err := p.export()
	if err != nil {
		return err
	}
	files["export/"+fileName(p.path)] = data
	return p.docs(docs)
}

// fileName makes a file name of an import path.
func fileName(path string) string { return "pkg_" + strings.ReplaceAll(path, "/", "_") + "_symbols" }

// write brings a directory to hold the files, and removes generated ones that are no longer among them.
func write(dir string, files map[string][]byte) error {
	for _, pattern := range []string{"pkg_*_symbols.go", "export/*"} {
		old, err := filepath.Glob(filepath.Join(dir, pattern))
		if err != nil {
			return err
		}
		for _, f := range old {
			rel, err := filepath.Rel(dir, f)
			if err != nil {
				return err
			}
			if _, ok := files[filepath.ToSlash(rel)]; !ok {
				if err := os.Remove(f); err != nil {
					return err
				}
			}
		}
	}
	if err := os.MkdirAll(filepath.Join(dir, "export"), 0o777); err != nil {
		return err
	}
	names := make([]string, 0, len(files))
	for f := range files {
		names = append(names, f)
	}
	sort.Strings(names)
	for _, f := range names {
		to := filepath.Join(dir, filepath.FromSlash(f))
		if old, err := os.ReadFile(to); err == nil && bytes.Equal(old, files[f]) {
			continue
		}
		if err := os.WriteFile(to, files[f], 0o666); err != nil {
			return err
		}
	}
	return nil
}
