package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"maps"
	"path"
	"strings"
	"sync"

	"golang.org/x/tools/go/gcexportdata"
)

// live is a name of the notebook: what it is for the checker, and what it is called in lowered text.
type live struct {
	name    string
	obj     types.Object
	lowered string
	cell    int // that declared it
	line    int

	captured bool      // a variable that functions or pointers may hold on to
	fn       *function // of a function
	offers   offers    // of a variable: what texts about its value can be
	indirect string    // of a function: the variable through which values that outlive a cell call it
}

// function is what a function needs to be made again when something it uses has changed.
type function struct {
	src  *source
	decl *ast.FuncDecl
	uses map[string]bool // names of the notebook in its body and signature
}

// scope is the set of live names.
type scope struct {
	names map[string]*live
}

func (s *scope) clone() *scope {
	c := &scope{names: make(map[string]*live, len(s.names)+4)}
	for k, v := range s.names {
		c.names[k] = v
	}
	return c
}

// base is what is in scope before the first cell: the vocabulary.
type base struct {
	voc      *Vocabulary
	packages map[string]*types.Package // by import path, those of the generic functions included
	byName   map[string]*types.Package // by the last element of the import path, those that cells may name
	open     *types.Package
	objects  map[string]types.Object // constants, hand-check functions
	targets  map[string]string       // hand-check function -> "import path.Name"
	docs     map[string]string       // of constants
}

// mainPath is the import path under which the checker sees every cell.
const mainPath = "main"

var packageCache sync.Map // *byte of the export data's owner -> map; see loadPackages

// loadPackages reads the export data of a vocabulary.
func loadPackages(v *Vocabulary) (map[string]*types.Package, error) {
	if p, ok := packageCache.Load(v); ok {
		return p.(map[string]*types.Package), nil
	}
	fset := token.NewFileSet()
	all := map[string]*types.Package{"unsafe": types.Unsafe}
	for _, p := range sortedKeys(v.Export) {
		if pkg := all[p]; pkg != nil && pkg.Complete() {
			continue
		}
		if _, err := gcexportdata.Read(strings.NewReader(string(v.Export[p])), fset, all, p); err != nil {
			return nil, err
		}
	}
	packageCache.Store(v, all)
	return all, nil
}

func newBase(v *Vocabulary) (*base, error) {
	all, err := loadPackages(v)
	if err != nil {
		return nil, err
	}
	b := &base{
		voc: v, packages: all, byName: map[string]*types.Package{}, open: all[v.Open],
		objects: map[string]types.Object{}, targets: map[string]string{}, docs: map[string]string{},
	}
	for _, p := range v.Packages {
		if all[p] != nil {
			b.byName[path.Base(p)] = all[p]
		}
	}
	lib, err := lists()
	if err != nil {
		return nil, err
	}
	b.packages = maps.Clone(all)
	for name, p := range lib.packages {
		b.packages[name] = p
		if b.byName[name] == nil && name != "iter" {
			b.byName[name] = p
		}
	}
	units := types.NewPackage("units", "units")
	for _, c := range v.Constants {
		val := constant.ToFloat(constant.MakeFromLiteral(c.Value, token.FLOAT, 0))
		b.objects[c.Name] = types.NewConst(token.NoPos, units, c.Name, types.Typ[types.UntypedFloat], val)
		b.docs[c.Name] = c.Doc
	}
	for name, target := range v.Functions {
		i := strings.LastIndexByte(target, '.')
		pkg := b.byName[target[:i]]
		if pkg == nil && b.open != nil && (b.open.Name() == target[:i] || b.open.Path() == target[:i]) {
			pkg = b.open
		}
		if pkg == nil {
			continue
		}
		if f, ok := pkg.Scope().Lookup(target[i+1:]).(*types.Func); ok {
			b.objects[name] = types.NewFunc(token.NoPos, units, name, f.Type().(*types.Signature))
			b.targets[name] = pkg.Path() + "." + f.Name()
		}
	}
	return b, nil
}

// lookup gives what a name means before any cell has declared it.
func (b *base) lookup(name string) types.Object {
	if o := b.objects[name]; o != nil {
		return o
	}
	if b.open != nil && token.IsExported(name) && !b.hidden(name) {
		if o := b.open.Scope().Lookup(name); o != nil {
			return o
		}
	}
	if p := b.byName[name]; p != nil {
		return types.NewPkgName(token.NoPos, types.NewPackage(mainPath, "main"), name, p)
	}
	return nil
}

// hidden tells whether an exported name is kept from cells: the twins of functions that take unit texts.
func (b *base) hidden(name string) bool { return strings.HasSuffix(name, twinSuffix) }

const twinSuffix = "WithUnits"

// isUnit tells whether a name is a unit or constant of the vocabulary, which cells cannot take over.
func (b *base) isUnit(name string) bool {
	_, ok := b.objects[name].(*types.Const)
	return ok
}

// foreign tells whether an object belongs to a compiled package.
func foreign(o types.Object) bool {
	return o.Pkg() != nil && o.Pkg().Path() != mainPath
}
