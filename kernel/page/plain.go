package page

import (
	"maps"
	"regexp"
	"slices"
	"strings"
)

var escapeSequence = regexp.MustCompile("\x1b(?:\\[[0-?]*[ -/]*[@-~]|\\][^\x07\x1b]*(?:\x07|\x1b\\\\)?|[@-Z\\\\-_])")

// terminal gives printed text as a terminal would leave it: colours gone, a line that returned to its start
// overwritten, a sign taken back where a backspace follows.
func terminal(s string) string {
	lines := strings.Split(escapeSequence.ReplaceAllString(s, ""), "\n")
	for i, line := range lines {
		if strings.ContainsAny(line, "\r\b") {
			line = overwrite(line)
		}
		lines[i] = line
	}
	return visible(strings.TrimRight(strings.Join(lines, "\n"), "\n"))
}

func overwrite(line string) string {
	var out []rune
	at := 0
	for _, r := range line {
		switch {
		case r == '\r':
			at = 0
		case r == '\b':
			at = max(at-1, 0)
		case at < len(out):
			out[at] = r
			at++
		default:
			out = append(out, r)
			at++
		}
	}
	return string(out)
}

// visible takes out the signs that an HTML text may not hold.
func visible(s string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' && r != '\n' && r != '\t' || r == 0x7f {
			return -1
		}
		return r
	}, strings.ToValidUTF8(s, "\uFFFD"))
}

// kinds lists the MIME types of a bundle in order.
func kinds(data map[string]any) []string { return slices.Sorted(maps.Keys(data)) }
