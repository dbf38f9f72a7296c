package dsl

import (
	"fmt"
	"math"
	"sync"

	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
	"ampturn/magcirc/tol"
)

// answer is a number that an operating point gave, with what it takes to give it again for another circuit.
type answer struct {
	op    *OperatingPoint
	kind  answerKind
	names []string
	what  string // "incremental inductance of L1.N"
	unit  string
	value float64
	ask   func(op *OperatingPoint) float64
}

// answerKind is the kind of an answer.
type answerKind string

const (
	incrementalKind answerKind = "incremental inductance"
	secantKind      answerKind = "secant inductance"
	mutualKind      answerKind = "mutual inductance"
	couplingKind    answerKind = "coupling"
	leakageKind     answerKind = "leakage inductance"
	perPhaseKind    answerKind = "inductance per phase"
	inPhaseKind     answerKind = "inductance in phase"
	fluxKind        answerKind = "flux"
	densityKind     answerKind = "flux density"
	fieldKind       answerKind = "field strength"
	mmfKind         answerKind = "mmf drop"
	currentKind     answerKind = "current"
	linkageKind     answerKind = "linkage"
	energyKind      answerKind = "energy"
	coenergyKind    answerKind = "co-energy"
	workKind        answerKind = "work since the demagnetised state"
)

// answers are the latest numbers that the operating points of the notebook gave, by their value.
var answers struct {
	sync.Mutex
	by   map[uint64]*answer
	ring []uint64
	at   int
}

// keptAnswers is how many numbers are remembered.
const keptAnswers = 8192

func init() { session.OnReset(forgetAnswers) }

func forgetAnswers() {
	answers.Lock()
	defer answers.Unlock()
	answers.by, answers.ring, answers.at = nil, nil, 0
}

// keep remembers what a number is, and gives the number.
func (op *OperatingPoint) keep(kind answerKind, unit string, value float64, ask func(op *OperatingPoint) float64, names ...string) float64 {
	if op == nil || op.circuit.drawn {
		return value
	}
	a := &answer{op: op, kind: kind, names: names, unit: unit, value: value, ask: ask, what: string(kind) + " of " + op.circuit.name}
	for i, n := range names {
		if i == 0 {
			a.what += "."
		} else {
			a.what += " and "
		}
		a.what += n
	}
	answers.Lock()
	defer answers.Unlock()
	if answers.by == nil {
		answers.by, answers.ring = map[uint64]*answer{}, make([]uint64, keptAnswers)
	}
	key := math.Float64bits(value)
	if old := answers.ring[answers.at]; old != key {
		delete(answers.by, old)
	}
	answers.ring[answers.at] = key
	answers.at = (answers.at + 1) % keptAnswers
	answers.by[key] = a
	return value
}

// answerOf finds what a number is; nil where no operating point gave it, or where it says nothing (zero).
func answerOf(value float64) *answer {
	if value == 0 {
		return nil
	}
	answers.Lock()
	defer answers.Unlock()
	return answers.by[math.Float64bits(value)]
}

// again gives the number for the circuit and the drive with other inputs.
func (a *answer) again(inputs []input) tol.Function {
	return func(x []float64) (value float64, err error) {
		err = Try(func() {
			c := a.op.circuit.with(inputs, x)
			value = a.ask(a.op.solvedLike(c, driven(a.op.drive, inputs, x)))
		})
		return value, err
	}
}

// solved is the state under a drive; nothing of it enters the document.
func (c *MagneticCircuit) solved(d reluct.Drive) *OperatingPoint {
	m := c.model()
	s := m.solve(d)
	return &OperatingPoint{circuit: *c, drive: d, model: m, solution: s, shown: s.Rounded()}
}

// uncertainty is what the methods behind the number leave open, relative to it; 0 where no method leaves anything open. A
// method whose error is as large as its result, or a state that cannot be computed at the edge of its error, is an error.
func (a *answer) uncertainty() (float64, error) {
	methods := a.op.model.methods(&a.op.circuit)
	if len(methods) == 0 || a.value == 0 {
		return 0, nil
	}
	for _, in := range methods {
		if in.Half >= 1 {
			return 0, fmt.Errorf("%s is uncertain by %s", in.Name, phys.FormatDigits(in.Half, "percent", 2))
		}
	}
	u, err := tol.Propagate(session.Context(), a.again(methods), below(methods))
	if err != nil {
		check(session.Context().Err())
		return 0, err
	}
	if u /= math.Abs(a.value); u > roundingShare {
		return u, nil
	}
	return 0, nil
}

// roundingShare is what rounding leaves of a number that does not depend on an input at all.
const roundingShare = 1e-12

// allInputs are all numbers that can turn a verdict on the answer.
func (a *answer) allInputs() []input {
	return append(a.op.circuit.inputs(), a.op.conditionInputs()...)
}

// flip says which single input, moved how far, uses up a margin: "length of gap L1.core.gap +43 um, to 493 um".
func (a *answer) flip(margin func(value float64) float64) string {
	if session.Context().Err() != nil { // asked after its cell has ended
		return ""
	}
	inputs := a.allInputs()
	m, ok, err := tol.Flip(session.Context(), a.again(inputs), below(inputs), margin)
	switch {
	case err != nil:
		return "not known: " + err.Error()
	case !ok:
		return "no single input within ten times its usual spread"
	}
	return moved(inputs[m.Input], m)
}

// moved says a move in words.
func moved(in input, m tol.Move) string {
	unit := in.Unit
	if unit == "degC" {
		unit = "K"
	}
	by := phys.FormatDigits(m.By, unit, 3)
	if m.By > 0 {
		by = "+" + by
	}
	return in.Name + " " + by + ", to " + phys.Format(m.To, in.Unit)
}

// conditionAnswer finds the answer that a verdict judges: the one with its value, if the operating point that gave it is
// among the conditions or there is no other.
func conditionAnswer(value float64, conditions []Condition) *answer {
	a := answerOf(value)
	if a == nil {
		return nil
	}
	for _, c := range conditions {
		if op, ok := c.(*OperatingPoint); ok {
			if op == a.op {
				return a
			}
		}
		if circuit, ok := c.(*MagneticCircuit); ok && circuit.name == a.op.circuit.name {
			return a
		}
	}
	if len(conditions) == 0 {
		return a
	}
	return nil
}

// wantAnswer finds what a number is, or says how to ask for it.
func wantAnswer(elem string, value float64) *answer {
	a := answerOf(value)
	if a == nil {
		hint := "give the number itself: " + elem + `(op.Inductance("N"))`
		if elem == "Basis" {
			hint = "ask what it came from: Basis(op)"
		}
		refuse(magcirc.WrongUse, elem, phys.Format(value, "")+" did not come from an operating point as it is", hint)
	}
	return a
}
