package cell

import (
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"sort"
	"strings"
	"unicode"
	"unicode/utf8"

	"ampturn/kernel"
)

// Complete lists what fits at the cursor: members after a dot, else names of the cell, of the notebook and of the
// vocabulary, in this order.
func (s *Session) Complete(source string, cursor int) kernel.Completion {
	s.mu.Lock()
	defer s.mu.Unlock()
	at := byteOffset(source, cursor)
	start := at
	for start > 0 {
		r, n := utf8.DecodeLastRuneInString(source[:start])
		if r != '_' && !unicode.IsLetter(r) && !unicode.IsDigit(r) {
			break
		}
		start -= n
	}
	prefix := source[start:at]
	c := kernel.Completion{Start: utf8.RuneCountInString(source[:start]), End: utf8.RuneCountInString(source[:at])}
	if inText(source[:start]) {
		return s.completeText(source, at)
	}
	names := s.scopeAt(source[:start])
	var found []types.Object
	if op := operandBefore(source[:start]); op != "" {
		found = s.membersOf(op, names)
	} else {
		found = s.fitting(s.inScope(names), s.wanted(source[:start], names))
	}
	for _, o := range found {
		if strings.HasPrefix(o.Name(), prefix) {
			c.Matches = append(c.Matches, o.Name())
			c.Types = append(c.Types, s.kind(o))
			c.Signatures = append(c.Signatures, s.labelOf(o))
		}
	}
	if operandBefore(source[:start]) == "" && prefix != "" {
		for _, k := range []string{"break", "case", "continue", "const", "else", "for", "func", "if", "range", "return", "switch", "type", "var"} {
			if strings.HasPrefix(k, prefix) {
				c.Matches, c.Types, c.Signatures = append(c.Matches, k), append(c.Types, "keyword"), append(c.Signatures, "")
			}
		}
	}
	return c
}

// byteOffset maps a count of code points to bytes.
func byteOffset(text string, cursor int) int {
	for i := range text {
		if cursor == 0 {
			return i
		}
		cursor--
	}
	return len(text)
}

// inText tells whether a text ends within a string or a comment.
func inText(before string) bool {
	open := false
	tokens(before, func(off int, msg string) {
		if strings.Contains(msg, "not terminated") {
			open = true
		}
	})
	if i := strings.LastIndexByte(before, '\n'); strings.Contains(before[i+1:], "//") && !open {
		all := tokens(before, func(int, string) {})
		j := i + 1 + strings.LastIndex(before[i+1:], "//")
		return len(all) == 0 || all[len(all)-1].off < j || all[len(all)-1].tok == token.SEMICOLON
	}
	return open
}

// operandBefore gives the expression before a trailing dot.
func operandBefore(before string) string {
	if !strings.HasSuffix(before, ".") {
		return ""
	}
	all := tokens(before, func(int, string) {})
	i := len(all) - 1
	for i >= 0 && (all[i].tok == token.SEMICOLON || all[i].tok == token.PERIOD && i == len(all)-1) {
		i--
		if all[i+1].tok == token.PERIOD {
			break
		}
	}
	end := i
	want := true // an operand is due
	for i >= 0 {
		switch t := all[i].tok; {
		case t == token.RPAREN || t == token.RBRACK || t == token.RBRACE:
			if i = opening(all, i); i < 0 {
				return ""
			}
			want = t == token.RPAREN || t == token.RBRACK
			if t == token.RPAREN && (i == 0 || all[i-1].tok != token.IDENT && all[i-1].tok != token.RPAREN && all[i-1].tok != token.RBRACK) {
				want = false
			}
			if !want {
				return before[all[i].off : len(before)-1]
			}
		case t == token.IDENT && want:
			want = false
		case t == token.PERIOD && !want:
			want = true
		default:
			if i == end {
				return ""
			}
			return before[all[i+1].off : len(before)-1]
		}
		i--
	}
	if end < 0 {
		return ""
	}
	return strings.TrimSpace(before[all[0].off : len(before)-1])
}

// opening finds the bracket that a closing one belongs to.
func opening(all []tok, i int) int {
	depth := 0
	for ; i >= 0; i-- {
		switch all[i].tok {
		case token.RPAREN, token.RBRACK, token.RBRACE:
			depth++
		case token.LPAREN, token.LBRACK, token.LBRACE:
			if depth--; depth == 0 {
				return i
			}
		}
	}
	return -1
}

// scopeAt gives the names at the end of an unfinished cell: those of its complete lines and those of the notebook.
func (s *Session) scopeAt(before string) *scope {
	all := tokens(before, func(int, string) {})
	var whole []chunk
	for _, c := range chunks(before, all) {
		if c.end < len(before) {
			whole = append(whole, c)
		}
	}
	if len(whole) == 0 {
		return s.scope
	}
	fset := token.NewFileSet()
	p, bad := parse(fset, 0, before[:whole[len(whole)-1].end])
	if len(bad) > 0 {
		return s.scope
	}
	r := s.attempt(p, fset)
	if r == nil {
		return s.scope
	}
	return r.after
}

