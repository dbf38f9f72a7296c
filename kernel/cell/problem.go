package cell

import (
	"go/ast"
	"go/token"
	"sort"
	"strings"
)

// problems turns the errors of the type checker into refusals, those of this cell first.
func (c *checking) problems(r *checked) []problem {
	var bad []problem
	top := map[string]bool{}
	for _, l := range r.own {
		top[l.name] = true
	}
	topExpr := map[int]bool{}
	for _, s := range c.p.stmts {
		if e, ok := unlabel(s).(*ast.ExprStmt); ok {
			off, _ := c.p.src.offset(e.X.Pos())
			topExpr[off] = true
		}
	}
	for _, e := range c.errs {
		src, off := c.locate(e.Pos)
		if src == nil {
			continue
		}
		if strings.HasSuffix(e.Msg, "is not used") && src == c.p.src && c.topUnused(e.Pos) {
			continue
		}
		if name, ok := strings.CutPrefix(e.Msg, "declared and not used: "); ok {
			if src == c.p.src && !c.isTopName(name, e.Pos) {
				line, _ := src.place(off)
				r.notes = append(r.notes, "note: line "+itoa(line)+": "+name+" is set and never used")
			}
			continue
		}
		b := problem{src: src, off: off, end: off, text: e.Msg}
		if src != c.p.src {
			b.name = c.owner(e.Pos)
		}
		bad = append(bad, c.hint(r, e, b))
	}
	sort.SliceStable(bad, func(i, j int) bool {
		a, b := bad[i], bad[j]
		if (a.src == c.p.src) != (b.src == c.p.src) {
			return a.src == c.p.src
		}
		return a.off < b.off
	})
	return bad
}

// topUnused tells whether a position lies in an expression statement of the cell's top level: its value is shown.
func (c *checking) topUnused(pos token.Pos) bool {
	for _, s := range c.p.stmts {
		if e, ok := unlabel(s).(*ast.ExprStmt); ok && e.Pos() <= pos && pos < e.End() && depthOf(e.X, pos) {
			return true
		}
	}
	return false
}

// depthOf tells that no function literal lies between an expression and a position.
func depthOf(x ast.Expr, pos token.Pos) bool {
	ok := true
	ast.Inspect(x, func(n ast.Node) bool {
		if f, is := n.(*ast.FuncLit); is && f.Pos() <= pos && pos < f.End() {
			ok = false
		}
		return ok
	})
	return ok
}

func (c *checking) isTopName(name string, pos token.Pos) bool {
	for _, s := range c.p.stmts {
		for _, id := range definedBy(s) {
			if id.Name == name && id.Pos() == pos {
				return true
			}
		}
	}
	return false
}

// owner names the function of an earlier cell in which a position lies.
func (c *checking) owner(pos token.Pos) string {
	for _, l := range c.before.names {
		if l.fn != nil && l.fn.decl.Pos() <= pos && pos <= l.fn.decl.End() {
			return l.name
		}
	}
	for _, m := range c.s.methods {
		if m.decl.Pos() <= pos && pos <= m.decl.End() {
			return m.typ + "." + m.name
		}
	}
	return ""
}

// locate finds the source of a position.
func (c *checking) locate(pos token.Pos) (*source, int) {
	for _, src := range c.sources {
		if off, ok := src.offset(pos); ok {
			return src, off
		}
	}
	return nil, 0
}
