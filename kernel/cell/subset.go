package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"strings"
)

// subset refuses what Go has and cells have not, each with what to write instead.
func (c *checking) subset(r *checked) []problem {
	w := &subsetWalk{c: c, r: r, collected: map[*ast.SelectorExpr]bool{}}
	for _, im := range c.p.imports {
		w.importSpec(im)
	}
	for _, d := range c.p.decls {
		ast.Inspect(d, w.visit)
		if f, ok := d.(*ast.FuncDecl); ok && f.Body == nil {
			w.refuse(f.Name, "func "+f.Name.Name+" has no body")
		}
	}
	for _, s := range c.p.stmts {
		w.returns(s)
		w.top = true
		ast.Inspect(s, w.visit)
	}
	w.order()
	w.bad = append(w.bad, c.divisions(r)...)
	return w.bad
}

// returns refuses a return outside functions.
func (w *subsetWalk) returns(s ast.Stmt) {
	ast.Inspect(s, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.FuncLit:
			return false
		case *ast.ReturnStmt:
			w.refuse(n, "return stands in functions only; a cell ends with its last line")
		}
		return true
	})
}

type subsetWalk struct {
	c   *checking
	r   *checked
	bad []problem
	top bool

	collected map[*ast.SelectorExpr]bool // sequences within slices.Sorted and slices.Collect
}

func (w *subsetWalk) refuse(n ast.Node, text string) {
	src, off := w.c.locate(n.Pos())
	if src == nil {
		src, off = w.c.p.src, 0
	}
	end, ok := src.offset(n.End())
	if !ok {
		end = off
	}
	w.bad = append(w.bad, problem{src: src, off: off, end: end, text: text})
}

func (w *subsetWalk) importSpec(im *ast.ImportSpec) {
	path := strings.Trim(im.Path.Value, "\"`")
	offered := path == "slices" || path == "maps" || path == "cmp"
	for _, p := range w.c.s.voc.Packages {
		offered = offered || p == path
	}
	switch {
	case path == w.c.s.voc.Open:
	case !offered:
		w.refuse(im.Path, "package "+path+" is not offered to cells; there are "+strings.Join(w.c.s.voc.Packages, " ")+" slices maps cmp")
	case im.Name != nil && im.Name.Name == ".":
		w.refuse(im, "import without a dot: the names are written "+w.c.s.base.packages[path].Name()+".Name")
	}
}

func (w *subsetWalk) visit(n ast.Node) bool {
	switch n := n.(type) {
	case *ast.Ident:
		if strings.Contains(n.Name, "__") && w.c.info.Defs[n] != nil {
			w.refuse(n, n.Name+": names with two underscores in a row are kept for the notebook")
		}
		if o, ok := w.c.info.Defs[n].(*types.Var); ok && !o.IsField() && w.c.s.base.isUnit(n.Name) {
			w.refuse(n, n.Name+" is a unit of the vocabulary; choose another name")
		}
	case *ast.DeferStmt:
		w.refuse(n, "a cell has no defer; write the line where it is due, and Try(func() { .. }) where a failure is expected")
	case *ast.GoStmt:
		w.refuse(n, "a cell has no goroutines; write a loop (MonteCarlo and WorstCase run many variants at a time)")
	case *ast.SelectorExpr:
		if o := w.c.info.Uses[n.Sel]; isSequence(o) && !w.collected[n] {
			w.refuse(n, "a cell reads the "+strings.ToLower(o.Name())+" of a map with slices.Sorted(maps."+o.Name()+"(m)), or ranges over the map itself, in the order of its keys")
		}
	case *ast.SelectStmt, *ast.ChanType, *ast.SendStmt:
		w.refuse(n, "a cell has no channels; use a slice")
	case *ast.UnaryExpr:
		if n.Op == token.ARROW {
			w.refuse(n, "a cell has no channels; use a slice")
		}
	case *ast.BranchStmt:
		if n.Tok == token.GOTO {
			w.refuse(n, "a cell has no goto; use for, break and continue")
		}
	case *ast.RangeStmt:
		if t := w.typeOf(n.X); t != nil {
			switch t.Underlying().(type) {
			case *types.Signature:
				w.refuse(n.X, "a cell does not range over functions; collect the values into a slice")
			case *types.Chan:
				w.refuse(n.X, "a cell has no channels; use a slice")
			}
		}
	case *ast.StructType:
		w.structType(n)
	case *ast.MapType:
		if t := w.typeOf(n.Key); t != nil && boxes(t, 0) {
			w.refuse(n.Key, "a map of a cell cannot have an interface in its key; use a text, a number or a struct of such")
		}
	case *ast.TypeAssertExpr:
		if n.Type != nil {
			w.assertion(n, n.X, n.Type)
		}
	case *ast.TypeSwitchStmt:
		w.typeSwitch(n)
	case *ast.CallExpr:
		w.call(n)
	case *ast.AssignStmt:
		for _, x := range n.Lhs {
			w.foreignVar(x)
		}
	case *ast.IncDecStmt:
		w.foreignVar(n.X)
	}
	return true
}

