package unit

import (
	"go/ast"
	"go/token"
	"go/types"
)

// inference finds the units of one cell. It passes over the cell until the units of all variables, fields and results
// stand still, then once more to record the unit of every expression and what must be refused.
type inference struct {
	*reader
	kept     map[any]value // of earlier cells
	info     *types.Info
	quote    func(pos, end token.Pos) string
	declared map[types.Object]value // what was declared with a type that says its unit, or none
	defined  map[types.Object]bool  // variables that this cell defines: what they were before does not count
	once     map[types.Object]bool  // variables that are set in one place
	env      map[any]value          // as the last pass left it
	next     map[any]value          // as this pass joins it
	final    bool                   // this is the pass that refuses
	values   map[ast.Expr]value     // of this pass
	refused  []Diagnostic
	reads    readers
	funcs    []*function // those being passed over, innermost last
}

// result is the key of a function's result in env and kept; of is a *types.Func or an *ast.FuncLit.
type result struct {
	of any
	i  int
}

// declaredKey is the key in kept of what a variable of an earlier cell was declared as.
type declaredKey struct{ obj types.Object }

// function is a function being passed over.
type function struct {
	of      any
	name    string
	results []tag
	named   []types.Object
	inner   bool // a function literal
}

// maxPasses bounds the search for the fixed point; what still moves then is untraced.
const maxPasses = 12

// run passes over the files until nothing moves, and records the last pass.
func (in *inference) run(files []*ast.File) {
	in.once = setOnce(files, in.info)
	in.env, in.values, in.reads = map[any]value{}, map[ast.Expr]value{}, readers{}
	for pass := 0; ; pass++ {
		in.pass(files)
		moved := false
		for k, v := range in.next {
			if v != in.env[k] {
				moved = true
				if pass >= maxPasses {
					in.next[k] = lost
				}
			}
		}
		in.env = in.next
		if !moved || pass > maxPasses+3 {
			break
		}
	}
	in.final = true
	in.pass(files)
}

// setOnce finds the variables that are set where they are defined and nowhere else.
func setOnce(files []*ast.File, info *types.Info) map[types.Object]bool {
	times := map[types.Object]int{}
	for _, f := range files {
		ast.Inspect(f, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.AssignStmt:
				for _, x := range n.Lhs {
					if id, ok := ast.Unparen(x).(*ast.Ident); ok {
						times[info.ObjectOf(id)]++
					} else {
						ast.Inspect(x, func(n ast.Node) bool { // an element or a field
							if id, ok := n.(*ast.Ident); ok {
								times[info.ObjectOf(id)] += 2
							}
							return true
						})
					}
				}
			case *ast.ValueSpec:
				for _, id := range n.Names {
					times[info.ObjectOf(id)]++
				}
			case *ast.RangeStmt:
				for _, x := range []ast.Expr{n.Key, n.Value} {
					if id, ok := x.(*ast.Ident); ok {
						times[info.ObjectOf(id)] += 2
					}
				}
			case *ast.UnaryExpr:
				if id, ok := ast.Unparen(n.X).(*ast.Ident); ok && n.Op == token.AND {
					times[info.ObjectOf(id)] += 2
				}
			}
			return true
		})
	}
	once := map[types.Object]bool{}
	for o, n := range times {
		once[o] = n == 1
	}
	return once
}

// pass passes over the files once.
func (in *inference) pass(files []*ast.File) {
	in.next = make(map[any]value, len(in.env))
	clear(in.values)
	for _, f := range files {
		for _, d := range f.Decls {
			switch d := d.(type) {
			case *ast.GenDecl:
				in.general(d)
			case *ast.FuncDecl:
				in.funcDecl(d)
			}
		}
	}
}

// lookup gives what is known of a variable, a constant of the cell or a field.
func (in *inference) lookup(obj types.Object) value {
	if v, ok := obj.(*types.Var); ok && v.IsField() {
		obj = v.Origin()
	}
	in.note(obj)
	if v, ok := in.fixed(obj); ok {
		return v
	}
	if foreign(obj) {
		if tg := in.written(obj.Type()); tg.kind == tagUnit {
			return inUnit(tg.q)
		}
		return lost
	}
	return in.state(obj)
}

// state gives what the passes, or earlier cells, know of a key.
func (in *inference) state(key any) value {
	v, now := in.env[key]
	if obj, ok := key.(types.Object); !now && ok && in.once[obj] {
		v, now = in.next[key] // of this pass: a chain of variables is followed at once
	}
	old, before := in.kept[key]
	if obj, ok := key.(types.Object); ok && in.defined[obj] {
		before = false
	}
	switch {
	case now && before:
		return join(v, old)
	case now:
		return v
	case before:
		return old
	}
	if obj, ok := key.(types.Object); ok && !in.defined[obj] {
		return lost
	}
	return nothing
}

// assign joins a value to what is known of a variable, field or result.
func (in *inference) assign(key any, v value) {
	if old, ok := in.next[key]; ok {
		v = join(old, v)
	}
	in.next[key] = v
}

// define marks an object as defined in this cell.
func (in *inference) define(id *ast.Ident) types.Object {
	obj := in.info.Defs[id]
	if obj != nil {
		in.defined[obj] = true
	}
	return obj
}

