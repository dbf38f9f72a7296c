package nb

import "fmt"

// worded is a value of a cell's type with the text it gives itself.
type worded struct {
	value any
	text  func() string
}

// Worded joins a value and its text, which compiled code would not find.
func Worded(v any, text func() string) any { return worded{v, text} }

// Format writes the text where a text is asked for, the bare value elsewhere.
func (w worded) Format(f fmt.State, verb rune) {
	switch verb {
	case 'v', 's', 'q':
		if !f.Flag('#') {
			fmt.Fprintf(f, fmt.FormatString(f, map[rune]rune{'v': 's', 's': 's', 'q': 'q'}[verb]), w.text())
			return
		}
	}
	fmt.Fprintf(f, fmt.FormatString(f, verb), w.value)
}

// Error makes a cell's error one for compiled code too.
func (w worded) Error() string { return w.text() }
