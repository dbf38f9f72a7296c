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

// near tells whether one of the names differs from a mistyped one in no more than a third of its letters.
func near(name string, names []string) bool {
	return slices.ContainsFunc(names, func(have string) bool { return distance(name, have) <= len(name)/3 })
}

// shares lists the names of the materials that have a word of three letters or more in common with a name, in their own
// name or their class.
func shares(name string, rows []MaterialRow) []string {
	var alike []string
	for _, r := range rows {
		words := strings.FieldsFunc(strings.ToLower(r.Name+" "+r.Class), func(c rune) bool { return c == ' ' || c == ',' || c == '-' })
		for _, w := range strings.FieldsFunc(strings.ToLower(name), func(c rune) bool { return c == ' ' || c == ',' || c == '-' }) {
			if len(w) >= 3 && slices.Contains(words, w) && !slices.Contains(alike, r.Name) {
				alike = append(alike, r.Name)
			}
		}
	}
	return alike
}
