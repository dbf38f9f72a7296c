// Package far lies outside the table.
package far

// Code counts kinds.
type Code int

// Failure is what went wrong.
type Failure struct {
	Code Code
	note string
}

// Error gives the note.
func (f *Failure) Error() string { return f.note }

// Inner drags along what nobody outside needs.
type Inner struct{ N int }
