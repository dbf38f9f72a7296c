package dsl

import "ampturn/magcirc"

// The alias types give parameters, results and fields their unit. All are float64: a number needs no conversion, and
// the unit check of a cell reads the alias where it was written. In a cell they declare fields and functions of one's
// own:
//
//	type Case struct { Vin Volt; Peak Ampere; Core Celsius }
//	func area(width, depth Metre) SquareMetre { return width * depth }
type (
	// Metre is a length in m, written with mm, um, cm, metre, mil or inch.
	Metre = float64
	// SquareMetre is an area in m2, written with mm2, cm2 or m2.
	SquareMetre = float64
	// CubicMetre is a volume in m3, written with mm3, cm3 or m3.
	CubicMetre = float64
	// QuarticMetre is a product of two areas in m4, written with cm4.
	QuarticMetre = float64
	// Second is a time in s, written with us, ns, ms or second.
	Second = float64
	// Hertz is a frequency in Hz, written with kHz, Hz or MHz.
	Hertz = float64
	// Kilogram is a mass in kg, written with gram or kg.
	Kilogram = float64
	// Newton is a force in N, written with newton.
	Newton = float64
	// MetrePerSecond is a speed in m/s, written as 2*metre/second; a bare number is in m/s.
	MetrePerSecond = float64
	// KilogramPerCubicMetre is a density of mass in kg/m3; a bare number is in kg/m3.
	KilogramPerCubicMetre = float64
	// Radian is an angle in rad, written with deg, arcmin or rad.
	Radian = float64
)

// Electric quantities.
type (
	// Volt is a voltage in V, written with volt, mV, uV or kV.
	Volt = float64
	// VoltPerSecond is a rate of change of voltage in V/s; a bare number is in V/s.
	VoltPerSecond = float64
	// VoltSecond is the time integral of a voltage in V s, written with uVs; the same dimension as Weber.
	VoltSecond = float64
	// Ampere is a current, or a magnetomotive force, in A, written with amp, mA, uA or kA.
	Ampere = float64
	// AmperePerSecond is a rate of change of current in A/s; a bare number is in A/s.
	AmperePerSecond = float64
	// AmpereSecond is a charge as current times time in A s.
	AmpereSecond = float64
	// AmpereSquaredSecond is the time integral of a squared current in A2 s, written with A2s.
	AmpereSquaredSecond = float64
	// AmperePerSquareMetre is a current density in A/m2, written as 4*amp/mm2; a bare number is in A/m2.
	AmperePerSquareMetre = float64
	// Coulomb is a charge in C.
	Coulomb = float64
	// Ohm is a resistance in ohm, written with ohm, mohm, kohm or megohm.
	Ohm = float64
	// OhmMetre is a resistivity in ohm m; a bare number is in ohm m.
	OhmMetre = float64
	// OhmPerMetre is a resistance per length in ohm/m; a bare number is in ohm/m.
	OhmPerMetre = float64
	// Siemens is a conductance in S, written as 1/ohm.
	Siemens = float64
	// Henry is an inductance, or a permeance, in H, written with uH, nH, mH or henry.
	Henry = float64
	// Farad is a capacitance in F, written with nF, pF, uF, mF or farad.
	Farad = float64
	// Watt is a power in W, written with watt, mW or kW.
	Watt = float64
	// VoltAmpere is an apparent power in VA, written with VA or kVA.
	VoltAmpere = float64
	// Joule is an energy in J, written with mJ, uJ or joule.
	Joule = float64
)

// Magnetic quantities.
type (
	// Tesla is a flux density in T, written with mT, uT, tesla or gauss.
	Tesla = float64
	// TeslaPerSecond is a rate of change of flux density in T/s; a bare number is in T/s.
	TeslaPerSecond = float64
	// Weber is a flux, or a flux linkage, in Wb, written with uWb, nWb, mWb or weber.
	Weber = float64
	// AmperePerMetre is a field strength in A/m, written with oersted or as 200*amp/metre; a bare number is in A/m.
	AmperePerMetre = float64
	// PerHenry is a reluctance in 1/H; a bare number is in 1/H.
	PerHenry = float64
	// HenryPerMetre is a permeability in H/m, as mu0; a bare number is in H/m.
	HenryPerMetre = float64
	// JoulePerCubicMetre is a density of energy, or the area of a loop, in J/m3; a bare number is in J/m3.
	JoulePerCubicMetre = float64
	// WattPerCubicMetre is a loss density in W/m3, written as 300*mW/cm3; a bare number is in W/m3.
	WattPerCubicMetre = float64
	// WattPerKilogram is a loss per mass in W/kg; a bare number is in W/kg.
	WattPerKilogram = float64
)

// Quantities of heat.
type (
	// Celsius is a temperature in degC, a point on the scale, written with degC: At(100*degC).
	Celsius = float64
	// Kelvin is a difference of temperatures in K, written with kelvin.
	Kelvin = float64
	// PerKelvin is a temperature coefficient in 1/K; a bare number is in 1/K.
	PerKelvin = float64
	// KelvinPerWatt is a thermal resistance in K/W, written as 30*kelvin/watt; a bare number is in K/W.
	KelvinPerWatt = float64
	// JoulePerKelvin is a heat capacity in J/K; a bare number is in J/K.
	JoulePerKelvin = float64
	// WattPerMetreKelvin is a thermal conductivity in W/(m K); a bare number is in W/(m K).
	WattPerMetreKelvin = float64
	// WattPerSquareMetreKelvin is a heat transfer coefficient in W/(m2 K); a bare number is in W/(m2 K).
	WattPerSquareMetreKelvin = float64
)

// Numbers without a unit.
type (
	// Turns is a number of turns, written with turn or bare; negative turns are refused where they make no sense.
	Turns = float64
	// Count is a number of things. It is a float64 so that any number fits; a fraction is refused when it is used.
	Count = float64
	// Ratio is a plain number, or a share written with percent.
	Ratio = float64
	// Value is a number in the one unit that a call is about: all arguments and results of that type in a call have the
	// same unit, and for a method it is the unit of its receiver. AtMost(0.32*tesla) is a bound in T. Several lists, as
	// the x and y of a curve, have a unit each.
	Value = float64
)

// Squared gives x times x; in a cell it is written sq(x). The unit of the result is the square of that of x.
func Squared(x float64) float64 { return x * x }

// FaultCode is the stable kind of a [Fault], for a design loop that branches on it.
type FaultCode = magcirc.Code

// RemarkKind is the kind of a [Remark].
type RemarkKind = magcirc.NoteKind
