package cell

import (
	"go/ast"
	"go/token"
	"go/types"
)

// checked is a cell that passed the type check.
type checked struct {
	*parsed
	info  *types.Info
	pkg   *types.Package
	after *scope // the names after the cell
	lives map[types.Object]*live
	own   []*live   // what the cell declares, variables with storage of earlier cells included
	fresh []*live   // variables that need storage
	gone  []*live   // variables whose storage nobody names any more
	types []*live   // types of the cell in their order
	funcs []*fnUnit // functions and methods to emit: the cell's own, and earlier ones that use what it declares
	notes []string
	files []*ast.File
}

// fnUnit is a function or method that is emitted with a cell.
type fnUnit struct {
	*function
	name string
	live *live  // of a function
	recv string // base type of a method
	meth *method
	own  bool // declared in this cell
}

// method is a method of a type of the notebook.
type method struct {
	*function
	typ, name string
	body      string // function that holds its body at present
	impl      string // variable that holds its body, for methods which use names of the notebook; "" for others
}

// checking holds one attempt to check a cell.
type checking struct {
	s         *Session
	p         *parsed
	fset      *token.FileSet
	before    *scope
	withdrawn map[string]bool
	sources   []*source
	errs      []types.Error
	info      *types.Info
	pkg       *types.Package
	checker   *types.Checker
	declared  map[string]bool // by declarations of the cell
	carried   []*live         // functions of earlier cells that are made again with their signatures
}

func newInfo() *types.Info {
	return &types.Info{
		Types: map[ast.Expr]types.TypeAndValue{}, Defs: map[*ast.Ident]types.Object{},
		Uses: map[*ast.Ident]types.Object{}, Selections: map[*ast.SelectorExpr]*types.Selection{},
		Instances: map[*ast.Ident]types.Instance{}, Implicits: map[ast.Node]types.Object{},
		Scopes: map[ast.Node]*types.Scope{},
	}
}

func (c *checking) config() *types.Config {
	return &types.Config{
		GoVersion: "go1.23", Sizes: sizes,
		Error: func(err error) {
			if e, ok := err.(types.Error); ok {
				c.errs = append(c.errs, e)
			}
		},
	}
}

var sizes = types.SizesFor("gc", "amd64")

// check type-checks a cell against the live names. The cell's syntax tree may be changed: conversions of whole
// numbers are written into it.
func (s *Session) check(p *parsed, fset *token.FileSet) (*checked, []problem) {
	withdrawn := map[string]bool{}
	for round := 0; ; round++ {
		c := &checking{s: s, p: p, fset: fset, before: s.scope, withdrawn: withdrawn, sources: []*source{p.src}}
		r, bad := c.run()
		again := false
		if round < 6 && (c.widen() || c.keyLiterals(r)) {
			again = true
		}
		if !again {
			for _, b := range bad {
				if b.src != p.src && b.name != "" && !withdrawn[b.name] {
					withdrawn[b.name] = true
					again = true
				}
			}
		}
		if again && round < 40 {
			continue
		}
		if len(bad) > 0 {
			return nil, bad
		}
		for _, name := range sortedKeys(withdrawn) {
			l := s.scope.names[name]
			if l == nil {
				r.notes = append(r.notes, "note: method "+name+" does not fit what this cell declares and keeps what it used before; run its cell again")
				continue
			}
			r.notes = append(r.notes, "note: "+name+" of cell "+itoa(l.cell)+" does not fit what this cell declares and is gone; run its cell again")
		}
		return r, nil
	}
}