func (w *subsetWalk) typeOf(e ast.Expr) types.Type {
	if tv, ok := w.c.info.Types[e]; ok {
		return tv.Type
	}
	return nil
}

func (w *subsetWalk) structType(n *ast.StructType) {
	for _, f := range n.Fields.List {
		if len(f.Names) > 0 {
			continue
		}
		if t := w.typeOf(f.Type); t != nil && types.IsInterface(t) {
			w.refuse(f.Type, "a struct of a cell cannot embed an interface; give the field a name: law "+w.c.p.src.quote(f.Type.Pos(), f.Type.End()))
		}
	}
}

// assertion refuses what cannot be told at run time: methods of a cell's types are unknown to compiled interfaces, and
// named types that are not structs look like what they are made of.
func (w *subsetWalk) assertion(at ast.Node, x, typ ast.Expr) {
	from, to := w.typeOf(x), w.typeOf(typ)
	if from == nil || to == nil {
		return
	}
	if isCellType(to) && !types.IsInterface(to) {
		if compiledInterface(from) && !(isError(from) && isStruct(to)) {
			w.refuse(at, "a value that the vocabulary holds cannot be turned back into a type of a cell; keep it in a variable of its own")
			return
		}
		if i, ok := from.Underlying().(*types.Interface); ok && i.NumMethods() == 0 && !isStruct(to) {
			w.refuse(at, "an any cannot tell "+w.short(to)+" from what it is made of; make it a struct")
		}
	}
	if i, ok := to.Underlying().(*types.Interface); ok && i.NumMethods() > 0 && isAny(from) {
		w.refuse(at, "an any does not know the methods of a cell's types; use a variable of the interface's type")
	}
}

func (w *subsetWalk) short(t types.Type) string { return shortType(t) }

func (w *subsetWalk) typeSwitch(n *ast.TypeSwitchStmt) {
	var x ast.Expr
	switch a := n.Assign.(type) {
	case *ast.AssignStmt:
		x = a.Rhs[0].(*ast.TypeAssertExpr).X
	case *ast.ExprStmt:
		x = a.X.(*ast.TypeAssertExpr).X
	}
	for _, cl := range n.Body.List {
		for _, t := range cl.(*ast.CaseClause).List {
			if id, ok := t.(*ast.Ident); !ok || id.Name != "nil" {
				w.assertion(t, x, t)
			}
		}
	}
}

func (w *subsetWalk) call(n *ast.CallExpr) {
	switch f := ast.Unparen(n.Fun).(type) {
	case *ast.Ident:
		if b, ok := w.c.info.Uses[f].(*types.Builtin); ok && b.Name() == "recover" {
			w.refuse(n, "a cell has no recover; err := Try(func() { .. }) gives the failure")
		}
	case *ast.SelectorExpr:
		o := w.c.info.Uses[f.Sel]
		if collects(o) {
			w.collects(n, o)
		}
		if o != nil && o.Pkg() != nil && o.Pkg().Path() == "fmt" {
			w.typeVerb(n)
		}
		if o != nil && o.Pkg() != nil && o.Pkg().Path() == "errors" && (o.Name() == "As" || o.Name() == "Is") && len(n.Args) == 2 {
			t := w.typeOf(n.Args[1])
			if t != nil && (o.Name() == "As" || isCellType(deref(t)) || isCellType(t)) {
				w.refuse(n, "errors."+o.Name()+" does not know the error types of a cell; use a type switch on the error itself")
			}
		}
	}
}

