package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"regexp"
	"sort"
	"strconv"
	"strings"
)

// Hints: what newcomers type, and what to write instead.

func itoa(n int) string { return strconv.Itoa(n) }

// tokenSlips finds what other languages write and Go never has.
func tokenSlips(src *source, all []tok) (bad []problem) {
	say := func(i, j int, text string) {
		bad = append(bad, problem{src: src, off: all[i].off, end: all[j].off + max(len(all[j].lit), 1), text: text, name: "SyntaxError"})
	}
	is := func(i int, t token.Token, lit string) bool {
		return i >= 0 && i < len(all) && all[i].tok == t && (lit == "" || all[i].lit == lit)
	}
	number := func(i int) bool { return is(i, token.INT, "") || is(i, token.FLOAT, "") }
	for i, t := range all {
		switch {
		case number(i) && is(i+1, token.IDENT, ""):
			say(i, i+1, "a unit is multiplied: "+t.lit+"*"+all[i+1].lit)
		case t.tok == token.MUL && is(i+1, token.MUL, "") && all[i+1].off == t.off+1 && isPower(all, i):
			base, exp := all[i-1].lit, "n"
			if i+2 < len(all) && all[i+2].lit != "" {
				exp = all[i+2].lit
			}
			if base == "" {
				base = "x"
			}
			say(i, i+1, "a power is math.Pow("+base+", "+exp+")")
		case t.tok == token.PACKAGE:
			say(i, i, "a cell has no package clause; write its lines at the top level")
		case (t.tok == token.TYPE || t.tok == token.RANGE || t.tok.IsKeyword()) && is(i+1, token.DEFINE, ""):
			say(i, i, t.tok.String()+" is a word of Go; choose another name")
		case t.tok == token.FOR && is(i+1, token.IDENT, "") && is(i+2, token.IDENT, "in"):
			n := "n"
			if is(i+3, token.RANGE, "") && is(i+4, token.LPAREN, "") && i+5 < len(all) {
				n = all[i+5].lit
			}
			say(i, i+2, "a loop is for "+all[i+1].lit+" := range "+n+" { .. }")
		case t.tok == token.LPAREN && is(i+1, token.LBRACE, "") && i > 0 && is(i-1, token.IDENT, ""):
			key := `"main"`
			if i+2 < len(all) && all[i+2].lit != "" {
				key = strconv.Quote(strings.Trim(all[i+2].lit, "\"'"))
			}
			say(i+1, i+1, "values by name need their type: Currents{"+key+": 8*amp}")
		}
	}
	return bad
}

// isPower tells whether two stars stand between operands, as for a power, and not before a pointer to a pointer.
func isPower(all []tok, i int) bool {
	if i == 0 || i+2 >= len(all) {
		return false
	}
	left := all[i-1]
	switch left.tok {
	case token.IDENT, token.INT, token.FLOAT, token.RPAREN, token.RBRACK:
	default:
		return false
	}
	return left.off+max(len(left.lit), 1) == all[i].off || all[i+2].off > all[i+1].off+1
}

var illegalRune = regexp.MustCompile(`illegal rune literal|more than one character in rune literal`)

// syntaxHints words the parser's messages.
func syntaxHints(src *source, all []tok, bad []problem) []problem {
	var out []problem
	for _, b := range bad {
		switch {
		case strings.Contains(b.text, "found 'EOF'") || b.off >= len(strings.TrimRight(src.text, " \t\n")):
			b.text = "the cell ends before this is complete: " + missing(all)
			b.off = max(len(strings.TrimRight(src.text, " \t\r\n"))-1, 0)
		case illegalRune.MatchString(b.text):
			b.text = "a text stands in double quotes: \"..\""
		case strings.Contains(b.text, "illegal character U+003F"):
			b.text = "there is no ? : in Go; write if a { x = b } else { x = c }"
		case strings.Contains(b.text, "illegal character U+201C"), strings.Contains(b.text, "illegal character U+201D"):
			b.text = "a text stands in straight double quotes: \"..\""
		}
		b.end = max(b.end, b.off)
		out = append(out, b)
	}
	return out[:1]
}

