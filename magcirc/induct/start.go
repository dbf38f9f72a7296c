package induct

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// start gives every entry a value from which the iteration finds the fit: first what the readings without shorts
// tell, then turns, then mutual inductances from pairs of open and shorted readings.
func (f *fit) start() error {
	var rows []row
	for _, r := range f.readings {
		if len(r.Shorted) == 0 {
			row, err := f.row(r)
			if err != nil {
				return err
			}
			rows = append(rows, row)
		}
	}
	ones := make([]float64, len(f.pairs))
	for k := range ones {
		ones[k] = 1
	}
	entries, known := f.linear(rows, ones)
	if f.addTurns(known) {
		entries, known = f.linear(append(rows, f.turns...), ones)
	}
	for k, p := range f.pairs {
		if p[0] == p[1] && known[k] && entries[k] <= 0 {
			return f.refuseSelf(p[0], entries[k])
		}
		if p[0] == p[1] && !known[k] {
			entries[k] = f.largest(p[0])
		}
		f.m.L.SetSym(p[0], p[1], entries[k])
	}
	for k, p := range f.pairs {
		if p[0] != p[1] && !known[k] {
			mutual, err := f.mutual(p[0], p[1])
			if err != nil {
				return err
			}
			f.m.L.SetSym(p[0], p[1], mutual)
		}
	}
	return nil
}

// linear solves rows, if there are any.
func (f *fit) linear(rows []row, scale []float64) (entries []float64, known []bool) {
	if len(rows) == 0 {
		return make([]float64, len(f.pairs)), make([]bool, len(f.pairs))
	}
	entries, known, _ = f.solve(rows, scale)
	return entries, known
}

// addTurns adds the equation Lj Ni^2 = Li Nj^2 for windings whose turns are known and of which not every self
// inductance follows from the readings.
func (f *fit) addTurns(known []bool) bool {
	first := -1
	for i, name := range f.m.Names {
		n := f.settings.Turns[name]
		if n <= 0 {
			continue
		}
		if first < 0 {
			first = i
			continue
		}
		a, b := f.pair(first, first), f.pair(i, i)
		if known[a] && known[b] {
			continue
		}
		ratio := n / f.settings.Turns[f.m.Names[first]]
		w := make([]float64, len(f.pairs))
		w[a], w[b] = ratio, -1/ratio
		f.turns = append(f.turns, row{w, 0, 1e-3 * f.largest(first)})
		f.note(magcirc.Assumed, fmt.Sprintf("self inductances of %s and %s taken as their turns squared, %s to %s",
			f.m.Names[first], name, phys.Format(f.settings.Turns[f.m.Names[first]], ""), phys.Format(n, "")))
	}
	return len(f.turns) > 0
}

func (f *fit) pair(i, j int) int {
	return slices.Index(f.pairs, [2]int{min(i, j), max(i, j)})
}

// largest is the largest reading at winding i, or of any.
func (f *fit) largest(i int) float64 {
	most, any := 0.0, 0.0
	for _, r := range f.readings {
		any = math.Max(any, r.Inductance)
		if r.At == f.m.Names[i] && len(r.Aiding)+len(r.Opposing) == 0 {
			most = math.Max(most, r.Inductance)
		}
	}
	if most == 0 {
		return any
	}
	return most
}

// mutual estimates M of windings i and j from a reading at one with the other shorted, M^2 = Ls (Lp - Lshort), with
// the sign that no reading tells taken as positive.
func (f *fit) mutual(i, j int) (float64, error) {
	li, lj := f.m.Self(i), f.m.Self(j)
	for _, r := range f.readings {
		at, ok := f.index[r.At]
		if !ok || len(r.Shorted) != 1 || len(r.Aiding)+len(r.Opposing) > 0 {
			continue
		}
		s := f.index[r.Shorted[0]]
		if !(at == i && s == j || at == j && s == i) {
			continue
		}
		rest := f.m.Self(at) - r.Inductance
		if rest <= 0 {
			return 0, f.shortAbove(r, at)
		}
		f.note(magcirc.Assumed, fmt.Sprintf("no reading tells the sign of M of %s and %s; their dots are taken to help each other", f.m.Names[i], f.m.Names[j]))
		return math.Sqrt(f.m.Self(s) * rest), nil
	}
	return 0.9 * math.Sqrt(li*lj), nil
}

// shortAbove refuses a reading with a short that is larger than the one without.
func (f *fit) shortAbove(r Reading, at int) error {
	return &magcirc.Error{Code: magcirc.NotPositive, Elem: "readings", Quantity: "inductance", Unit: "H", Got: r.Inductance, Limit: f.m.Self(at),
		Msg: fmt.Sprintf("%s is not below %s open, %s; a short cannot raise an inductance",
			r.quoted(), r.At, phys.Format(f.m.Self(at), "H")), Hint: "are the two exchanged?"}
}

func (f *fit) refuseSelf(i int, l float64) error {
	return &magcirc.Error{Code: magcirc.NotPositive, Elem: "readings", Quantity: "self inductance", Unit: "H", Got: l,
		Msg:  fmt.Sprintf("matrix not positive definite: the self inductance of %s comes out as %s; these clash: %s", f.m.Names[i], phys.Format(l, "H"), f.listing([]int{i})),
		Hint: fmt.Sprintf("read %s open", f.m.Names[i])}
}

// undetermined names an entry that follows from no reading, a self inductance first.
func (f *fit) undetermined(determined []bool) error {
	e := &magcirc.Error{Code: magcirc.NoSolution, Elem: "readings"}
	for k, p := range f.pairs {
		a, b := f.m.Names[p[0]], f.m.Names[p[1]]
		switch {
		case determined[k]:
		case p[0] == p[1]:
			e.Msg = fmt.Sprintf("no reading tells the self inductance of %s", a)
			e.Hint = fmt.Sprintf("add %s with the others open", a)
			return e
		case e.Msg == "":
			e.Msg = fmt.Sprintf("no reading tells the mutual inductance of %s and %s", a, b)
			e.Hint = fmt.Sprintf("add %s with %s shorted, or %s and %s in series", a, b, a, b)
		}
	}
	return e
}

// clash refuses a matrix that no part has, with the readings behind it.
func (f *fit) clash() error {
	_, d := f.m.Definite()
	involved := f.involved(d.Currents)
	hint := "read the leakage directly: one winding with the others shorted"
	if len(involved) == 2 {
		hint = fmt.Sprintf("read the leakage directly: %s with %s shorted", f.m.Names[involved[0]], f.m.Names[involved[1]])
	}
	return &magcirc.Error{Code: magcirc.NotPositive, Elem: "readings", Got: d.Least,
		Msg: fmt.Sprintf("matrix %s; these clash: %s", d.Text, f.listing(involved)), Hint: hint}
}

// involved gives the pair of windings with the largest coupling above 1, or all that the currents name.
func (f *fit) involved(currents []float64) (idx []int) {
	if i, j, k := f.m.tightest(); math.Abs(k) > 1 {
		return []int{i, j}
	}
	for i, c := range currents {
		if math.Abs(c) > 1e-3 {
			idx = append(idx, i)
		}
	}
	return idx
}

// listing quotes the readings that touch only the given windings.
func (f *fit) listing(windings []int) string {
	var words []string
	for _, r := range f.readings {
		inside := !slices.ContainsFunc(r.names(), func(n string) bool { return !slices.Contains(windings, f.index[n]) })
		if inside || len(windings) == 1 && slices.Contains(r.names(), f.m.Names[windings[0]]) {
			words = append(words, r.quoted())
		}
	}
	return strings.Join(words, ", ")
}
