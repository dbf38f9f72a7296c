package notebook

import (
	"encoding/json"
	"fmt"
	"strings"
	"unicode/utf8"
)

// node is a JSON value with the place where it starts. value is nil, a bool, json.Number, string, []*node or fields.
type node struct {
	at    int
	value any
}

// fields are the members of an object. Of a key that comes twice the last one counts, as in nbformat.
type fields map[string]*node

// plain gives the value without places.
func (n *node) plain() any {
	switch v := n.value.(type) {
	case []*node:
		list := make([]any, len(v))
		for i, e := range v {
			list[i] = e.plain()
		}
		return list
	case fields:
		return v.plain()
	default:
		return v
	}
}

func (f fields) plain() map[string]any {
	m := make(map[string]any, len(f))
	for key, e := range f {
		m[key] = e.plain()
	}
	return m
}

// reader reads JSON (RFC 8259) and knows, at any fault, where in the notebook it is.
type reader struct {
	data []byte
	at   int
	path []any // keys (string) and places from 0 (int) down to the value being read
}

const maxDepth = 500

// parseJSON reads one JSON text.
func parseJSON(data []byte) (*node, error) {
	r := &reader{data: data}
	if strings.HasPrefix(string(data[:min(3, len(data))]), "\uFEFF") {
		r.at = 3
	}
	n, err := r.readValue()
	if err != nil {
		return nil, err
	}
	if r.skip(); r.at < len(data) {
		return nil, r.fault("expected the end of the file after the notebook")
	}
	return n, nil
}

// readValue reads the value that starts at the next sign that is not blank.
func (r *reader) readValue() (*node, error) {
	if len(r.path) > maxDepth {
		return nil, r.fault("values are nested more than %d deep", maxDepth)
	}
	r.skip()
	n := &node{at: r.at}
	if r.at >= len(r.data) {
		return nil, r.fault("the file ends, expected a value%s", r.where("for"))
	}
	var err error
	switch c := r.data[r.at]; {
	case c == '{':
		n.value, err = r.readObject()
	case c == '[':
		n.value, err = r.readArray()
	case c == '"':
		n.value, err = r.readString()
	case c == '-' || c >= '0' && c <= '9':
		n.value, err = r.readNumber()
	default:
		n.value, err = r.readWord()
	}
	return n, err
}

func (r *reader) readObject() (fields, error) {
	f := fields{}
	r.at++
	for {
		if r.skip(); len(f) == 0 && r.peek() == '}' {
			r.at++
			return f, nil
		}
		if r.peek() != '"' {
			return nil, r.expected(`a name in '"'`, "in")
		}
		key, err := r.readString()
		if err != nil {
			return nil, err
		}
		r.path = append(r.path, key)
		if r.skip(); r.peek() != ':' {
			return nil, r.expected("':'", "after the name of")
		}
		r.at++
		if f[key], err = r.readValue(); err != nil {
			return nil, err
		}
		r.skip()
		switch r.peek() {
		case ',':
			r.at++
			r.path = r.path[:len(r.path)-1]
		case '}':
			r.at++
			r.path = r.path[:len(r.path)-1]
			return f, nil
		default:
			return nil, r.expected("',' or '}'", "after")
		}
	}
}

func (r *reader) readArray() ([]*node, error) {
	list := []*node{}
	r.at++
	if r.skip(); r.peek() == ']' {
		r.at++
		return list, nil
	}
	for {
		r.path = append(r.path, len(list))
		e, err := r.readValue()
		if err != nil {
			return nil, err
		}
		list = append(list, e)
		r.skip()
		switch r.peek() {
		case ',':
			r.at++
			r.path = r.path[:len(r.path)-1]
		case ']':
			r.at++
			r.path = r.path[:len(r.path)-1]
			return list, nil
		default:
			return nil, r.expected("',' or ']'", "after")
		}
	}
}

// readString reads a string; encoding/json undoes its escapes.
func (r *reader) readString() (string, error) {
	start := r.at
	for r.at++; r.at < len(r.data); {
		switch c := r.data[r.at]; {
		case c == '"':
			r.at++
			var s string
			if err := json.Unmarshal(r.data[start:r.at], &s); err != nil {
				r.at = start
				return "", r.fault("a text with a wrong escape%s", r.where("in"))
			}
			return s, nil
		case c == '\\':
			r.at += 2
		case c < ' ':
			return "", r.fault("a line break or control sign inside a text%s", r.where("in"))
		case c < utf8.RuneSelf:
			r.at++
		default:
			rune, size := utf8.DecodeRune(r.data[r.at:])
			if rune == utf8.RuneError && size == 1 {
				return "", r.fault("a text that is not UTF-8%s", r.where("in"))
			}
			r.at += size
		}
	}
	r.at = len(r.data)
	return "", r.fault("the file ends inside a text%s", r.where("in"))
}

func (r *reader) readNumber() (json.Number, error) {
	start := r.at
	for r.at < len(r.data) && strings.IndexByte("+-.0123456789eE", r.data[r.at]) >= 0 {
		r.at++
	}
	text := string(r.data[start:r.at])
	if !json.Valid([]byte(text)) {
		r.at = start
		return "", r.fault("%q is no number%s", text, r.where("in"))
	}
	return json.Number(text), nil
}

// readWord reads true, false and null.
func (r *reader) readWord() (any, error) {
	start := r.at
	for r.at < len(r.data) && r.data[r.at] >= 'a' && r.data[r.at] <= 'z' {
		r.at++
	}
	switch word := string(r.data[start:r.at]); word {
	case "true":
		return true, nil
	case "false":
		return false, nil
	case "null":
		return nil, nil
	}
	r.at = start
	return nil, r.expected("a value", "for")
}

func (r *reader) skip() {
	for r.at < len(r.data) && strings.IndexByte(" \t\r\n", r.data[r.at]) >= 0 {
		r.at++
	}
}

// peek gives the next sign, 0 at the end.
func (r *reader) peek() byte {
	if r.at < len(r.data) {
		return r.data[r.at]
	}
	return 0
}

// expected is the fault of a sign that is missing, at the end of the file or before another sign.
func (r *reader) expected(what, joint string) error {
	if r.at >= len(r.data) {
		return r.fault("the file ends, expected %s%s", what, r.where(joint))
	}
	return r.fault("expected %s%s", what, r.where(joint))
}

func (r *reader) fault(format string, args ...any) error {
	return &FormatError{Byte: r.at, Text: fmt.Sprintf(format, args...)}
}

// where names the value being read in words: " after the outputs of cell 7".
func (r *reader) where(joint string) string {
	if place := placeName(r.path); place != "" {
		return " " + joint + " " + place
	}
	if joint == "after" {
		return ""
	}
	return " " + joint + " the notebook"
}

// placeName says in words which part of a notebook a path leads to: the cell and the field of it; inside a field the
// path is not followed further.
func placeName(path []any) string {
	if len(path) == 0 {
		return ""
	}
	field := fmt.Sprint(path[0])
	index, inCell := at(path, 1).(int)
	switch {
	case field != "cells":
		return "the " + field + " of the notebook"
	case !inCell:
		return "the cells"
	}
	cell := fmt.Sprintf("cell %d", index+1)
	if len(path) == 2 {
		return cell
	}
	field = fmt.Sprint(path[2])
	if index, ok := at(path, 3).(int); ok && field == "outputs" {
		return fmt.Sprintf("output %d of %s", index+1, cell)
	}
	return "the " + field + " of " + cell
}

func at(path []any, i int) any {
	if i < len(path) {
		return path[i]
	}
	return nil
}