// missing names the bracket that is open at the end.
func missing(all []tok) string {
	var open []token.Token
	for _, t := range all {
		switch t.tok {
		case token.LPAREN, token.LBRACK, token.LBRACE:
			open = append(open, t.tok)
		case token.RPAREN, token.RBRACK, token.RBRACE:
			if len(open) > 0 {
				open = open[:len(open)-1]
			}
		}
	}
	if len(open) == 0 {
		return "something is missing after the last sign"
	}
	return map[token.Token]string{token.LPAREN: ") is missing", token.LBRACK: "] is missing", token.LBRACE: "} is missing"}[open[len(open)-1]]
}

var (
	undefinedName  = regexp.MustCompile(`^undefined: (?:\w+\.)?(\w+)$`)
	undefinedField = regexp.MustCompile(`undefined \(type (.+) has no field or method (\w+)`)
	notEnough      = regexp.MustCompile(`^not enough arguments in call to`)
	tooMany        = regexp.MustCompile(`^too many arguments in call to`)
	caretOperator  = regexp.MustCompile(`operator \^ not defined`)
	indirectNumber = regexp.MustCompile(`cannot indirect`)
	truncated      = regexp.MustCompile(`truncated|cannot use .* \(untyped float constant|constant .* as int value`)
	notFunction    = regexp.MustCompile(`^(?:invalid operation: )?cannot call (?:non-function )?(\w+) \(variable`)
	packageAlone   = regexp.MustCompile(`use of package (\w+) `)
)

var otherWords = map[string]string{
	"True": "true", "False": "false", "None": "nil", "null": "nil", "NULL": "nil", "and": "&&", "or": "||", "not": "!",
	"A": "amp", "V": "volt", "m": "metre", "H": "henry", "T": "tesla", "W": "watt", "ohms": "ohm", "K": "kelvin", "s": "second",
}

// hint words an error of the type checker.
func (c *checking) hint(r *checked, e types.Error, b problem) problem {
	b.text = c.plain(e.Msg, b)
	node := c.nodeAt(e.Pos)
	switch {
	case undefinedName.MatchString(e.Msg):
		name := undefinedName.FindStringSubmatch(e.Msg)[1]
		b.end = b.off + len(name)
		b.text = c.undefined(r, name, node)
	case undefinedField.MatchString(e.Msg):
		m := undefinedField.FindStringSubmatch(e.Msg)
		b.text = c.noMember(e.Msg, m[2], node)
	case notEnough.MatchString(e.Msg), tooMany.MatchString(e.Msg):
		b.text = c.arguments(e.Msg, e.Pos, b)
	case caretOperator.MatchString(e.Msg):
		if x := c.caretFrom(e.Pos); x != nil {
			base, exponent := nearestFactor(x)
			b.text = "a power is math.Pow(" + c.quote(base) + ", " + c.quote(exponent) + ")"
		} else {
			b.text = "a power is math.Pow(x, n); ^ is for the bits of whole numbers"
		}
	case indirectNumber.MatchString(e.Msg):
		b.text += "; a power is math.Pow(2, 3)"
	case packageAlone.MatchString(e.Msg):
		name := packageAlone.FindStringSubmatch(e.Msg)[1]
		b.text = name + " is a package; its names are written " + name + ".Name, and they cannot be set"
	case notFunction.MatchString(e.Msg):
		name := notFunction.FindStringSubmatch(e.Msg)[1]
		if l := r.after.names[name]; l != nil {
			b.text = name + " is your variable since cell " + itoa(l.cell)
			if c.s.base.lookup(name) != nil {
				b.text += "; name it otherwise to get the vocabulary's " + name + " back"
			} else {
				b.text += " and cannot be called"
			}
		}
	case notNumber.MatchString(e.Msg):
		b.text = c.numberHint(e.Pos, b.text)
	case strings.HasPrefix(e.Msg, "assignment mismatch"):
	case truncated.MatchString(e.Msg):
		b.text = c.wholeHint(r, e.Pos, b.text)
	case strings.Contains(e.Msg, "redeclared in this block"), strings.HasPrefix(e.Msg, "no new variables on left side of :="):
		b.text = strings.TrimSpace(strings.SplitN(b.text, "\n", 2)[0])
		if strings.HasPrefix(e.Msg, "no new") {
			b.text = "this name is declared in the cell already; set it with = instead of :="
		}
	}
	return b
}

