package stdlib

import (
	"slices"
	"strings"

	"ampturn/magcirc"
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

// distance is that of two names; a name that holds the other as a part is near.
func distance(a, b string) int {
	a, b = strings.ToLower(a), strings.ToLower(b)
	d := magcirc.Distance(a, b)
	if len(a) > 2 && strings.Contains(b, a) {
		d = 1 + d/8
	}
	return d
}
