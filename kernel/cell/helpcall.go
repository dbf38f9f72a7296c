package cell

import (
	"go/ast"
	"go/token"
	"strconv"
)

// helpVerb is the function of a vocabulary that explains a name.
const helpVerb = "Help"

// quoteHelp lets the name that is to be explained be written without quotes: types, packages and methods, which are no
// values, too. Help(Gap) becomes Help("Gap").
func (c *checking) quoteHelp() {
	if c.before.names[helpVerb] != nil || c.s.base.lookup(helpVerb) == nil {
		return
	}
	ast.Inspect(c.p.body, func(n ast.Node) bool {
		e, ok := n.(*ast.CallExpr)
		if !ok || len(e.Args) != 1 {
			return true
		}
		if id, ok := e.Fun.(*ast.Ident); !ok || id.Name != helpVerb {
			return true
		}
		if name := dotted(e.Args[0]); name != "" {
			e.Args[0] = &ast.BasicLit{ValuePos: e.Args[0].Pos(), Kind: token.STRING, Value: strconv.Quote(name)}
		}
		return true
	})
}

// dotted writes a name with its qualifiers; "" for any other expression.
func dotted(e ast.Expr) string {
	switch e := e.(type) {
	case *ast.Ident:
		return e.Name
	case *ast.SelectorExpr:
		if x := dotted(e.X); x != "" {
			return x + "." + e.Sel.Name
		}
	}
	return ""
}
