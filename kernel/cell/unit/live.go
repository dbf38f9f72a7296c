package unit

import (
	"go/ast"
	"go/types"
)

// Of gives the unit text of what a name of the notebook holds, as [Report.Text] does of an expression.
func (c *Checker) Of(obj types.Object) string {
	in := &inference{
		reader: c.reader, kept: c.kept, info: &types.Info{}, declared: map[types.Object]value{}, defined: map[types.Object]bool{},
		values: map[ast.Expr]value{},
	}
	return in.typeText(obj.Type(), in.lookup(obj), 0)
}

// Written gives the unit text that a type says where it was written: "m" for Metre; ok is false for types that say none.
func (c *Checker) Written(t types.Type) (text string, ok bool) {
	tg := c.reader.written(t)
	if tg.kind != tagUnit {
		return "", false
	}
	return c.reader.shown(tg.q), true
}

// In lists the units that a quantity of a unit text can be written in: "mm", "um", "metre" for "m".
func (c *Checker) In(text string) []string {
	d, err := c.reader.ParseDim(text)
	if err != nil || d == Number {
		return nil
	}
	return c.reader.units[d]
}
