package notebook

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"unicode/utf8"
)

// A text notebook is a list of cells, each opened by a mark:
//
//	// %%                               a code cell
//	// %% Bias curve {"tags":["slow"]}  the same with a title and metadata
//	// %% [markdown]                    text; each of its lines stands behind "// "
//	// %% [raw]                         likewise
//
// One blank line before a mark belongs to the mark. A line of a cell that would read as a mark is written with a
// backslash, "// \%%", and loses it on reading. Metadata of the notebook, beyond kernel and language, is one line
// "//ampturn:metadata {...}" after the first. Outputs, counts and ids are not part of a text.
const (
	buildLine    = "//go:build ampturn"
	metadataLine = "//ampturn:metadata "
)

var (
	markLine    = regexp.MustCompile(`^//[ \t]*%%(?:[ \t].*)?$`)
	escapedLine = regexp.MustCompile(`^//[ \t]*\\+%%(?:[ \t].*)?$`)
	toEscape    = regexp.MustCompile(`^//[ \t]*\\*%%(?:[ \t].*)?$`)
	kindWord    = regexp.MustCompile(`(?:^|[ \t])\[(markdown|md|raw)\]$`)
)

// ParseText reads a percent-cell text. The first line may be "//go:build ampturn"; a text without it needs at least one
// cell mark. Code before the first mark is a cell of its own.
func ParseText(name string, data []byte) (*Notebook, error) {
	text, err := normalText(name, data)
	if err != nil {
		return nil, err
	}
	lines := strings.Split(text, "\n")
	if lines[len(lines)-1] == "" {
		lines = lines[:len(lines)-1]
	}
	nb := New()
	head := len(lines) > 0 && strings.TrimRight(lines[0], " \t") == buildLine
	if head {
		lines = lines[1:]
		if lines, err = nb.readHead(lines); err != nil {
			return nil, &FormatError{File: name, Byte: -1, Text: err.Error()}
		}
	}
	first := slices.IndexFunc(lines, markLine.MatchString)
	if first < 0 && !head {
		return nil, &FormatError{File: name, Byte: -1, Text: `no line of it is a cell mark "// %%"`}
	}
	if first < 0 {
		first = len(lines)
	}
	if code := trimBlankLines(lines[:first]); len(code) > 0 {
		nb.addText("", code)
	}
	for lines = lines[first:]; len(lines) > 0; {
		end := slices.IndexFunc(lines[1:], markLine.MatchString) + 1
		body := lines[1:]
		if end > 0 {
			body = lines[1:end]
			if n := len(body); n > 0 && body[n-1] == "" {
				body = body[:n-1]
			}
		} else {
			end = len(lines)
		}
		nb.addText(lines[0], body)
		lines = lines[end:]
	}
	nb.nameCells()
	return nb, nil
}

// normalText checks that the file is text and ends its lines with \n only.
func normalText(name string, data []byte) (string, error) {
	if !utf8.Valid(data) {
		at := 0
		for r, size := utf8.DecodeRune(data); r != utf8.RuneError || size > 1; r, size = utf8.DecodeRune(data[at:]) {
			at += size
		}
		return "", &FormatError{File: name, Byte: at, Text: "a sign that is not UTF-8"}
	}
	text := strings.TrimPrefix(string(data), "\uFEFF")
	if first, _, more := strings.Cut(text, "\n"); more && strings.HasSuffix(first, "\r") {
		text = strings.ReplaceAll(text, "\r\n", "\n")
	}
	return text, nil
}

// readHead reads the line of notebook metadata, if there is one, and gives the lines after it.
func (nb *Notebook) readHead(lines []string) ([]string, error) {
	i := slices.IndexFunc(lines, func(s string) bool { return strings.TrimSpace(s) != "" })
	if i < 0 || !strings.HasPrefix(lines[i], metadataLine) {
		return lines, nil
	}
	m, err := parseMap(strings.TrimPrefix(lines[i], metadataLine))
	if err != nil {
		return nil, errors.New("the line " + strings.TrimSpace(metadataLine) + " does not hold one JSON object")
	}
	nb.Metadata = m
	return lines[i+1:], nil
}

