package cell_test

import (
	"bufio"
	"context"
	"io"
	"os"
	"os/exec"
	"reflect"
	"strings"
	"sync"
	"testing"

	"github.com/traefik/yaegi/stdlib"
	"golang.org/x/tools/go/gcexportdata"

	"ampturn/kernel"
	"ampturn/kernel/cell"
	"ampturn/kernel/cell/internal/toy"
	"ampturn/kernel/cell/unit"
)

const toyPath = "ampturn/kernel/cell/internal/toy"

var std = []string{"fmt", "math", "math/cmplx", "math/rand", "strings", "strconv", "sort", "errors", "unicode", "bytes"}

// wrapLaw lets values of cell types be toy.Law, as the symbol generator writes it.
type wrapLaw struct {
	IValue interface{}
	WForce func(x float64) float64
}

func (w wrapLaw) Force(x float64) float64 { return w.WForce(x) }

var toySymbols = map[string]reflect.Value{
	"NewRod": reflect.ValueOf(toy.NewRod), "Joined": reflect.ValueOf(toy.Joined), "NewHandle": reflect.ValueOf(toy.NewHandle),
	"Hooke": reflect.ValueOf(toy.Hooke), "Work": reflect.ValueOf(toy.Work), "SumOf": reflect.ValueOf(toy.SumOf),
	"LawOf": reflect.ValueOf(toy.LawOf), "Keep": reflect.ValueOf(toy.Keep), "Kept": reflect.ValueOf(toy.Kept),
	"Integrate": reflect.ValueOf(toy.Integrate), "Parallel": reflect.ValueOf(toy.Parallel), "Try": reflect.ValueOf(toy.Try),
	"Total": reflect.ValueOf(toy.Total), "Limit": reflect.ValueOf(toy.Limit), "LimitWithUnits": reflect.ValueOf(toy.LimitWithUnits),
	"Square": reflect.ValueOf(toy.Square), "Wait": reflect.ValueOf(toy.Wait), "Show": reflect.ValueOf(toy.Show), "Boxed": reflect.ValueOf(toy.Boxed),
	"Fault": reflect.ValueOf((*toy.Fault)(nil)), "Rod": reflect.ValueOf((*toy.Rod)(nil)), "Handle": reflect.ValueOf((*toy.Handle)(nil)),
	"Law": reflect.ValueOf((*toy.Law)(nil)), "_Law": reflect.ValueOf((*wrapLaw)(nil)), "Pair": reflect.ValueOf((*toy.Pair)(nil)),
	"Loads": reflect.ValueOf((*toy.Loads)(nil)), "Kind": reflect.ValueOf((*toy.Kind)(nil)),
	"Metre": reflect.ValueOf((*float64)(nil)), "SquareMetre": reflect.ValueOf((*float64)(nil)),
}

