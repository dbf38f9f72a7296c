package magcirc

import "strings"

// Distance counts the letters to change, add or drop between two names, whatever their case: the hints of errors offer the
// names that are nearest to a mistyped one.
//
// Source: V. I. Levenshtein, Soviet Physics Doklady 10 (1966) 707.
func Distance(a, b string) int {
	x, y := []rune(strings.ToLower(a)), []rune(strings.ToLower(b))
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i := range x {
		diagonal := row[0]
		row[0] = i + 1
		for j := range y {
			change := diagonal
			if x[i] != y[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(y)]
}
