package working

import (
	"fmt"
	"math"

	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// Describe tells the parts of a network by branch and element.
type Describe func(branch, element int) Part

// Inductance writes the self inductance of a winding at a solution, incremental or secant.
//
//	L = N^2 / R,   R = sum of the reluctances in series,   R = R_c + 1/(1/R_1 + 1/R_2 + ...)
//
// Valid: by hand for a ring, and for paths that all run between the same two nodes, the winding on one of them. Elsewhere the
// reluctances are written and the last line names the matrix formula.
// Source: R. K. Wangsness, Electromagnetic Fields, 2nd ed. 1986, ch. 20 (magnetic circuits; from memory).
func Inductance(n *reluct.Network, s *reluct.Solution, winding int, solved float64, secant bool, of Describe) Working {
	w := Working{Solved: solved, Value: solved}
	branches := n.Branches()
	whole := make([]Line, len(branches))
	own, turns, elsewhere := -1, 0.0, false
	for i := range branches {
		b := &branches[i]
		var lines []Line
		for k := range b.Elements {
			lines = append(lines, reluctance(&b.Elements[k], s.State[i][k], of(i, k), secant))
		}
		for k := range lines {
			if len(branches) > 1 && len(lines) > 0 {
				lines[k].Symbol = name("R", "R", b.Name+" "+b.Elements[k].Name)
			}
		}
		w.Lines = append(w.Lines, lines...)
		line, more := total("reluctance of path "+b.Name, b.Name, lines)
		if more {
			w.Lines = append(w.Lines, line)
		}
		whole[i] = line
		for _, t := range b.Turns {
			if t.Winding == winding {
				elsewhere = elsewhere || own >= 0
				own, turns = i, t.Turns
			}
		}
	}
	seen, ok := w.seen(branches, whole, own)
	if !ok || elsewhere {
		w.Lines = append(w.Lines, Line{What: "inductance, from the loop equations of the network: B the loops, R the reluctances of the paths, N the turns",
			Symbol: Formula{"L", "L"}, Rule: Formula{"N B^T (B R B^T)^-1 B N^T", `N B^T (B R B^T)^{-1} B N^T`}, Value: solved, Unit: "H"})
		return w
	}
	count := number(math.Abs(turns), "")
	l := Line{What: "inductance", Symbol: Formula{"L", "L"}, Rule: fraction(square(Formula{"N", "N"}), seen.Symbol),
		Numbers: fraction(square(count), number(seen.Value, "1/H")), Value: turns * turns / seen.Value, Unit: "H"}
	w.Lines, w.Value, w.Hand = append(w.Lines, l), l.Value, true
	return w
}

// seen writes the reluctance that the winding on branch own sees, where flux divides in one place at most.
func (w *Working) seen(branches []reluct.Branch, whole []Line, own int) (Line, bool) {
	if own < 0 {
		return Line{}, false
	}
	if b := branches[own]; b.From == b.To {
		return whole[own], true
	}
	var others []Line
	for i, b := range branches {
		same := b.From == branches[own].From && b.To == branches[own].To
		turned := b.From == branches[own].To && b.To == branches[own].From
		switch {
		case b.From == b.To:
		case !same && !turned:
			return Line{}, false
		case i != own && !math.IsInf(whole[i].Value, 0):
			others = append(others, whole[i])
		}
	}
	if len(others) == 0 {
		return Line{}, false
	}
	back := others[0]
	if len(others) > 1 {
		back = parallel("the other paths in parallel", "back", others)
		w.Lines = append(w.Lines, back)
	}
	l, _ := total("reluctance that the winding sees", "seen", []Line{whole[own], back})
	w.Lines = append(w.Lines, l)
	return l, true
}

// FluxDensity writes the flux density in a leg, and the balance of mmf around the loop that its flux closes.
//
//	B = Phi / A,   in a gap  B = mu0 U / l,   sum N i = sum U
//
// Valid: in a leg beside which air carries flux the line says what the air takes. In a gap it is the flux density between the
// faces; the flux beside them is not in it.
func FluxDensity(n *reluct.Network, s *reluct.Solution, branch, element int, of Describe) Working {
	b := &n.Branches()[branch]
	e, state := &b.Elements[element], s.State[branch][element]
	w := balance(n, s, branch, of)
	if e.Kind == reluct.Gap && e.Length > 0 {
		value := phys.Mu0 * state.MMF / e.Length
		w.Lines = append(w.Lines, Line{What: "flux density in " + of(branch, element).Elem, Symbol: Formula{"B", "B"}, Rule: fraction(product(symMu0, name("U", "U", e.Name)), symLength),
			Numbers: fraction(product(numMu0, number(state.MMF, "A")), number(e.Length, "m")), Value: value, Unit: "T"})
		w.Value, w.Solved, w.Hand = value, state.B, true
		return w
	}
	phi, numbers := Formula{"Phi", `\Phi`}, number(s.Flux[branch], "Wb")
	value := s.Flux[branch] / e.Area
	if e.Air > 0 {
		phi = Formula{"(Phi - mu0 H A_air)", `(\Phi - \mu_0 H A_{\text{air}})`}
		numbers = Formula{"(" + numbers.Plain + " - " + number(phys.Mu0*state.H*e.Air, "Wb").Plain + ")", "(" + numbers.TeX + " - " + number(phys.Mu0*state.H*e.Air, "Wb").TeX + ")"}
		value -= phys.Mu0 * state.H * e.Air / e.Area
	}
	w.Lines = append(w.Lines, Line{What: "flux density in " + of(branch, element).Elem, Symbol: Formula{"B", "B"}, Rule: fraction(phi, symArea),
		Numbers: fraction(numbers, number(e.Area, "m2")), Value: value, Unit: "T"})
	w.Value, w.Solved, w.Hand = value, state.B, true
	return w
}

// Flux writes the flux of a path: the balance of mmf that it meets.
func Flux(n *reluct.Network, s *reluct.Solution, branch int, of Describe) Working {
	w := balance(n, s, branch, of)
	w.Value, w.Solved = s.Flux[branch], s.Flux[branch]
	return w
}

// balance writes the drops of mmf along a branch and what drives them: the turns on it, and where it does not close on itself
// the potential between its ends.
func balance(n *reluct.Network, s *reluct.Solution, branch int, of Describe) Working {
	b := &n.Branches()[branch]
	var w Working
	sumOfDrops := 0.0
	var symbols, numbers []Formula
	for k := range b.Elements {
		state, e := s.State[branch][k], &b.Elements[k]
		l := Line{What: "mmf drop of " + of(branch, k).Elem, Symbol: name("U", "U", e.Name), Value: state.MMF, Unit: "A"}
		switch e.Kind {
		case reluct.Gap, reluct.Stray:
			l.Rule, l.Numbers = fraction(Formula{"Phi", `\Phi`}, Formula{"P", `\Lambda`}), fraction(number(s.Flux[branch], "Wb"), number(e.Permeance, "H"))
		default:
			l.Rule, l.Numbers = product(Formula{"H", "H"}, symLength), product(number(state.H, "A/m"), number(e.Length, "m"))
		}
		w.Lines = append(w.Lines, l)
		symbols, numbers = append(symbols, l.Symbol), append(numbers, number(state.MMF, "A"))
		sumOfDrops += state.MMF
	}
	l := Line{What: "balance of mmf along path " + b.Name, Value: sumOfDrops, Unit: "A", Rule: sum(symbols...), Numbers: sum(numbers...)}
	var drives, values []Formula
	for _, t := range b.Turns {
		drives = append(drives, product(name("N", "N", n.Windings()[t.Winding]), name("i", "i", n.Windings()[t.Winding])))
		values = append(values, product(number(t.Turns, ""), number(s.Current[t.Winding], "A")))
	}
	if b.From != b.To {
		drives = append(drives, Formula{fmt.Sprintf("u(%s) - u(%s)", n.Nodes()[b.From], n.Nodes()[b.To]), fmt.Sprintf(`u_{\text{%s}} - u_{\text{%s}}`, n.Nodes()[b.From], n.Nodes()[b.To])})
		values = append(values, number(s.Potential[b.From]-s.Potential[b.To], "A"))
	}
	if len(drives) > 0 {
		l.Symbol = Formula{sum(drives...).Plain + " = " + sum(values...).Plain, sum(drives...).TeX + " = " + sum(values...).TeX}
		w.Lines = append(w.Lines, l)
	}
	return w
}

// Linkage writes the flux linkage of a winding: lambda = sum of N Phi over its paths.
func Linkage(n *reluct.Network, s *reluct.Solution, winding int) Working {
	var symbols, numbers []Formula
	value := 0.0
	for i, b := range n.Branches() {
		for _, t := range b.Turns {
			if t.Winding == winding {
				symbols = append(symbols, product(name("N", "N", b.Name), name("Phi", `\Phi`, b.Name)))
				numbers = append(numbers, product(number(t.Turns, ""), number(s.Flux[i], "Wb")))
				value += t.Turns * s.Flux[i]
			}
		}
	}
	l := Line{What: "flux linkage of " + n.Windings()[winding], Symbol: Formula{"lambda", `\lambda`}, Rule: sum(symbols...), Numbers: sum(numbers...), Value: value, Unit: "Wb"}
	return Working{Lines: []Line{l}, Value: value, Solved: s.Linkage[winding], Hand: true}
}

// Coupling writes the coupling factor of two windings: k = M/sqrt(L1 L2).
func Coupling(l1, l2, m, solved float64) Working {
	l := Line{What: "coupling factor", Symbol: Formula{"k", "k"}, Rule: Formula{"M/sqrt(L1 L2)", `\frac{M}{\sqrt{L_1 L_2}}`},
		Numbers: Formula{number(m, "H").Plain + "/sqrt(" + number(l1, "H").Plain + " * " + number(l2, "H").Plain + ")",
			`\frac{` + number(m, "H").TeX + `}{\sqrt{` + number(l1, "H").TeX + `\cdot ` + number(l2, "H").TeX + `}}`},
		Value: m / math.Sqrt(l1*l2)}
	return Working{Lines: []Line{l}, Value: l.Value, Solved: solved, Hand: true}
}

// Leakage writes the inductance seen at one winding with another shorted: L = L1 - M^2/L2.
func Leakage(l1, l2, m, solved float64) Working {
	l := Line{What: "inductance with the other winding shorted", Symbol: Formula{"L_leak", `L_{\text{leak}}`}, Rule: Formula{"L1 - M^2/L2", `L_1 - \frac{M^2}{L_2}`},
		Numbers: Formula{number(l1, "H").Plain + " - (" + number(m, "H").Plain + ")^2/" + number(l2, "H").Plain,
			number(l1, "H").TeX + ` - \frac{(` + number(m, "H").TeX + `)^2}{` + number(l2, "H").TeX + `}`},
		Value: l1 - m*m/l2, Unit: "H"}
	return Working{Lines: []Line{l}, Value: l.Value, Solved: solved, Hand: true}
}
