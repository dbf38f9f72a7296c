package cell

import (
	"embed"
	"fmt"
	"go/ast"
	"go/parser"
	"go/printer"
	"go/token"
	"go/types"
	"strings"
	"sync"
)

// Packages slices, maps and cmp hold generic functions, of which no compiled form can be handed to the interpreter.
// What cells have of them is written in lists/*.txt, in the part of Go that the interpreter gets right. A cell that calls such
// a function gets it with its types filled in; an exported program calls the library's own.

//go:embed lists/*.txt
var listSource embed.FS

var listNames = []string{"cmp", "iter", "maps", "slices"} // each after what it imports

// listLibrary is what cells have of the packages.
type listLibrary struct {
	packages map[string]*types.Package
	funcs    map[string]*ast.FuncDecl // by "package.Name"
}

var lists = sync.OnceValues(func() (*listLibrary, error) {
	lib := &listLibrary{packages: map[string]*types.Package{}, funcs: map[string]*ast.FuncDecl{}}
	fset := token.NewFileSet()
	for _, name := range listNames {
		text, err := listSource.ReadFile("lists/" + name + ".txt")
		if err != nil {
			return nil, err
		}
		f, err := parser.ParseFile(fset, name, text, parser.SkipObjectResolution)
		if err != nil {
			return nil, err
		}
		conf := types.Config{IgnoreFuncBodies: true, Importer: fixedImporter(lib.packages), Error: func(error) {}}
		pkg, _ := conf.Check(name, fset, []*ast.File{f}, nil) // functions without a body are errors to it
		lib.packages[name] = pkg
		for _, d := range f.Decls {
			if fn, ok := d.(*ast.FuncDecl); ok {
				lib.funcs[name+"."+fn.Name.Name] = fn
			}
		}
	}
	return lib, nil
})

// isList tells whether an object belongs to the packages of generic functions.
func isList(o types.Object) bool {
	if o == nil || o.Pkg() == nil {
		return false
	}
	lib, err := lists()
	return err == nil && lib.packages[o.Pkg().Path()] == o.Pkg()
}

// isSequence tells whether a function gives a sequence, which cells have only within slices.Sorted and slices.Collect.
func isSequence(o types.Object) bool {
	return isList(o) && o.Pkg().Path() == "maps" && (o.Name() == "Keys" || o.Name() == "Values")
}

// collects tells whether a function takes a sequence.
func collects(o types.Object) bool {
	return isList(o) && o.Pkg().Path() == "slices" && (o.Name() == "Sorted" || o.Name() == "Collect")
}

// listFunc names a function of the packages with its types filled in.
func (l *lowering) listFunc(o types.Object, args *types.TypeList) string {
	var texts []string
	for i := range args.Len() {
		texts = append(texts, l.typ(args.At(i)))
	}
	if l.s.plain {
		return l.pkg(o.Pkg().Path()) + "." + o.Name() + "[" + strings.Join(texts, ", ") + "]"
	}
	key := o.Pkg().Path() + "." + o.Name()
	lib, err := lists()
	if err != nil {
		panic(err)
	}
	decl := lib.funcs[key]
	if decl == nil || decl.Body == nil {
		panic(key + " without lowered form")
	}
	open, given := l.openTypes(args)
	full := key + "[" + strings.Join(texts, ", ") + "]" + open
	if name := l.generic[full]; name != "" {
		return name + given
	}
	name := l.s.version(o.Pkg().Path()+"_"+o.Name(), false)
	l.generic[full] = name
	filled := map[string]string{}
	params := o.Type().(*types.Signature).TypeParams()
	for i := range params.Len() {
		filled[params.At(i).Obj().Name()] = texts[i]
	}
	text := fillIn(decl, name+open, filled)
	for i := range args.Len() {
		if boxes(args.At(i), 0) {
			text = strings.NewReplacer("s[i] == v", l.nb("Same")+`(s[i], v, "", "")`, "s1[i] != s2[i]", "!"+l.nb("Same")+`(s1[i], s2[i], "", "")`,
				"v1 != v2", "!"+l.nb("Same")+`(v1, v2, "", "")`).Replace(text)
			break
		}
	}
	l.globals = append(l.globals, text)
	return name + given
}

