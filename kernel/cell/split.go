package cell

import (
	"go/ast"
	"go/parser"
	"go/scanner"
	"go/token"
	"sort"
	"strings"
)

// source is the text of one cell in the session's file set. It is parsed in two copies of equal length, one with the
// declarations and one with the statements, the other kind blanked, so that every position maps to the typed text.
type source struct {
	cell  int    // number of the cell, for messages
	text  string // as typed
	lines []int  // offset of each line
	files []*token.File
	base  []int // position of the text's first byte in each file
}

// parsed is a cell told apart.
type parsed struct {
	src     *source
	imports []*ast.ImportSpec
	decls   []ast.Decl // types, constants, functions
	stmts   []ast.Stmt // everything else, variables included
	body    *ast.BlockStmt
	help    map[ast.Stmt]string // statements that only ask for help on a name
}

// problem is a refusal at a place in a cell.
type problem struct {
	src  *source
	off  int // offset in the text
	end  int // end of the place, or off
	text string
	name string // kind of the refusal; "" for a plain one
}

func newSource(cell int, text string) *source {
	s := &source{cell: cell, text: text, lines: []int{0}}
	for i := 0; i < len(text); i++ {
		if text[i] == '\n' {
			s.lines = append(s.lines, i+1)
		}
	}
	return s
}

// place gives line and column, from 1, of an offset.
func (s *source) place(off int) (line, col int) {
	i := sort.SearchInts(s.lines, off+1) - 1
	return i + 1, off - s.lines[i] + 1
}

// line gives the text of a line, numbered from 1.
func (s *source) line(n int) string {
	if n < 1 || n > len(s.lines) {
		return ""
	}
	text := s.text[s.lines[n-1]:]
	if i := strings.IndexByte(text, '\n'); i >= 0 {
		text = text[:i]
	}
	return strings.TrimRight(text, "\r")
}

// offset maps a position to an offset of the text; ok is false for positions outside.
func (s *source) offset(p token.Pos) (off int, ok bool) {
	for i, f := range s.files {
		if int(p) >= f.Base() && int(p) <= f.Base()+f.Size() {
			return min(max(int(p)-s.base[i], 0), len(s.text)), true
		}
	}
	return 0, false
}

// quote gives the typed text between two positions.
func (s *source) quote(pos, end token.Pos) string {
	a, ok := s.offset(pos)
	b, ok2 := s.offset(end)
	if !ok || !ok2 || a > b {
		return ""
	}
	return s.text[a:b]
}

// chunk is a top-level piece of a cell.
type chunk struct {
	off, end int
	decl     bool
}

// tok is a token with its place.
type tok struct {
	tok token.Token
	lit string
	off int
}

// tokens scans a text; errors are reported to bad.
func tokens(text string, bad func(off int, msg string)) []tok {
	fset := token.NewFileSet()
	file := fset.AddFile("", -1, len(text))
	var s scanner.Scanner
	s.Init(file, []byte(text), func(pos token.Position, msg string) { bad(pos.Offset, msg) }, 0)
	var all []tok
	for {
		pos, t, lit := s.Scan()
		if t == token.EOF {
			return all
		}
		all = append(all, tok{t, lit, file.Offset(pos)})
	}
}

// chunks cuts a text at its top-level semicolons.
func chunks(text string, all []tok) []chunk {
	var out []chunk
	depth, first := 0, 0
	for i, t := range all {
		switch t.tok {
		case token.LPAREN, token.LBRACK, token.LBRACE:
			depth++
		case token.RPAREN, token.RBRACK, token.RBRACE:
			depth = max(depth-1, 0)
		}
		last := i == len(all)-1
		if !(t.tok == token.SEMICOLON && depth == 0) && !last {
			continue
		}
		end := len(text)
		if !last {
			end = all[i+1].off
		}
		if first < i || t.tok != token.SEMICOLON {
			out = append(out, chunk{all[first].off, end, isDecl(all[first:])})
		}
		first = i + 1
	}
	return out
}

// isDecl tells whether tokens begin a declaration that stands outside functions: import, type, const, a function or a
// method.
func isDecl(t []tok) bool {
	switch t[0].tok {
	case token.IMPORT, token.TYPE, token.CONST:
		return true
	case token.FUNC:
	default:
		return false
	}
	if len(t) > 1 && t[1].tok == token.IDENT {
		return true
	}
	depth := 0
	for i := 1; i+2 < len(t); i++ {
		switch t[i].tok {
		case token.LPAREN:
			depth++
		case token.RPAREN:
			if depth--; depth == 0 {
				return t[i+1].tok == token.IDENT && t[i+2].tok == token.LPAREN
			}
		}
	}
	return false
}

const (
	declHead = "package main;"
	stmtHead = "package main;func cell__(){"
	stmtTail = "\n}"
)

// parse tells the declarations of a cell from its statements. Problems come in order of their places.
func parse(fset *token.FileSet, cell int, text string) (*parsed, []problem) {
	src := newSource(cell, text)
	var bad []problem
	report := func(off int, msg string) {
		bad = append(bad, problem{src: src, off: off, end: off, text: msg, name: "SyntaxError"})
	}
	all := tokens(text, report)
	if bad = append(bad, tokenSlips(src, all)...); len(bad) > 0 {
		sort.SliceStable(bad, func(i, j int) bool { return bad[i].off < bad[j].off })
		return nil, syntaxHints(src, all, bad)
	}
	decl, stmt := []byte(text), []byte(text)
	blank(decl, 0, len(text), text)
	cs := chunks(text, all)
	for _, c := range cs {
		if c.decl {
			copy(decl[c.off:c.end], text[c.off:c.end])
			blank(stmt, c.off, c.end, text)
		}
	}
	p := &parsed{src: src, help: map[ast.Stmt]string{}}
	parseOne := func(head, body, tail string) *ast.File {
		base := fset.Base()
		file, err := parser.ParseFile(fset, "cell", head+body+tail, parser.SkipObjectResolution)
		if f := fset.File(token.Pos(base)); f != nil {
			src.files = append(src.files, f)
			src.base = append(src.base, base+len(head))
		}
		if list, ok := err.(scanner.ErrorList); ok {
			for _, e := range list {
				report(min(max(e.Pos.Offset-len(head), 0), len(text)), e.Msg)
			}
		}
		return file
	}
	df := parseOne(declHead, string(decl), "\n")
	sf := parseOne(stmtHead, string(stmt), stmtTail)
	if len(bad) > 0 {
		sort.SliceStable(bad, func(i, j int) bool { return bad[i].off < bad[j].off })
		return nil, syntaxHints(src, all, bad)
	}
	for _, d := range df.Decls {
		if g, ok := d.(*ast.GenDecl); ok && g.Tok == token.IMPORT {
			for _, s := range g.Specs {
				p.imports = append(p.imports, s.(*ast.ImportSpec))
			}
			continue
		}
		p.decls = append(p.decls, d)
	}
	if len(sf.Decls) != 1 {
		report(len(text), "a closing brace without an opening one")
		return nil, bad
	}
	p.body = sf.Decls[0].(*ast.FuncDecl).Body
	p.stmts = p.body.List
	return p, nil
}

// blank writes blanks over a range, keeping line ends.
func blank(b []byte, from, to int, text string) {
	for i := from; i < to; i++ {
		if text[i] != '\n' {
			b[i] = ' '
		}
	}
}
