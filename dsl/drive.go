package dsl

import (
	"fmt"
	"slices"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// Drive says how windings are driven: [Currents] or [Linkages].
type Drive interface {
	drive(c *MagneticCircuit, d *reluct.Drive)
	values() map[string]float64
	unit() string
}

// Currents are instantaneous currents by winding, positive into the dot. A winding that is not named carries none.
type Currents map[string]Ampere

// Linkages are flux linkages by winding: what the integral of a winding's voltage has set. Its current follows.
type Linkages map[string]Weber

func (i Currents) values() map[string]float64 { return i }
func (i Currents) unit() string               { return "A" }
func (l Linkages) values() map[string]float64 { return l }
func (l Linkages) unit() string               { return "Wb" }

func (i Currents) drive(c *MagneticCircuit, d *reluct.Drive) { set(c, i, d, &d.Current) }
func (l Linkages) drive(c *MagneticCircuit, d *reluct.Drive) { set(c, l, d, &d.Linkage) }

// set enters the values of a drive by winding index and refuses a winding that is driven twice.
func set(c *MagneticCircuit, from Drive, d *reluct.Drive, into *map[int]float64) {
	quantity := "current"
	if from.unit() == "Wb" {
		quantity = "linkage"
	}
	for _, name := range sortedNames(from.values()) {
		w := c.windingOf(name)
		elem := "winding " + c.name + "." + c.windings()[w]
		wantFinite(elem, quantity, from.values()[name], from.unit())
		_, byCurrent := d.Current[w]
		_, byLinkage := d.Linkage[w]
		if byCurrent || byLinkage {
			refuse(magcirc.Inconsistent, elem, "is driven twice", "give it one current or one linkage")
		}
		(*into)[w] = from.values()[name]
	}
}

func sortedNames(m map[string]float64) []string {
	names := make([]string, 0, len(m))
	for n := range m {
		names = append(names, n)
	}
	slices.Sort(names)
	return names
}

// driveOf gathers what drives a circuit.
func (c *MagneticCircuit) driveOf(drives []Drive) reluct.Drive {
	d := reluct.Drive{Current: map[int]float64{}, Linkage: map[int]float64{}}
	for _, from := range drives {
		if from == nil {
			refuse(magcirc.BadValue, "circuit "+c.name, "is given no drive (nil)", `write Currents{"main": 3.2*amp}`)
		}
		from.drive(c, &d)
	}
	return d
}

// driveWords says in words what drives a circuit: "main 3.2 A".
func driveWords(c *MagneticCircuit, d reluct.Drive) string {
	var all []string
	for w, name := range c.windings() {
		if i, ok := d.Current[w]; ok {
			all = append(all, fmt.Sprintf("%s %s", name, phys.Format(i, "A")))
		}
		if l, ok := d.Linkage[w]; ok {
			all = append(all, fmt.Sprintf("%s %s", name, phys.Format(l, "Wb")))
		}
	}
	if len(all) == 0 {
		return "no current"
	}
	return strings.Join(all, ", ")
}
