package notebook

import (
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"
)

// The form that is written: nbformat 4.5.
const (
	major = 4
	minor = 5
)

// ParseIPYNB reads an .ipynb file of nbformat 4. Minor 0 to 4 become 4.5: cells get ids, made from their content; a
// minor above 5 is kept, and so are the fields it may have added.
func ParseIPYNB(name string, data []byte) (*Notebook, error) {
	nb, err := parseIPYNB(data)
	var bad *FormatError
	if errors.As(err, &bad) {
		bad.File = name
	}
	return nb, err
}

func parseIPYNB(data []byte) (*Notebook, error) {
	if strings.TrimSpace(string(data)) == "" {
		return nil, faultAt(nil, "the file is empty")
	}
	root, err := parseJSON(data)
	if err != nil {
		return nil, err
	}
	top, ok := root.value.(fields)
	if !ok {
		return nil, faultAt(root, "expected '{' at the start")
	}
	nb := &Notebook{}
	if nb.Minor, err = top.version(root); err != nil {
		return nil, err
	}
	d := decoder{object: top, at: root, where: "the notebook"}
	nb.Metadata = d.mapping("metadata", true)
	cells := d.list("cells", true)
	d.drop("nbformat", "nbformat_minor")
	nb.Extra = d.rest()
	for i, n := range cells {
		c, err := parseCell(n, fmt.Sprintf("cell %d", i+1))
		if err != nil {
			return nil, err
		}
		nb.Cells = append(nb.Cells, c)
	}
	nb.nameCells()
	return nb, d.err
}

// version checks nbformat and gives the minor version to write.
func (f fields) version(root *node) (int, error) {
	number := func(key string) (int, *node, error) {
		n := f[key]
		if n == nil {
			return 0, root, faultAt(root, "it has no %q", key)
		}
		v, err := whole(n)
		if err != nil {
			return 0, n, faultAt(n, "%q is no whole number", key)
		}
		return v, n, nil
	}
	v, n, err := number("nbformat")
	switch {
	case err != nil:
		return 0, err
	case v < major:
		return 0, faultAt(n, "it is of nbformat %d; save it once with a front end that writes nbformat 4", v)
	case v > major:
		return 0, faultAt(n, "it is of nbformat %d, which is newer than 4", v)
	}
	v, _, err = number("nbformat_minor")
	return max(v, minor), err
}

func parseCell(n *node, where string) (*Cell, error) {
	object, ok := n.value.(fields)
	if !ok {
		return nil, faultAt(n, "%s is no object", where)
	}
	d := decoder{object: object, at: n, where: where}
	kind := object["cell_type"]
	c := &Cell{Kind: Kind(d.text("cell_type", true))}
	switch c.Kind {
	case Code, Markdown, Raw:
	default:
		d.fail(kind, "the cell_type of %s is %q; it can be code, markdown or raw", where, c.Kind)
	}
	c.Source = d.text("source", true)
	c.Metadata = d.mapping("metadata", true)
	c.ID = d.text("id", false)
	if c.Kind == Code {
		c.Count = d.count("execution_count")
		for i, o := range d.list("outputs", true) {
			out, err := parseOutput(o, fmt.Sprintf("output %d of %s", i+1, where))
			if err != nil {
				return nil, err
			}
			c.Outputs = append(c.Outputs, out)
		}
	} else {
		c.Attachments = d.attachments()
	}
	c.Extra = d.rest()
	return c, d.err
}

func parseOutput(n *node, where string) (*Output, error) {
	object, ok := n.value.(fields)
	if !ok {
		return nil, faultAt(n, "%s is no object", where)
	}
	d := decoder{object: object, at: n, where: where}
	kind := object["output_type"]
	o := &Output{Kind: OutputKind(d.text("output_type", true))}
	switch o.Kind {
	case Stream:
		o.Name, o.Text = d.text("name", true), d.text("text", true)
	case Display, Result:
		o.Data, o.Metadata = joinBundle(d.mapping("data", true)), d.mapping("metadata", false)
		if o.Kind == Result {
			o.Count = d.count("execution_count")
		}
	case Fault:
		o.Fault, o.Text = d.text("ename", true), d.text("evalue", true)
		for _, line := range d.list("traceback", true) {
			text, ok := line.value.(string)
			if !ok {
				d.fail(line, "a line of the traceback of %s is no text", where)
			}
			o.Traceback = append(o.Traceback, text)
		}
	default:
		d.fail(kind, "%s is of the unknown type %q", where, o.Kind)
	}
	o.Extra = d.rest()
	return o, d.err
}

