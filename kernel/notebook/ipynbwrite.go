package notebook

import (
	"bytes"
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"unicode/utf8"
)

// IPYNB gives the notebook as an .ipynb file in the layout that nbformat's own writer uses: keys in order, one blank
// of indent a level, texts as lists of lines, signs beyond ASCII as they are, a line break at the end.
func (nb *Notebook) IPYNB() ([]byte, error) {
	nb.nameCells()
	cells := make([]any, len(nb.Cells))
	for i, c := range nb.Cells {
		cells[i] = c.object()
	}
	top := maps.Clone(nb.Extra)
	if top == nil {
		top = map[string]any{}
	}
	top["cells"] = cells
	top["metadata"] = orEmpty(nb.Metadata)
	top["nbformat"] = major
	top["nbformat_minor"] = max(nb.Minor, minor)
	var b bytes.Buffer
	if err := writeJSON(&b, top, "\n"); err != nil {
		return nil, err
	}
	b.WriteByte('\n')
	return b.Bytes(), nil
}

func (c *Cell) object() map[string]any {
	m := maps.Clone(c.Extra)
	if m == nil {
		m = map[string]any{}
	}
	m["cell_type"] = string(c.Kind)
	m["id"] = c.ID
	m["metadata"] = orEmpty(c.Metadata)
	m["source"] = splitLines(c.Source)
	if c.Kind != Code {
		if c.Attachments != nil {
			m["attachments"] = splitAttachments(c.Attachments)
		}
		return m
	}
	outputs := make([]any, len(c.Outputs))
	for i, o := range c.Outputs {
		outputs[i] = o.object()
	}
	m["execution_count"], m["outputs"] = countOrNull(c.Count), outputs
	return m
}

func (o *Output) object() map[string]any {
	m := maps.Clone(o.Extra)
	if m == nil {
		m = map[string]any{}
	}
	m["output_type"] = string(o.Kind)
	switch o.Kind {
	case Stream:
		m["name"], m["text"] = o.Name, splitLines(o.Text)
	case Fault:
		lines := make([]any, len(o.Traceback))
		for i, line := range o.Traceback {
			lines[i] = line
		}
		m["ename"], m["evalue"], m["traceback"] = o.Fault, o.Text, lines
	default:
		m["data"], m["metadata"] = splitBundle(o.Data), orEmpty(o.Metadata)
		if o.Kind == Result {
			m["execution_count"] = countOrNull(o.Count)
		}
	}
	return m
}

func countOrNull(n int) any {
	if n == 0 {
		return nil
	}
	return n
}

func orEmpty(m map[string]any) map[string]any {
	if m == nil {
		return map[string]any{}
	}
	return m
}

func splitAttachments(pictures map[string]any) map[string]any {
	out := make(map[string]any, len(pictures))
	for name, bundle := range pictures {
		if b, ok := bundle.(map[string]any); ok {
			bundle = splitBundle(b)
		}
		out[name] = bundle
	}
	return out
}

// splitBundle gives a MIME bundle with its texts as lists of lines.
func splitBundle(bundle map[string]any) map[string]any {
	out := make(map[string]any, len(bundle))
	for key, value := range bundle {
		if s, ok := value.(string); ok && isLines(key) {
			value = splitLines(s)
		}
		out[key] = value
	}
	return out
}

// splitLines cuts a text after each line break, of which nbformat's writer knows all that Unicode knows.
func splitLines(s string) []any {
	lines := []any{}
	start := 0
	for i := 0; i < len(s); {
		r, size := utf8.DecodeRuneInString(s[i:])
		i += size
		switch r {
		case '\r':
			if i < len(s) && s[i] == '\n' {
				i++
			}
		case '\n', '\v', '\f', '\x1c', '\x1d', '\x1e', '\u0085', '\u2028', '\u2029':
		default:
			continue
		}
		lines = append(lines, s[start:i])
		start = i
	}
	if start < len(s) {
		lines = append(lines, s[start:])
	}
	return lines
}

// writeJSON writes a value; newline is the line break with the indent of the value's own level.
func writeJSON(b *bytes.Buffer, value any, newline string) error {
	inner := newline + " "
	switch v := value.(type) {
	case map[string]any:
		if len(v) == 0 {
			b.WriteString("{}")
			return nil
		}
		for i, key := range slices.Sorted(maps.Keys(v)) {
			b.WriteString(opening(i, "{") + inner)
			writeString(b, key)
			b.WriteString(": ")
			if err := writeJSON(b, v[key], inner); err != nil {
				return err
			}
		}
		b.WriteString(newline + "}")
	case []any:
		if len(v) == 0 {
			b.WriteString("[]")
			return nil
		}
		for i, e := range v {
			b.WriteString(opening(i, "[") + inner)
			if err := writeJSON(b, e, inner); err != nil {
				return err
			}
		}
		b.WriteString(newline + "]")
	case string:
		writeString(b, v)
	case json.Number:
		b.WriteString(v.String())
	case nil, bool, int:
		fmt.Fprint(b, jsonWord(v))
	default:
		return writeOther(b, v, newline)
	}
	return nil
}

func opening(i int, bracket string) string {
	if i == 0 {
		return bracket
	}
	return ","
}

func jsonWord(v any) any {
	if v == nil {
		return "null"
	}
	return v
}

// writeOther writes a value that a program put into the notebook: encoding/json turns it into plain values.
func writeOther(b *bytes.Buffer, value any, newline string) error {
	text, err := json.Marshal(value)
	if err != nil {
		return fmt.Errorf("a value of type %T cannot be written to a notebook: %w", value, err)
	}
	n, err := parseJSON(text)
	if err != nil {
		return err
	}
	return writeJSON(b, n.plain(), newline)
}

// writeString writes a text with the escapes of RFC 8259 and no others.
func writeString(b *bytes.Buffer, s string) {
	b.WriteByte('"')
	for _, r := range clean(s) {
		switch r {
		case '"':
			b.WriteString(`\"`)
		case '\\':
			b.WriteString(`\\`)
		case '\n':
			b.WriteString(`\n`)
		case '\r':
			b.WriteString(`\r`)
		case '\t':
			b.WriteString(`\t`)
		case '\b':
			b.WriteString(`\b`)
		case '\f':
			b.WriteString(`\f`)
		default:
			if r < ' ' {
				fmt.Fprintf(b, `\u%04x`, r)
			} else {
				b.WriteRune(r)
			}
		}
	}
	b.WriteByte('"')
}
