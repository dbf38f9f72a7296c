package cell

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"strings"
	"unicode"

	"ampturn/kernel"
)

// Inspect explains the name at the cursor; inside the brackets of a call, the function that is called.
func (s *Session) Inspect(source string, cursor int) (data map[string]any, ok bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	at := byteOffset(source, cursor)
	end := at
	for i, r := range source[at:] {
		if r != '_' && !unicode.IsLetter(r) && !unicode.IsDigit(r) {
			break
		}
		end = at + i + len(string(r))
	}
	before := source[:end]
	names := s.scopeAt(before)
	if text := operandBefore(before + "."); text != "" {
		if data, ok := s.describeText(text, names); ok {
			return data, true
		}
	}
	if text := calledBefore(before); text != "" {
		return s.describeText(text, names)
	}
	return nil, false
}

// calledBefore gives the function whose argument list is open at the end of a text.
func calledBefore(before string) string {
	all := tokens(before, func(int, string) {})
	depth := 0
	for i := len(all) - 1; i > 0; i-- {
		switch all[i].tok {
		case token.RPAREN, token.RBRACK, token.RBRACE:
			depth++
		case token.LPAREN, token.LBRACK, token.LBRACE:
			if depth--; depth < 0 && all[i].tok == token.LPAREN {
				return operandBefore(before[:all[i].off] + ".")
			}
		}
	}
	return ""
}

// describe explains a name of the notebook or of the vocabulary.
func (s *Session) describe(text string) (map[string]any, bool) { return s.describeText(text, s.scope) }

func (s *Session) describeText(text string, names *scope) (map[string]any, bool) {
	x, err := parser.ParseExpr(text)
	if err != nil {
		return nil, false
	}
	switch x := x.(type) {
	case *ast.Ident:
		if o := s.object(names, x.Name); o != nil {
			return s.card(o, names.names[x.Name])
		}
		if o := types.Universe.Lookup(x.Name); o != nil {
			return bundle(o.Name()+signatureOf(o), "", "built into the language"), true
		}
	case *ast.SelectorExpr:
		if id, ok := x.X.(*ast.Ident); ok {
			if p, ok := s.object(names, id.Name).(*types.PkgName); ok {
				if o := p.Imported().Scope().Lookup(x.Sel.Name); o != nil && o.Exported() {
					return s.card(o, nil)
				}
				return nil, false
			}
		}
		if t := s.typeOfText(x.X, names); t != nil {
			o, _, _ := types.LookupFieldOrMethod(pointerTo(t), true, types.NewPackage(mainPath, "main"), x.Sel.Name)
			if o != nil && !hiddenMember(o) {
				return bundle(shortType(t)+"."+o.Name()+signatureOf(o), s.unitNote(o.Type()), s.memberDoc(t, o)), true
			}
		}
	default:
		if t := s.typeOfText(x, names); t != nil {
			return bundle(shortType(t), "", ""), true
		}
	}
	return nil, false
}

// memberDoc gives the documentation of a method or field.
func (s *Session) memberDoc(t types.Type, o types.Object) string {
	n, ok := types.Unalias(deref(t)).(*types.Named)
	if !ok || n.Obj().Pkg() == nil {
		return ""
	}
	return s.voc.Docs[n.Obj().Pkg().Path()+"."+n.Obj().Name()+"."+o.Name()]
}

// card writes what an object is: its declaration and its documentation.
func (s *Session) card(o types.Object, l *live) (map[string]any, bool) {
	var head, note, doc string
	switch o := o.(type) {
	case *types.Const:
		if s.base.objects[o.Name()] == o {
			return bundle(o.Name()+" = "+o.Val().String(), "", s.base.docs[o.Name()]), true
		}
		head = "const " + o.Name() + " = " + o.Val().String()
	case *types.TypeName:
		head = "type " + o.Name() + " " + shortType(o.Type().Underlying())
		if len(head) > 200 {
			head = "type " + o.Name()
		}
	case *types.PkgName:
		return bundle("package "+o.Imported().Name(), "", s.voc.Docs[o.Imported().Path()]), true
	case *types.Func:
		head, note = "func "+o.Name()+signatureOf(o), s.unitNote(o.Type())
	default:
		head = o.Name() + " " + signatureOf(o)
		if u := s.unitOf(o); u != "" && u != "?" && u[0] != '{' {
			note = "in " + u
		}
	}
	switch {
	case l != nil:
		doc = fmt.Sprintf("declared in cell %d, line %d", l.cell, l.line)
		if l.fn != nil {
			doc = commentAbove(l.fn.src, l.line) + doc
		}
	case s.base.targets[o.Name()] != "" && s.base.objects[o.Name()] == o:
		doc = s.voc.Docs[s.base.targets[o.Name()]]
	case o.Pkg() != nil:
		doc = s.voc.Docs[o.Pkg().Path()+"."+o.Name()]
	}
	if s.voc.Help != nil && l == nil {
		if h := s.voc.Help(o.Name()); h != "" {
			doc = h
		}
	}
	return bundle(head, note, doc), true
}

// commentAbove gives the comment that ends in the line before a declaration.
func commentAbove(src *source, line int) string {
	text := ""
	for line--; line >= 1; line-- {
		c, ok := strings.CutPrefix(strings.TrimSpace(src.line(line)), "//")
		if !ok {
			break
		}
		text = strings.TrimSpace(c) + "\n" + text
	}
	if text != "" {
		text += "\n"
	}
	return text
}

// IsComplete tells whether a cell can be run as it stands.
func (s *Session) IsComplete(source string) (status, indent string) {
	if strings.TrimSpace(source) == "" {
		return "complete", ""
	}
	broken := false
	open := false
	all := tokens(source, func(_ int, msg string) {
		if strings.Contains(msg, "raw string literal not terminated") || strings.Contains(msg, "comment not terminated") {
			open = true
		} else {
			broken = true
		}
	})
	if open {
		return "incomplete", ""
	}
	depth := 0
	last := token.SEMICOLON
	for _, t := range all {
		switch t.tok {
		case token.LPAREN, token.LBRACK, token.LBRACE:
			depth++
		case token.RPAREN, token.RBRACK, token.RBRACE:
			if depth--; depth < 0 {
				return "invalid", ""
			}
		}
		last = t.tok
	}
	if depth > 0 {
		return "incomplete", strings.Repeat("\t", depth)
	}
	if last.IsOperator() && last != token.SEMICOLON && last != token.RPAREN && last != token.RBRACK && last != token.RBRACE &&
		last != token.INC && last != token.DEC {
		return "incomplete", "\t"
	}
	if broken {
		return "invalid", ""
	}
	if _, bad := parse(token.NewFileSet(), 1, source); len(bad) > 0 {
		return "invalid", ""
	}
	return "complete", ""
}

// Language describes the cell language.
func (s *Session) Language() kernel.Language {
	return kernel.Language{
		Name: "go", Version: "1.22", MIMEType: "text/x-go", Extension: ".go", Lexer: "go", Mirror: "go",
		Banner: "Go cells with units: x := 0.6*mm. Help(name) explains a name.",
	}
}
