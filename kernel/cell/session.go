package cell

import (
	"context"
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"reflect"
	"strings"
	"sync"
	"sync/atomic"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/cell/unit"
)

// Session runs the cells of one notebook, one after another in one scope. It implements [kernel.Engine].
type Session struct {
	voc     *Vocabulary
	hooks   Hooks
	base    *base
	machine *machine
	units   *unit.Checker

	turn  turn // of who evaluates
	later later
	mu    sync.Mutex // guards what follows

	scope          *scope
	methods        []*method
	pendingMethods []*method
	fset           *token.FileSet
	versions       map[string]int
	typeNames      map[*types.TypeName]string
	marks          []mark
	shows          []shown
	abilities      []*abilities // methods of cell types that compiled code asks for
	byType         map[reflect.Type]*abilities
	ableIndex      map[ability]int
	texts          map[int]string
	cache          map[string]*unitOfWork
	ledger         ledger
	methodOwner    map[string]*types.TypeName // by method: the first generic type that has it
	generic        map[string][]string        // by lowered name of generic code: the names in it
	plain          bool                       // lowers to a plain program, which is not run
	late           []string                   // notes on names that the cell took over

	sink      atomic.Pointer[kernel.Sink]
	now       kernel.Cell                    // the running cell
	src       *source                        // its text
	words     map[string]map[string][]string // by name of the notebook: what texts about it can be
	stuck     chan struct{}
	stuckCell int
	raceMark  *atomic.Int64
	raceDepth *atomic.Int64
	runner    atomic.Int64 // the goroutine that runs the cell
	tooDeep   atomic.Bool
}

var _ kernel.Engine = (*Session)(nil)

// unitOfWork is a compiled cell.
type unitOfWork struct {
	text    string
	run     func()
	undo    func()
	low     *lowered
	src     *source
	own     []*live
	fresh   map[string]bool         // names that the cell declares first
	uses    map[string]types.Object // what the names in it meant
	notes   []string
	checked *checked
	queries map[ast.Expr]string // unit texts it was lowered with
	before  *scope
	methods []*method
}

// New makes a session with a vocabulary.
func New(v *Vocabulary, h Hooks) (*Session, error) {
	b, err := newBase(v)
	if err != nil {
		return nil, err
	}
	s := &Session{
		voc: v, hooks: h, base: b, scope: &scope{names: map[string]*live{}}, fset: token.NewFileSet(),
		turn: newTurn(), versions: map[string]int{}, typeNames: map[*types.TypeName]string{}, texts: map[int]string{}, cache: map[string]*unitOfWork{},
		marks: []mark{{}}, ledger: newLedger(), methodOwner: map[string]*types.TypeName{}, generic: map[string][]string{}, byType: map[reflect.Type]*abilities{}, ableIndex: map[ability]int{},
	}
	if s.machine, err = newMachine(v, s.helpers()); err != nil {
		return nil, err
	}
	if v.Units != nil {
		if s.units, err = unit.New(v.Units); err != nil {
			return nil, err
		}
	}
	return s, nil
}

// Lowered gives the text into which a cell was turned when it last ran, for reports and exports; "" if it did not get
// that far.
func (s *Session) Lowered(cell int) string {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.texts[cell]
}

// Emit sends an output of the running cell, or of the one that ran last.
func (s *Session) Emit(o kernel.Output) {
	if sink := s.sink.Load(); sink != nil && *sink != nil {
		(*sink)(o)
	}
}

// Run runs a cell: parse, check, lower, compile, then run it. See [kernel.Engine].
func (s *Session) Run(ctx context.Context, c kernel.Cell, out kernel.Sink) kernel.Outcome {
	s.takeTurn(ctx)
	defer s.turn.give()
	if s.stuck != nil {
		select {
		case <-s.stuck:
			s.stuck = nil
		default:
			return faulted("Busy", fmt.Sprintf("cell %d: a call of cell %d still runs and cannot be stopped; restart the kernel", c.Number, s.stuckCell))
		}
	}
	s.sink.Store(&out)
	s.now = c
	if ctx.Err() != nil {
		return kernel.Outcome{Interrupted: true, Fault: &kernel.Fault{Name: "Interrupted", Text: fmt.Sprintf("cell %d was interrupted before it began", c.Number)}}
	}
	s.mu.Lock()
	s.late = nil
	u, bad := s.prepare(c)
	s.forgetFiles()
	late := s.late
	s.mu.Unlock()
	if len(bad) > 0 {
		return kernel.Outcome{Fault: s.refusal(bad)}
	}
	reads := s.reads(u)
	for _, n := range append(append(late, u.notes...), s.ledger.notes(c, reads)...) {
		s.stream("stderr", n+"\n")
	}
	o := s.execute(ctx, c, u)
	if o.Fault == nil {
		sets, functions := s.sets(u)
		s.ledger.record(c, sets, functions, reads)
	}
	return o
}

