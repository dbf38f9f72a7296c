package cell

import (
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"reflect"
	"strings"
	"unicode/utf8"

	"ampturn/kernel"
)

// completer is a value that knows what texts about it can be: by the name of a parameter, or of a map type whose keys
// they are.
type completer interface{ Completions() map[string][]string }

// Value kinds of a live name as far as completion goes.
type offers struct {
	asked bool
	at    reflect.Value // a pointer to the variable; invalid: its type offers nothing
}

// learn notes what the values of the notebook offer. It runs at the end of a cell, so that a cell under way is not
// looked into.
func (s *Session) learn() {
	s.mu.Lock()
	defer s.mu.Unlock()
	words := map[string]map[string][]string{}
	for name, l := range s.scope.names {
		v, ok := l.obj.(*types.Var)
		if !ok {
			continue
		}
		if !l.offers.asked {
			l.offers.asked = true
			if m, _, _ := types.LookupFieldOrMethod(v.Type(), true, nil, "Completions"); m != nil && foreign(m) {
				l.offers.at, _ = s.machine.value("&" + l.lowered)
			}
		}
		if l.offers.at.IsValid() {
			words[name] = offered(l.offers.at.Elem())
		}
	}
	s.words = words
}

func offered(v reflect.Value) (all map[string][]string) {
	defer func() { _ = recover() }() // a value that is half made offers nothing
	if c, ok := v.Interface().(completer); ok {
		all = c.Completions()
	}
	return all
}

// textStart gives the place after the quote of the text that a source ends in; ok is false where it ends in none.
func textStart(before string) (start int, ok bool) {
	tokens(before, func(off int, msg string) {
		if strings.Contains(msg, "string literal not terminated") && !ok {
			start, ok = off+1, true
		}
	})
	return start, ok
}

// completeText lists what the text at the cursor can be.
func (s *Session) completeText(source string, at int) kernel.Completion {
	before := source[:at]
	start, ok := textStart(before)
	c := kernel.Completion{Start: utf8.RuneCountInString(before), End: utf8.RuneCountInString(before)}
	if !ok {
		return c
	}
	c.Start = utf8.RuneCountInString(before[:start])
	for _, w := range s.wordsFor(before[:start-1]) {
		if strings.HasPrefix(w, before[start:]) {
			c.Matches, c.Types, c.Signatures = append(c.Matches, w), append(c.Types, "text"), append(c.Signatures, "")
		}
	}
	return c
}

// wordsFor gives what a text that begins at the end of a source can be.
func (s *Session) wordsFor(before string) []string {
	call := openAt(before)
	for range 4 { // a text may stand in a map that is an argument
		switch {
		case call.fun == "":
			return nil
		case call.literal:
			outer := openAt(before[:call.at])
			if outer.fun == "" {
				return nil
			}
			if w := s.words[root(outer.fun)][call.fun]; w != nil {
				return w
			}
			call = outer
			continue
		}
		if texts := s.voc.Texts[call.fun]; texts != nil && call.arg == 0 {
			return texts()
		}
		return s.words[root(call.fun)][s.parameter(call)]
	}
	return nil
}

// bracket is the innermost bracket that is open at the end of a source.
type bracket struct {
	fun     string // what is called, or the type of a literal
	arg     int    // arguments before the one under way
	at      int    // where the expression with the bracket begins
	literal bool
}

func openAt(before string) bracket {
	all := tokens(before, func(int, string) {})
	depth, arg := 0, 0
	for i := len(all) - 1; i > 0; i-- {
		switch all[i].tok {
		case token.RPAREN, token.RBRACK, token.RBRACE:
			depth++
		case token.COMMA:
			if depth == 0 {
				arg++
			}
		case token.LPAREN, token.LBRACE, token.LBRACK:
			if depth > 0 {
				depth--
				continue
			}
			literal := all[i].tok == token.LBRACE
			if literal && all[i-1].tok == token.IDENT {
				return bracket{fun: all[i-1].lit, arg: arg, at: all[i-1].off, literal: true}
			}
			fun := operandBefore(before[:all[i].off] + ".")
			if literal || fun == "" || all[i].tok == token.LBRACK {
				return bracket{}
			}
			return bracket{fun: fun, arg: arg, at: all[i].off - len(fun)}
		}
	}
	return bracket{}
}

// root gives the first name of an expression: T1 of T1.At(100*degC).Solve.
func root(text string) string {
	end := strings.IndexFunc(text, func(r rune) bool { return strings.ContainsRune(".([ \t", r) })
	if end < 0 {
		return text
	}
	return text[:end]
}

// parameter gives the name of the parameter that an argument under way is for.
func (s *Session) parameter(call bracket) string {
	if p := s.parameterOf(call, s.scope); p != nil {
		return p.Name()
	}
	return ""
}

func (s *Session) parameterOf(call bracket, names *scope) *types.Var {
	x, err := parser.ParseExpr(call.fun)
	if err != nil {
		return nil
	}
	t := s.typeOfText(x, names)
	if t == nil {
		if sel, ok := x.(*ast.SelectorExpr); ok { // a function of a package
			if id, ok := sel.X.(*ast.Ident); ok {
				if p, ok := s.object(names, id.Name).(*types.PkgName); ok {
					if o := p.Imported().Scope().Lookup(sel.Sel.Name); o != nil {
						t = o.Type()
					}
				}
			}
		}
	}
	if t == nil {
		return nil
	}
	sig, ok := t.Underlying().(*types.Signature)
	if !ok || sig.Params().Len() == 0 {
		return nil
	}
	i := call.arg
	if i >= sig.Params().Len() {
		if !sig.Variadic() {
			return nil
		}
		i = sig.Params().Len() - 1
	}
	return sig.Params().At(i)
}

// wanted gives the unit of the argument under way at the end of a source; "" where none is asked for.
func (s *Session) wanted(before string, names *scope) string {
	call := openAt(before)
	if s.units == nil || call.fun == "" || call.literal {
		return ""
	}
	p := s.parameterOf(call, names)
	if p == nil {
		return ""
	}
	text, _ := s.units.Written(p.Type())
	return text
}

// fitting moves to the front, in their order, the variables that are in a unit and the units that it is written in.
func (s *Session) fitting(found []types.Object, unit string) []types.Object {
	if unit == "" {
		return found
	}
	in := map[string]bool{}
	for _, name := range s.units.In(unit) {
		in[name] = true
	}
	var vars, units, rest []types.Object
	for _, o := range found {
		switch o := o.(type) {
		case *types.Var:
			if s.unitOf(o) == unit {
				vars = append(vars, o)
				continue
			}
		case *types.Const:
			if in[o.Name()] && s.base.objects[o.Name()] == o {
				units = append(units, o)
				continue
			}
		}
		rest = append(rest, o)
	}
	return append(append(vars, units...), rest...)
}

// unitNote tells in which units a function takes its arguments and gives its result: "length in m; result in H".
func (s *Session) unitNote(t types.Type) string {
	sig, ok := t.Underlying().(*types.Signature)
	if !ok || s.units == nil {
		return ""
	}
	var parts []string
	for i := range sig.Params().Len() {
		p := sig.Params().At(i)
		if u, ok := s.units.Written(p.Type()); ok && u != "" {
			parts = append(parts, p.Name()+" in "+u)
		}
	}
	if sig.Results().Len() == 1 {
		if u, ok := s.units.Written(sig.Results().At(0).Type()); ok && u != "" {
			parts = append(parts, "result in "+u)
		}
	}
	return strings.Join(parts, "; ")
}
