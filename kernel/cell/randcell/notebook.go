package randcell

import (
	"fmt"
	"math/rand/v2"
	"strings"
)

// New makes the notebook of a seed. The same seed and options give the same notebook.
func New(seed uint64, opt Options) *Notebook {
	w := &writer{
		Rand: rand.New(rand.NewPCG(seed, 20)), opt: opt, prefix: fmt.Sprintf("n%d_", seed),
		book:  &Notebook{Seed: seed, Uses: map[string]int{}},
		names: map[string]*entity{}, numbers: map[string]int{},
	}
	w.book.prefix = w.prefix
	var run strings.Builder
	fmt.Fprintf(&run, "func %sbook() {\n", w.prefix)
	for range 5 + w.IntN(4) {
		if len(w.past) == 0 || !w.chance(15) || !w.oncemore(&run) {
			w.oneCell(&run)
		}
	}
	run.WriteString("}\n")
	w.book.Reference = w.global.String() + run.String()
	return w.book
}

// oneCell writes the next cell of both sides.
func (w *writer) oneCell(run *strings.Builder) {
	w.cell.Reset()
	w.body.Reset()
	w.prolog.Reset()
	w.locals, w.touched, w.changed = nil, map[string]bool{}, map[string]bool{}
	w.once = false
	w.times, w.spent, w.budget, w.loop, w.pure, w.sealed, w.callee = 1, 0, 3000, 0, 0, 0, false
	number := len(w.book.Cells) + 1
	before := w.snapshot()
	outcome := Runs
	if n := w.IntN(100); number > 1 && n < 27 {
		outcome = []Outcome{Fails, Interrupted, Refused}[map[bool]int{true: 0}[n < 15]+map[bool]int{true: 1}[n >= 15 && n < 20]+map[bool]int{true: 2}[n >= 20]]
	}
	n := 2 + w.IntN(4)
	stop := w.IntN(n)
	for i := range n {
		if i == stop {
			w.ending(outcome)
		}
		w.chunk()
	}
	w.once = w.once || len(w.locals) > 0 // closures may hold them
	w.state()
	cell := Cell{Source: w.cell.String(), Outcome: outcome}
	w.book.Cells = append(w.book.Cells, cell)
	w.count("cell that " + outcome.String())
	if outcome == Refused {
		w.names = before
		fmt.Fprintf(run, "\trefused(%d)\n", number)
		return
	}
	fmt.Fprintf(&w.global, "func %scell%d() {\n%s%s}\n", w.prefix, number, indent(w.prolog.String()), indent(w.body.String()))
	if outcome == Runs {
		fmt.Fprintf(run, "\tcell(%d, %scell%d)\n", number, w.prefix, number)
		w.remember(cell)
		return
	}
	w.names = before
	set := sortedNames(w.changed)
	for i, name := range set {
		fmt.Fprintf(run, "\tsaved%d_%d := %s\n", number, i, name)
	}
	fmt.Fprintf(run, "\tcell(%d, %scell%d)\n", number, w.prefix, number)
	for i, name := range set {
		fmt.Fprintf(run, "\t%s = saved%d_%d\n", name, number, i)
	}
}

func (w *writer) snapshot() map[string]*entity {
	copied := map[string]*entity{}
	for n, e := range w.names {
		c := *e
		copied[n] = &c
	}
	return copied
}

// state shows a few of the names that are there at the end of a cell.
func (w *writer) state() {
	w.locals = nil
	for _, e := range w.sorted() {
		if e.role == variable && w.chance(40) {
			switch e.typ.kind {
			case intKind, floatKind, stringKind, boolKind, sliceKind, mapKind:
				if e.typ.kind == sliceKind && e.typ.elem.kind > boolKind {
					continue
				}
				w.count("state shown")
				w.top("fmt.Println(" + `"` + e.name + `", ` + w.mark(e.name) + ")")
			case structKind:
				for _, f := range e.typ.fields {
					if f.typ.kind <= boolKind {
						w.top("fmt.Println(" + `"` + e.name + "." + f.name + `", ` + w.mark(e.name) + "." + f.name + ")")
					}
				}
			}
		}
		if e.role == function && e.body != "" && w.chance(30) && !strings.Contains(e.name, ".") && len(e.typ.results) == 1 && e.typ.results[0].kind <= boolKind {
			w.count("state shown")
			w.top("fmt.Println(" + `"` + e.name + `", ` + w.mark(e.name) + "(" + w.arguments(e.typ, 1) + "))")
		}
	}
}

// Program joins the references of notebooks into one Go file of package main. Its output is split by [Outputs]. format
// is the expression that writes a float64 called x as notebooks show it; imports is what that and the snippets need.
func Program(books []*Notebook, format string, imports ...string) string {
	var b strings.Builder
	b.WriteString("package main\n\nimport (\n\t\"bufio\"\n\t\"errors\"\n\t\"fmt\"\n\t\"math\"\n\t\"os\"\n\t\"sort\"\n\t\"strconv\"\n\t\"strings\"\n")
	for _, i := range imports {
		fmt.Fprintf(&b, "\t%q\n", i)
	}
	b.WriteString(")\n\nfunc formatted(x float64) string { return " + format + " }\n" + support)
	var main strings.Builder
	for _, n := range books {
		b.WriteString(n.Reference)
		fmt.Fprintf(&main, "\tfmt.Println(%q)\n\t%sbook()\n", bookMark(n), n.prefix)
	}
	b.WriteString("\nfunc main() {\n" + main.String() + "}\n")
	return b.String()
}

func bookMark(n *Notebook) string { return fmt.Sprintf("=== notebook %d", n.Seed) }

// Outputs takes the output of a program apart: seed, then what each cell printed and how it ended, as [Show] writes it.
func Outputs(text string) map[string][]string {
	out := map[string][]string{}
	for _, book := range strings.Split(text, "=== notebook ")[1:] {
		seed, rest, _ := strings.Cut(book, "\n")
		out[seed] = strings.Split(strings.TrimPrefix(rest, "--- cell\n"), "--- cell\n")
	}
	return out
}

// Ending is the last line of a cell's output for an outcome.
func Ending(o Outcome) string { return "--- " + o.String() + "\n" }

const support = `
var _ = bufio.NewReader
var _ = errors.New
var _ = os.Stdout
var _ = math.Pi
var _ = strconv.Itoa
var _ = strings.Repeat

func cell(number int, run func()) {
	fmt.Println("--- cell")
	defer func() {
		switch r := recover(); r {
		case nil:
			fmt.Println("--- runs")
		case "an endless loop":
			fmt.Println("--- is interrupted")
		default:
			fmt.Println("--- fails")
		}
	}()
	run()
}

func stop(why string) { panic(why) }

func refused(number int) {
	fmt.Println("--- cell")
	fmt.Println("--- is refused")
}

func keys[K int | string, V any](m map[K]V) []K {
	var all []K
	for k := range m {
		all = append(all, k)
	}
	sort.Slice(all, func(i, j int) bool { return all[i] < all[j] })
	return all
}

// show writes a value as notebooks show it.
func show(v any) {
	switch v := v.(type) {
	case float64:
		fmt.Println("=>", formatted(v))
	default:
		fmt.Println("=>", v)
	}
}
`
