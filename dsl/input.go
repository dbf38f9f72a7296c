package dsl

import (
	"maps"
	"math"

	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
	"ampturn/magcirc/tol"
)

// input is a number of a circuit or of its drive that can be another one.
type input struct {
	tol.Input
	chosen  bool // its distribution was chosen
	line    string
	parts   func(paths []path, x float64)
	heat    bool
	current int // index of the winding, -1 for others
}

// The moves of inputs without a stated tolerance that count as equally far when the nearest one that turns a verdict is
// sought: what production, materials and temperature commonly do.
const (
	commonLength       = 0.05 // share of a gap
	commonLeg          = 0.02 // share of a leg's length
	commonArea         = 0.05 // share of a section
	commonPermeability = 0.25 // share, the usual spread of a ferrite's initial permeability
	commonStray        = 0.2
	commonRemanence    = 0.05
	commonCurrent      = 0.1
	commonTemperature  = 10.0 // K
)

// with is a copy of the circuit whose inputs have other values.
func (c *MagneticCircuit) with(inputs []input, x []float64) *MagneticCircuit {
	next := c.changed(func(paths []path) {
		for i, in := range inputs {
			if in.parts != nil && x[i] != in.Nominal {
				in.parts(paths, x[i])
			}
		}
	})
	next.drawn = true
	for i, in := range inputs {
		if in.heat {
			next.temperature = x[i]
		}
	}
	return next
}

// driven is a copy of the drive with other currents.
func driven(d reluct.Drive, inputs []input, x []float64) reluct.Drive {
	for i, in := range inputs {
		if in.current >= 0 {
			d.Current = maps.Clone(d.Current)
			d.Current[in.current] = x[i]
		}
	}
	return d
}

// inputs lists the numbers of the circuit's parts and materials that can differ, in the order of the paths.
func (c *MagneticCircuit) inputs() []input {
	var all []input
	seen := map[*MagneticMaterial]bool{}
	for i := range c.paths {
		p := &c.paths[i]
		for k := range p.parts {
			elem := p.full(c.name, k)
			at := place{i, k}
			switch part := p.parts[k].(type) {
			case GapPart:
				in := lengthInput(elem, at, part.length, part.spread, commonLength)
				in.Least = leastGap
				in.Most = 100 * part.length
				if beside := p.beside(elem, k); beside != nil {
					in.Most = beside.length
				}
				all = append(all, in)
			case LegPart:
				all = append(all, lengthInput(elem, at, part.length, part.along, commonLeg))
				all = append(all, areaInput(elem, at, part))
				if !seen[part.material] {
					seen[part.material] = true
					all = append(all, part.material.input())
				}
			case PermeancePart:
				if part.permeance > 0 {
					all = append(all, strayInput(elem, at, part))
				}
			case MagnetPart:
				all = append(all, magnetInput(elem, at, part))
			}
		}
	}
	return all
}

// spreads are the inputs that have a tolerance.
func (c *MagneticCircuit) spreads() []input {
	var all []input
	for _, in := range c.inputs() {
		if in.Half > 0 {
			all = append(all, in)
		}
	}
	return all
}

func newInput(name, unit string, nominal float64, s spread, common float64) input {
	return input{Input: tol.Input{Name: name, Unit: unit, Nominal: nominal, Half: s.width(nominal), Shape: s.shape, Group: s.group,
		Scale: math.Max(s.width(nominal), 0)}, chosen: s.chosen, current: -1}.scaled(common * math.Abs(nominal))
}

// scaled sets the move that counts as one where no tolerance says it.
func (in input) scaled(common float64) input {
	if in.Scale == 0 {
		in.Scale = common
	}
	return in
}

func lengthInput(elem string, at place, length float64, s spread, common float64) input {
	in := newInput("length of "+elem, "m", length, s, common)
	in.parts = func(paths []path, x float64) { lengthOf(at, x)(paths) }
	in.line = ".Normal()"
	return in
}

func areaInput(elem string, at place, leg LegPart) input {
	area := leg.section.Metal()
	in := newInput("section of "+elem, "m2", area, leg.across, commonArea)
	in.parts = func(paths []path, x float64) {
		part := paths[at.path].parts[at.part].(LegPart)
		part.stretch = x/area - 1
		paths[at.path].parts[at.part] = part
	}
	return in
}

func strayInput(elem string, at place, stray PermeancePart) input {
	in := newInput("permeance of "+elem, "H", stray.permeance, stray.spread, commonStray)
	in.parts = func(paths []path, x float64) {
		part := paths[at.path].parts[at.part].(PermeancePart)
		part.permeance = x
		paths[at.path].parts[at.part] = part
	}
	return in
}

func magnetInput(elem string, at place, magnet MagnetPart) input {
	in := newInput("remanence of "+elem, "T", magnet.br, magnet.spread, commonRemanence)
	in.parts = func(paths []path, x float64) {
		part := paths[at.path].parts[at.part].(MagnetPart)
		part.br = x
		paths[at.path].parts[at.part] = part
	}
	return in
}

// input is the permeability of all legs of the material, as a factor.
func (m *MagneticMaterial) input() input {
	lot := m.lot
	lot.half, lot.relative = m.below.Spread(), true
	in := newInput("permeability of "+m.Name()+", factor", "", 1, lot, commonPermeability)
	in.Least, in.Most = 0.02, 50
	in.parts = func(paths []path, x float64) {
		other := &MagneticMaterial{must(m.below.Scaled(x)), m.lot, m.sheet}
		for i := range paths {
			for k, part := range paths[i].parts {
				if leg, ok := part.(LegPart); ok && leg.material == m {
					leg.material = other
					paths[i].parts[k] = leg
				}
			}
		}
	}
	return in
}

// methods are the errors of the methods for the flux around the gaps, as shares of the permeances: those of one method
// have one sign.
func (m *model) methods(c *MagneticCircuit) []input {
	var all []input
	for i := range c.paths {
		for k := range c.paths[i].parts {
			at := place{i, k}
			r, ok := m.gaps[at]
			if !ok || r.Uncertainty == 0 {
				continue
			}
			in := input{Input: tol.Input{Name: "permeance of " + c.paths[i].full(c.name, k) + " by " + r.Method.String(), Half: r.Uncertainty, Group: r.Method.String()}, current: -1}
			in.parts = func(paths []path, x float64) {
				part := paths[at.path].parts[at.part].(GapPart)
				part.bias = x
				paths[at.path].parts[at.part] = part
			}
			all = append(all, in)
		}
	}
	return all
}

// conditionsOf are the currents and the temperature of an operating point as inputs.
func (op *OperatingPoint) conditionInputs() []input {
	var all []input
	for w, name := range op.circuit.windings() {
		if i, ok := op.drive.Current[w]; ok && i != 0 {
			in := newInput("current of "+op.circuit.name+"."+name, "A", i, spread{}, commonCurrent)
			in.current = w
			all = append(all, in)
		}
	}
	t := newInput("temperature of "+op.circuit.name, "degC", op.circuit.temperature, spread{}, 0)
	t.heat, t.Scale = true, commonTemperature
	return append(all, t)
}

// below gives the inputs for the layer below.
func below(inputs []input) []tol.Input {
	all := make([]tol.Input, len(inputs))
	for i, in := range inputs {
		all[i] = in.Input
	}
	return all
}

// tolerance says the tolerance of an input in words: "450 um +-20 um".
func (in input) tolerance() string {
	if in.Half == 0 {
		return phys.Format(in.Nominal, in.Unit)
	}
	return phys.Format(in.Nominal, in.Unit) + " +-" + phys.Format(in.Half, in.Unit)
}