// run checks declarations, then statements, then the bodies of functions, which see the variables of the statements.
func (c *checking) run() (*checked, []problem) {
	c.info = newInfo()
	c.pkg = types.NewPackage(mainPath, "main")
	if bad := c.declarations(); len(bad) > 0 {
		return nil, bad
	}
	c.helps()
	c.carry(c.declared)
	decls := &ast.File{Name: ast.NewIdent("main"), GoVersion: ""}
	for _, d := range c.p.decls {
		decls.Decls = append(decls.Decls, withoutBody(d))
	}
	for _, l := range c.carried {
		decls.Decls = append(decls.Decls, withoutBody(l.fn.decl))
	}
	stmts := &ast.File{Name: ast.NewIdent("main"), Decls: []ast.Decl{
		&ast.FuncDecl{Name: ast.NewIdent("cell__"), Type: &ast.FuncType{Params: &ast.FieldList{}}, Body: c.p.body},
	}}
	c.fill(c.pkg, c.before, decls, stmts)
	c.checker = types.NewChecker(c.config(), c.fset, c.pkg, c.info)
	c.checker.Files([]*ast.File{decls})
	c.checker.Files([]*ast.File{stmts})
	r := c.collect()
	c.bodies(r)
	r.files = c.unitFiles(r)
	bad := c.problems(r)
	if len(bad) == 0 {
		bad = c.subset(r)
	}
	return r, bad
}

// declarations notes which names the declarations of the cell introduce and refuses what cannot be declared.
func (c *checking) declarations() (bad []problem) {
	c.declared = map[string]bool{}
	refuse := func(id *ast.Ident, text string) {
		off, _ := c.p.src.offset(id.Pos())
		bad = append(bad, problem{src: c.p.src, off: off, end: off + len(id.Name), text: text})
	}
	add := func(id *ast.Ident) {
		switch {
		case c.s.base.isUnit(id.Name):
			refuse(id, id.Name+" is a unit of the vocabulary; choose another name")
		case id.Name == "main" || id.Name == "init":
			refuse(id, "a cell needs no func "+id.Name+": write its lines at the top level")
		}
		c.declared[id.Name] = true
	}
	local := map[string]bool{}
	for _, d := range c.p.decls {
		if g, ok := d.(*ast.GenDecl); ok {
			for _, sp := range g.Specs {
				switch sp := sp.(type) {
				case *ast.TypeSpec:
					add(sp.Name)
					local[sp.Name.Name] = true
				case *ast.ValueSpec:
					for _, id := range sp.Names {
						add(id)
					}
				}
			}
		}
	}
	for _, d := range c.p.decls {
		f, ok := d.(*ast.FuncDecl)
		if !ok {
			continue
		}
		if f.Recv == nil {
			add(f.Name)
		} else if t := recvBase(f); !local[t] {
			where := "the cell that declares it"
			if l := c.before.names[t]; l != nil {
				where = "cell " + itoa(l.cell) + ", which declares it"
			}
			refuse(f.Name, "methods of "+t+" belong into "+where)
		}
	}
	return bad
}

// helps takes types and packages that stand alone out of the statements: their help is shown.
func (c *checking) helps() {
	c.quoteHelp()
	for i, s := range c.p.stmts {
		e, ok := s.(*ast.ExprStmt)
		if !ok {
			continue
		}
		id, ok := ast.Unparen(e.X).(*ast.Ident)
		if !ok {
			continue
		}
		asked := false
		switch c.s.object(c.before, id.Name).(type) {
		case *types.TypeName, *types.PkgName:
			asked = true
		case nil:
			_, asked = types.Universe.Lookup(id.Name).(*types.TypeName)
		}
		if !asked {
			for _, d := range c.p.decls {
				if g, ok := d.(*ast.GenDecl); ok && g.Tok == token.TYPE {
					for _, sp := range g.Specs {
						asked = asked || sp.(*ast.TypeSpec).Name.Name == id.Name
					}
				}
			}
		}
		if asked {
			c.p.stmts[i] = &ast.EmptyStmt{Semicolon: id.Pos(), Implicit: true}
			c.p.help[c.p.stmts[i]] = id.Name
		}
	}
}

// recvBase gives the name of a method's type.
func recvBase(f *ast.FuncDecl) string {
	if f.Recv == nil || len(f.Recv.List) == 0 {
		return ""
	}
	t := f.Recv.List[0].Type
	for {
		switch x := t.(type) {
		case *ast.StarExpr:
			t = x.X
		case *ast.ParenExpr:
			t = x.X
		case *ast.IndexExpr:
			t = x.X
		case *ast.IndexListExpr:
			t = x.X
		case *ast.Ident:
			return x.Name
		default:
			return ""
		}
	}
}

