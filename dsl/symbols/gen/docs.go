package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"go/ast"
	"go/token"
	"sort"
	"strings"
)

// docs adds the doc comments of the package, of its exported names and of their exported methods and fields. The
// keys are "PATH", "PATH.Name" and "PATH.Name.Member". A name of the vocabulary without a comment is an error. Packages
// of Go's library have their own documentation, which is not copied here.
func (p *loaded) docs(all map[string]string) error {
	if !p.whole {
		return nil
	}
	d := &docs{p: p, all: all}
	for _, f := range p.files {
		if f.Doc != nil {
			d.add(p.path, f.Doc)
		}
		for _, decl := range f.Decls {
			switch decl := decl.(type) {
			case *ast.FuncDecl:
				d.function(decl)
			case *ast.GenDecl:
				d.general(decl)
			}
		}
	}
	if p.whole && len(d.missing) > 0 {
		sort.Strings(d.missing)
		return fmt.Errorf("without a doc comment: %s", strings.Join(d.missing, ", "))
	}
	return nil
}

// docs collects the comments of one package.
type docs struct {
	p       *loaded
	all     map[string]string
	missing []string
}

// add adds the first comment that says anything.
func (d *docs) add(key string, comments ...*ast.CommentGroup) {
	for _, c := range comments {
		if text := strings.TrimSpace(c.Text()); text != "" {
			d.all[key] = text
			return
		}
	}
	if key != d.p.path {
		d.missing = append(d.missing, strings.TrimPrefix(key, d.p.path+"."))
	}
}

// function adds a function or method.
func (d *docs) function(fn *ast.FuncDecl) {
	if !fn.Name.IsExported() {
		return
	}
	key := d.p.path + "."
	if fn.Recv != nil {
		recv := receiver(fn)
		if !ast.IsExported(recv) {
			return
		}
		key += recv + "."
	}
	d.add(key+fn.Name.Name, fn.Doc)
}

// receiver gives the name of a method's receiver type.
func receiver(fn *ast.FuncDecl) string {
	t := ast.Unparen(fn.Recv.List[0].Type)
	if star, ok := t.(*ast.StarExpr); ok {
		t = ast.Unparen(star.X)
	}
	if ix, ok := t.(*ast.IndexExpr); ok {
		t = ix.X
	}
	if id, ok := t.(*ast.Ident); ok {
		return id.Name
	}
	return ""
}

// general adds the names of a const, var or type declaration.
func (d *docs) general(gen *ast.GenDecl) {
	for _, spec := range gen.Specs {
		switch spec := spec.(type) {
		case *ast.ValueSpec:
			for _, n := range spec.Names {
				if n.IsExported() {
					d.add(d.p.path+"."+n.Name, spec.Doc, spec.Comment, gen.Doc)
				}
			}
		case *ast.TypeSpec:
			if !spec.Name.IsExported() {
				continue
			}
			comments := []*ast.CommentGroup{spec.Doc, spec.Comment}
			if gen.Lparen == token.NoPos {
				comments = append(comments, gen.Doc)
			}
			key := d.p.path + "." + spec.Name.Name
			d.add(key, comments...)
			d.members(key, spec.Type)
		}
	}
}

// members adds the fields of a struct and the methods of an interface that have a comment.
func (d *docs) members(key string, t ast.Expr) {
	var list *ast.FieldList
	switch t := t.(type) {
	case *ast.StructType:
		list = t.Fields
	case *ast.InterfaceType:
		list = t.Methods
	default:
		return
	}
	for _, f := range list.List {
		for _, n := range f.Names {
			if n.IsExported() && (f.Doc != nil || f.Comment != nil) {
				d.add(key+"."+n.Name, f.Doc, f.Comment)
			}
		}
	}
}

// docsJSON writes the comments in the order of their keys.
func docsJSON(all map[string]string) []byte {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", " ")
	if err := enc.Encode(all); err != nil {
		panic(err) // a map of strings always encodes
	}
	return b.Bytes()
}