// prepare turns a cell into something that runs and commits its names; a cell that ran before with everything it uses
// unchanged is taken as it is.
func (s *Session) prepare(c kernel.Cell) (*unitOfWork, []problem) {
	if u := s.cache[c.Source]; u != nil && s.still(u) {
		u.src.cell = c.Number
		for _, l := range u.own {
			l.cell = c.Number
		}
		u.before, u.methods = s.scope, s.methods
		u.fresh = map[string]bool{}
		s.texts[c.Number] = u.text
		return u, nil
	}
	p, bad := parse(s.fset, c.Number, c.Source)
	if len(bad) > 0 {
		return nil, bad
	}
	r, bad := s.check(p, s.fset)
	if len(bad) > 0 {
		return nil, bad
	}
	u := &unitOfWork{src: p.src, own: r.own, notes: r.notes, checked: r, queries: map[ast.Expr]string{}, before: s.scope, fresh: map[string]bool{}}
	report, bad := s.checkUnits(r)
	if len(bad) > 0 {
		return nil, bad
	}
	s.pendingMethods = nil
	low, err := s.lowerSafe(r, func(e ast.Expr) string {
		t := ""
		if report != nil {
			t = report.Text(e)
		}
		u.queries[e] = t
		return t
	})
	if err == nil {
		u.low, u.text = low, strings.Join(low.imports, "\n")+"\n"+low.decls
		s.texts[c.Number] = u.text
		if !s.plain {
			s.machine.release(s.keepNames())
			err = s.compile(u)
		}
	}
	if c, ok := err.(cannot); ok {
		return nil, []problem{{src: p.src, text: string(c)}}
	}
	if err != nil {
		return nil, []problem{{src: p.src, text: "this cell is not supported here (" + err.Error() + "); please report it with its text", name: "InternalError"}}
	}
	for _, l := range r.own {
		if s.scope.names[l.name] == nil {
			u.fresh[l.name] = true
		}
	}
	u.uses = s.meanings(p, r)
	s.commit(u, r, report)
	s.cache[c.Source] = u
	if len(s.cache) > 64 {
		s.cache = map[string]*unitOfWork{c.Source: u}
	}
	return u, nil
}

// cannot is what keeps a cell that passed the check from being lowered, in words for its author.
type cannot string

func (c cannot) Error() string { return string(c) }

func (s *Session) lowerSafe(r *checked, text func(ast.Expr) string) (low *lowered, err error) {
	defer func() {
		switch x := recover().(type) {
		case nil:
		case cannot:
			err = x
		default:
			err = fmt.Errorf("lowering: %v", x)
		}
	}()
	return s.lower(r, text), nil
}

// compile gives the lowered text to the interpreter.
func (s *Session) compile(u *unitOfWork) (err error) {
	for _, im := range u.low.imports {
		if err := s.machine.eval(im); err != nil {
			return err
		}
		s.machine.imported[strings.Fields(im)[1]] = true
	}
	if err := s.machine.eval(u.low.decls); err != nil {
		return err
	}
	if u.run, err = s.machine.function(u.low.run); err == nil && u.low.undo != "" {
		u.undo, err = s.machine.function(u.low.undo)
	}
	return err
}

// meanings notes what the names in a cell stood for when it was checked.
func (s *Session) meanings(p *parsed, r *checked) map[string]types.Object {
	m := map[string]types.Object{}
	note := func(n ast.Node) bool {
		if id, ok := n.(*ast.Ident); ok {
			if l := r.after.names[id.Name]; l != nil {
				m[id.Name] = l.obj
			} else {
				m[id.Name] = nil
			}
		}
		return true
	}
	for _, d := range p.decls {
		ast.Inspect(d, note)
	}
	ast.Inspect(p.body, note)
	return m
}

// still tells whether a compiled cell means the same as when it was compiled.
func (s *Session) still(u *unitOfWork) bool {
	for name, o := range u.uses {
		l := s.scope.names[name]
		if (l == nil) != (o == nil) || l != nil && l.obj != o {
			return false
		}
	}
	for _, l := range u.own {
		if s.scope.names[l.name] != l {
			return false
		}
	}
	if s.units == nil {
		return true
	}
	report, bad := s.checkUnits(u.checked)
	if len(bad) > 0 || report == nil {
		return false
	}
	for e, t := range u.queries {
		if report.Text(e) != t {
			return false
		}
	}
	report.Commit()
	return true
}

