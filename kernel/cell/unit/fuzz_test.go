package unit_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"strings"
	"testing"
)

// FuzzCheck demands that any cell which passes the type check passes the unit check without a panic, and that every
// expression of it has a text.
func FuzzCheck(f *testing.F) {
	for _, file := range []string{"wrong.txtar", "right.txtar"} {
		for _, c := range cases(f, file) {
			for _, cell := range cells(c) {
				f.Add(cell)
			}
		}
	}
	f.Fuzz(func(t *testing.T, cell string) {
		decl, stmt := separate(cell)
		for _, text := range []string{"package main;" + decl + "\n", "package main;func cell__(){" + stmt + "\n}"} {
			file, err := parser.ParseFile(token.NewFileSet(), "cell", text, parser.SkipObjectResolution)
			if err != nil || len(file.Imports) > 0 {
				t.Skip()
			}
			if strings.Contains(text, "cell__(){") && len(file.Decls) != 1 {
				t.Skip()
			}
		}
		n := newNotebook(t)
		n.lenient = true
		r := n.run(cell)
		if r.Report == nil {
			t.Skip()
		}
		for _, s := range r.stmts {
			ast.Inspect(s, func(node ast.Node) bool {
				if e, ok := node.(ast.Expr); ok {
					r.Text(e)
				}
				return true
			})
		}
	})
}
