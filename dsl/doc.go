// Package dsl is the vocabulary of a notebook on magnetic circuits: what an engineer says, as Go. It converts, sets
// defaults, names and shows; what it says is computed in magcirc.
//
//	noun                                              what it is
//	NewMaterial; Linear Froehlich Langevin            a material and its magnetisation law over temperature
//	  Arctan Curve LawOf
//	Rect Disc Annulus Area                            sections
//	Magnetic: Path, Ring                              a circuit and its paths
//	Leg Yoke Gap Winding Permeance Magnet             the parts of a path
//	NoFringe AddTheGap LogRule ConformalMap           the flux around a gap
//	  FieldSolve
//	Solve(Currents{...}), Solve(Linkages{...})        an operating point, which answers questions
//	BiasCurve GapFor CurrentFor TurnsFor              inductance over current; the number that meets a demand
//	At, With(Length(...))                             the circuit hot; a variant
//	FromReadings                                      coupling and leakage from meter readings
//	PlusMinus, Tolerance, Normal, Together            tolerances of parts and materials
//	WorstCase MonteCarlo: s.Part, s.Of, s.Between     a result over tolerances: Min, Max, Cpk, Plot, Tornado
//	Limit Require AtMost AtLeast Within Tolerance     verdicts
//	  Corner OpenPoint Waive Verdicts Assumptions
//	Plot Series Line Bars TableOf Span                pictures and tables
//	Show Note Cite Warn Revision Override             what stands in the document
//	  SVG HTML Clear
//	Working Basis                                     the lines of a result; its method, source and validity
//	Bench SideBySide TestSpec SignOff                 the model against a reading; two circuits; limits for the supplier
//	Try                                               the failure as a value
//
// Six lines:
//
//	fer := NewMaterial("lot 12", Froehlich(2200, 0.49*tesla))
//	L1 := Magnetic("L1")
//	L1.Ring("core", Leg(fer, 46*mm, Disc(8.9*mm)), Gap(0.45*mm), Winding("N", 7*turn))
//	op := L1.Solve(Currents{"N": 13*amp})
//	op.Inductance("N")
//	Limit("flux density", op.FluxDensity("core"), AtMost(0.32*tesla), op)
//
// Names. T1.centre.gap is circuit, path, part; a shorter form serves where it is unique, otherwise the fault lists the
// candidates. Unnamed parts are leg, gap, gap2, ...; .As("pole") names one.
//
// Signs. "bottom -> top": the arrow is the positive direction of the flux. Positive current into a winding's dot
// drives flux along the arrow. A ring's arrow runs in the order of its parts. A magnet is magnetised along the arrow.
//
// Units. Every number is a float64 in SI, temperatures are in degrees Celsius. The alias types say the unit of a
// parameter. No parameter is an int; Turns and Count refuse a fraction when they are used.
//
// Faults. A wrong value stops the cell with a [Fault] of one line: part, quantity, value, limit, way out. [Try] gives
// it as an error.
//
// Functions and methods whose name ends in WithUnits are the same as those without, for a caller that knows the units
// of the arguments: it labels what they make. They take one unit text for each written argument.
package dsl
