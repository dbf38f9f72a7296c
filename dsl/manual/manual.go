// Package manual is the manual of the vocabulary: chapters with examples that run, and the doc comments of every name.
// Its notebook is made of the texts in chapters and of the comments in the sources:
//
//	go generate ./dsl/manual
package manual

//go:generate go run ./gen -source .. -chapters chapters -out manual.ipynb

import _ "embed" // holds the notebook

// Name is the manual's file name.
const Name = "manual.ipynb"

// Notebook is the manual as an .ipynb file without outputs.
//
//go:embed manual.ipynb
var Notebook []byte
