// Package unit checks the units of a cell before it runs and names the unit of every number that the cell shows.
//
// Numbers in a cell are float64 in SI. Their units stand in the text alone: in the unit constants that literals are
// multiplied with, and in the alias types with which parameters, results, fields and variables were declared:
//
//	a := 12.2*mm * 15*mm      m2: products of the constants
//	Rod(0.6*mm2)              refused: the parameter was declared as Metre, the argument is in m2
//	w + d                     refused where w is in m and d in m2
//	x := 3.0; x = f(y)        what cannot be traced passes silently and is shown as untraced
//
// A dimension is a product of half powers of the base units, or a point on the Celsius scale ([Dim]). The check is
// flow-insensitive: a variable has the dimension of everything that is assigned to it, found as a fixed point over
// the cell; two different ones leave it untraced. An alias type counts only where it was written, never where the type
// checker derived it for an intermediate value. Dimensions of variables, fields and functions live on from cell to
// cell.
//
// Constants, aliases and words come from a [Table]; the package itself knows dimensions and the functions of math.
package unit

import (
	"fmt"
	"sort"
)

// Table is what the check knows about the names of a vocabulary. Unit texts are as [ParseDim] reads them.
type Table struct {
	Symbols   []Symbol           // symbols of unit texts; the first of a dimension is the one that is shown
	Words     map[string]string  // words for units without a symbol, by unit text: "m2" -> "square metre"
	Bare      []string           // units that a bare number may stand for
	Constants []Constant         // unit constants; the first of a unit is the one that hints suggest
	Aliases   map[string]string  // alias type -> unit text: "Metre" -> "m"
	Value     string             // alias type of a number in the unit that a call is about
	Functions map[string]string  // further names of functions: "sqrt" -> "math.Sqrt"
	Powers    map[string]float64 // functions that give a power of their argument: "dsl.Squared" -> 2
}

// Symbol is a unit symbol.
type Symbol struct {
	Name string // "H"
	Base string // its dimension in base units; equal to Name for the base units m, kg, s, A, K and for degC
	Word string // "henry"
}

// Constant is a unit constant of the vocabulary.
type Constant struct {
	Name  string // "mm"
	Dim   string // "m"
	Value string // in SI, as typed: "1e-3"; may be left out
}

// table is a Table with its texts read.
type table struct {
	*Table
	symbols   map[string]Dim
	texts     map[Dim]string // the symbol or listed text that shows a dimension
	constants map[string]constantOf
	aliases   map[string]quantity
	bare      map[Dim]bool
	units     map[Dim][]string // the unit constants of a dimension
	base      map[Dim]string   // the one whose value is 1
}

// constantOf is a constant's dimension with the text it was listed under.
type constantOf struct {
	quantity
	name string
}

// quantity is a dimension and the text under which somebody declared it ("" for the usual one).
type quantity struct {
	dim Dim
	as  string
}

// read reads the texts of a table.
func (t *Table) read() (*table, error) {
	r := &table{
		Table: t, symbols: map[string]Dim{}, texts: map[Dim]string{}, constants: map[string]constantOf{},
		aliases: map[string]quantity{}, bare: map[Dim]bool{}, units: map[Dim][]string{}, base: map[Dim]string{},
	}
	if err := r.readSymbols(); err != nil {
		return nil, err
	}
	for _, text := range append(append([]string{}, t.Bare...), sortedKeys(t.Words)...) {
		d, err := r.ParseDim(text)
		if err != nil {
			return nil, err
		}
		r.name(d, text)
	}
	for _, text := range t.Bare {
		d, _ := r.ParseDim(text)
		r.bare[d] = true
	}
	for _, c := range t.Constants {
		d, err := r.ParseDim(c.Dim)
		if err != nil {
			return nil, fmt.Errorf("constant %s: %w", c.Name, err)
		}
		r.constants[c.Name] = constantOf{quantity{d, c.Dim}, c.Name}
		if d != Number || c.Dim == radian {
			r.units[d] = append(r.units[d], c.Name)
			if c.Value == "1" {
				r.base[d] = c.Name
			}
		}
	}
	for _, name := range sortedKeys(t.Aliases) {
		d, err := r.ParseDim(t.Aliases[name])
		if err != nil {
			return nil, fmt.Errorf("alias %s: %w", name, err)
		}
		r.aliases[name] = quantity{d, t.Aliases[name]}
	}
	return r, nil
}

// readSymbols reads the base symbols first, then those defined by them.
func (r *table) readSymbols() error {
	for _, s := range r.Symbols {
		if d, ok := baseDims[s.Name]; ok && s.Base == s.Name {
			r.symbols[s.Name] = d
			r.name(d, s.Name)
		}
	}
	for _, s := range r.Symbols {
		if _, ok := r.symbols[s.Name]; ok {
			continue
		}
		d, err := r.ParseDim(s.Base)
		if err != nil {
			return fmt.Errorf("symbol %s: %w", s.Name, err)
		}
		r.symbols[s.Name] = d
		if d != (Dim{}) {
			r.name(d, s.Name)
		}
	}
	return nil
}

// name makes text the one that shows d, unless d has one.
func (r *table) name(d Dim, text string) {
	if _, ok := r.texts[d]; !ok {
		r.texts[d] = text
	}
}

// sortedKeys gives the keys of a map in order.
func sortedKeys(m map[string]string) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}