// attempt checks a cell for the names it declares; its errors do not matter.
func (s *Session) attempt(p *parsed, fset *token.FileSet) (r *checked) {
	defer func() { _ = recover() }() // half-written cells may leave the checker without answers
	for round := 0; round < 3; round++ {
		c := &checking{s: s, p: p, fset: fset, before: s.scope, withdrawn: map[string]bool{}, sources: []*source{p.src}}
		r, _ = c.run()
		if r == nil || !c.widen() {
			break
		}
	}
	return r
}

// membersOf lists what a dot after an expression gives.
func (s *Session) membersOf(text string, names *scope) []types.Object {
	x, err := parser.ParseExpr(text)
	if err != nil {
		return nil
	}
	if id, ok := x.(*ast.Ident); ok {
		if p, ok := s.object(names, id.Name).(*types.PkgName); ok {
			return s.exported(p.Imported())
		}
	}
	t := s.typeOfText(x, names)
	if t == nil {
		return nil
	}
	ms := members(t)
	sort.Slice(ms, func(i, j int) bool { return ms[i].Name() < ms[j].Name() })
	return ms
}

func (s *Session) typeOfText(x ast.Expr, names *scope) types.Type {
	pkg := types.NewPackage(mainPath, "main")
	ast.Inspect(x, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			if o := s.object(names, id.Name); o != nil {
				insert(pkg, o)
			}
		}
		return true
	})
	info := &types.Info{Types: map[ast.Expr]types.TypeAndValue{}}
	_ = types.CheckExpr(token.NewFileSet(), pkg, token.NoPos, x, info)
	t := info.TypeOf(x)
	if t == nil || t == types.Typ[types.Invalid] {
		return nil
	}
	return t
}

func (s *Session) exported(p *types.Package) (out []types.Object) {
	for _, n := range p.Scope().Names() {
		if token.IsExported(n) && !s.base.hidden(n) {
			out = append(out, p.Scope().Lookup(n))
		}
	}
	return out
}

// inScope lists all names: own ones, functions of the vocabulary, units, types, packages.
func (s *Session) inScope(names *scope) []types.Object {
	type ranked struct {
		o    types.Object
		rank int
	}
	var all []ranked
	for _, l := range names.names {
		all = append(all, ranked{l.obj, 0})
	}
	for _, n := range s.base.names() {
		if names.names[n] != nil {
			continue
		}
		o := s.base.lookup(n)
		rank := 3
		switch o.(type) {
		case *types.Func:
			rank = 1
		case *types.Const:
			rank = 2
		case *types.PkgName:
			rank = 4
		}
		all = append(all, ranked{o, rank})
	}
	for _, n := range []string{"append", "cap", "clear", "copy", "delete", "len", "make", "max", "min", "new", "panic"} {
		all = append(all, ranked{types.Universe.Lookup(n), 5})
	}
	sort.Slice(all, func(i, j int) bool {
		if all[i].rank != all[j].rank {
			return all[i].rank < all[j].rank
		}
		return all[i].o.Name() < all[j].o.Name()
	})
	out := make([]types.Object, len(all))
	for i, r := range all {
		out[i] = r.o
	}
	return out
}

// kind names what an object is, for a list of completions.
func (s *Session) kind(o types.Object) string {
	switch o := o.(type) {
	case *types.Func:
		if sig, ok := o.Type().(*types.Signature); ok && sig.Recv() != nil {
			return "method"
		}
		return "function"
	case *types.Const:
		if s.base.objects[o.Name()] == o {
			return "unit"
		}
		return "constant"
	case *types.TypeName:
		return "type"
	case *types.PkgName:
		return "package"
	case *types.Builtin:
		return "function"
	case *types.Var:
		if o.IsField() {
			return "field"
		}
	}
	return "variable"
}

// labelOf gives the signature of an object with the units of arguments and result, or its unit.
func (s *Session) labelOf(o types.Object) string {
	label := signatureOf(o)
	note := ""
	switch o := o.(type) {
	case *types.Func:
		note = s.unitNote(o.Type())
	case *types.Const:
		if s.base.objects[o.Name()] == o {
			return s.base.docs[o.Name()]
		}
	case *types.Var:
		if !o.IsField() && o.Pkg() != nil && o.Pkg().Path() == mainPath {
			if u := s.unitOf(o); u != "" && u != "?" && u[0] != '{' {
				note = "in " + u
			}
		}
	}
	if note != "" {
		label += " [" + note + "]"
	}
	return label
}

// signatureOf gives parameters and results of a function, the type of anything else.
func signatureOf(o types.Object) string {
	switch o.(type) {
	case *types.PkgName, *types.Builtin, *types.TypeName:
		return ""
	}
	return strings.TrimPrefix(shortType(o.Type()), "func")
}