// decoder takes the fields of an object one by one; it keeps the first fault, and what was not asked for is the rest.
type decoder struct {
	object fields
	at     *node
	where  string
	err    error
}

func (d *decoder) fail(n *node, format string, args ...any) {
	if d.err == nil {
		if n == nil {
			n = d.at
		}
		d.err = faultAt(n, format, args...)
	}
}

// take gives a field and removes it from the rest; nil: there is none.
func (d *decoder) take(key string, must bool) *node {
	n := d.object[key]
	delete(d.object, key)
	if n == nil && must {
		d.fail(nil, "%s has no %q", d.where, key)
	}
	return n
}

func (d *decoder) drop(keys ...string) {
	for _, key := range keys {
		delete(d.object, key)
	}
}

func (d *decoder) rest() map[string]any {
	if len(d.object) == 0 {
		return nil
	}
	return d.object.plain()
}

// text takes a text, which a file may hold as a list of lines.
func (d *decoder) text(key string, must bool) string {
	n := d.take(key, must)
	if n == nil {
		return ""
	}
	if s, ok := joined(n.plain()).(string); ok {
		return s
	}
	d.fail(n, "%q of %s is neither a text nor a list of lines", key, d.where)
	return ""
}

func (d *decoder) mapping(key string, must bool) map[string]any {
	n := d.take(key, must)
	if n == nil {
		return map[string]any{}
	}
	f, ok := n.value.(fields)
	if !ok {
		d.fail(n, "%q of %s is no object", key, d.where)
		return nil
	}
	return f.plain()
}

func (d *decoder) list(key string, must bool) []*node {
	n := d.take(key, must)
	if n == nil {
		return nil
	}
	list, ok := n.value.([]*node)
	if !ok {
		d.fail(n, "%q of %s is no list", key, d.where)
	}
	return list
}

// count takes an execution count: a whole number, or null for a cell that was not run.
func (d *decoder) count(key string) int {
	n := d.take(key, false)
	if n == nil || n.value == nil {
		return 0
	}
	v, err := whole(n)
	if err != nil || v < 0 {
		d.fail(n, "%q of %s is neither a whole number from 0 nor null", key, d.where)
	}
	return v
}

// attachments takes the pictures of a text: name to MIME bundle.
func (d *decoder) attachments() map[string]any {
	n := d.object["attachments"]
	if n == nil {
		return nil
	}
	m := d.mapping("attachments", false)
	for name, bundle := range m {
		b, ok := bundle.(map[string]any)
		if !ok {
			d.fail(n, "the attachment %q of %s is no object", name, d.where)
			return nil
		}
		m[name] = joinBundle(b)
	}
	return m
}

func faultAt(n *node, format string, args ...any) *FormatError {
	e := &FormatError{Byte: -1, Text: fmt.Sprintf(format, args...)}
	if n != nil {
		e.Byte = n.at
	}
	return e
}

func whole(n *node) (int, error) {
	num, ok := n.value.(json.Number)
	if !ok {
		return 0, errors.New("no number")
	}
	v, err := num.Int64()
	return int(v), err
}

// joinBundle joins the lists of lines in a MIME bundle; JSON contents stay as they are.
func joinBundle(bundle map[string]any) map[string]any {
	for key, value := range bundle {
		if !isJSON(key) {
			bundle[key] = joined(value)
		}
	}
	return bundle
}

// joined joins a list of texts to one; any other value is given back.
func joined(value any) any {
	list, ok := value.([]any)
	if !ok {
		return value
	}
	var b strings.Builder
	for _, line := range list {
		s, ok := line.(string)
		if !ok {
			return value
		}
		b.WriteString(s)
	}
	return b.String()
}

func isJSON(mime string) bool {
	return mime == "application/json" || strings.HasPrefix(mime, "application/") && strings.HasSuffix(mime, "+json")
}

func isLines(mime string) bool {
	return strings.HasPrefix(mime, "text/") || slices.Contains([]string{"image/svg+xml", "application/javascript"}, mime)
}
