package unit

import (
	"cmp"
	"go/ast"
	"go/token"
	"go/types"
	"slices"
)

// Checker checks the cells of one notebook one after another. It keeps the dimensions of the objects that earlier
// cells declared. A Checker serves one goroutine at a time.
type Checker struct {
	// Quote gives the source text of a piece of the cell, as typed, for messages; nil prints the syntax tree.
	Quote func(pos, end token.Pos) string

	reader *reader
	kept   map[any]value
	named  map[string]types.Object // the object of each name of the notebook
	reads  readers
}

// New makes a checker for the names of a table.
func New(t *Table) (*Checker, error) {
	r, err := t.read()
	if err != nil {
		return nil, err
	}
	return &Checker{reader: newReader(r), kept: map[any]value{}, named: map[string]types.Object{}, reads: readers{}}, nil
}

// Diagnostic is a refusal at a place in the cell.
type Diagnostic struct {
	Pos, End token.Pos
	Text     string // one line: what, way out
}

// Report is what a check found in one cell.
type Report struct {
	Diagnostics []Diagnostic // in order of their positions; empty: the cell may run

	checker *Checker
	in      *inference
	pkg     *types.Package
}

// Check checks one cell after its type check succeeded. The files hold the cell's declarations and statements, info
// their types, definitions, uses and selections; pkg is the package of the cell. Nothing is remembered for later
// cells until [Report.Commit].
func (c *Checker) Check(fset *token.FileSet, files []*ast.File, info *types.Info, pkg *types.Package) *Report {
	in := &inference{
		reader: c.reader, kept: c.kept, info: info, quote: c.Quote,
		declared: map[types.Object]value{}, defined: map[types.Object]bool{},
	}
	in.run(files)
	return &Report{Diagnostics: ordered(in.refused), checker: c, in: in, pkg: pkg}
}

// ordered sorts refusals by place and keeps one of those that say the same.
func ordered(list []Diagnostic) []Diagnostic {
	slices.SortStableFunc(list, func(a, b Diagnostic) int { return cmp.Compare(a.Pos, b.Pos) })
	return slices.Compact(list)
}

// Text gives the unit text of an expression of the cell as it is shown: "m2", "A/m"; "" for what has no unit (plain
// numbers, whole numbers, text), "?" for what could not be traced, "{Vin=V;Core=degC}" for a struct and for a container
// of structs. A plain number typed as a literal gives "#".
func (r *Report) Text(e ast.Expr) string {
	v, ok := r.in.values[e]
	if !ok {
		v = lost
	}
	return r.in.textOf(e, r.in.info.TypeOf(e), v)
}

// Commit keeps the dimensions of the cell's objects for the cells that follow. Call it when the cell's names are
// committed.
func (r *Report) Commit() {
	r.doubt()
	for key, v := range r.in.env {
		switch k := key.(type) {
		case types.Object:
			if r.lasting(k) {
				r.keep(k, v)
			}
		case result:
			if fn, ok := k.of.(*types.Func); ok {
				r.checker.kept[k] = v
				r.name(fn)
			}
		}
	}
	for _, name := range r.pkg.Scope().Names() {
		if t, ok := r.pkg.Scope().Lookup(name).(*types.TypeName); ok && t.Pkg() == r.pkg {
			r.name(t)
		}
	}
	for obj, v := range r.in.declared {
		if r.lasting(obj) {
			delete(r.checker.kept, obj)
			r.checker.kept[declaredKey{obj}] = v
			r.name(obj)
		}
	}
}

// keep keeps what is known of an object: all that was assigned to it since it was defined.
func (r *Report) keep(obj types.Object, v value) {
	if old, ok := r.checker.kept[obj]; ok && !r.in.defined[obj] {
		v = join(old, v)
	}
	delete(r.checker.kept, declaredKey{obj})
	r.checker.kept[obj] = v
	r.name(obj)
}

// name notes the object of a name and forgets what was known of the one before.
func (r *Report) name(obj types.Object) {
	if v, ok := obj.(*types.Var); ok && v.IsField() {
		return
	}
	if fn, ok := obj.(*types.Func); ok && fn.Signature().Recv() != nil {
		return
	}
	c := r.checker
	if old := c.named[obj.Name()]; old != nil && old != obj {
		c.forget(old)
	}
	c.named[obj.Name()] = obj
}

// forget forgets an object that has no name any more; of a type its fields and methods.
func (c *Checker) forget(obj types.Object) {
	c.reads.drop(obj)
	delete(c.kept, obj)
	delete(c.kept, declaredKey{obj})
	switch obj := obj.(type) {
	case *types.Func:
		for i := range obj.Signature().Results().Len() {
			delete(c.kept, result{obj, i})
		}
	case *types.TypeName:
		if s, ok := obj.Type().Underlying().(*types.Struct); ok {
			for f := range s.Fields() {
				c.forget(f)
			}
		}
		if n, ok := obj.Type().(*types.Named); ok {
			for i := range n.NumMethods() {
				c.forget(n.Method(i))
			}
		}
	}
}

// lasting tells whether later cells can meet an object: a field, or a name of the notebook.
func (r *Report) lasting(obj types.Object) bool {
	if v, ok := obj.(*types.Var); ok && v.IsField() {
		return true
	}
	return obj.Parent() == nil && obj.Pkg() == r.pkg || obj.Parent() == r.pkg.Scope() || r.in.kept[obj].kind != unset
}
