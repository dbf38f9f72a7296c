package unit_test

import (
	"go/ast"
	"go/constant"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"os"
	"strings"
	"testing"

	"ampturn/kernel/cell/unit"
)

// symbols, constants and aliases of the tests' vocabulary, words.txt.
func words() *unit.Table {
	t := &unit.Table{
		Words:     map[string]string{"m2": "square metre", "m3": "cubic metre", "A/m": "ampere per metre"},
		Bare:      []string{"A/m", "1/H", "W/m3", "K/W"},
		Value:     "Value",
		Functions: map[string]string{"sqrt": "math.Sqrt", "sq": "words.Squared", "sin": "math.Sin"},
		Powers:    map[string]float64{"words.Squared": 2},
		Aliases:   map[string]string{},
	}
	for _, s := range strings.Split(`m=m metre,kg=kg kilogram,s=s second,A=A ampere,K=K kelvin,degC=degC degree Celsius,rad= radian,turn= turn,
Hz=s-1 hertz,N=kg m s-2 newton,J=kg m2 s-2 joule,W=kg m2 s-3 watt,VA=kg m2 s-3 volt-ampere,V=kg m2 s-3 A-1 volt,
ohm=kg m2 s-3 A-2 ohm,F=kg-1 m-2 s4 A2 farad,H=kg m2 s-2 A-2 henry,Wb=kg m2 s-2 A-1 weber,T=kg s-2 A-1 tesla`, ",") {
		name, rest, _ := strings.Cut(strings.TrimSpace(s), "=")
		at := strings.LastIndexByte(rest, ' ')
		if name == "degC" {
			at = strings.IndexByte(rest, ' ')
		}
		t.Symbols = append(t.Symbols, unit.Symbol{Name: name, Base: strings.TrimSpace(rest[:at]), Word: rest[at+1:]})
	}
	for _, s := range strings.Fields(constantList) {
		p := strings.Split(s, ":")
		t.Constants = append(t.Constants, unit.Constant{Name: p[0], Dim: strings.ReplaceAll(p[2], "_", " ")})
	}
	for _, s := range strings.Fields(`Metre:m SquareMetre:m2 CubicMetre:m3 Second:s Hertz:Hz Kilogram:kg Newton:N Radian:rad Volt:V
Ampere:A Ohm:ohm Henry:H Farad:F Watt:W VoltAmpere:VA Joule:J VoltSecond:V_s Tesla:T Weber:Wb AmperePerMetre:A/m
PerHenry:1/H WattPerCubicMetre:W/m3 KelvinPerWatt:K/W Celsius:degC Kelvin:K Turns:turn Count: Ratio:`) {
		name, dim, _ := strings.Cut(s, ":")
		t.Aliases[name] = strings.ReplaceAll(dim, "_", " ")
	}
	return t
}

// constantList is name:value:unit of the unit constants.
const constantList = `mm:1e-3:m um:1e-6:m metre:1:m inch:25.4e-3:m mm2:1e-6:m2 cm3:1e-6:m3 us:1e-6:s ns:1e-9:s ms:1e-3:s second:1:s
kHz:1e3:Hz Hz:1:Hz newton:1:N deg:0.017453292519943295:rad volt:1:V amp:1:A mA:1e-3:A ohm:1:ohm mohm:1e-3:ohm uH:1e-6:H nF:1e-9:F
uF:1e-6:F watt:1:W mW:1e-3:W mT:1e-3:T tesla:1:T uVs:1e-6:V_s oersted:79.577:A/m degC:1:degC kelvin:1:K percent:0.01: turn:1:turn
mu0:1.25663706143591729e-6:H/m pi:3.14159265358979323846264338327950288419716939937510582097494459:`

// notebook checks cells one after another, as the runner of cells does: a fresh package per cell, into which the
// names of earlier cells and of the vocabulary are put.
type notebook struct {
	t       testing.TB
	fset    *token.FileSet
	checker *unit.Checker
	base    map[string]types.Object
	live    map[string]types.Object
	packs   importing
	texts   map[*token.File]string
	lenient bool      // give no report for a cell that fails the type check, in place of a failed test
	check   checkFunc // the checker's, or one around it
}

// importing is an importer of what the tests have compiled.
type importing map[string]*types.Package

func (i importing) Import(path string) (*types.Package, error) { return i[path], nil }

