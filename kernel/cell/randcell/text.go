package randcell

import "strings"

// A draft is text for both sides. Marks tell them apart:
//
//	nameOpen x nameEnd   a name of the notebook: x in the cell, what it stands for in the reference
//	refOpen .. refEnd    text of the reference alone
//	cellOpen .. cellEnd  text of the cell alone
const (
	nameOpen, nameEnd = "\x01", "\x02"
	refOpen, refEnd   = "\x03", "\x04"
	cellOpen, cellEnd = "\x05", "\x06"
)

func ref(text string) string  { return refOpen + text + refEnd }
func only(text string) string { return cellOpen + text + cellEnd }

// float marks a conversion that the cell leaves out: a whole number that counts as float64.
func float(text string) string { return ref("float64(") + text + ref(")") }

// forCell gives the side of the cell.
func forCell(draft string) string {
	draft = cut(draft, refOpen, refEnd)
	return strings.NewReplacer(nameOpen, "", nameEnd, "", cellOpen, "", cellEnd, "").Replace(draft)
}

// forReference gives the side of the reference; meaning tells what a name stands for.
func forReference(draft string, meaning func(name string) string) string {
	draft = cut(draft, cellOpen, cellEnd)
	draft = strings.NewReplacer(refOpen, "", refEnd, "").Replace(draft)
	var b strings.Builder
	for {
		i := strings.Index(draft, nameOpen)
		if i < 0 {
			b.WriteString(draft)
			return b.String()
		}
		j := strings.Index(draft, nameEnd)
		b.WriteString(draft[:i])
		b.WriteString(meaning(draft[i+1 : j]))
		draft = draft[j+1:]
	}
}

// cut takes marked pieces out; they may be nested.
func cut(s, open, end string) string {
	var b strings.Builder
	depth := 0
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case open[0]:
			depth++
		case end[0]:
			depth--
		default:
			if depth == 0 {
				b.WriteByte(s[i])
			}
		}
	}
	return b.String()
}

func indent(text string) string {
	return "\t" + strings.ReplaceAll(strings.TrimRight(text, "\n"), "\n", "\n\t") + "\n"
}
