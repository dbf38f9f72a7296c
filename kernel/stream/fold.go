package stream

import "strings"

// Fold drops what a carriage return has overwritten: of "10 %\r20 %\r30 %" only the last is seen, so only that is
// kept. Text before the first line end may continue a line that was sent already; there one carriage return stays.
// Lines with escape sequences are left alone.
func Fold(text string) string {
	if strings.IndexByte(text, '\r') < 0 {
		return text
	}
	lines := strings.SplitAfter(text, "\n")
	for i, l := range lines {
		lines[i] = foldLine(l, i > 0)
	}
	return strings.Join(lines, "")
}

// foldLine folds one line; whole tells that it begins at its first column.
func foldLine(line string, whole bool) string {
	body := strings.TrimRight(line, "\r\n")
	end := line[len(body):]
	parts := strings.Split(body, "\r")
	first := 0
	if !whole {
		first = 1
	}
	if len(parts) <= first+1 || strings.IndexByte(body, '\x1b') >= 0 {
		return line
	}
	seen := []rune(parts[first])
	for _, p := range parts[first+1:] {
		over := []rune(p)
		if len(over) >= len(seen) {
			seen = over
			continue
		}
		seen = append(over, seen[len(over):]...)
	}
	if whole {
		return string(seen) + end
	}
	return parts[0] + "\r" + string(seen) + end
}
