package stdlib

import (
	"slices"
	"strings"
)

// nearest gives the n names that differ least from a mistyped one, quoted, nearest first; equals keep their order.
func nearest(name string, names []string, n int) []string {
	sorted := slices.Clone(names)
	slices.SortStableFunc(sorted, func(a, b string) int { return distance(name, a) - distance(name, b) })
	quoted := make([]string, 0, n)
	for _, s := range sorted[:min(n, len(sorted))] {
		quoted = append(quoted, `"`+s+`"`)
	}
	return quoted
}

// distance counts the letters to change, add or drop between two names, whatever their case (Levenshtein 1966); a
// name that holds the other as a part is near.
func distance(a, b string) int {
	x, y := []rune(strings.ToLower(a)), []rune(strings.ToLower(b))
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i := range x {
		last := row[0]
		row[0] = i + 1
		for j := range y {
			change := last
			if x[i] != y[j] {
				change++
			}
			last = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	d := row[len(y)]
	if len(x) > 2 && strings.Contains(string(y), string(x)) {
		d = 1 + d/8
	}
	return d
}
