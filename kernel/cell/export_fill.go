package cell

import (
	"embed"
	"errors"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"strings"
	"sync"

	"golang.org/x/tools/go/ast/astutil"
)

// The compiler asks for more than the interpreter: no variable may stay unused, no function may run off its end. What
// is missing is found by a type check of the program and written into it.

const nbPath = "ampturn/kernel/cell/nb"

//go:embed nb/*.go
var nbSource embed.FS

// nbPackage gives package nb to the type checker: its signatures, which name basic types only where it matters.
var nbPackage = sync.OnceValues(func() (*types.Package, error) {
	fset := token.NewFileSet()
	entries, err := nbSource.ReadDir("nb")
	if err != nil {
		return nil, err
	}
	var files []*ast.File
	for _, e := range entries {
		text, err := nbSource.ReadFile("nb/" + e.Name())
		if err != nil {
			return nil, err
		}
		if strings.HasSuffix(e.Name(), "_test.go") {
			continue
		}
		f, err := parser.ParseFile(fset, e.Name(), text, parser.SkipObjectResolution)
		if err != nil {
			return nil, err
		}
		files = append(files, f)
	}
	conf := types.Config{IgnoreFuncBodies: true, Error: func(error) {}, Importer: fixedImporter{}}
	pkg, _ := conf.Check(nbPath, fset, files, nil) // packages of the library are out of reach: errors are expected
	return pkg, nil
})

// fixedImporter imports what it holds.
type fixedImporter map[string]*types.Package

func (f fixedImporter) Import(path string) (*types.Package, error) {
	if p := f[path]; p != nil {
		return p, nil
	}
	return nil, fmt.Errorf("no package %s", path)
}

// filled writes into the declarations of a program what the compiler asks for.
func (s *Session) filled(text string) (string, error) {
	own, err := nbPackage()
	if err != nil {
		return "", err
	}
	known := fixedImporter{nbPath: own}
	for path, p := range s.base.packages {
		known[path] = p
	}
	for range 4 {
		head := "package main\n"
		imports := s.importsOf(text)
		for _, name := range sortedKeys(imports) {
			head += fmt.Sprintf("import %s %q\n", name, imports[name])
		}
		fset := token.NewFileSet()
		file, err := parser.ParseFile(fset, "main.go", head+text, parser.SkipObjectResolution)
		if err != nil {
			return "", err
		}
		var due []insertion
		var other []error
		conf := types.Config{Importer: known, Error: func(err error) {
			if in, ok := amend(file, err); ok {
				in.off -= len(head)
				due = append(due, in)
			} else if !strings.HasSuffix(err.Error(), "imported as p_nb and not used") {
				other = append(other, err)
			}
		}}
		_, _ = conf.Check("main", fset, []*ast.File{file}, nil)
		if len(other) > 0 {
			return "", other[0]
		}
		if len(due) == 0 {
			return text, nil
		}
		text = inserted(text, due)
	}
	return "", errors.New("what is unused cannot be told")
}

// amend gives what has to be written into a program so that an error goes away.
func amend(file *ast.File, err error) (insertion, bool) {
	var e types.Error
	if !errors.As(err, &e) {
		return insertion{}, false
	}
	base := int(file.FileStart)
	if e.Msg == "missing return" {
		return insertion{int(e.Pos) - base, `panic("no result")` + "\n"}, true
	}
	name, ok := strings.CutPrefix(e.Msg, "declared and not used: ")
	if !ok {
		return insertion{}, false
	}
	path, _ := astutil.PathEnclosingInterval(file, e.Pos, e.Pos+1)
	for i, n := range path {
		switch n := n.(type) {
		case *ast.RangeStmt:
			return insertion{int(n.Body.Lbrace) + 1 - base, "\n_ = " + name}, true
		case *ast.AssignStmt, *ast.DeclStmt:
			if i+1 < len(path) {
				switch path[i+1].(type) {
				case *ast.BlockStmt, *ast.CaseClause:
					return insertion{int(n.End()) - base, "\n_ = " + name}, true
				}
			}
		}
	}
	return insertion{}, false
}
