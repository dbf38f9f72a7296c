package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"go/ast"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
)

// listed is what the go command says of a package.
type listed struct {
	ImportPath, Dir, Export string
	GoFiles                 []string
	ImportMap               map[string]string
}

// listing holds the packages of a build by their import path.
type listing map[string]*listed

// list asks the go command for packages and all that they import. The platform is fixed, so that the same sources give
// the same bytes everywhere.
func list(paths []string) (listing, error) {
	args := append([]string{"list", "-deps", "-export", "-json=ImportPath,Dir,Export,GoFiles,ImportMap", "--"}, paths...)
	cmd := exec.Command("go", args...)
	cmd.Env = append(os.Environ(), "GOOS=linux", "GOARCH=amd64", "CGO_ENABLED=0")
	var said bytes.Buffer
	cmd.Stderr = &said
	out, err := cmd.Output()
	if err != nil {
		return nil, fmt.Errorf("go list: %w\n%s", err, said.Bytes())
	}
	all := listing{}
	for dec := json.NewDecoder(bytes.NewReader(out)); ; {
		var p listed
		if err := dec.Decode(&p); errors.Is(err, io.EOF) {
			return all, nil
		} else if err != nil {
			return nil, fmt.Errorf("go list: %w", err)
		}
		all[p.ImportPath] = &p
	}
}

// loaded is a package of the table.
type loaded struct {
	path  string
	whole bool // the vocabulary: nothing may be left out
	table map[string]bool
	build listing
	fset  *token.FileSet
	files []*ast.File    // with comments and bodies
	full  *types.Package // the exported names as they are
	api   *types.Package // what is offered: see strip

	deprecated map[string]bool // functions that their comments call so
}

// load parses and checks one package from source, its imports from export data.
func (l listing) load(path string, table map[string]bool) (*loaded, error) {
	at, ok := l[path]
	if !ok {
		return nil, fmt.Errorf("go list: no package %s", path)
	}
	p := &loaded{path: path, table: table, build: l, fset: token.NewFileSet(), deprecated: map[string]bool{}}
	for _, name := range at.GoFiles {
		f, err := parser.ParseFile(p.fset, filepath.Join(at.Dir, name), nil, parser.ParseComments|parser.SkipObjectResolution)
		if err != nil {
			return nil, err
		}
		p.files = append(p.files, f)
		for _, d := range f.Decls {
			if fn, ok := d.(*ast.FuncDecl); ok && fn.Recv == nil && strings.Contains(fn.Doc.Text(), "\nDeprecated: ") {
				p.deprecated[fn.Name.Name] = true
			}
		}
	}
	var err error
	if p.full, err = p.check(p.files, nil); err != nil {
		return nil, err
	}
	return p, nil
}

// check type-checks files without their function bodies. With lenient it goes on after errors and gives them all.
func (p *loaded) check(files []*ast.File, lenient func(error)) (*types.Package, error) {
	at := p.build[p.path]
	lookup := func(path string) (io.ReadCloser, error) {
		if to, ok := at.ImportMap[path]; ok {
			path = to
		}
		dep, ok := p.build[path]
		if !ok || dep.Export == "" {
			return nil, fmt.Errorf("no export data for %s", path)
		}
		return os.Open(dep.Export)
	}
	conf := types.Config{
		IgnoreFuncBodies: true, Error: lenient, Sizes: types.SizesFor("gc", "amd64"),
		Importer: importer.ForCompiler(p.fset, "gc", lookup),
	}
	pkg, err := conf.Check(p.path, p.fset, files, nil)
	if lenient != nil {
		err = nil
	}
	return pkg, err
}
