package magcirc

import "strings"

// Error is a refusal: which part, what is wrong with it, against which limit, and the way out.
type Error struct {
	Code     Code    // stable kind of the refusal
	Elem     string  // the part in its user's words, with its kind: "gap T1.centre.gap"
	Msg      string  // quantity, value and limit: "length 600 mm is longer than its leg (36 mm)"
	Hint     string  // the way out, a sentence or a clause
	Quantity string  // "length"
	Unit     string  // SI unit of Got and Limit
	Got      float64 // the refused value
	Limit    float64 // the limit it missed
	Err      error   // the cause, if another error lies below
}

// Error gives the one line that a reader sees: "elem: msg. Hint".
func (e *Error) Error() string {
	var b strings.Builder
	if e.Elem != "" {
		b.WriteString(e.Elem)
		b.WriteString(": ")
	}
	b.WriteString(e.Msg)
	if e.Hint != "" {
		switch first := e.Hint[0]; {
		case first >= 'A' && first <= 'Z':
			b.WriteString(". ")
		default:
			b.WriteString("; ")
		}
		b.WriteString(e.Hint)
	}
	return b.String()
}

// Unwrap gives the cause.
func (e *Error) Unwrap() error { return e.Err }

// CodeName gives the stable name of the refusal, for programs that branch on it.
func (e *Error) CodeName() string { return e.Code.String() }

// Note is what a reader must know about a result that was delivered all the same: a law used beyond its data, a
// formula at the edge of its range.
type Note struct {
	Kind NoteKind
	Elem string // the part: "leg T1.centre"
	Text string // one line
}

// String gives the line that a reader sees: "elem: text".
func (n Note) String() string {
	if n.Elem == "" {
		return n.Text
	}
	return n.Elem + ": " + n.Text
}

// NoteKind sorts notes for the lists that a document makes of them.
type NoteKind int

const (
	Remark       NoteKind = iota // plain information on the method
	Extrapolated                 // data or law used beyond its range
	OutOfRange                   // formula used outside its validity
	Assumed                      // a default that nobody chose
	Override                     // a computed value replaced by the author
)
