package reluct

import (
	"math"
	"strconv"

	"ampturn/magcirc"
)

// Validate gives the first fault of the network, or nil: an element outside what it can be, a name given twice, an
// index that is not there, a node at which flux cannot return.
//
// Errors: [magcirc.BadValue], [magcirc.DuplicateName], [magcirc.UnknownName], [magcirc.OpenCircuit].
func (n *Network) Validate() error {
	if n.err != nil {
		return n.err
	}
	return n.checkReturn()
}

// checkBranch gives the first fault of branch i.
func (n *Network) checkBranch(i int) error {
	b := &n.branches[i]
	if b.Name != "" {
		if _, twice := n.branchOf[b.Name]; twice {
			return &magcirc.Error{Code: magcirc.DuplicateName, Elem: "path " + n.path(i), Msg: "there is a path of this name already", Hint: "name it otherwise"}
		}
	}
	for _, node := range [2]int{b.From, b.To} {
		if node < 0 || node >= len(n.nodes) {
			return n.noSuch(i, "node", node)
		}
	}
	if len(b.Elements) == 0 {
		return &magcirc.Error{Code: magcirc.BadValue, Elem: "path " + n.path(i), Msg: "has no leg, gap, stray path or magnet", Hint: "give it one: a path without reluctance has no flux of its own"}
	}
	for k := range b.Elements {
		if err := n.checkElement(i, k); err != nil {
			return err
		}
	}
	for _, t := range b.Turns {
		if t.Winding < 0 || t.Winding >= len(n.windings) {
			return n.noSuch(i, "winding", t.Winding)
		}
		if !finite(t.Turns) {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: "winding " + n.windings[t.Winding], Msg: "turns on path " + n.path(i) + " are not a finite number", Quantity: "turns", Got: t.Turns}
		}
	}
	return nil
}

func (n *Network) noSuch(i int, what string, index int) error {
	return &magcirc.Error{Code: magcirc.UnknownName, Elem: "path " + n.path(i), Msg: "names " + what + " " + strconv.Itoa(index) + ", which is not there"}
}

// checkElement gives the first fault of element k of branch i.
func (n *Network) checkElement(i, k int) error {
	e := &n.branches[i].Elements[k]
	for j := range k {
		if e.Name != "" && n.branches[i].Elements[j].Name == e.Name {
			return &magcirc.Error{Code: magcirc.DuplicateName, Elem: n.part(i, k), Msg: "its path has another part of this name", Hint: "name it otherwise"}
		}
	}
	switch e.Kind {
	case Leg:
		if e.Law == nil {
			return &magcirc.Error{Code: magcirc.BadValue, Elem: n.part(i, k), Msg: "has no magnetisation law"}
		}
		return first(n.positive(i, k, "length", "m", e.Length), n.positive(i, k, "area", "m2", e.Area), n.notNegative(i, k, "enclosed air area", "m2", e.Air))
	case Gap:
		return n.positive(i, k, "permeance", "H", e.Permeance)
	case Stray:
		return n.notNegative(i, k, "permeance", "H", e.Permeance)
	case Magnet:
		if !finite(e.Br) {
			return n.bad(i, k, "remanence", "T", e.Br, "is not a finite number")
		}
		return first(n.positive(i, k, "length", "m", e.Length), n.positive(i, k, "area", "m2", e.Area), n.positive(i, k, "recoil permeability", "", e.Mur))
	}
	return &magcirc.Error{Code: magcirc.BadValue, Elem: n.part(i, k), Msg: "is of no known kind"}
}

func first(errs ...error) error {
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

func (n *Network) positive(i, k int, quantity, unit string, x float64) error {
	if x > 0 && finite(x) && finite(1/x) {
		return nil
	}
	return n.bad(i, k, quantity, unit, x, "must be above zero and finite")
}

func (n *Network) notNegative(i, k int, quantity, unit string, x float64) error {
	if x >= 0 && finite(x) {
		return nil
	}
	return n.bad(i, k, quantity, unit, x, "must not be below zero, and finite")
}

func (n *Network) bad(i, k int, quantity, unit string, x float64, what string) error {
	return &magcirc.Error{Code: magcirc.BadValue, Elem: n.part(i, k), Msg: quantity + " " + show(x, unit) + " " + what, Quantity: quantity, Unit: unit, Got: x}
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// checkReturn refuses a node at which a single branch ends: no flux can pass it.
func (n *Network) checkReturn() error {
	ends := make([]int, len(n.nodes))
	for i := range n.branches {
		ends[n.branches[i].From]++
		ends[n.branches[i].To]++
	}
	for i, count := range ends {
		if count == 1 {
			return &magcirc.Error{Code: magcirc.OpenCircuit, Elem: n.circuit(), Msg: "flux cannot return at node " + n.nodes[i] +
				" (one path ends there): add the path that closes it, or make it a Ring"}
		}
	}
	return nil
}
