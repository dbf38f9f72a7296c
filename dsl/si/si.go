// Package si lists the units of the vocabulary as data: the unit constants a notebook multiplies with, the unit that
// each alias type of a parameter stands for, the symbols they are written in and the words that messages use.
//
// Unit texts name a unit by symbols and powers: "m", "m2", "A/m", "1/H", "V s", "kg m2 s-2". "degC" is a point on the
// Celsius scale, "K" a difference of temperatures; "" is a number without unit. "rad" and "turn" are numbers that are
// called by a name.
//
// The package holds data only; who reads it decides what to do with it.
package si

// Unit is a constant that a number is multiplied with: 0.6*mm.
type Unit struct {
	Name  string // as typed: "mm"
	Value string // its value in SI as an exact decimal constant: "1e-3"
	Dim   string // what it measures, as a unit text: "m"
	Doc   string // one line for the reader
}

// Symbol is a unit that has a symbol of its own.
type Symbol struct {
	Name string // "H"
	Base string // in base units, as a unit text: "kg m2 s-2 A-2"; equal to Name for a base unit
	Word string // as messages say it: "henry"
}

// Symbols lists the symbols of unit texts; of two for the same dimension the first is the one that results are shown in.
var Symbols = []Symbol{
	{"m", "m", "metre"},
	{"kg", "kg", "kilogram"},
	{"s", "s", "second"},
	{"A", "A", "ampere"},
	{"K", "K", "kelvin"},
	{"degC", "degC", "degree Celsius"},
	{"rad", "", "radian"},
	{"turn", "", "turn"},
	{"Hz", "s-1", "hertz"},
	{"N", "kg m s-2", "newton"},
	{"J", "kg m2 s-2", "joule"},
	{"W", "kg m2 s-3", "watt"},
	{"VA", "kg m2 s-3", "volt-ampere"},
	{"C", "A s", "coulomb"},
	{"V", "kg m2 s-3 A-1", "volt"},
	{"ohm", "kg m2 s-3 A-2", "ohm"},
	{"S", "kg-1 m-2 s3 A2", "siemens"},
	{"F", "kg-1 m-2 s4 A2", "farad"},
	{"H", "kg m2 s-2 A-2", "henry"},
	{"Wb", "kg m2 s-2 A-1", "weber"},
	{"T", "kg s-2 A-1", "tesla"},
}

// Words says in messages what has no symbol of its own, by unit text.
var Words = map[string]string{
	"m2": "square metre", "m3": "cubic metre", "m4": "metre to the fourth",
	"A/m": "ampere per metre", "A/m2": "ampere per square metre", "1/H": "per henry", "H/m": "henry per metre",
	"J/m3": "joule per cubic metre", "W/m3": "watt per cubic metre", "W/kg": "watt per kilogram",
	"kg/m3": "kilogram per cubic metre", "K/W": "kelvin per watt", "W/K": "watt per kelvin", "J/K": "joule per kelvin",
	"1/K": "per kelvin", "ohm m": "ohm metre", "ohm/m": "ohm per metre", "m/s": "metre per second",
	"V s": "volt second", "A s": "ampere second", "A2 s": "ampere squared second", "A/s": "ampere per second",
	"V/s": "volt per second", "V/m": "volt per metre", "T/s": "tesla per second", "W/(m K)": "watt per metre kelvin",
	"W/(m2 K)": "watt per square metre kelvin", "1/m": "per metre", "1/s": "per second",
}

// Bare lists the units without a symbol of their own that a bare number in SI may stand for: 200 for a field strength
// of 200 A/m. Every other quantity is written with its unit.
var Bare = []string{
	"A/m", "A/m2", "1/H", "H/m", "J/m3", "W/m3", "W/kg", "kg/m3", "K/W", "W/K", "J/K", "1/K", "ohm m", "ohm/m", "m/s",
	"A/s", "V/s", "V/m", "T/s", "W/(m K)", "W/(m2 K)", "1/m",
}

// Aliases gives the unit of each alias type that a parameter, a result or a field can have. [Value] is not among
// them: it stands for the one unit that the arguments and results of a call share.
var Aliases = map[string]string{
	"Metre": "m", "SquareMetre": "m2", "CubicMetre": "m3", "QuarticMetre": "m4",
	"Second": "s", "Hertz": "Hz", "Kilogram": "kg", "Newton": "N",
	"Volt": "V", "Ampere": "A", "Ohm": "ohm", "Henry": "H", "Farad": "F", "Coulomb": "C", "Siemens": "S",
	"Tesla": "T", "Weber": "Wb", "Watt": "W", "VoltAmpere": "VA", "Joule": "J",
	"Kelvin": "K", "Celsius": "degC", "Radian": "rad", "Turns": "turn", "Count": "", "Ratio": "",
	"AmperePerMetre": "A/m", "AmperePerSquareMetre": "A/m2", "PerHenry": "1/H", "HenryPerMetre": "H/m",
	"JoulePerCubicMetre": "J/m3", "WattPerCubicMetre": "W/m3", "WattPerKilogram": "W/kg",
	"KilogramPerCubicMetre": "kg/m3", "KelvinPerWatt": "K/W", "JoulePerKelvin": "J/K", "PerKelvin": "1/K",
	"WattPerMetreKelvin": "W/(m K)", "WattPerSquareMetreKelvin": "W/(m2 K)",
	"OhmMetre": "ohm m", "OhmPerMetre": "ohm/m", "MetrePerSecond": "m/s", "VoltSecond": "V s",
	"AmpereSecond": "A s", "AmpereSquaredSecond": "A2 s", "AmperePerSecond": "A/s", "VoltPerSecond": "V/s",
	"TeslaPerSecond": "T/s",
}

// Value is the name of the alias type for "a number in the unit that this call is about".
const Value = "Value"

// Functions are the lower-case names for hand checks and the functions that stand behind them.
var Functions = map[string]string{
	"sqrt": "math.Sqrt", "sq": "dsl.Squared", "pow": "math.Pow", "exp": "math.Exp", "ln": "math.Log",
	"log10": "math.Log10", "sin": "math.Sin", "cos": "math.Cos", "atan": "math.Atan", "abs": "math.Abs",
}

// Powers are the functions of the vocabulary whose result is a power of their argument.
var Powers = map[string]float64{"dsl.Squared": 2}
