package diff

import (
	"strings"

	"ampturn/kernel/notebook"
)

// input compares the source of a cell in two revisions.
func input(p pair, number, before map[*notebook.Cell]int) []Moved {
	switch {
	case p.old == nil && strings.TrimSpace(p.now.Source) != "":
		return []Moved{{Name: p.name(number, before), Note: "new", Lines: marked("+ ", strings.Split(p.now.Source, "\n"))}}
	case p.now == nil && strings.TrimSpace(p.old.Source) != "":
		return []Moved{{Name: p.name(number, before), Note: "gone", Lines: marked("- ", strings.Split(p.old.Source, "\n"))}}
	case p.old == nil || p.now == nil || p.old.Source == p.now.Source:
		return nil
	}
	out, in := changed(strings.Split(p.old.Source, "\n"), strings.Split(p.now.Source, "\n"), func(a, b string) bool { return a == b })
	return []Moved{{Name: p.name(number, before), Lines: append(marked("- ", out), marked("+ ", in)...)}}
}

func marked(mark string, lines []string) []string {
	list := make([]string, len(lines))
	for i, l := range lines {
		list[i] = mark + strings.ReplaceAll(strings.TrimRight(l, " \t"), "\t", "    ")
	}
	return list
}

// most is the number of lines up to which the longest common part is looked for.
const most = 2000

// changed gives the lines of a that are not in b, and those of b that are not in a, by their longest common part.
func changed(a, b []string, same func(x, y string) bool) (out, in []string) {
	for len(a) > 0 && len(b) > 0 && same(a[0], b[0]) {
		a, b = a[1:], b[1:]
	}
	for len(a) > 0 && len(b) > 0 && same(a[len(a)-1], b[len(b)-1]) {
		a, b = a[:len(a)-1], b[:len(b)-1]
	}
	if len(a) > most || len(b) > most {
		return a, b
	}
	common := make([][]int, len(a)+1)
	for i := range common {
		common[i] = make([]int, len(b)+1)
	}
	for i := len(a) - 1; i >= 0; i-- {
		for j := len(b) - 1; j >= 0; j-- {
			if same(a[i], b[j]) {
				common[i][j] = common[i+1][j+1] + 1
			} else {
				common[i][j] = max(common[i+1][j], common[i][j+1])
			}
		}
	}
	for i, j := 0, 0; i < len(a) || j < len(b); {
		switch {
		case i < len(a) && j < len(b) && same(a[i], b[j]):
			i, j = i+1, j+1
		case j == len(b) || i < len(a) && common[i+1][j] >= common[i][j+1]:
			out = append(out, a[i])
			i++
		default:
			in = append(in, b[j])
			j++
		}
	}
	return out, in
}