// newNotebook compiles the vocabulary and opens a notebook on it.
func newNotebook(t testing.TB) *notebook {
	t.Helper()
	n := &notebook{t: t, fset: token.NewFileSet(), base: map[string]types.Object{}, live: map[string]types.Object{},
		packs: importing{}, texts: map[*token.File]string{}}
	source, err := os.ReadFile("../../../testdata/cells/units/words.txt")
	if err != nil {
		t.Fatal(err)
	}
	f, err := parser.ParseFile(n.fset, "words.go", source, 0)
	if err != nil {
		t.Fatal(err)
	}
	vocabulary, err := (&types.Config{}).Check("toy/words", n.fset, []*ast.File{f}, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range vocabulary.Scope().Names() {
		n.base[name] = vocabulary.Scope().Lookup(name)
	}
	units := types.NewPackage("units", "units")
	for _, s := range strings.Fields(constantList) {
		p := strings.Split(s, ":")
		n.base[p[0]] = types.NewConst(token.NoPos, units, p[0], types.Typ[types.UntypedFloat],
			constant.ToFloat(constant.MakeFromLiteral(p[1], token.FLOAT, 0)))
	}
	for _, path := range []string{"fmt", "math", "math/cmplx", "math/rand"} {
		pkg := standard(t, path)
		n.packs[path] = pkg
		n.base[pkg.Name()] = types.NewPkgName(token.NoPos, types.NewPackage("main", "main"), pkg.Name(), pkg)
	}
	float := types.NewTuple(types.NewVar(token.NoPos, units, "x", types.Typ[types.Float64]))
	for name := range words().Functions {
		n.base[name] = types.NewFunc(token.NoPos, units, name, types.NewSignatureType(nil, nil, nil, float, float, false))
	}
	if n.checker, err = unit.New(words()); err != nil {
		t.Fatal(err)
	}
	n.checker.Quote, n.check = n.quote, n.checker.Check
	return n
}

var standardPackages = map[string]*types.Package{}

// standard imports a package of the standard library.
func standard(t testing.TB, path string) *types.Package {
	t.Helper()
	if pkg := standardPackages[path]; pkg != nil {
		return pkg
	}
	pkg, err := importer.Default().Import(path)
	if err != nil {
		t.Fatal(err)
	}
	standardPackages[path] = pkg
	return pkg
}

// quote gives the typed text between two positions.
func (n *notebook) quote(pos, end token.Pos) string {
	f := n.fset.File(pos)
	if f == nil || int(end) > f.Base()+f.Size() {
		return ""
	}
	return n.texts[f][f.Offset(pos):f.Offset(end)]
}

// checked is a cell that was checked.
type checked struct {
	*unit.Report
	stmts []ast.Stmt
}

// run checks one cell and commits it.
func (n *notebook) run(text string) checked {
	n.t.Helper()
	decl, stmt := separate(text)
	df := n.parse("package main;" + decl + "\n")
	sf := n.parse("package main;func cell__(){" + stmt + "\n}")
	pkg := types.NewPackage("main", "main")
	for _, f := range []*ast.File{df, sf} {
		ast.Inspect(f, func(node ast.Node) bool {
			if id, ok := node.(*ast.Ident); ok && !declares(df, id.Name) {
				if o := n.live[id.Name]; o != nil {
					pkg.Scope().Insert(o)
				} else if p, ok := n.base[id.Name].(*types.PkgName); ok {
					pkg.Scope().Insert(types.NewPkgName(token.NoPos, pkg, id.Name, p.Imported()))
				} else if o := n.base[id.Name]; o != nil {
					pkg.Scope().Insert(o)
				}
			}
			return true
		})
	}
	info := &types.Info{Types: map[ast.Expr]types.TypeAndValue{}, Defs: map[*ast.Ident]types.Object{},
		Uses: map[*ast.Ident]types.Object{}, Selections: map[*ast.SelectorExpr]*types.Selection{},
		Instances: map[*ast.Ident]types.Instance{}, Implicits: map[ast.Node]types.Object{}}
	failed := false
	conf := &types.Config{Importer: n.packs, Error: func(err error) {
		if s := err.Error(); !strings.Contains(s, "is not used") && !strings.Contains(s, "declared and not used") {
			failed = true
			if !n.lenient {
				n.t.Errorf("%s\n%s", s, text)
			}
		}
	}}
	_ = types.NewChecker(conf, n.fset, pkg, info).Files([]*ast.File{df, sf})
	if failed && n.lenient {
		return checked{}
	}
	cell := sf.Decls[0].(*ast.FuncDecl)
	delete(info.Defs, cell.Name)
	body := cell.Body.List
	r := n.settle(pkg, info, df, body, n.check, []*ast.File{df, sf})
	if len(r.Diagnostics) == 0 {
		r.Commit()
	}
	return checked{r, body}
}

type checkFunc func(*token.FileSet, []*ast.File, *types.Info, *types.Package) *unit.Report

// settle makes names of the notebook of what the cell declares. A variable of the type of its predecessor keeps its
// object, as the storage is kept.
func (n *notebook) settle(pkg *types.Package, info *types.Info, df *ast.File, body []ast.Stmt, check checkFunc, files []*ast.File) *unit.Report {
	moved := map[types.Object]types.Object{}
	for _, s := range body {
		for _, id := range defined(s) {
			local, ok := info.Defs[id].(*types.Var)
			if !ok || id.Name == "_" {
				continue
			}
			old, ok := n.live[id.Name].(*types.Var)
			if !ok || !types.Identical(old.Type(), local.Type()) {
				old = types.NewVar(id.Pos(), pkg, id.Name, local.Type())
			}
			moved[local], n.live[id.Name] = old, old
		}
	}
	for id, o := range info.Defs {
		if m := moved[o]; o != nil && m != nil {
			info.Defs[id] = m
		}
	}
	for id, o := range info.Uses {
		if m := moved[o]; m != nil {
			info.Uses[id] = m
		}
	}
	r := check(n.fset, files, info, pkg)
	for _, name := range pkg.Scope().Names() {
		if declares(df, name) {
			n.live[name] = pkg.Scope().Lookup(name)
		}
	}
	return r
}

// defined gives the names that a statement defines.
func defined(s ast.Stmt) (ids []*ast.Ident) {
	switch s := s.(type) {
	case *ast.AssignStmt:
		if s.Tok == token.DEFINE {
			for _, e := range s.Lhs {
				if id, ok := e.(*ast.Ident); ok {
					ids = append(ids, id)
				}
			}
		}
	case *ast.DeclStmt:
		for _, spec := range s.Decl.(*ast.GenDecl).Specs {
			if v, ok := spec.(*ast.ValueSpec); ok {
				ids = append(ids, v.Names...)
			}
		}
	}
	return ids
}

// declares tells whether a file declares a name.
func declares(f *ast.File, name string) bool {
	for _, d := range f.Decls {
		switch d := d.(type) {
		case *ast.FuncDecl:
			if d.Recv == nil && d.Name.Name == name {
				return true
			}
		case *ast.GenDecl:
			for _, s := range d.Specs {
				switch s := s.(type) {
				case *ast.TypeSpec:
					if s.Name.Name == name {
						return true
					}
				case *ast.ValueSpec:
					for _, id := range s.Names {
						if id.Name == name {
							return true
						}
					}
				}
			}
		}
	}
	return false
}

// parse parses a text and keeps it for quotations.
func (n *notebook) parse(text string) *ast.File {
	n.t.Helper()
	f, err := parser.ParseFile(n.fset, "cell", text, parser.SkipObjectResolution)
	if err != nil {
		n.t.Fatalf("%v\n%s", err, text)
	}
	n.texts[n.fset.File(f.Package)] = text
	return f
}

// separate gives two copies of a cell: its functions, types and constants, and everything else, the other blanked.
func separate(text string) (decl, stmt string) {
	var d, s strings.Builder
	depth, in := 0, false
	for _, line := range strings.SplitAfter(text, "\n") {
		if depth == 0 {
			in = strings.HasPrefix(line, "type ") || strings.HasPrefix(line, "const ") ||
				strings.HasPrefix(line, "func ") && !strings.HasPrefix(line, "func(")
		}
		code, _, _ := strings.Cut(line, "//!")
		depth += strings.Count(code, "{") + strings.Count(code, "(") - strings.Count(code, "}") - strings.Count(code, ")")
		blank := strings.Repeat(" ", len(strings.TrimSuffix(line, "\n"))) + line[len(strings.TrimSuffix(line, "\n")):]
		if in {
			d.WriteString(line)
			s.WriteString(blank)
		} else {
			d.WriteString(blank)
			s.WriteString(line)
		}
	}
	return d.String(), s.String()
}
