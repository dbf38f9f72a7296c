package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

// collect finds what the cell declares after declarations and statements were checked: constants, types, functions, and
// the variables of its top level, which become names of the notebook.
func (c *checking) collect() *checked {
	r := &checked{
		parsed: c.p, info: c.info, pkg: c.pkg, after: c.before.clone(), lives: map[types.Object]*live{},
	}
	for _, l := range c.before.names {
		r.lives[l.obj] = l
	}
	for name := range c.withdrawn {
		delete(r.after.names, name)
	}
	for _, im := range c.p.imports {
		c.importName(r, im)
	}
	for _, d := range c.p.decls {
		switch d := d.(type) {
		case *ast.GenDecl:
			for _, sp := range d.Specs {
				switch sp := sp.(type) {
				case *ast.TypeSpec:
					if l := c.declare(r, sp.Name); l != nil {
						r.types = append(r.types, l)
					}
				case *ast.ValueSpec:
					for _, id := range sp.Names {
						c.declare(r, id)
					}
				}
			}
		case *ast.FuncDecl:
			fn := &function{src: c.p.src, decl: d, uses: namesIn(d)}
			if d.Recv != nil {
				r.funcs = append(r.funcs, &fnUnit{function: fn, name: d.Name.Name, recv: recvBase(d), own: true})
			} else if l := c.declare(r, d.Name); l != nil {
				l.fn = fn
				r.funcs = append(r.funcs, &fnUnit{function: fn, name: l.name, live: l, own: true})
			}
		}
	}
	for _, old := range c.carried {
		c.again(r, old, c.pkg.Scope().Lookup(old.name))
	}
	c.variables(r)
	return r
}

// again makes a function of an earlier cell new, under a new object if its signature was checked again.
func (c *checking) again(r *checked, old *live, obj types.Object) {
	if obj == nil {
		return
	}
	l := &live{name: old.name, obj: obj, cell: old.cell, line: old.line, fn: old.fn}
	if types.Identical(obj.Type(), old.obj.Type()) {
		l.indirect = old.indirect
	}
	r.after.names[l.name] = l
	r.lives[obj] = l
	r.funcs = append(r.funcs, &fnUnit{function: old.fn, name: l.name, live: l})
}

// declare makes a live name of a declaration.
func (c *checking) declare(r *checked, id *ast.Ident) *live {
	obj := c.info.Defs[id]
	if obj == nil || id.Name == "_" {
		return nil
	}
	l := c.newLive(id, obj)
	if old := c.before.names[id.Name]; old != nil && old.fn != nil && types.Identical(old.obj.Type(), obj.Type()) {
		l.indirect = old.indirect
	}
	r.add(l)
	c.taken(r, id)
	return l
}

func (c *checking) newLive(id *ast.Ident, obj types.Object) *live {
	off, _ := c.p.src.offset(id.Pos())
	line, _ := c.p.src.place(off)
	return &live{name: id.Name, obj: obj, cell: c.p.src.cell, line: line}
}

func (r *checked) add(l *live) {
	r.after.names[l.name] = l
	r.lives[l.obj] = l
	r.own = append(r.own, l)
}

// taken notes that a name of the vocabulary is taken over.
func (c *checking) taken(r *checked, id *ast.Ident) {
	if c.before.names[id.Name] != nil {
		return
	}
	switch o := c.s.base.lookup(id.Name).(type) {
	case *types.Func:
		r.notes = append(r.notes, "note: "+id.Name+" is now yours; the vocabulary's "+o.Name()+" is out of reach under this name")
	}
}

// importName makes a name of an import; packages are there anyway.
func (c *checking) importName(r *checked, im *ast.ImportSpec) {
	path := strings.Trim(im.Path.Value, "\"`")
	pkg := c.s.base.packages[path]
	if pkg == nil || im.Name == nil || im.Name.Name == "_" || im.Name.Name == "." || im.Name.Name == pkg.Name() {
		return
	}
	r.add(c.newLive(im.Name, types.NewPkgName(im.Name.Pos(), c.pkg, im.Name.Name, pkg)))
}

