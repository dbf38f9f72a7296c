package main

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// leftOut are functions of the standard packages that cells get no symbol for: they read the standard input.
var leftOut = map[string]bool{"fmt.Scan": true, "fmt.Scanf": true, "fmt.Scanln": true}

// keptOld are deprecated functions that cells get all the same; the others are left out.
var keptOld = map[string]bool{"math/rand.Seed": true}

// strip checks the package once more, without what cells have no use for: unexported fields and the signatures of
// unexported methods, which would drag the insides of other packages into the export data, and, outside the vocabulary, functions and methods that cells
// could not call (generics, types of packages that are not in the table). What remains must not change by that.
func (p *loaded) strip() error {
	for _, f := range p.files {
		p.stripFile(f)
	}
	var errs []error
	var err error
	if p.api, err = p.check(p.files, func(e error) { errs = append(errs, e) }); err != nil {
		return err
	}
	for _, name := range p.api.Scope().Names() {
		obj := p.api.Scope().Lookup(name)
		if !obj.Exported() {
			continue
		}
		if was, is := p.describe(p.full.Scope().Lookup(name)), p.describe(obj); was != is {
			return fmt.Errorf("%s changes when unexported fields are left out: %s, was %s (%v)", name, is, was, errs)
		}
	}
	if was, is := implementers(p.full), implementers(p.api); was != is {
		return fmt.Errorf("unexported methods of one name and two signatures: %s, was %s", is, was)
	}
	return nil
}

// implementers writes which exported types of a package satisfy which of its exported interfaces.
func implementers(pkg *types.Package) string {
	var b strings.Builder
	for _, iface := range pkg.Scope().Names() {
		it, ok := pkg.Scope().Lookup(iface).(*types.TypeName)
		if !ok || !it.Exported() || isGeneric(it.Type()) || !types.IsInterface(it.Type()) {
			continue
		}
		i := it.Type().Underlying().(*types.Interface)
		fmt.Fprintf(&b, "%s:", iface)
		for _, name := range pkg.Scope().Names() {
			t, ok := pkg.Scope().Lookup(name).(*types.TypeName)
			if !ok || !t.Exported() || isGeneric(t.Type()) {
				continue
			}
			if types.Implements(t.Type(), i) {
				fmt.Fprintf(&b, " %s", name)
			}
			if types.Implements(types.NewPointer(t.Type()), i) {
				fmt.Fprintf(&b, " *%s", name)
			}
		}
		b.WriteString("; ")
	}
	return b.String()
}

// describe writes what cells see of a name: its type and the methods of a defined type.
func (p *loaded) describe(obj types.Object) string {
	if obj == nil {
		return "nothing"
	}
	t, ok := obj.(*types.TypeName)
	if !ok {
		return types.ObjectString(obj, (*types.Package).Path)
	}
	var b strings.Builder
	b.WriteString(t.Name())
	if s, ok := t.Type().Underlying().(*types.Struct); ok {
		for f := range s.Fields() {
			if f.Exported() {
				fmt.Fprintf(&b, "; %s", types.ObjectString(f, (*types.Package).Path))
			}
		}
		fmt.Fprintf(&b, "; comparable %v", types.Comparable(s))
	}
	if n, ok := t.Type().(*types.Named); ok {
		for i := range n.NumMethods() {
			if m := n.Method(i); m.Exported() && !p.unusable(m) {
				fmt.Fprintf(&b, "; %s", types.ObjectString(m, (*types.Package).Path))
			}
		}
	}
	return b.String()
}

// stripFile strips one file.
func (p *loaded) stripFile(f *ast.File) {
	kept := f.Decls[:0]
	for _, d := range f.Decls {
		if fn, ok := d.(*ast.FuncDecl); ok && p.drops(fn) {
			continue
		}
		switch d := d.(type) {
		case *ast.GenDecl:
			p.stripTypes(d)
		case *ast.FuncDecl:
			if d.Recv != nil && !d.Name.IsExported() {
				seal(d.Type)
			}
		}
		kept = append(kept, d)
	}
	f.Decls = kept
}

