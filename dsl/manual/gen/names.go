package main

import (
	"bytes"
	"errors"
	"fmt"
	"go/ast"
	"go/doc"
	"go/doc/comment"
	"go/parser"
	"go/printer"
	"go/token"
	"os"
	"path/filepath"
	"sort"
	"strings"
)

// name is an exported name of the vocabulary with what its sources say.
type name struct {
	name    string
	sign    string // declaration without its body
	doc     string // as Markdown
	members []name // methods, with their short names
	taken   bool
}

// readNames reads the exported names of the vocabulary, its documentation in the order of the alphabet.
func readNames(dir string) (map[string]*name, error) {
	files, err := filepath.Glob(filepath.Join(dir, "*.go"))
	if err != nil {
		return nil, err
	}
	set := token.NewFileSet()
	var parsed []*ast.File
	for _, f := range files {
		if strings.HasSuffix(f, "_test.go") {
			continue
		}
		text, err := os.ReadFile(f)
		if err != nil {
			return nil, err
		}
		file, err := parser.ParseFile(set, filepath.Base(f), text, parser.ParseComments)
		if err != nil {
			return nil, err
		}
		parsed = append(parsed, file)
	}
	if len(parsed) == 0 {
		return nil, errors.New(dir + " holds no Go sources")
	}
	p, err := doc.NewFromFiles(set, parsed, "ampturn/dsl")
	if err != nil {
		return nil, err
	}
	r := &reader{p: p, set: set, names: map[string]*name{}}
	r.functions(p.Funcs)
	r.values(p.Consts)
	r.values(p.Vars)
	for _, t := range p.Types {
		r.typ(t)
	}
	return r.names, nil
}

// reader turns documentation into names.
type reader struct {
	p     *doc.Package
	set   *token.FileSet
	names map[string]*name
}

func (r *reader) functions(list []*doc.Func) {
	for _, f := range list {
		if !hidden(f.Name) {
			r.names[f.Name] = &name{name: f.Name, sign: r.function(f), doc: r.markdown(f.Doc)}
		}
	}
}

// values adds constants and variables; of a group each takes its own comment, or that of the group.
func (r *reader) values(list []*doc.Value) {
	for _, v := range list {
		for _, spec := range v.Decl.Specs {
			s, ok := spec.(*ast.ValueSpec)
			if !ok {
				continue
			}
			text := v.Doc
			if s.Doc != nil {
				text = s.Doc.Text()
			} else if s.Comment != nil {
				text = s.Comment.Text()
			}
			for _, id := range s.Names {
				if id.IsExported() && !hidden(id.Name) {
					r.names[id.Name] = &name{name: id.Name, sign: id.Name, doc: r.markdown(text)}
				}
			}
		}
	}
}

func (r *reader) typ(t *doc.Type) {
	r.functions(t.Funcs)
	r.values(t.Consts)
	r.values(t.Vars)
	for _, spec := range t.Decl.Specs {
		s, ok := spec.(*ast.TypeSpec)
		if !ok || s.Name.Name != t.Name {
			continue
		}
		text := t.Doc
		if s.Doc != nil {
			text = s.Doc.Text()
		}
		n := &name{name: t.Name, sign: "type " + t.Name, doc: r.markdown(text)}
		if s.Assign.IsValid() || exportedFields(s) {
			n.sign = "type " + r.print(s)
		}
		for _, m := range t.Methods {
			if !hidden(m.Name) && ast.IsExported(m.Name) {
				n.members = append(n.members, name{name: m.Name, sign: r.function(m), doc: r.markdown(m.Doc)})
			}
		}
		r.names[t.Name] = n
	}
}

// exportedFields tells whether a type is a struct whose fields users write, or an interface that they meet.
func exportedFields(s *ast.TypeSpec) bool {
	switch t := s.Type.(type) {
	case *ast.StructType:
		for _, f := range t.Fields.List {
			for _, id := range f.Names {
				if id.IsExported() {
					return true
				}
			}
		}
	case *ast.InterfaceType:
		for _, f := range t.Methods.List {
			if len(f.Names) > 0 && f.Names[0].IsExported() {
				return true
			}
		}
	case *ast.MapType:
		return true
	}
	return false
}

// hidden tells whether a name is not for users: twins that carry units, what shows values.
func hidden(n string) bool {
	return strings.HasSuffix(n, "WithUnits") || strings.HasPrefix(n, "MIME") || n == "String"
}

func (r *reader) function(f *doc.Func) string {
	decl := *f.Decl
	decl.Doc, decl.Body = nil, nil
	if decl.Recv != nil {
		sign := r.print(&decl)
		if i := strings.Index(sign, ") "); i >= 0 {
			return strings.TrimSpace(sign[i+2:])
		}
	}
	return strings.TrimPrefix(r.print(&decl), "func ")
}

func (r *reader) print(node any) string {
	if s, ok := node.(*ast.TypeSpec); ok {
		plain := *s
		plain.Doc = nil
		node = &plain
	}
	var b bytes.Buffer
	if err := (&printer.Config{Mode: printer.UseSpaces | printer.TabIndent, Tabwidth: 4}).Fprint(&b, r.set, node); err != nil {
		return fmt.Sprint(err)
	}
	return b.String()
}

// markdown writes a comment as Markdown: links as words, headings below those of a chapter.
func (r *reader) markdown(text string) string {
	pr := r.p.Printer()
	pr.DocLinkURL = func(*comment.DocLink) string { return "" }
	pr.HeadingLevel = 5
	pr.HeadingID = func(*comment.Heading) string { return "" }
	return strings.TrimSpace(string(pr.Markdown(r.p.Parser().Parse(text))))
}

// entry writes what the sources say of a name.
func (n *name) entry() string {
	var b strings.Builder
	n.taken = true
	n.one(&b, "")
	for _, m := range n.members {
		m.one(&b, n.name+".")
	}
	return b.String()
}

func (n *name) one(b *strings.Builder, owner string) {
	if strings.Contains(n.sign, "\n") {
		fmt.Fprintf(b, "**%s%s**\n\n```\n%s\n```\n\n%s\n\n", owner, n.name, n.sign, n.doc)
		return
	}
	fmt.Fprintf(b, "**%s%s** &ensp; `%s`\\\n%s\n\n", owner, n.name, n.sign, n.doc) // one paragraph, so that no sheet ends within it
}

// open lists the names that no chapter has taken.
func open(names map[string]*name) []string {
	var list []string
	for key, n := range names {
		if !n.taken {
			list = append(list, key)
		}
	}
	sort.Strings(list)
	return list
}
