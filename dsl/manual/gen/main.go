// Gen makes the manual's notebook of chapters and of the doc comments of the vocabulary.
//
//	go run ./gen -source .. -chapters chapters -out manual.ipynb
//
// A chapter is a Markdown text. Its code fences marked go become cells; a line "@names A B" is replaced by what the
// sources say of these names. Names that no chapter takes follow in a last one.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
)

func main() {
	source := flag.String("source", "..", "directory of the vocabulary's sources")
	chapters := flag.String("chapters", "chapters", "directory of the chapters")
	out := flag.String("out", "manual.ipynb", "file to write")
	flag.Parse()
	if err := write(*source, *chapters, *out); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func write(source, chapters, out string) error {
	names, err := readNames(source)
	if err != nil {
		return err
	}
	files, err := filepath.Glob(filepath.Join(chapters, "*.md"))
	if err != nil {
		return err
	}
	var book book
	book.text(opening)
	for _, f := range files {
		text, err := os.ReadFile(f)
		if err != nil {
			return err
		}
		if err := book.chapter(string(text), names); err != nil {
			return fmt.Errorf("%s: %w", f, err)
		}
	}
	book.rest(names)
	data, err := book.ipynb()
	if err != nil {
		return err
	}
	return os.WriteFile(out, data, 0o644)
}

const opening = `# ampturn: the manual

*What can be said in a cell, with examples that run.* Every example stands in a cell of this notebook, in one scope: a later one may use what an earlier one has made. What is said of each name comes from its documentation in the program; ` + "`Help(name)`" + `, completion and inspection show the same.`
