package cell

import (
	"fmt"
	"go/ast"
	"go/types"
	"strings"
)

// lowered is a cell as plain text in the part of Go that the interpreter gets right.
type lowered struct {
	imports []string // import lines that are new to the session
	decls   string   // types, variables, functions
	run     string   // name of the function that runs the statements
	undo    string   // name of the function that takes back what run replaced; "" for none
	top     []topStmt
}

// topStmt tells what a statement of the top level may assign.
type topStmt struct {
	off     int
	assigns []string
}

// mark is a place that a running cell can name.
type mark struct {
	src *source
	off int
	end int
	fn  string // function around it
}

// lowering turns one checked cell into text.
type lowering struct {
	s    *Session
	r    *checked
	info *types.Info
	unit func(ast.Expr) string

	out   strings.Builder // the function under way
	ind   int
	pre   []string // lines due before the statement under way
	moved int      // counts hoisted evaluations; function literals are none
	n     int      // numbers temporaries

	src     *source
	fn      *frame
	locals  map[types.Object]string
	generic map[string]string       // names of generic functions with their types filled in
	floats  map[types.Object]string // float64 that goes along with a loop variable
	taken   map[string]int
	imports map[string]bool
	newImp  []string
	globals []string // declarations beside functions
	types   []string
	prolog  []string
	undo    []string
	pending map[*live]bool // functions whose indirect variable must be set
}

// frame is a function under way.
type frame struct {
	name    string
	sig     *types.Signature
	guarded bool // counts its depth
	values  bool // its code outlives the cell as a value: a literal or a method
	loops   []*loop
	named   []string // variables of named results
	top     bool     // statements of the cell itself
	parent  *frame
}

// loop is a loop under way.
type loop struct {
	label string
	next  []string // lines due before the next pass
}

// lower writes a checked cell as text.
func (s *Session) lower(r *checked, unit func(ast.Expr) string) *lowered {
	l := &lowering{
		s: s, r: r, info: r.info, unit: unit, src: r.src, locals: map[types.Object]string{}, floats: map[types.Object]string{}, generic: map[string]string{}, taken: map[string]int{},
		imports: map[string]bool{}, pending: map[*live]bool{},
	}
	for _, t := range r.types {
		t.lowered = s.version(t.name, true)
		s.typeNames[t.obj.(*types.TypeName)] = t.lowered
	}
	for _, t := range r.types {
		l.typeDecl(t.obj.(*types.TypeName), t.lowered)
	}
	for _, t := range r.types {
		l.abilities(t.obj.(*types.TypeName), t.lowered)
	}
	for _, v := range r.fresh {
		v.lowered = s.version(v.name, false)
		l.globals = append(l.globals, "var "+v.lowered+" "+l.typ(v.obj.Type()))
	}
	for _, f := range r.funcs {
		if f.live != nil {
			f.live.lowered = s.version(f.name, false)
			if f.live.indirect != "" {
				l.prolog = append(l.prolog, f.live.indirect+" = "+f.live.lowered)
				if old := s.scope.names[f.name]; old != nil {
					l.undo = append(l.undo, f.live.indirect+" = "+old.lowered)
				}
			}
		}
	}
	var funcs, early, generic []string // generic code stands before what uses it
	for _, f := range r.funcs {
		text := l.function(f)
		if genericRecv(f.decl) {
			early = append(early, text)
			s.keepGeneric(s.typeNames[r.after.names[f.recv].obj.(*types.TypeName)], text)
			continue
		}
		if f.live != nil && f.live.obj.Type().(*types.Signature).TypeParams().Len() > 0 {
			generic = append(generic, text)
			s.keepGeneric(f.live.lowered, text)
			continue
		}
		funcs = append(funcs, text)
	}
	res := &lowered{run: s.version("cell", false)}
	body := l.statements(res)
	if len(l.undo) > 0 {
		res.undo = res.run + "__undo"
		funcs = append(funcs, "func "+res.undo+"() {\n\t"+strings.Join(l.undo, "\n\t")+"\n}\n")
	}
	res.imports = l.newImp
	res.decls = strings.Join(l.types, "\n") + "\n" + strings.Join(append(generic, early...), "\n") + "\n" + strings.Join(l.globals, "\n") + "\n" +
		strings.Join(funcs, "\n") + "\n" +
		"func " + res.run + "() {\n" + prefixed(l.prolog) + body + "}\n"
	return res
}

