package kerneltest

import (
	"maps"
	"slices"
	"strings"

	"ampturn/kernel"
)

// Complete lists the commands and names that begin with the word before the cursor.
func (t *Toy) Complete(source string, cursor int) kernel.Completion {
	before := []rune(source)[:cursor]
	start := len(before)
	for start > 0 && isWord(before[start-1]) {
		start--
	}
	c := kernel.Completion{Start: start, End: cursor}
	prefix := string(before[start:])
	add := func(word, kind string) {
		if strings.HasPrefix(word, prefix) {
			c.Matches = append(c.Matches, word)
			c.Types = append(c.Types, kind)
		}
	}
	t.mu.Lock()
	defer t.mu.Unlock()
	for _, n := range slices.Sorted(maps.Keys(t.names)) {
		add(n, "variable")
	}
	for _, n := range slices.Sorted(maps.Keys(commands)) {
		add(n, "function")
	}
	return c
}

func isWord(r rune) bool {
	return r == '_' || r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9'
}

// Inspect knows the commands.
func (t *Toy) Inspect(source string, cursor int) (map[string]any, bool) {
	all := []rune(source)
	start, end := cursor, cursor
	for start > 0 && isWord(all[start-1]) {
		start--
	}
	for end < len(all) && isWord(all[end]) {
		end++
	}
	word := string(all[start:end])
	if _, ok := commands[word]; !ok {
		return nil, false
	}
	return map[string]any{"text/plain": word + ": a command"}, true
}

// IsComplete takes a line that ends in a backslash for an incomplete one and "=" alone for an invalid one.
func (t *Toy) IsComplete(source string) (status, indent string) {
	switch {
	case strings.HasSuffix(source, "\\"):
		return "incomplete", "  "
	case strings.HasPrefix(source, "="):
		return "invalid", ""
	}
	return "complete", ""
}
