package main

import (
	"fmt"
	"regexp"
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/dsl/symbols"
	"ampturn/kernel/cell"
)

// help explains a name of the notebook; a word that is no name lists those whose comments speak of it.
func help(s *cell.Session) func(name string) (map[string]any, bool) {
	return func(name string) (map[string]any, bool) {
		if data, ok := s.Help(name); ok {
			return data, true
		}
		t, ok := about(name)
		if !ok {
			return nil, false
		}
		return t.Bundle(), true
	}
}

// mostTopics is how many names a topic lists.
const mostTopics = 40

// silent are members that front ends call, or that say the same of everything.
var silent = []string{"MIMEBundle", "MIMEMetadata", "Completions", "Notes"}

// about lists the names of the vocabulary whose comments speak of a topic: first those that have it in their name, then those
// whose first sentence does, then the others; each group by name.
func about(topic string) (doc.Table, bool) {
	topic = strings.TrimSpace(topic)
	if len(topic) < 3 {
		return doc.Table{}, false
	}
	word := regexp.MustCompile(`(?i)\b` + regexp.QuoteMeta(topic) + `(s|es)?\b`)
	type entry struct {
		name, says string
		rank       int
	}
	var found []entry
	for path, comment := range symbols.Docs() {
		name, ok := strings.CutPrefix(path, "ampturn/dsl.")
		last := name[strings.LastIndex(name, ".")+1:]
		if !ok || strings.HasSuffix(last, "WithUnits") || slices.Contains(silent, last) {
			continue
		}
		e := entry{name: name, says: first(comment)}
		switch {
		case strings.Contains(strings.ToLower(last), strings.ToLower(topic)):
		case word.MatchString(e.says):
			e.rank = 1
		case word.MatchString(comment):
			e.rank = 2
		default:
			continue
		}
		found = append(found, e)
	}
	slices.SortFunc(found, func(a, b entry) int {
		if a.rank != b.rank {
			return a.rank - b.rank
		}
		return strings.Compare(a.name, b.name)
	})
	t := doc.Table{Caption: fmt.Sprintf("%q is no name; what speaks of it", topic), Columns: []doc.Column{{Name: "name"}, {Name: "what it is"}},
		Notes: []string{"Help(name) explains one of them"}}
	if more := len(found) - mostTopics; more > 0 {
		found = found[:mostTopics]
		t.Notes = append(t.Notes, fmt.Sprintf("%d more mention it", more))
	}
	for _, e := range found {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(e.name), doc.Text(e.says)})
	}
	return t, len(found) > 0
}

// first is the first sentence of a comment, on one line.
func first(comment string) string {
	paragraph, _, _ := strings.Cut(comment, "\n\n")
	line := strings.Join(strings.Fields(paragraph), " ")
	if i := strings.Index(line, ". "); i >= 0 {
		line = line[:i]
	}
	return strings.TrimRight(strings.NewReplacer("[", "", "]", "").Replace(line), ".:")
}