// methodName gives the lowered name of a method. The interpreter finds the methods of generic types by their name and
// types alone; a name that another generic type of the notebook has is changed.
func (l *lowering) methodName(m types.Object) string {
	f, ok := m.(*types.Func)
	if !ok || l.s.plain || foreign(m) || f.Signature().Recv() == nil {
		return m.Name()
	}
	n, ok := types.Unalias(deref(f.Signature().Recv().Type())).(*types.Named)
	if !ok || n.Origin().TypeParams().Len() == 0 {
		return m.Name()
	}
	o := n.Origin().Obj()
	owner := l.s.methodOwner[m.Name()]
	if owner == nil {
		l.s.methodOwner[m.Name()] = o
	}
	if owner == nil || owner == o {
		return m.Name()
	}
	return m.Name() + "__" + l.s.typeNames[o]
}

// renamed tells whether a generic type has a method whose name was changed, so that it cannot be held in an interface.
func (l *lowering) renamed(t types.Type) bool {
	n, ok := types.Unalias(deref(t)).(*types.Named)
	if !ok || foreign(n.Obj()) || n.Obj().Pkg() == nil || n.TypeArgs().Len() == 0 {
		return false
	}
	for i := range n.NumMethods() {
		if m := n.Method(i); l.methodName(m) != m.Name() {
			return true
		}
	}
	return false
}

func prefixed(lines []string) string {
	var b strings.Builder
	for _, s := range lines {
		b.WriteString("\t" + s + "\n")
	}
	return b.String()
}

// version gives the next name for a name of the notebook in lowered text. Types keep their own name at first, since
// embedded fields are called by it.
func (s *Session) version(name string, typ bool) string {
	s.versions[name]++
	if typ && s.versions[name] == 1 && types.Universe.Lookup(name) == nil {
		return name
	}
	return fmt.Sprintf("%s__%d", name, s.versions[name])
}

// statements lowers the top level of the cell.
func (l *lowering) statements(res *lowered) string {
	l.fn = &frame{name: "", top: true}
	l.ind = 1
	l.out.Reset()
	for i, s := range l.r.stmts {
		off, _ := l.src.offset(s.Pos())
		res.top = append(res.top, topStmt{off: off, assigns: l.assigned(s)})
		l.topLine(i)
		l.stmt(s)
	}
	l.topLine(len(l.r.stmts))
	for _, g := range l.r.gone {
		if !g.captured {
			l.line("%s = %s", g.lowered, l.zero(g.obj.Type()))
		}
	}
	return l.out.String()
}

// topLine notes which statement of the top level runs.
func (l *lowering) topLine(i int) {
	if !l.s.plain {
		l.line("nb__top = %d", i)
	}
}

// assigned lists the older variables of the notebook that a statement sets itself.
func (l *lowering) assigned(s ast.Stmt) (names []string) {
	seen := map[string]bool{}
	add := func(x ast.Expr) {
		for {
			switch e := ast.Unparen(x).(type) {
			case *ast.IndexExpr:
				x = e.X
				continue
			case *ast.SelectorExpr:
				x = e.X
				continue
			case *ast.StarExpr:
				x = e.X
				continue
			case *ast.Ident:
				o := l.info.ObjectOf(e)
				if v := l.r.lives[o]; v != nil && isVar(v) && l.s.scope.names[v.name] == v && !seen[v.name] {
					seen[v.name] = true
					names = append(names, v.name)
				}
			}
			return
		}
	}
	ast.Inspect(s, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.AssignStmt:
			for _, x := range n.Lhs {
				add(x)
			}
		case *ast.IncDecStmt:
			add(n.X)
		case *ast.RangeStmt:
			if n.Key != nil {
				add(n.Key)
			}
			if n.Value != nil {
				add(n.Value)
			}
		case *ast.ValueSpec:
			for _, id := range n.Names {
				add(id)
			}
		}
		return true
	})
	return names
}

// line writes a line of the function under way.
func (l *lowering) line(format string, args ...any) {
	for i := 0; i < l.ind; i++ {
		l.out.WriteByte('\t')
	}
	if len(args) == 0 {
		l.out.WriteString(format)
	} else {
		fmt.Fprintf(&l.out, format, args...)
	}
	l.out.WriteByte('\n')
}

// flush writes the lines that are due before the statement under way.
func (l *lowering) flush() {
	pre := l.pre
	l.pre = nil
	for _, s := range pre {
		l.line("%s", s)
	}
}

// before adds a line that is due before the statement under way.
func (l *lowering) before(format string, args ...any) {
	l.pre = append(l.pre, fmt.Sprintf(format, args...))
}

