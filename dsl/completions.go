package dsl

import "slices"

// The methods Completions give, by the name of a parameter or of a map type, what a text there may be: a front end offers
// it inside the quotes.

// Completions lists the names that texts about the circuit can be.
func (c *MagneticCircuit) Completions() map[string][]string {
	if c == nil {
		return nil
	}
	var paths, parts, magnets, routes []string
	for i := range c.paths {
		p := &c.paths[i]
		paths = append(paths, p.name)
		for k := range p.parts {
			switch p.parts[k].part() {
			case windingKind:
				continue
			case magnetKind:
				magnets = append(magnets, p.name+"."+p.names[k])
			}
			parts = append(parts, p.name+"."+p.names[k])
		}
		if route := p.from + " -> " + p.to; !p.ring && !slices.Contains(routes, route) {
			routes = append(routes, route)
		}
	}
	all := map[string][]string{"path": paths, "part": parts, "magnet": magnets, "route": routes}
	for _, key := range []string{"winding", "windings", "first", "second", "seen", "shorted", "primary", "secondary", "Currents", "Linkages"} {
		all[key] = c.windings()
	}
	return all
}

// Completions lists the names that texts about the operating point can be.
func (op *OperatingPoint) Completions() map[string][]string {
	if op == nil {
		return nil
	}
	return op.circuit.Completions()
}

// Completions lists the names that texts about the matrix can be.
func (m *InductanceMatrix) Completions() map[string][]string {
	if m == nil || m.origin == nil {
		return nil
	}
	return m.origin.Completions()
}