// checkUnits runs the unit check on a cell.
func (s *Session) checkUnits(r *checked) (*unit.Report, []problem) {
	if s.units == nil {
		return nil, nil
	}
	s.units.Quote = func(pos, end token.Pos) string { return r.src.quote(pos, end) }
	report := s.units.Check(s.fset, r.files, r.info, r.pkg)
	var bad []problem
	for _, d := range report.Diagnostics {
		off, ok := r.src.offset(d.Pos)
		if !ok {
			continue
		}
		end, _ := r.src.offset(d.End)
		bad = append(bad, problem{src: r.src, off: off, end: end, text: d.Text, name: "UnitError"})
	}
	return report, bad
}

// commit makes the names of a compiled cell those of the notebook.
func (s *Session) commit(u *unitOfWork, r *checked, report *unit.Report) {
	s.scope = r.after
	u.methods = s.methods
	again := map[string]bool{}
	for _, m := range s.pendingMethods {
		again[m.typ+"."+m.name] = true
	}
	methods := s.pendingMethods
	for _, m := range s.methods {
		if t := s.scope.names[m.typ]; t != nil && u.before.names[m.typ] == t && !again[m.typ+"."+m.name] {
			methods = append(methods, m)
		}
	}
	s.methods = methods
	if report != nil {
		report.Commit()
	}
	for _, l := range r.gone {
		if l.captured {
			s.late = append(s.late, fmt.Sprintf("note: %s has another type now; functions made before cell %d keep the earlier one", l.name, r.src.cell))
		}
	}
}

// patience is how long an interrupted call may go on before it is left behind.
const patience = 2 * time.Second

// execute runs a compiled cell in a goroutine of its own, so that a call that cannot be stopped does not hold up the
// kernel for ever.
func (s *Session) execute(ctx context.Context, c kernel.Cell, u *unitOfWork) kernel.Outcome {
	key := cellKey(c)
	s.machine.clear()
	s.raceMark.Store(0)
	s.raceDepth.Store(0)
	s.tooDeep.Store(false)
	s.src = u.src
	if s.hooks.Sink != nil {
		s.hooks.Sink(*s.sink.Load())
	}
	if s.hooks.Context != nil {
		s.hooks.Context(ctx)
	}
	if s.hooks.Begin != nil {
		s.hooks.Begin(key, c.Number)
	}
	begun := time.Now()
	done := make(chan struct{})
	var end ending // written by the cell's goroutine before done is closed
	go func() {
		defer close(done)
		defer func() {
			if end.value = recover(); end.value != nil {
				end.stack = ownStack(end.value)
			}
			if s.tooDeep.Load() {
				end.value = tooDeep{}
			}
		}()
		s.runner.Store(goroutine())
		u.run()
	}()
	stopped, stack := any(interrupted{}), []byte(nil)
	if s.wait(ctx, done, c.Number) {
		stopped, stack = end.value, end.stack
	}
	var o kernel.Outcome
	if stopped != nil && ctx.Err() != nil {
		stopped = interrupted{} // compiled code ends its long calls in its own words
	}
	if stopped != nil {
		o = s.stopped(u, stopped, stack, time.Since(begun))
		s.rollback(u)
	}
	if s.hooks.End != nil {
		s.hooks.End(key, stopped != nil)
	}
	if s.stuck == nil {
		s.learn()
	}
	s.begin(u.src, stopped != nil)
	return o
}

// ending is how the goroutine of a cell ended: with what was recovered, and its stack if that is nobody's fault.
type ending struct {
	value any
	stack []byte
}

// wait waits for the end of a cell. After an interrupt it waits a while longer, then leaves the cell's goroutine behind.
func (s *Session) wait(ctx context.Context, done chan struct{}, number int) bool {
	select {
	case <-done:
		return true
	case <-ctx.Done():
	}
	s.machine.interrupt()
	select {
	case <-done:
		return true
	case <-time.After(patience):
		s.stuck, s.stuckCell = done, number
		return false
	}
}

// rollback takes back the names of a cell that failed; older variables keep what was assigned to them.
func (s *Session) rollback(u *unitOfWork) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if u.undo != nil && s.stuck == nil {
		u.undo()
	}
	s.scope, s.methods = u.before, u.methods
	delete(s.cache, u.src.text)
}

func faulted(name, text string) kernel.Outcome {
	return kernel.Outcome{Fault: &kernel.Fault{Name: name, Text: text, Traceback: []string{text}}}
}
