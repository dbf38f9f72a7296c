package dsl

import (
	"fmt"
	"slices"
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
	"ampturn/magcirc/reluct"
)

// SideBySide sets circuits beside each other: the parts in which they differ, and what comes of it without current and in
// saturation.
//
//	SideBySide(T1, T1.With(Length("centre.gap", 0.55*mm)))
func SideBySide(first, second *MagneticCircuit, more ...*MagneticCircuit) *TableView {
	all := append([]*MagneticCircuit{first, second}, more...)
	t := doc.Table{Caption: "side by side; parts that are equal are left out", Columns: []doc.Column{{Name: "what"}}}
	for _, c := range all {
		c.given()
		t.Columns = append(t.Columns, doc.Column{Name: c.state(), Mixed: true})
	}
	equal, notes := 0, sideNotes{}
	for _, name := range partNames(all) {
		row := []doc.Cell{doc.Text(name)}
		same := true
		for i, c := range all {
			what := c.described(name)
			row = append(row, doc.Text(what))
			same = same && (i == 0 || what == row[1].Words)
		}
		if same {
			equal++
			continue
		}
		t.Rows = append(t.Rows, row)
	}
	for _, w := range windingNames(all) {
		zero, falls := []doc.Cell{doc.Text("inductance of " + w + " without current")}, []doc.Cell{doc.Text("current of " + w + " at which it has fallen by 20 %")}
		for _, c := range all {
			zero, falls = append(zero, c.zeroCell(w, &notes)), append(falls, c.fallCell(w, &notes))
		}
		t.Rows = append(t.Rows, zero, falls)
	}
	t.Notes = append(t.Notes, fmt.Sprintf("%d equal parts", equal))
	t.Notes = append(t.Notes, notes.lines(all)...)
	return &TableView{table: t}
}

// partNames lists the parts of all circuits by path and name, in the order of first mention.
func partNames(all []*MagneticCircuit) []string {
	var names []string
	seen := map[string]bool{}
	for _, c := range all {
		for i := range c.paths {
			for _, part := range c.paths[i].names {
				if name := c.paths[i].name + "." + part; !seen[name] {
					seen[name] = true
					names = append(names, name)
				}
			}
		}
	}
	return names
}

func windingNames(all []*MagneticCircuit) []string {
	var names []string
	seen := map[string]bool{}
	for _, c := range all {
		for _, w := range c.windings() {
			if !seen[w] {
				seen[w] = true
				names = append(names, w)
			}
		}
	}
	return names
}

// described says what a part of the circuit is, "none" where it has none of that name.
func (c *MagneticCircuit) described(name string) string {
	for i := range c.paths {
		for k, part := range c.paths[i].names {
			if c.paths[i].name+"."+part == name {
				return describe(c.paths[i].parts[k])
			}
		}
	}
	return "none"
}

// sideNotes are the notes behind the cells, by their line: which circuits they belong to.
type sideNotes struct {
	order []string
	of    map[string][]*MagneticCircuit
}

// take enters the notes on the state of a circuit under a drive.
func (n *sideNotes) take(c *MagneticCircuit, d reluct.Drive) {
	if n.of == nil {
		n.of = map[string][]*MagneticCircuit{}
	}
	for _, line := range noteLines(c.quiet().solved(d).Notes()) {
		if n.of[line] == nil {
			n.order = append(n.order, line)
		}
		if !slices.Contains(n.of[line], c) {
			n.of[line] = append(n.of[line], c)
		}
	}
}

// lines are the notes; one that does not belong to all circuits names its own.
func (n *sideNotes) lines(all []*MagneticCircuit) []string {
	var lines []string
	for _, line := range n.order {
		if of := n.of[line]; len(of) < len(all) {
			var names []string
			for _, c := range of {
				names = append(names, c.state())
			}
			line = strings.Join(names, "; ") + ": " + line
		}
		lines = append(lines, line)
	}
	return lines
}

// zeroCell is the inductance of a winding without current.
func (c *MagneticCircuit) zeroCell(winding string, notes *sideNotes) doc.Cell {
	cell := doc.Text("none")
	for w, name := range c.windings() {
		if name == winding {
			if l, err := c.quiet().zeroBias(w); err == nil {
				cell = doc.Quantity(l, "H")
				notes.take(c, reluct.Drive{})
			} else {
				cell = doc.Text(reason(err))
			}
		}
	}
	return cell
}

// fallCell is the current at which the inductance of a winding has fallen by a fifth.
func (c *MagneticCircuit) fallCell(winding string, notes *sideNotes) doc.Cell {
	cell := doc.Text("none")
	for w, name := range c.windings() {
		if name != winding {
			continue
		}
		cell = doc.Text("not reached up to 1 MA")
		for most := 1.0; most <= 1e6; most *= 10 {
			var i float64
			err := Try(func() { i = c.quiet().BiasCurve(winding, 0, most).SaturationCurrent(0.2) })
			if err == nil {
				notes.take(c, reluct.Drive{Current: map[int]float64{w: i}})
				return doc.Quantity(i, "A")
			}
			if f, ok := err.(*Fault); !ok || f.Code != magcirc.NoSolution {
				return doc.Text(reason(err))
			}
		}
	}
	return cell
}

// quiet is the circuit for a trial: nothing of it enters the document.
func (c *MagneticCircuit) quiet() *MagneticCircuit {
	next := *c
	next.drawn, next.variant = true, true
	return &next
}
