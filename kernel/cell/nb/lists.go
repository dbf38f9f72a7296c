package nb

import (
	"reflect"
	"slices"
	"sort"
)

// SortList sorts a list of numbers or texts in place; values that are no number come first.
func SortList(x any) {
	switch x := x.(type) {
	case []float64:
		slices.Sort(x)
	case []int:
		slices.Sort(x)
	case []string:
		slices.Sort(x)
	default:
		v := reflect.ValueOf(x)
		sort.Slice(x, func(i, j int) bool {
			a, b := v.Index(i), v.Index(j)
			if a.CanFloat() && a.Float() != a.Float() {
				return b.Float() == b.Float()
			}
			return Compare(a, b) < 0
		})
	}
}

// SortBy sorts a list in place, as slices.SortFunc does: with the same algorithm, so that equals come in the same order.
func SortBy(x any, less func(i, j int) bool) { sort.Slice(x, less) }

// SortStableBy sorts a list in place and keeps equals in their order.
func SortStableBy(x any, less func(i, j int) bool) { sort.SliceStable(x, less) }

// Letters gives the letters of a text and the byte at which each begins, as a loop over the text does.
func Letters(text string) (at []int, letters []rune) {
	for i, r := range text {
		at, letters = append(at, i), append(letters, r)
	}
	return at, letters
}
