// Package randcell makes random notebooks in the cell language, each together with a plain Go program that says what
// it must print. Both texts are written from one random draft; the program knows nothing of how cells are checked or
// lowered. It follows the rule that a reader is told:
//
//	a name stands for what was declared last; a variable declared again with its own type stays the same variable
//	functions and methods see a function, a constant or a variable that was declared again
//	function values made before keep a constant, a variable of another type and a function of another signature
//	a cell that fails or is interrupted leaves no name that it declared; older variables keep what was assigned
//	a cell that is refused does nothing
//	whole numbers count as float64 beside a float64, a unit or a literal with a point
//	maps are ranged over in the order of their keys
//
// A [Notebook] holds the cells; [Program] joins the references of many notebooks into one package that prints, cell by
// cell, what the cells print. Constructs are counted, so that a test can tell what it has seen.
//
// Not covered: texts of failures, units, help, and what a notebook writes to stderr.
package randcell

// Outcome says how a cell must end.
type Outcome int

// The ways in which a cell ends.
const (
	Runs        Outcome = iota // to its end
	Fails                      // on the way, by a panic
	Interrupted                // in an endless loop, when [Spinning] was printed
	Refused                    // before anything runs
)

func (o Outcome) String() string {
	return [...]string{"runs", "fails", "is interrupted", "is refused"}[o]
}

// Spinning is the line that a cell prints before its endless loop.
const Spinning = "spinning"

// Cell is a cell of a notebook.
type Cell struct {
	Source  string
	Outcome Outcome
}

// Notebook is a random notebook.
type Notebook struct {
	Seed      uint64
	Cells     []Cell
	Reference string         // declarations of a Go file; see [Program]
	Uses      map[string]int // construct -> how often
	prefix    string
}

// Snippet is an expression of a vocabulary with the value float64. "$1", "$2" stand for numbers from 1 to 10; "@"
// stands before names that the reference takes from the vocabulary's package. Fails makes it one that stops the cell.
type Snippet struct {
	Name  string // construct under which it is counted
	Text  string
	Fails bool
}

// Options choose what notebooks hold.
type Options struct {
	Snippets []Snippet // calls of a vocabulary; may be empty
	Package  string    // qualifier of the vocabulary in the reference: "dsl"
	Units    []string  // names of units of equal dimension, for n*mm/um; may be empty
}

// Constructs lists what is counted, without the names of snippets.
func Constructs() []string { return append([]string(nil), constructs...) }