// variables makes names of the notebook of the variables that the statements declare at their top level. A variable
// of a type identical to that of its predecessor keeps its storage, so that functions see the new value.
func (c *checking) variables(r *checked) {
	moved := map[types.Object]types.Object{}
	for _, s := range c.p.stmts {
		for _, id := range definedBy(s) {
			local, ok := c.info.Defs[id].(*types.Var)
			if !ok || id.Name == "_" {
				continue
			}
			old := r.after.names[id.Name]
			if old != nil && isVar(old) && types.Identical(old.obj.Type(), local.Type()) {
				moved[local] = old.obj
				r.own = append(r.own, old)
				continue
			}
			l := c.newLive(id, types.NewVar(id.Pos(), c.pkg, id.Name, local.Type()))
			if old != nil && isVar(old) {
				r.gone = append(r.gone, old)
			}
			moved[local] = l.obj
			r.add(l)
			r.fresh = append(r.fresh, l)
			c.taken(r, id)
		}
	}
	for id, o := range c.info.Defs {
		if m := moved[o]; o != nil && m != nil {
			c.info.Defs[id] = m
		}
	}
	for id, o := range c.info.Uses {
		if m := moved[o]; m != nil {
			c.info.Uses[id] = m
		}
	}
}

func isVar(l *live) bool {
	_, ok := l.obj.(*types.Var)
	return ok
}

// namesIn gives the identifiers in a tree.
func namesIn(n ast.Node) map[string]bool {
	names := map[string]bool{}
	ast.Inspect(n, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			names[id.Name] = true
		}
		return true
	})
	return names
}

// bodies checks the bodies of functions with all names of the cell in scope. Functions and methods of earlier cells
// that use a name which now means something else are made again.
func (c *checking) bodies(r *checked) {
	changed := map[string]bool{}
	for name, l := range r.after.names {
		if old := c.before.names[name]; old != nil && old != l {
			changed[name] = true
		}
	}
	for again := true; again; {
		again = false
		for _, name := range sortedKeys(c.before.names) {
			l := c.before.names[name]
			if l.fn != nil && !changed[name] && !c.withdrawn[name] && r.after.names[name] == l && meets(l.fn.uses, changed) {
				changed[name], again = true, true
				c.sources = append(c.sources, l.fn.src)
				c.again(r, l, l.obj)
			}
		}
	}
	for _, m := range c.s.methods {
		if t := r.after.names[m.typ]; t != nil && c.before.names[m.typ] == t && m.impl != "" && meets(m.uses, changed) && !c.withdrawn[m.typ+"."+m.name] {
			c.sources = append(c.sources, m.src)
			r.funcs = append(r.funcs, &fnUnit{function: m.function, name: m.name, recv: m.typ, meth: m})
		}
	}
	file := &ast.File{Name: ast.NewIdent("main")}
	for _, f := range r.funcs {
		if d := asFunction(f.decl); d != nil {
			file.Decls = append(file.Decls, d)
		}
	}
	if len(file.Decls) == 0 {
		return
	}
	pkg := types.NewPackage(mainPath, "main")
	c.fill(pkg, r.after, file)
	types.NewChecker(c.config(), c.fset, pkg, c.info).Files([]*ast.File{file})
	// The definition of a function is the one that its cell knows it by.
	for _, f := range r.funcs {
		if f.live != nil {
			c.info.Defs[f.decl.Name] = f.live.obj
		}
	}
}

// asFunction gives a function or method under a name that nobody uses, a receiver as first parameter.
func asFunction(f *ast.FuncDecl) *ast.FuncDecl {
	if f.Body == nil || genericRecv(f) {
		return nil
	}
	d := &ast.FuncDecl{Name: &ast.Ident{NamePos: f.Name.NamePos, Name: f.Name.Name + "__body"}, Type: f.Type, Body: f.Body}
	if f.Recv == nil {
		return d
	}
	d.Name.Name = recvBase(f) + "__" + d.Name.Name
	t := *f.Type
	params := &ast.FieldList{Opening: f.Type.Params.Opening, Closing: f.Type.Params.Closing}
	for _, field := range append(append([]*ast.Field{}, f.Recv.List...), f.Type.Params.List...) {
		if len(field.Names) == 0 {
			named := *field
			named.Names = []*ast.Ident{{NamePos: field.Type.Pos(), Name: "_"}}
			field = &named
		}
		params.List = append(params.List, field)
	}
	t.Params = params
	d.Type = &t
	return d
}

// unitFiles gives the cell as one file for the unit check.
func (c *checking) unitFiles(r *checked) []*ast.File {
	f := &ast.File{Name: ast.NewIdent("main"), Package: c.p.body.Lbrace}
	f.Decls = append(f.Decls, c.p.decls...)
	for _, u := range r.funcs {
		if !u.own {
			f.Decls = append(f.Decls, u.decl)
		}
	}
	f.Decls = append(f.Decls, &ast.FuncDecl{
		Name: ast.NewIdent("cell__"), Type: &ast.FuncType{Params: &ast.FieldList{}}, Body: c.p.body,
	})
	return []*ast.File{f}
}
