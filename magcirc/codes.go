package magcirc

// Code names a kind of refusal. Codes are stable: new ones go to the end.
type Code int

// The kinds of refusal. Each comment holds a line that provokes it.
const (
	BadValue        Code = iota // a value outside what the quantity can be: Gap(-1*mm)
	Implausible                 // a value that looks like a slip of a unit: Gap(600*mm)
	UnknownName                 // a path, part or winding that is not there: op.Flux("center")
	Ambiguous                   // a short name that fits several parts: op.MMF("gap")
	DuplicateName               // a name given twice
	NotMonotone                 // a magnetisation curve that falls: Curve([]AmperePerMetre{0, 1, 2}, []Tesla{0, 0.4, 0.3})
	OutsideData                 // a temperature or field too far beyond the data of a law
	OutsideValidity             // a formula asked far outside its range
	OpenCircuit                 // flux cannot return at a node
	Inconsistent                // windings that prescribe different fluxes in one path
	NoConvergence               // a solution that did not meet its tolerance
	NotPositive                 // readings whose matrix is not positive definite
	NoSolution                  // no gap, current or number of turns meets the demand
	Sealed                      // a change to an object that is complete
	WrongUse                    // a call in the wrong order or place
	BadFile                     // a data file that cannot be read as what it should be
)

var codeNames = [...]string{
	"BadValue", "Implausible", "UnknownName", "Ambiguous", "DuplicateName", "NotMonotone", "OutsideData",
	"OutsideValidity", "OpenCircuit", "Inconsistent", "NoConvergence", "NotPositive", "NoSolution", "Sealed",
	"WrongUse", "BadFile",
}

// String gives the code's name.
func (c Code) String() string {
	if c < 0 || int(c) >= len(codeNames) {
		return "Unknown"
	}
	return codeNames[c]
}