// collects lets slices.Sorted and slices.Collect read the keys or values of a map.
func (w *subsetWalk) collects(n *ast.CallExpr, o types.Object) {
	if len(n.Args) == 1 {
		if inner, ok := ast.Unparen(n.Args[0]).(*ast.CallExpr); ok {
			if s, ok := ast.Unparen(inner.Fun).(*ast.SelectorExpr); ok && isSequence(w.c.info.Uses[s.Sel]) {
				w.collected[s] = true
				return
			}
		}
	}
	w.refuse(n, "slices."+o.Name()+" takes maps.Keys(m) or maps.Values(m) here")
}

// typeVerb refuses %T for what holds types of a cell: at run time they have no name.
func (w *subsetWalk) typeVerb(n *ast.CallExpr) {
	format, held := false, false
	for _, a := range n.Args {
		tv := w.c.info.Types[a]
		switch {
		case tv.Value != nil && tv.Value.Kind() == constant.String:
			format = format || strings.Contains(constant.StringVal(tv.Value), "%T")
		case tv.Type != nil:
			held = held || mentionsCell(tv.Type, 0) && !isAny(tv.Type)
		}
	}
	if format && held {
		w.refuse(n, "%T does not know the types of a cell; write the type's name as text")
	}
}

func (w *subsetWalk) foreignVar(x ast.Expr) {
	s, ok := ast.Unparen(x).(*ast.SelectorExpr)
	if !ok {
		return
	}
	if v, ok := w.c.info.Uses[s.Sel].(*types.Var); ok && !v.IsField() && foreign(v) {
		w.refuse(x, v.Name()+" belongs to a compiled package and cannot be set")
	}
}

// order refuses statements that call a function before the variables which it uses are set in the same cell.
func (w *subsetWalk) order() {
	set := map[types.Object]int{} // variable of this cell -> offset where it is declared
	for _, s := range w.r.stmts {
		for _, id := range definedBy(s) {
			if o := w.c.info.Defs[id]; o != nil {
				if _, ok := set[o]; !ok {
					set[o], _ = w.r.src.offset(s.Pos())
				}
			}
		}
	}
	needs := map[types.Object]map[types.Object]bool{}
	for _, f := range w.r.funcs {
		if f.live == nil || !f.own {
			continue
		}
		needs[f.live.obj] = w.usedIn(f.decl)
	}
	for _, s := range w.r.stmts {
		at, _ := w.r.src.offset(s.Pos())
		seen := map[types.Object]bool{}
		var follow func(o, via types.Object)
		follow = func(o, via types.Object) {
			if seen[o] {
				return
			}
			seen[o] = true
			if off, ok := set[o]; ok && via != nil && off > at {
				line, _ := w.r.src.place(off)
				w.refuse(s, via.Name()+" uses "+o.Name()+", which is set in line "+itoa(line)+" only; move that line up")
			}
			for u := range needs[o] {
				follow(u, o)
			}
		}
		for o := range w.usedIn(s) {
			if needs[o] != nil {
				follow(o, nil)
			}
		}
	}
}

func (w *subsetWalk) usedIn(n ast.Node) map[types.Object]bool {
	used := map[types.Object]bool{}
	ast.Inspect(n, func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			if o := w.c.info.Uses[id]; o != nil {
				used[o] = true
			}
		}
		return true
	})
	return used
}

// isCellType tells whether a type is declared in a cell, or is a pointer to such a type.
func isCellType(t types.Type) bool {
	switch t := types.Unalias(t).(type) {
	case *types.Named:
		return t.Obj().Pkg() != nil && t.Obj().Pkg().Path() == mainPath
	case *types.Pointer:
		return isCellType(t.Elem())
	}
	return false
}

// compiledInterface tells whether a type is an interface with methods of a compiled package, error included.
func compiledInterface(t types.Type) bool {
	n, ok := types.Unalias(t).(*types.Named)
	if !ok || n.Obj().Pkg() != nil && n.Obj().Pkg().Path() == mainPath {
		return false
	}
	i, ok := n.Underlying().(*types.Interface)
	return ok && i.NumMethods() > 0
}

func isAny(t types.Type) bool {
	i, ok := t.Underlying().(*types.Interface)
	return ok && i.NumMethods() == 0
}

func isStruct(t types.Type) bool {
	_, ok := deref(t).Underlying().(*types.Struct)
	return ok
}

func deref(t types.Type) types.Type {
	if p, ok := types.Unalias(t).(*types.Pointer); ok {
		return p.Elem()
	}
	return t
}
