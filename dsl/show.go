package dsl

import (
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
)

// Show shows values from within loops and functions; at the top level of a cell a value shows itself.
func Show(values ...any) {
	for _, v := range values {
		session.Show(v)
	}
}

// words is the bundle of a result that is one line of text.
func words(text string) map[string]any { return doc.Bundle(text, "", "") }

// noteLines gives notes as lines of a document.
func noteLines(notes []magcirc.Note) []string {
	lines := make([]string, len(notes))
	for i, n := range notes {
		lines[i] = n.String()
	}
	return lines
}

// joinMetadata gives the numbers of several tables in full.
func joinMetadata(tables []doc.Table) map[string]any {
	all := make([]any, len(tables))
	for i := range tables {
		all[i] = tables[i].Metadata()["ampturn"]
	}
	return map[string]any{"ampturn": map[string]any{"tables": all}}
}

// TableView is a table that shows itself.
type TableView struct {
	table doc.Table
}

// MIMEBundle shows the table.
func (t *TableView) MIMEBundle() map[string]any {
	if t == nil {
		return nil
	}
	return t.table.Bundle()
}

// MIMEMetadata gives the numbers in full.
func (t *TableView) MIMEMetadata() map[string]any {
	if t == nil {
		return nil
	}
	return t.table.Metadata()
}

// Caption gives a copy of the table under a caption of one's own.
func (t *TableView) Caption(text string) *TableView {
	if t == nil {
		refuse(magcirc.BadValue, "table", "there is none", "make it with TableOf(rows)")
	}
	next := *t
	next.table.Caption = text
	return &next
}

// headOf makes a column's header of a field's name: "PeakCurrent" is "peak current", "Vin" and "IR" stay as they are.
func headOf(field string) string {
	var b strings.Builder
	for i, r := range field {
		upper := r >= 'A' && r <= 'Z'
		before := i > 0 && field[i-1] >= 'a' && field[i-1] <= 'z'
		after := i+1 < len(field) && field[i+1] >= 'a' && field[i+1] <= 'z'
		if upper && before && after {
			b.WriteByte(' ')
			r += 'a' - 'A'
		}
		b.WriteRune(r)
	}
	s := b.String()
	if strings.Contains(s, " ") {
		s = strings.ToLower(s[:1]) + s[1:]
	}
	return s
}