// addText adds the cell that a mark opens.
func (nb *Notebook) addText(mark string, body []string) {
	c := readMark(mark)
	lines := slices.Clone(body)
	for i, line := range lines {
		if escapedLine.MatchString(line) {
			line = strings.Replace(line, `\`, "", 1)
		}
		if c.Kind != Code {
			line = uncomment(line)
		}
		lines[i] = line
	}
	c.Source = strings.Join(lines, "\n")
	nb.Cells = append(nb.Cells, c)
}

// readMark reads title, kind and metadata from a cell mark.
func readMark(mark string) *Cell {
	c := &Cell{Kind: Code, Metadata: map[string]any{}}
	_, rest, _ := strings.Cut(mark, "%%")
	rest = strings.TrimSpace(rest)
	for i := 0; i < len(rest) && strings.HasSuffix(rest, "}"); i++ {
		if rest[i] != '{' || i > 0 && rest[i-1] != ' ' {
			continue
		}
		if m, err := parseMap(rest[i:]); err == nil {
			c.Metadata, rest = m, strings.TrimSpace(rest[:i])
			break
		}
	}
	if m := kindWord.FindStringSubmatch(rest); m != nil {
		c.Kind = Markdown
		if m[1] == "raw" {
			c.Kind = Raw
		}
		rest = strings.TrimSpace(kindWord.ReplaceAllString(rest, ""))
	}
	if _, set := c.Metadata["title"]; rest != "" && !set {
		c.Metadata["title"] = rest
	}
	return c
}

func parseMap(text string) (map[string]any, error) {
	n, err := parseJSON([]byte(text))
	if err != nil {
		return nil, err
	}
	f, ok := n.value.(fields)
	if !ok {
		return nil, errors.New("not an object")
	}
	return f.plain(), nil
}

// uncomment takes the "// " from a line of text; a line without it is taken as it is.
func uncomment(line string) string {
	if rest, ok := strings.CutPrefix(line, "// "); ok {
		return rest
	}
	rest, _ := strings.CutPrefix(line, "//")
	return rest
}

// Text gives the notebook as a percent-cell text.
//
// Errors: cells with attachments, which a text cannot hold.
func (nb *Notebook) Text() ([]byte, error) {
	var b bytes.Buffer
	b.WriteString(buildLine + "\n")
	if m := nb.textMetadata(); len(m) > 0 {
		line, err := oneLine(m)
		if err != nil {
			return nil, err
		}
		b.WriteString("\n" + metadataLine + line + "\n")
	}
	for i, c := range nb.Cells {
		if len(c.Attachments) > 0 {
			return nil, fmt.Errorf("cell %d carries pictures of its own, which a .go text cannot hold; write it as .ipynb", i+1)
		}
		mark, err := c.mark()
		if err != nil {
			return nil, err
		}
		b.WriteString("\n" + mark + "\n")
		c.writeLines(&b)
	}
	return b.Bytes(), nil
}

// textMetadata is the metadata without what every run puts there.
func (nb *Notebook) textMetadata() map[string]any {
	m := map[string]any{}
	for key, value := range nb.Metadata {
		if key != "kernelspec" && key != "language_info" {
			m[key] = value
		}
	}
	return m
}

// mark gives the line that opens the cell.
func (c *Cell) mark() (string, error) {
	words := []string{"// %%"}
	meta := map[string]any{}
	for key, value := range c.Metadata {
		if title, ok := value.(string); key == "title" && ok && plainTitle(title) {
			words = append(words, title)
			continue
		}
		meta[key] = value
	}
	switch c.Kind {
	case Markdown:
		words = append(words, "[markdown]")
	case Raw:
		words = append(words, "[raw]")
	}
	if len(meta) > 0 {
		line, err := oneLine(meta)
		if err != nil {
			return "", err
		}
		words = append(words, line)
	}
	return strings.Join(words, " "), nil
}

// plainTitle tells whether a title reads back from a mark as it is.
func plainTitle(s string) bool {
	return s != "" && s == strings.TrimSpace(s) && !strings.ContainsAny(s, "\n\r{[\\") && utf8.ValidString(s)
}

// oneLine gives JSON on one line, keys in order.
func oneLine(m map[string]any) (string, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	err := enc.Encode(m)
	return strings.TrimSpace(b.String()), err
}

func (c *Cell) writeLines(b *bytes.Buffer) {
	if c.Source == "" {
		return
	}
	for _, line := range strings.Split(clean(c.Source), "\n") {
		if c.Kind != Code {
			line = comment(line)
		}
		if toEscape.MatchString(line) {
			at := strings.Index(line, "%%")
			slash := strings.LastIndexFunc(line[:at], func(r rune) bool { return r != '\\' }) + 1
			line = line[:slash] + `\` + line[slash:]
		}
		b.WriteString(line + "\n")
	}
}

func comment(line string) string {
	if line == "" {
		return "//"
	}
	return "// " + line
}

func trimBlankLines(lines []string) []string {
	blank := func(s string) bool { return strings.TrimSpace(s) == "" }
	for len(lines) > 0 && blank(lines[0]) {
		lines = lines[1:]
	}
	for len(lines) > 0 && blank(lines[len(lines)-1]) {
		lines = lines[:len(lines)-1]
	}
	return lines
}