func (c *checking) quote(n ast.Node) string {
	for _, s := range c.sources {
		if q := s.quote(n.Pos(), n.End()); q != "" {
			return q
		}
	}
	return ""
}

var (
	qualified = regexp.MustCompile(`\b(main|untyped|units)\.(\w)`)
	wrapped   = regexp.MustCompile(`float64\(([^()]*)\)`)
)

// plain takes package names of the notebook and of the vocabulary, and conversions that nobody typed, out of a message.
func (c *checking) plain(msg string, b problem) string {
	msg = qualified.ReplaceAllString(msg, "$2")
	if c.s.base.open != nil {
		msg = strings.ReplaceAll(msg, c.s.base.open.Name()+".", "")
	}
	if b.src != nil {
		line, _ := b.src.place(b.off)
		if !strings.Contains(b.src.line(line), "float64(") {
			msg = wrapped.ReplaceAllString(msg, "$1")
		}
	}
	return strings.TrimPrefix(msg, "invalid operation: ")
}

// nodeAt finds the smallest expression that begins at, or has its operator at, a position.
func (c *checking) nodeAt(pos token.Pos) (found ast.Node) {
	visit := func(n ast.Node) bool {
		if n == nil || pos < n.Pos() || pos > n.End() {
			return false
		}
		switch x := n.(type) {
		case *ast.BinaryExpr:
			if x.OpPos == pos || x.Pos() == pos {
				found = n
			}
		case *ast.CallExpr:
			if x.Pos() == pos || x.Rparen == pos || pos >= x.Lparen {
				found = n
			}
		case *ast.SelectorExpr:
			if x.Sel.Pos() == pos || x.Pos() == pos {
				found = n
			}
		case *ast.AssignStmt, *ast.RangeStmt, *ast.IncDecStmt:
			found = n
		}
		return true
	}
	for _, d := range c.p.decls {
		ast.Inspect(d, visit)
	}
	ast.Inspect(c.p.body, visit)
	return found
}

// caretFrom finds the x^y that begins at a position, however long its factors are.
func (c *checking) caretFrom(pos token.Pos) (found *ast.BinaryExpr) {
	visit := func(n ast.Node) bool {
		if x, ok := n.(*ast.BinaryExpr); ok && x.Op == token.XOR && (x.Pos() == pos || x.OpPos == pos) {
			found = x
		}
		return true
	}
	for _, d := range c.p.decls {
		ast.Inspect(d, visit)
	}
	ast.Inspect(c.p.body, visit)
	return found
}

// enclosing finds the smallest node of a kind around a position.
func enclosing[N ast.Node](c *checking, pos token.Pos) (found N) {
	visit := func(n ast.Node) bool {
		if n == nil || pos < n.Pos() || pos > n.End() {
			return false
		}
		if x, ok := n.(N); ok {
			found = x
		}
		return true
	}
	for _, d := range c.p.decls {
		ast.Inspect(d, visit)
	}
	ast.Inspect(c.p.body, visit)
	return found
}