// declare records what a declared type says of a variable; false if it says nothing.
func (in *inference) declare(obj types.Object, t types.Type) bool {
	if obj == nil {
		return true
	}
	in.defined[obj] = true
	switch tg := in.written(t); tg.kind {
	case tagUnit:
		in.declared[obj] = inUnit(tg.q)
	case tagValue, tagParam:
		if numeric(t) {
			in.declared[obj] = lost
			return true
		}
		return false
	default:
		return false
	}
	return true
}

// numeric tells whether a type is that of a number.
func numeric(t types.Type) bool {
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsNumeric != 0
}

// whole tells whether a type is that of a whole number.
func whole(t types.Type) bool {
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsInteger != 0 && b.Info()&types.IsUntyped == 0
}

// general passes over a const, var or type declaration.
func (in *inference) general(d *ast.GenDecl) {
	var last []ast.Expr
	for _, s := range d.Specs {
		spec, ok := s.(*ast.ValueSpec)
		if !ok {
			continue
		}
		if d.Tok == token.CONST && len(spec.Values) > 0 {
			last = spec.Values
		}
		values := spec.Values
		if d.Tok == token.CONST && len(values) == 0 {
			values = last
		}
		in.valueSpec(spec, values)
	}
}

// valueSpec passes over the names of one specification and their values.
func (in *inference) valueSpec(spec *ast.ValueSpec, values []ast.Expr) {
	var typed bool
	for _, id := range spec.Names {
		obj := in.define(id)
		if spec.Type != nil && obj != nil {
			typed = in.declare(obj, in.info.TypeOf(spec.Type))
		}
	}
	got := in.list(values, len(spec.Names))
	for i, id := range spec.Names {
		obj := in.info.Defs[id]
		switch {
		case obj == nil:
		case len(values) == 0:
			if !typed {
				in.assign(obj, initial(obj.Type()))
			}
		case typed:
			if want := in.declared[obj]; want.kind == known && i < len(got) {
				in.door(got[i], want.quantity, place{what: id.Name}, at(values, i))
			}
		case i < len(got):
			in.assign(obj, got[i])
		}
	}
}

// initial gives what is known of the zero value of a type.
func initial(t types.Type) value {
	if numeric(t) {
		return fits
	}
	if a, ok := t.Underlying().(*types.Array); ok {
		return initial(a.Elem())
	}
	return nothing
}

// at gives the i-th of several expressions, or the only one, which gives several values.
func at(list []ast.Expr, i int) ast.Expr {
	if i < len(list) {
		return list[i]
	}
	if len(list) > 0 {
		return list[0]
	}
	return nil
}

// list gives the values of n operands: as many expressions, or one call with n results.
func (in *inference) list(exprs []ast.Expr, n int) []value {
	if len(exprs) == 1 && n != 1 {
		return in.several(exprs[0], n)
	}
	out := make([]value, len(exprs))
	for i, e := range exprs {
		out[i] = in.expr(e)
	}
	return out
}

// several gives the values of an expression with n results: a call, or one with a second "ok".
func (in *inference) several(e ast.Expr, n int) []value {
	if call, ok := ast.Unparen(e).(*ast.CallExpr); ok {
		got := in.call(call)
		for len(got) < n {
			got = append(got, lost)
		}
		return got
	}
	got := []value{in.expr(e)}
	for len(got) < n {
		got = append(got, number)
	}
	return got
}

// funcDecl passes over a declared function.
func (in *inference) funcDecl(d *ast.FuncDecl) {
	obj, _ := in.info.Defs[d.Name].(*types.Func)
	f := &function{name: d.Name.Name}
	if obj != nil {
		in.defined[obj] = true
		f.of = obj
	} else {
		f.of = d
	}
	if d.Recv != nil {
		in.params(d.Recv)
	}
	in.body(f, d.Type, d.Body)
}

// body passes over parameters, results and statements of a function.
func (in *inference) body(f *function, t *ast.FuncType, body *ast.BlockStmt) {
	in.params(t.Params)
	in.results(f, t.Results)
	if body == nil {
		return
	}
	in.funcs = append(in.funcs, f)
	in.block(body.List)
	in.funcs = in.funcs[:len(in.funcs)-1]
}

// params declares parameters: those whose type says nothing are untraced.
func (in *inference) params(list *ast.FieldList) {
	if list == nil {
		return
	}
	for _, field := range list.List {
		for _, id := range field.Names {
			if obj := in.info.Defs[id]; obj != nil && !in.declare(obj, obj.Type()) {
				in.declared[obj] = lost
			}
		}
	}
}

// results notes what the results of a function say; named ones are variables.
func (in *inference) results(f *function, list *ast.FieldList) {
	if list == nil {
		return
	}
	for _, field := range list.List {
		t := in.info.TypeOf(field.Type)
		tg := in.written(t)
		if len(field.Names) == 0 {
			f.results = append(f.results, tg)
			f.named = append(f.named, nil)
		}
		for _, id := range field.Names {
			obj := in.info.Defs[id]
			if obj != nil && !in.declare(obj, t) {
				in.assign(obj, initial(t))
			}
			f.results = append(f.results, tg)
			f.named = append(f.named, obj)
		}
	}
}