// drops tells whether a function declaration is left out.
func (p *loaded) drops(fn *ast.FuncDecl) bool {
	if !fn.Name.IsExported() {
		return false
	}
	if fn.Recv == nil {
		obj, ok := p.full.Scope().Lookup(fn.Name.Name).(*types.Func)
		return ok && p.unusable(obj)
	}
	recv := ast.Unparen(fn.Recv.List[0].Type)
	if star, ok := recv.(*ast.StarExpr); ok {
		recv = star.X
	}
	id, ok := recv.(*ast.Ident)
	if !ok {
		return false
	}
	t := p.full.Scope().Lookup(id.Name)
	if t == nil {
		return false
	}
	obj, _, _ := types.LookupFieldOrMethod(types.NewPointer(t.Type()), true, p.full, fn.Name.Name)
	m, ok := obj.(*types.Func)
	return ok && p.unusable(m)
}

// unusable tells whether cells could not call a function of a package other than the vocabulary.
func (p *loaded) unusable(fn *types.Func) bool {
	if p.whole {
		return false
	}
	if name := p.path + "." + fn.Name(); fn.Signature().Recv() == nil && (leftOut[name] || p.deprecated[fn.Name()] && !keptOld[name]) {
		return true
	}
	if fn.Signature().TypeParams().Len() > 0 {
		return true
	}
	w := newWalker(fn.Pkg(), p.table)
	w.shallow = true
	w.walk(fn.Name(), fn.Type())
	return len(w.faults) > 0
}

// stripTypes leaves unexported fields out of the struct types of a declaration.
func (p *loaded) stripTypes(gen *ast.GenDecl) {
	for _, spec := range gen.Specs {
		ts, ok := spec.(*ast.TypeSpec)
		if !ok {
			continue
		}
		if it, ok := ts.Type.(*ast.InterfaceType); ok {
			for _, m := range it.Methods.List {
				if ft, ok := m.Type.(*ast.FuncType); ok && !m.Names[0].IsExported() {
					seal(ft)
				}
			}
		}
		st, ok := ts.Type.(*ast.StructType)
		obj := p.full.Scope().Lookup(ts.Name.Name)
		if !ok || obj == nil || ts.TypeParams != nil {
			continue
		}
		stripFields(st, types.Comparable(obj.Type()))
	}
}

// seal leaves parameters and results out of the signature of an unexported method. Its name alone keeps other packages
// from satisfying an interface.
func seal(t *ast.FuncType) {
	t.Params, t.Results = &ast.FieldList{Opening: t.Params.Opening, Closing: t.Params.Closing}, nil
}

// stripFields puts one blank field in the place of all unexported fields that are not embedded; its type keeps the
// struct as comparable as it was.
func stripFields(st *ast.StructType, compares bool) {
	kept := st.Fields.List[:0]
	var hidden bool
	for _, f := range st.Fields.List {
		if len(f.Names) == 0 {
			kept = append(kept, f)
			continue
		}
		var names []*ast.Ident
		for _, n := range f.Names {
			if n.IsExported() {
				names = append(names, n)
			}
		}
		hidden = hidden || len(names) < len(f.Names)
		if f.Names = names; len(names) > 0 {
			kept = append(kept, f)
		}
	}
	if hidden {
		at := st.Fields.Opening
		var blank ast.Expr = &ast.StructType{Struct: at, Fields: &ast.FieldList{Opening: at, Closing: at}}
		if !compares {
			blank = &ast.ArrayType{Lbrack: at, Len: &ast.BasicLit{ValuePos: at, Kind: token.INT, Value: "0"},
				Elt: &ast.FuncType{Func: at, Params: &ast.FieldList{Opening: at, Closing: at}}}
		}
		kept = append(kept, &ast.Field{Names: []*ast.Ident{{NamePos: at, Name: "_"}}, Type: blank})
	}
	st.Fields.List = kept
}
