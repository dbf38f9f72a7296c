// Package cell is the cell language: Go statements and declarations, run one cell after another in one scope.
//
// A cell passes five stages, a file or a few for each:
//
//	parse     split.go               declarations and statements told apart; syntax errors end here
//	check     check.go whole.go ...  go/types against the live names of earlier cells; subset rules; units
//	lower     lower_*.go             the checked tree as plain text in a small part of Go
//	evaluate  machine.go session.go  the text is compiled, then names are committed, then the cell runs
//	show      show.go fault.go       values of expression statements; one line for what stopped a cell
//
// Text that a user typed never reaches the interpreter; only what was checked and lowered does. A [Session] is a
// [kernel.Engine] for one notebook.
package cell
