package main

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"strings"
)

// book is the notebook under way.
type book struct {
	cells []cell
}

type cell struct {
	kind, source string
}

// text adds a text; texts that follow each other become one cell.
func (b *book) text(s string) {
	s = strings.TrimSpace(s)
	if s == "" {
		return
	}
	if n := len(b.cells); n > 0 && b.cells[n-1].kind == "markdown" && !strings.HasPrefix(s, "## ") {
		b.cells[n-1].source += "\n\n" + s
		return
	}
	b.cells = append(b.cells, cell{"markdown", s})
}

// chapter adds a chapter.
func (b *book) chapter(text string, names map[string]*name) error {
	var under []string
	flush := func() {
		b.text(strings.Join(under, "\n"))
		under = nil
	}
	lines := strings.Split(text, "\n")
	for i := 0; i < len(lines); i++ {
		line := lines[i]
		switch {
		case line == "```go":
			flush()
			end := i + 1
			for end < len(lines) && lines[end] != "```" {
				end++
			}
			if end == len(lines) {
				return fmt.Errorf("line %d: the fence has no end", i+1)
			}
			b.cells = append(b.cells, cell{"code", strings.Join(lines[i+1:end], "\n")})
			i = end
		case strings.HasPrefix(line, "@names "):
			flush()
			b.cells = append(b.cells, cell{"markdown", "**The names of this chapter**"})
			for _, key := range strings.Fields(line)[1:] {
				n := names[key]
				if n == nil {
					return fmt.Errorf("line %d: the vocabulary has no name %s", i+1, key)
				}
				b.text(n.entry())
			}
		case strings.HasPrefix(line, "#"):
			under = append(under, "#"+line)
		default:
			under = append(under, line)
		}
	}
	flush()
	return nil
}

// rest adds the names that no chapter has taken.
func (b *book) rest(names map[string]*name) {
	list := open(names)
	if len(list) == 0 {
		return
	}
	b.text("## Further names\n\nThe types of quantities, and what has no chapter of its own yet.")
	for _, key := range list {
		b.text(names[key].entry())
	}
}

// ipynb gives the notebook in the layout of nbformat's own writer.
func (b *book) ipynb() ([]byte, error) {
	type object = map[string]any
	cells := make([]any, len(b.cells))
	for i, c := range b.cells {
		sum := sha256.Sum256([]byte(fmt.Sprintf("%d %s %s", i, c.kind, c.source)))
		o := object{"cell_type": c.kind, "id": hex.EncodeToString(sum[:4]), "metadata": object{}, "source": lines(c.source)}
		if c.kind == "code" {
			o["execution_count"], o["outputs"] = nil, []any{}
		}
		cells[i] = o
	}
	nb := object{"cells": cells, "nbformat": 4, "nbformat_minor": 5,
		"metadata": object{"kernelspec": object{"display_name": "ampturn", "language": "go", "name": "ampturn"}}}
	var out bytes.Buffer
	enc := json.NewEncoder(&out)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", " ")
	err := enc.Encode(nb)
	return out.Bytes(), err
}

func lines(s string) []string {
	list := strings.SplitAfter(s, "\n")
	if list[len(list)-1] == "" {
		list = list[:len(list)-1]
	}
	return list
}
