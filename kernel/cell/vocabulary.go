package cell

import (
	"context"
	"reflect"

	"ampturn/kernel"
	"ampturn/kernel/cell/unit"
)

// Vocabulary is what cells can use without importing anything: compiled packages with their types, unit constants,
// hand-check functions, documentation and the way numbers are written.
type Vocabulary struct {
	// Symbols maps "import path/package name" to the compiled names of the package, wrappers of interfaces ("_Law")
	// among them.
	Symbols map[string]map[string]reflect.Value
	// Export holds the export data of each package by import path.
	Export map[string][]byte
	// Docs holds the comment of each documented name: "ampturn/dsl.Gap", "ampturn/dsl.Part.As".
	Docs map[string]string
	// Open is the import path of the package whose exported names need no qualifier.
	Open string
	// Packages lists the import paths that cells may name by their last element.
	Packages []string
	// Constants are the units and constants that are in every cell's scope.
	Constants []Constant
	// Functions maps lower-case names for hand checks to what stands behind them: "sqrt" to "math.Sqrt". The part
	// before the dot is the last element of an import path.
	Functions map[string]string
	// Units infers and checks units; nil: cells are not checked for units.
	Units *unit.Table
	// Format writes a number with its unit; nil: four significant digits and the unit text.
	Format func(x float64, unit string) string
	// Texts gives what the first argument of a function can be: "Material".
	Texts map[string]func() []string
	// Help gives what a name means to a reader, as Markdown; nil or "": the documentation of Docs is taken.
	Help func(name string) string
}

// Constant is a unit or a physical constant. Its value is exact.
type Constant struct {
	Name  string
	Value string // decimal constant: "1e-3"
	Dim   string // unit text: "m"
	Doc   string // one line
}

// Hooks tell the vocabulary how a cell goes. Nil fields are left out.
type Hooks struct {
	Begin   func(key string, number int) // before a cell runs
	End     func(key string, failed bool)
	Context func(context.Context) // the context that ends when the running cell is interrupted
	Pass    func()                // after each pass of a loop at the top level of a cell
	Sink    func(kernel.Sink)     // where what is shown goes, before a cell runs
	Hold    func() (back func())  // back makes the state of the vocabulary again what it is now
}
