package cell

import (
	"go/token"
	"sort"
	"strings"
)

// names lists the names that cells can use of the vocabulary.
func (b *base) names() []string {
	var out []string
	for n := range b.objects {
		out = append(out, n)
	}
	for n := range b.byName {
		out = append(out, n)
	}
	if b.open != nil {
		for _, n := range b.open.Scope().Names() {
			if token.IsExported(n) && !b.hidden(n) {
				out = append(out, n)
			}
		}
	}
	return out
}

// nearest gives the name at the smallest distance, if it is near enough to be meant.
func nearest(name string, names []string) string {
	limit := 1 + len(name)/4
	if len(name) <= 2 {
		limit = 0
	}
	best, at := "", limit+1
	sort.Strings(names)
	for _, n := range names {
		d := distance(strings.ToLower(name), strings.ToLower(n))
		if d < at || d == at && best != "" && n[0] == name[0] && best[0] != name[0] {
			best, at = n, d
		}
	}
	return best
}

// distance counts the letters to change, drop, add or swap with their neighbours.
func distance(a, b string) int {
	prev2, prev, cur := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range prev {
		prev[j] = j
	}
	for i := 1; i <= len(a); i++ {
		cur[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			cur[j] = min(prev[j]+1, cur[j-1]+1, prev[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				cur[j] = min(cur[j], prev2[j-2]+1)
			}
		}
		prev2, prev, cur = prev, cur, prev2
	}
	return prev[len(b)]
}
