package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"regexp"
	"strings"
)

// notNumber is the refusal of a value where a number is wanted.
var notNumber = regexp.MustCompile(`^cannot use .+ \((?:variable|value) of .*\) as \S+ value in argument`)

// numberHint names the methods of a value, given where a number is wanted, that are one.
func (c *checking) numberHint(pos token.Pos, text string) string {
	call := enclosing[*ast.CallExpr](c, pos)
	if call == nil {
		return text
	}
	for _, arg := range call.Args {
		t := c.info.TypeOf(arg)
		if arg.Pos() != pos || t == nil {
			continue
		}
		var ways []string
		for _, m := range members(t) {
			if f, ok := m.(*types.Func); ok && isNumber(f) {
				ways = append(ways, c.quote(arg)+"."+f.Name()+"()")
			}
		}
		if len(ways) > 0 && len(ways) <= 12 {
			return c.quote(arg) + " is no number; " + strings.Join(ways, ", ") + " give one"
		}
	}
	return text
}

// isNumber tells whether a method gives a number without being told anything.
func isNumber(f *types.Func) bool {
	sig := f.Signature()
	if sig.Params().Len() != 0 || sig.Results().Len() != 1 {
		return false
	}
	b, ok := sig.Results().At(0).Type().Underlying().(*types.Basic)
	return ok && b.Kind() == types.Float64
}