var vocabulary = sync.OnceValues(func() (*cell.Vocabulary, error) {
	v := &cell.Vocabulary{
		Symbols: map[string]map[string]reflect.Value{toyPath + "/toy": toySymbols}, Export: map[string][]byte{},
		Open: toyPath, Packages: std,
		Docs: map[string]string{toyPath + ".NewRod": "NewRod makes a rod of a length.", toyPath + ".Rod.Scaled": "Scaled gives a rod that is longer by a factor."},
		Constants: []cell.Constant{
			{Name: "mm", Value: "1e-3", Dim: "m", Doc: "millimetre"}, {Name: "metre", Value: "1", Dim: "m", Doc: "metre"},
			{Name: "mm2", Value: "1e-6", Dim: "m2", Doc: "square millimetre"}, {Name: "newton", Value: "1", Dim: "N", Doc: "newton"},
			{Name: "amp", Value: "1", Dim: "A", Doc: "ampere"}, {Name: "ms", Value: "1e-3", Dim: "s", Doc: "millisecond"},
			{Name: "kHz", Value: "1e3", Dim: "Hz", Doc: "kilohertz"}, {Name: "henry", Value: "1", Dim: "H", Doc: "henry"},
		},
		Functions: map[string]string{"sqrt": "math.Sqrt", "sq": "toy.Square", "abs": "math.Abs"},
		Units: &unit.Table{
			Symbols: []unit.Symbol{
				{Name: "m", Base: "m", Word: "metre"}, {Name: "kg", Base: "kg", Word: "kilogram"}, {Name: "s", Base: "s", Word: "second"},
				{Name: "A", Base: "A", Word: "ampere"}, {Name: "Hz", Base: "s-1", Word: "hertz"}, {Name: "N", Base: "kg m s-2", Word: "newton"},
				{Name: "H", Base: "kg m2 s-2 A-2", Word: "henry"},
			},
			Words: map[string]string{"m2": "square metre"},
			Constants: []unit.Constant{
				{Name: "mm", Dim: "m"}, {Name: "metre", Dim: "m"}, {Name: "mm2", Dim: "m2"}, {Name: "newton", Dim: "N"}, {Name: "amp", Dim: "A"},
				{Name: "ms", Dim: "s"}, {Name: "kHz", Dim: "Hz"}, {Name: "henry", Dim: "H"},
			},
			Aliases:   map[string]string{"Metre": "m", "SquareMetre": "m2", "Second": "s", "Newton": "N"},
			Functions: map[string]string{"sqrt": "math.Sqrt", "sq": "toy.Square", "abs": "math.Abs"},
		},
	}
	for _, p := range std {
		v.Symbols[p+"/"+p[strings.LastIndexByte(p, '/')+1:]] = stdlib.Symbols[p+"/"+p[strings.LastIndexByte(p, '/')+1:]]
	}
	out, err := exec.Command("go", append([]string{"list", "-export", "-f", "{{.ImportPath}} {{.Export}}", toyPath}, std...)...).Output()
	if err != nil {
		return nil, err
	}
	for _, line := range strings.Fields(strings.ReplaceAll(string(out), " ", "\x00")) {
		path, file, _ := strings.Cut(line, "\x00")
		if v.Export[path], err = exportData(file); err != nil {
			return nil, err
		}
	}
	return v, nil
})

// exportData takes the export data out of a compiled package.
func exportData(file string) ([]byte, error) {
	f, err := os.Open(file)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	r, err := gcexportdata.NewReader(bufio.NewReader(f)) //lint:ignore SA1019 the go command hands out archives
	if err != nil {
		return nil, err
	}
	return io.ReadAll(r)
}

// notebook runs cells and gathers what they show.
type notebook struct {
	t    testing.TB
	s    *cell.Session
	n    int
	mu   sync.Mutex
	outs []kernel.Output
}

// bare is the vocabulary without a unit check, for tests of the language alone.
var bare = sync.OnceValues(func() (*cell.Vocabulary, error) {
	v, err := vocabulary()
	if err != nil {
		return nil, err
	}
	b := *v
	b.Units = nil
	return &b, nil
})

func open(t testing.TB, units bool) *notebook {
	t.Helper()
	v, err := bare()
	if units {
		v, err = vocabulary()
	}
	if err != nil {
		t.Fatal(err)
	}
	s, err := cell.New(v, cell.Hooks{Context: toy.SetContext})
	if err != nil {
		t.Fatal(err)
	}
	return &notebook{t: t, s: s}
}

func (n *notebook) sink(o kernel.Output) {
	n.mu.Lock()
	defer n.mu.Unlock()
	n.outs = append(n.outs, o)
}

// run gives what a cell shows as lines: streams as they are, values by their text, notes of stderr after "! ".
func (n *notebook) run(ctx context.Context, src string) (string, kernel.Outcome) {
	n.n++
	n.outs = nil
	o := n.s.Run(ctx, kernel.Cell{Number: n.n, Source: src}, n.sink)
	n.mu.Lock()
	defer n.mu.Unlock()
	var b strings.Builder
	for _, x := range n.outs {
		switch {
		case x.Kind == kernel.Stream && x.Name == "stderr":
			b.WriteString("! " + x.Text)
		case x.Kind == kernel.Stream:
			b.WriteString(x.Text)
		default:
			text, _ := x.Data["text/plain"].(string)
			b.WriteString(text + "\n")
		}
	}
	return b.String(), o
}