// openTypes gives, for a call within a generic function, the type parameters that the types of the call rest on, as
// they are declared and as they are handed on.
func (l *lowering) openTypes(args *types.TypeList) (declared, given string) {
	var names, list []string
	seen := map[*types.TypeParam]bool{}
	var walk func(t types.Type)
	walk = func(t types.Type) {
		switch t := types.Unalias(t).(type) {
		case *types.TypeParam:
			if !seen[t] {
				seen[t] = true
				names = append(names, paramName(t))
				list = append(list, paramName(t)+" "+l.constraint(t.Constraint()))
			}
		case *types.Slice:
			walk(t.Elem())
		case *types.Pointer:
			walk(t.Elem())
		case *types.Array:
			walk(t.Elem())
		case *types.Map:
			walk(t.Key())
			walk(t.Elem())
		case *types.Named:
			for i := range t.TypeArgs().Len() {
				walk(t.TypeArgs().At(i))
			}
		}
	}
	for i := range args.Len() {
		walk(args.At(i))
	}
	if len(names) == 0 {
		return "", ""
	}
	return "[" + strings.Join(list, ", ") + "]", "[" + strings.Join(names, ", ") + "]"
}

// fillIn writes a generic function with its types filled in.
func fillIn(decl *ast.FuncDecl, name string, filled map[string]string) string {
	var renamed []*ast.Ident
	ast.Inspect(decl, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok && filled[id.Name] != "" {
			renamed = append(renamed, id)
		}
		return true
	})
	old := make([]string, len(renamed))
	for i, id := range renamed {
		old[i] = id.Name
		id.Name = filled[id.Name]
	}
	defer func() {
		for i, id := range renamed {
			id.Name = old[i]
		}
	}()
	var b strings.Builder
	d := &ast.FuncDecl{Name: ast.NewIdent(name), Type: &ast.FuncType{Params: decl.Type.Params, Results: decl.Type.Results}, Body: decl.Body}
	if err := printer.Fprint(&b, token.NewFileSet(), d); err != nil {
		panic(err)
	}
	return b.String() + "\n"
}

// collected lowers slices.Sorted and slices.Collect of the keys or values of a map: in the order of the keys, or sorted.
func (l *lowering) collected(e *ast.CallExpr, o types.Object) string {
	inner := ast.Unparen(e.Args[0]).(*ast.CallExpr)
	seq := callee(l.info, ast.Unparen(inner.Fun))
	m := l.info.TypeOf(inner.Args[0]).Underlying().(*types.Map)
	mt, kt, vt := l.typ(l.info.TypeOf(inner.Args[0])), l.typ(m.Key()), l.typ(m.Elem())
	full := o.Name() + seq.Name() + mt
	name := l.generic[full]
	if name == "" {
		name = l.s.version("maps_"+seq.Name(), false)
		l.generic[full] = name
		text := fmt.Sprintf("func %s(m %s) []%%s {\n\tkeys := make([]%s, 0, len(m))\n\tfor k := range m {\n\t\tkeys = append(keys, k)\n\t}\n\t%s(keys)\n", name, mt, kt, l.nb("Sort"))
		if seq.Name() == "Keys" {
			text = fmt.Sprintf(text, kt) + "\treturn keys\n}\n"
		} else {
			text = fmt.Sprintf(text, vt) + fmt.Sprintf("\tvalues := make([]%s, 0, len(m))\n\tfor _, k := range keys {\n\t\tv := m[k]\n\t\tvalues = append(values, v)\n\t}\n", vt)
			if o.Name() == "Sorted" {
				text += "\t" + l.nb("SortList") + "(values)\n"
			}
			text += "\treturn values\n}\n"
		}
		l.globals = append(l.globals, text)
	}
	return name + "(" + l.expr(inner.Args[0]) + ")"
}