// undefined words an unknown name, with what may have been meant.
func (c *checking) undefined(r *checked, name string, node ast.Node) string {
	if as, ok := node.(*ast.AssignStmt); ok && as.Tok == token.ASSIGN {
		for _, l := range as.Lhs {
			if id, ok := l.(*ast.Ident); ok && id.Name == name {
				return name + " is not there yet; its first use is " + name + " := .."
			}
		}
	}
	if w := otherWords[name]; w != "" {
		return "undefined: " + name + "; write " + w
	}
	if c.withdrawn[name] {
		return name + " does not fit what this cell declares"
	}
	var names []string
	for n := range r.after.names {
		names = append(names, n)
	}
	names = append(names, c.s.base.names()...)
	if n := nearest(name, names); n != "" {
		return "undefined: " + name + "; did you mean " + n + "?"
	}
	return "undefined: " + name
}

// noMember words an unknown method or field.
func (c *checking) noMember(msg, name string, node ast.Node) string {
	what := strings.SplitN(msg, " undefined", 2)[0]
	var t types.Type
	if sel, ok := node.(*ast.SelectorExpr); ok {
		t = c.info.TypeOf(sel.X)
	}
	if t == nil {
		return c.plain(what, problem{}) + ": there is no " + name
	}
	ms := members(t)
	names := make([]string, len(ms))
	for i, m := range ms {
		names[i] = m.Name()
	}
	text := shortType(t) + " has no " + name
	if n := nearest(name, names); n != "" {
		return text + "; did you mean " + n + "?"
	}
	if len(names) > 0 && len(names) <= 12 {
		sort.Strings(names)
		return text + "; it has " + strings.Join(names, ", ")
	}
	return text
}

// arguments words a call with too few or too many arguments.
func (c *checking) arguments(msg string, pos token.Pos, b problem) string {
	call := enclosing[*ast.CallExpr](c, pos)
	if call == nil {
		return c.plain(msg, b)
	}
	sig, ok := c.info.TypeOf(call.Fun).(*types.Signature)
	if !ok {
		return c.plain(strings.SplitN(msg, "\n", 2)[0], b)
	}
	var names []string
	for i := 0; i < sig.Params().Len(); i++ {
		n := sig.Params().At(i).Name()
		if n == "" || n == "_" {
			n = shortType(sig.Params().At(i).Type())
		}
		if sig.Variadic() && i == sig.Params().Len()-1 {
			n += " ..."
		}
		names = append(names, n)
	}
	form := c.quote(call.Fun) + "(" + strings.Join(names, ", ") + ")"
	if tooMany.MatchString(msg) {
		if a := c.decimalComma(call); a != "" {
			return "a decimal point, not a comma: " + a + ". The call is " + form
		}
		return "too many arguments: " + form
	}
	if len(call.Args) < len(names) {
		return form + ": " + names[len(call.Args)] + " is missing"
	}
	return form
}

// decimalComma finds 0,6*mm among the arguments.
func (c *checking) decimalComma(call *ast.CallExpr) string {
	for i := 0; i+1 < len(call.Args); i++ {
		next := c.quote(call.Args[i+1])
		if isIntLit(call.Args[i]) && next != "" && next[0] >= '0' && next[0] <= '9' {
			return c.quote(call.Args[i]) + "." + next
		}
	}
	return ""
}

// wholeHint words a real number where a whole one is due.
func (c *checking) wholeHint(r *checked, pos token.Pos, text string) string {
	as := enclosing[*ast.AssignStmt](c, pos)
	if as == nil || len(as.Lhs) == 0 {
		return text
	}
	id, ok := as.Lhs[0].(*ast.Ident)
	if !ok {
		return text
	}
	o := c.info.Uses[id]
	if l := r.lives[o]; l != nil {
		where := "in line " + itoa(l.line)
		if l.cell != c.p.src.cell {
			where = "in cell " + itoa(l.cell)
		}
		return id.Name + " was made a whole number " + where + ": write " + id.Name + " := 3.0 there"
	}
	return id.Name + " is a whole number: make it one with a point, " + id.Name + " := 3.0"
}
