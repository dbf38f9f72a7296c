package unit

import (
	"go/ast"
	"go/token"
	"go/types"
)

// Checker checks the cells of one notebook one after another. It keeps the dimensions of the objects that earlier
// cells declared. A Checker serves one goroutine at a time.
type Checker struct {
	table *table
	// Quote gives the source text of a piece of the cell, as typed, for messages; nil prints the syntax tree.
	Quote func(pos, end token.Pos) string
}

// New makes a checker for the names of a table.
func New(t *Table) (*Checker, error) {
	r, err := t.read()
	if err != nil {
		return nil, err
	}
	return &Checker{table: r}, nil
}

// Diagnostic is a refusal at a place in the cell.
type Diagnostic struct {
	Pos, End token.Pos
	Text     string // one line: what, way out
}

// Report is what a check found in one cell.
type Report struct {
	Diagnostics []Diagnostic // in order of their positions; empty: the cell may run
	checker     *Checker
}

// Check checks one cell after its type check succeeded. The files hold the cell's declarations and statements, info
// their types, definitions, uses, selections and instances; pkg is the package of the cell. Nothing is remembered for later
// cells until [Report.Commit].
func (c *Checker) Check(fset *token.FileSet, files []*ast.File, info *types.Info, pkg *types.Package) *Report {
	return &Report{checker: c}
}

// Text gives the unit text of an expression of the cell as it is shown: "m2", "A/m"; "" for what has no unit (plain
// numbers, whole numbers, text), "?" for what could not be traced, "{Vin=V;Core=degC}" for a struct and for a container
// of structs. A plain number typed as a literal has "#" appended.
func (r *Report) Text(e ast.Expr) string { return "?" }

// Commit keeps the dimensions of the cell's objects for the cells that follow. Call it when the cell's names are
// committed.
func (r *Report) Commit() {}