// generic tells whether a method belongs to a generic type.
func genericRecv(f *ast.FuncDecl) bool {
	if f.Recv == nil {
		return false
	}
	found := false
	ast.Inspect(f.Recv.List[0].Type, func(n ast.Node) bool {
		switch n.(type) {
		case *ast.IndexExpr, *ast.IndexListExpr:
			found = true
		}
		return true
	})
	return found
}

// carry finds the functions of earlier cells that use one of the names, directly or through others: they are made
// again together with the cell.
func (c *checking) carry(changed map[string]bool) {
	names := map[string]bool{}
	for n := range changed {
		names[n] = true
	}
	for again := true; again; {
		again = false
		for _, name := range sortedKeys(c.before.names) {
			l := c.before.names[name]
			if l.fn == nil || names[name] || c.declared[name] || c.withdrawn[name] || !meets(l.fn.uses, names) {
				continue
			}
			names[name] = true
			c.carried = append(c.carried, l)
			c.sources = append(c.sources, l.fn.src)
			again = true
		}
	}
}

func meets(a, b map[string]bool) bool {
	for n := range a {
		if b[n] {
			return true
		}
	}
	return false
}

// withoutBody gives a function with a body that only ends, so that its signature is checked alone. Methods of generic
// types keep theirs.
func withoutBody(d ast.Decl) ast.Decl {
	f, ok := d.(*ast.FuncDecl)
	if !ok || f.Body == nil || genericRecv(f) {
		return d
	}
	stub := *f
	stub.Body = &ast.BlockStmt{
		Lbrace: f.Body.Lbrace, Rbrace: f.Body.Rbrace,
		List: []ast.Stmt{&ast.ForStmt{For: f.Body.Lbrace, Body: &ast.BlockStmt{Lbrace: f.Body.Lbrace, Rbrace: f.Body.Rbrace}}},
	}
	return &stub
}

// fill puts into the scope of a package what the files name and do not declare at their top level.
func (c *checking) fill(pkg *types.Package, names *scope, files ...*ast.File) {
	for _, f := range files {
		for _, d := range f.Decls {
			ast.Inspect(d, func(n ast.Node) bool {
				id, ok := n.(*ast.Ident)
				if !ok || id.Name == "_" || c.declared[id.Name] && pkg == c.pkg {
					return true
				}
				if o := c.s.object(names, id.Name); o != nil && !c.isCarried(id.Name, pkg) {
					insert(pkg, o)
				}
				return true
			})
		}
	}
}

// insert puts an object into a package's scope; the checker wants names of packages to be the package's own.
func insert(pkg *types.Package, o types.Object) {
	if p, ok := o.(*types.PkgName); ok {
		o = types.NewPkgName(token.NoPos, pkg, p.Name(), p.Imported())
	}
	pkg.Scope().Insert(o)
}

// isCarried tells whether a function is made again with the cell. A withdrawn one is not: the cell itself can still
// call it as it was.
func (c *checking) isCarried(name string, pkg *types.Package) bool {
	if pkg != c.pkg {
		return false
	}
	for _, l := range c.carried {
		if l.name == name {
			return true
		}
	}
	return false
}

// object gives what a name means with a set of live names.
func (s *Session) object(names *scope, name string) types.Object {
	if l := names.names[name]; l != nil {
		return l.obj
	}
	return s.base.lookup(name)
}

func unlabel(s ast.Stmt) ast.Stmt {
	for {
		l, ok := s.(*ast.LabeledStmt)
		if !ok {
			return s
		}
		s = l.Stmt
	}
}

// definedBy gives the names that a statement declares in its own scope.
func definedBy(s ast.Stmt) (ids []*ast.Ident) {
	switch s := unlabel(s).(type) {
	case *ast.AssignStmt:
		if s.Tok == token.DEFINE {
			for _, x := range s.Lhs {
				if id, ok := x.(*ast.Ident); ok {
					ids = append(ids, id)
				}
			}
		}
	case *ast.DeclStmt:
		if g, ok := s.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR {
			for _, sp := range g.Specs {
				ids = append(ids, sp.(*ast.ValueSpec).Names...)
			}
		}
	}
	return ids
}