// name gives a new name for a temporary.
func (l *lowering) name(what string) string {
	l.n++
	return fmt.Sprintf("%s__t%d", what, l.n)
}

// hold evaluates a text before the statement under way and gives the name that holds it.
func (l *lowering) hold(text string) string {
	t := l.name("v")
	l.before("%s := %s", t, text)
	l.moved++
	return t
}

// local gives the name of a variable of a function. Every variable of a cell has its own.
func (l *lowering) local(o types.Object) string {
	if n, ok := l.locals[o]; ok {
		return n
	}
	name := o.Name()
	l.taken[name]++
	if k := l.taken[name]; k > 1 || reserved(name) || l.s.versions[name] > 0 {
		name = fmt.Sprintf("%s__l%d", name, k)
	}
	l.locals[o] = name
	return name
}

func reserved(name string) bool {
	return types.Universe.Lookup(name) != nil || strings.HasPrefix(name, "p_") || strings.HasPrefix(name, "nb_")
}

// pkg gives the name under which lowered text knows a compiled package.
func (l *lowering) pkg(path string) string {
	alias := importName(path)
	if !l.s.machine.imported[alias] && !l.imports[alias] {
		l.imports[alias] = true
		l.newImp = append(l.newImp, fmt.Sprintf("import %s %q", alias, path))
	}
	return alias
}

// nb names a helper that is compiled into the kernel.
func (l *lowering) nb(name string) string { return "p_nb." + name }

// at writes the mark of a place in the cell.
func (l *lowering) at(n ast.Node) {
	if l.s.plain {
		return
	}
	off, ok := l.src.offset(n.Pos())
	if !ok {
		return
	}
	end, _ := l.src.offset(n.End())
	k := l.s.addMark(mark{src: l.src, off: off, end: end, fn: l.fnName()})
	if racing {
		l.line("%s(%d)", l.nb("At"), k)
		return
	}
	l.line("nb__at = %d", k)
}

func (l *lowering) fnName() string {
	for f := l.fn; f != nil; f = f.parent {
		if f.name != "" {
			return f.name
		}
	}
	return ""
}

// stopCheck writes the check for an interrupt.
func (l *lowering) stopCheck() {
	if l.s.plain {
		return
	}
	if racing {
		l.line("%s()", l.nb("Poll"))
		return
	}
	l.line("if nb__stop { %s() }", l.nb("Interrupt"))
}

// enter and leave count the depth of calls in functions that may call themselves.
func (l *lowering) enter() {
	if l.s.plain {
		return
	}
	if racing {
		l.line("%s()", l.nb("Enter"))
		return
	}
	l.line("nb__depth++")
	l.line("if nb__depth > %d { %s() }", maxDepth, l.nb("Deep"))
}

func (l *lowering) leave() {
	if l.s.plain {
		return
	}
	if racing {
		l.line("%s()", l.nb("Leave"))
		return
	}
	l.line("nb__depth--")
}

// maxDepth is how deep functions of a notebook may call each other. The time in which the interpreter unwinds a failure
// grows with the square of the depth: 5 s for this one.
const maxDepth = 10000

// fallible tells whether evaluating a tree can stop a cell.
func (l *lowering) fallible(nodes ...ast.Node) bool {
	found := false
	for _, n := range nodes {
		if n == nil {
			continue
		}
		ast.Inspect(n, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.FuncLit:
				return false
			case *ast.CallExpr:
				if tv := l.info.Types[n.Fun]; !tv.IsType() && l.info.Types[n].Value == nil {
					found = true
				}
			case *ast.IndexExpr, *ast.SliceExpr, *ast.StarExpr, *ast.TypeAssertExpr:
				found = true
			case *ast.SelectorExpr:
				if s := l.info.Selections[n]; s != nil {
					if _, ok := s.Recv().Underlying().(*types.Pointer); ok || s.Indirect() {
						found = true
					}
				}
			case *ast.BinaryExpr:
				if op := n.Op.String(); (op == "/" || op == "%" || op == "<<" || op == ">>") && l.info.Types[n].Value == nil {
					b, ok := l.info.TypeOf(n).Underlying().(*types.Basic)
					found = found || ok && b.Info()&types.IsInteger != 0
				}
				if n.Op.String() == "==" || n.Op.String() == "!=" {
					found = found || types.IsInterface(l.info.TypeOf(n.X))
				}
			case *ast.AssignStmt:
				if op := n.Tok.String(); op == "/=" || op == "%=" {
					found = true
				}
			}
			return !found
		})
	}
	return found
}
