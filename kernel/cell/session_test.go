package cell_test

import (
	"context"
	"fmt"
	"os"
	"runtime"
	"runtime/debug"
	"strings"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/cell"
	"ampturn/kernel/cell/internal/toy"
)

// must runs a cell that has to succeed and gives what it shows.
func (n *notebook) must(src string) string {
	n.t.Helper()
	out, o := n.run(context.Background(), src)
	if o.Fault != nil {
		n.t.Fatalf("%s\n%s", strings.Join(o.Fault.Traceback, "\n"), n.s.Lowered(n.n))
	}
	return out
}

// TestInterrupt stops endless cells of several kinds and demands that the notebook goes on as before.
func TestInterrupt(t *testing.T) {
	for name, src := range map[string]string{
		"loop":      "for {\n}",
		"count":     "x := 0\nfor i := 0; ; i++ {\n\tx += i\n}",
		"recursion": "func f(n int) int {\n\tif n > 5 {\n\t\treturn 0\n\t}\n\treturn f(n+1) + f(n+1)\n}\nfor {\n\tf(0)\n}",
		"callback":  "Integrate(func(x float64) float64 { return x }, 1e12)",
		"wait":      "Wait(1000)",
		"closure":   "g := func() float64 { return 1 }\nfor {\n\tg()\n}",
		"range":     "for i := range 1000000000000 {\n\t_ = i\n}",
	} {
		t.Run(name, func(t *testing.T) {
			n := open(t, false)
			n.must("k := 40\nolder := 1\nh := func() int { return k + 2 }")
			ctx, cancel := context.WithTimeout(context.Background(), 50*time.Millisecond)
			defer cancel()
			begun := time.Now()
			_, o := n.run(ctx, "fresh := 2\nolder = 7\n"+src)
			if o.Fault == nil || !o.Interrupted {
				t.Fatalf("outcome %+v", o)
			}
			if d := time.Since(begun); d > time.Second {
				t.Errorf("stopped after %v", d)
			}
			if o.Interrupted && (!strings.Contains(o.Fault.Text, "names set before: older (kept)") || !strings.Contains(o.Fault.Text, "fresh") ||
				!strings.HasPrefix(o.Fault.Text, "interrupted in cell 2")) {
				t.Error(o.Fault.Text)
			}
			if got := n.must("k = 50\nh()\nolder"); got != "52\n7\n" {
				t.Errorf("after it: %q", got)
			}
			if _, o := n.run(context.Background(), "fresh"); o.Fault == nil {
				t.Error("a name of the interrupted cell is still there")
			}
		})
	}
}

// TestHeldCall leaves a call behind that cannot be stopped, and refuses cells until it has ended.
func TestHeldCall(t *testing.T) {
	n := open(t, false)
	toy.SetContext(context.Background())
	v, _ := bare()
	s, err := cell.New(v, cell.Hooks{}) // without the hook, Wait does not know the context
	if err != nil {
		t.Fatal(err)
	}
	n.s = s
	ctx, cancel := context.WithTimeout(context.Background(), 50*time.Millisecond)
	defer cancel()
	_, o := n.run(ctx, "x := 1\nWait(3)")
	if !o.Interrupted || !strings.Contains(o.Fault.Text, "cannot be stopped") {
		t.Fatalf("%+v", o.Fault)
	}
	if _, o := n.run(context.Background(), "1"); o.Fault == nil || o.Fault.Name != "Busy" {
		t.Fatalf("%+v", o.Fault)
	}
	time.Sleep(1500 * time.Millisecond)
	if got := n.must("1"); got != "1\n" {
		t.Error(got)
	}
}

// TestParallel runs a closure of a cell from many goroutines.
func TestParallel(t *testing.T) {
	n := open(t, false)
	got := n.must("k := 2.0\nfunc sqr(x float64) float64 { return x * x }\nParallel(64, func(x float64) float64 {\n\ts := 0.0\n\tfor i := range 100 {\n\t\ts += k * float64(i)\n\t}\n\treturn s*0 + sqr(x)\n})")
	want := 0.0
	for i := 0.0; i < 64; i++ {
		want += i * i
	}
	if got != fmt.Sprintf("%.4g\n", want) {
		t.Errorf("%s, want %.4g", got, want)
	}
}

// TestAgain runs one cell 1,000 times as it is and 1,000 times changed: the heap after collection grows by less than
// 20 MB each time, resident memory by less than 30 MB.
func TestAgain(t *testing.T) {
	n := open(t, true)
	src := "a := 3.0 * mm\nr := NewRod(\"r\", a)\nsum := 0.0\nfor i := range 10 {\n\tsum += a * i\n}\nfunc f(x float64) float64 { return x * 2 }\nf(sum)\nr"
	n.must(src)
	heap := func() uint64 {
		runtime.GC()
		var m runtime.MemStats
		runtime.ReadMemStats(&m)
		return m.HeapAlloc
	}
	before, held := heap(), resident()
	for range 1000 {
		n.must(src)
	}
	t.Logf("unchanged cell: %d bytes a run", (int64(heap())-int64(before))/1000)
	if grown := int64(heap()) - int64(before); grown > 20<<20 {
		t.Errorf("heap grew by %d bytes", grown)
	}
	before = heap()
	for i := range 1000 {
		n.must(strings.Replace(src, "3.0", fmt.Sprintf("%d.5", i), 1))
	}
	t.Logf("resident memory of both: %d bytes more", resident()-held)
	t.Logf("changed cell: %d bytes a run", (int64(heap())-int64(before))/1000)
	if grown := int64(heap()) - int64(before); grown > 20<<20 {
		t.Errorf("heap grew by %d bytes with a cell that changes", grown)
	}
	if grown := resident() - held; grown > 30<<20 && !cell.Racing {
		t.Errorf("resident memory grew by %d bytes", grown)
	}
	if got := n.must("f(2)"); !strings.HasPrefix(got, "4") {
		t.Error(got)
	}
	runtime.KeepAlive(n)
}

// resident gives the resident memory of the process in bytes after what is free has been given back; 0 where the system
// does not tell it in /proc.
func resident() int64 {
	debug.FreeOSMemory()
	text, err := os.ReadFile("/proc/self/statm")
	if err != nil {
		return 0
	}
	var size, pages int64
	if _, err := fmt.Sscan(string(text), &size, &pages); err != nil {
		return 0
	}
	return pages * int64(os.Getpagesize())
}

// TestComplete completes members with signatures, names in scope and units, also while a cell runs.
func TestComplete(t *testing.T) {
	n := open(t, true)
	n.must("rod := NewRod(\"a\", 5*mm)\ntype P struct{ width, height float64 }\nfunc area(p P) float64 { return p.width * p.height }\np := P{1, 2}")
	for _, c := range []struct{ before, want, signature string }{
		{"rod.Sc", "Scaled", "(by float64) *Rod"},
		{"NewRod(\"a\", rod.Len", "Length", "Metre"},
		{"x := p.wi", "width", "float64"},
		{"math.Sqr", "Sqrt", "(x float64) float64"},
		{"are", "area", "(p P) float64"},
		{"NewR", "NewRod", "(name string, length Metre) *Rod"},
		{"3*new", "newton", ""},
		{"q := rod\nq.Str", "Stretch", "(by Metre)"},
		{"NewRod(\"b\", 1*mm).Sca", "Scaled", ""},
	} {
		got := n.s.Complete(c.before, len(c.before))
		found := false
		for i, m := range got.Matches {
			if m == c.want && (c.signature == "" || strings.Contains(got.Signatures[i], c.signature)) {
				found = true
			}
		}
		if !found {
			t.Errorf("%q: %v %v, want %s %s", c.before, got.Matches, got.Signatures, c.want, c.signature)
		}
	}
	for _, hidden := range []string{"rod.", "Limit"} {
		for _, m := range n.s.Complete(hidden, len(hidden)).Matches {
			if m == "MIMEBundle" || m == "LimitWithUnits" {
				t.Errorf("%s is offered", m)
			}
		}
	}
	if got := n.s.Complete(`NewRod("ro`, 10); len(got.Matches) > 0 {
		t.Errorf("within a text: %v", got.Matches)
	}
	done := make(chan struct{})
	ctx, cancel := context.WithCancel(context.Background())
	go func() { n.s.Run(ctx, kernel.Cell{Number: 9, Source: "for {\n}"}, func(kernel.Output) {}); close(done) }()
	for range 100 {
		if len(n.s.Complete("rod.", 4).Matches) == 0 {
			t.Error("nothing offered while a cell runs")
		}
		n.s.Inspect("area", 2)
	}
	cancel()
	<-done
}

// TestInspect explains names, members and the function whose arguments are being typed.
func TestInspect(t *testing.T) {
	n := open(t, true)
	n.must("rod := NewRod(\"a\", 5*mm)\n// area of a rectangle.\nfunc area(w, h float64) float64 { return w * h }")
	for _, c := range []struct{ src, want string }{
		{"NewRod", "NewRod makes a rod"}, {"NewRod(\"a\", ", "NewRod makes a rod"}, {"mm", "millimetre"}, {"rod.Scaled", "longer by a factor"},
		{"area", "area of a rectangle"}, {"rod", "*Rod"}, {"sqrt", "func sqrt(x float64) float64"}, {"len", "built in"},
	} {
		data, ok := n.s.Inspect(c.src, len(c.src))
		if text, _ := data["text/plain"].(string); !ok || !strings.Contains(text, c.want) {
			t.Errorf("%s: %v, want %q", c.src, data["text/plain"], c.want)
		}
	}
	if _, ok := n.s.Inspect("nothingSuch", 4); ok {
		t.Error("an unknown name is explained")
	}
	if got := n.must("NewRod"); !strings.Contains(got, "makes a rod") {
		t.Error(got)
	}
	if got := n.must("Rod"); !strings.Contains(got, "type Rod") {
		t.Error(got)
	}
}

// TestIsComplete tells whole cells from those that go on.
func TestIsComplete(t *testing.T) {
	n := open(t, false)
	for src, want := range map[string]string{
		"x := 1": "complete", "": "complete", "for {": "incomplete", "f(1,": "incomplete", "x := 1 +": "incomplete", "`abc": "incomplete",
		"/* abc": "incomplete", "x := )": "invalid", "for i := range 3 {\n\tf(i)\n}": "complete", "a.": "incomplete", "x++": "complete",
		"x := := 1": "invalid", "// note": "complete", "func f() int {\n\treturn 1": "incomplete", "[]int{1, 2}": "complete", "x = \"ab": "invalid",
	} {
		if got, _ := n.s.IsComplete(src); got != want {
			t.Errorf("%q: %s, want %s", src, got, want)
		}
	}
}

// TestFault demands the line, the source line with its mark, and the name.
func TestFault(t *testing.T) {
	n := open(t, true)
	n.must("func mk(l Metre) {\n\tNewRod(\"q\", l)\n}")
	_, o := n.run(context.Background(), "x := 1\nNewRod(\"gap\", 600*metre)")
	want := []string{
		"cell 2, line 2: rod gap: length 600 m is not between 0 and 100 m; was mm meant?",
		"    NewRod(\"gap\", 600*metre)",
		"                  ^",
		"first set here: x (dropped)",
	}
	if o.Fault == nil || strings.Join(o.Fault.Traceback, "\n") != strings.Join(want, "\n") || o.Fault.Name != "OutOfRange" {
		t.Errorf("%+v", o.Fault)
	}
	_, o = n.run(context.Background(), "\nmk(600*metre)")
	if o.Fault == nil || !strings.Contains(strings.Join(o.Fault.Traceback, "\n"), "in mk, called from cell 3, line 2") ||
		!strings.HasPrefix(o.Fault.Text, "cell 1, line 2: ") {
		t.Errorf("%+v", o.Fault)
	}
}

// BenchmarkFirstCell measures a new session with its first cell.
func BenchmarkFirstCell(b *testing.B) {
	open(b, true)
	for b.Loop() {
		n := open(b, true)
		n.must("r := NewRod(\"a\", 5*mm)\nr")
	}
}

// BenchmarkCell measures an eight-line cell that changes each time.
func BenchmarkCell(b *testing.B) {
	n := open(b, true)
	i := 0
	for b.Loop() {
		i++
		n.must(fmt.Sprintf("a := %d.5 * mm\nr := NewRod(\"r\", 5*mm)\nsum := 0.0\nfor i := range 10 {\n\tsum += a * i\n}\nx := sum * 2\nr", i))
	}
}

// BenchmarkLoop measures a pass of a loop over floats.
func BenchmarkLoop(b *testing.B) {
	n := open(b, false)
	n.must(fmt.Sprintf("s := 0.0\nfor i := 0; i < %d; i++ {\n\ts += float64(i) * 0.5\n}", b.N))
}

// longCell is a cell of many lines, such as a long calculation.
func longCell(lines int) string {
	var b strings.Builder
	b.WriteString("x0 := 1.5 * mm\n")
	for i := 1; i < lines; i++ {
		switch i % 5 {
		case 0:
			fmt.Fprintf(&b, "r%d := NewRod(\"r\", 5*mm)\n", i)
		case 1:
			fmt.Fprintf(&b, "x%d := 2.5 * x%d\n", i, (i-1)/5*5)
		case 2:
			fmt.Fprintf(&b, "if x%d > 3*mm { fmt.Println(\"large\", x%d) }\n", i-1, i-1)
		case 3:
			fmt.Fprintf(&b, "for i := range 10 { _ = x%d * i }\n", i-2)
		case 4:
			fmt.Fprintf(&b, "x%d := sqrt(x%d * x0) + x0\n", i+1, i-3)
		}
	}
	return b.String()
}

// BenchmarkCheckAndLower measures the two stages before the interpreter: a cell of eight lines (aim 0.3 ms), one of 300
// (15 ms), a table of 5000 rows.
func BenchmarkCheckAndLower(b *testing.B) {
	var table strings.Builder
	table.WriteString("table := [][]float64{\n")
	for i := range 5000 {
		fmt.Fprintf(&table, "\t{%d, %g},\n", i, float64(i)*0.25)
	}
	table.WriteString("}\n")
	for _, c := range []struct{ name, src string }{
		{"8 lines", "a := 2.5 * mm\nr := NewRod(\"r\", 5*mm)\nsum := 0.0\nfor i := range 10 {\n\tsum += a * i\n}\nx := sum * 2\nr"},
		{"300 lines", longCell(300)},
		{"5000 rows", table.String()},
	} {
		b.Run(c.name, func(b *testing.B) {
			n := open(b, true)
			for b.Loop() {
				if ok, err := n.s.Lower(c.src); !ok || err != nil {
					b.Fatal(ok, err)
				}
			}
		})
	}
}

// BenchmarkTable measures a table of 5000 rows from its text to the value.
func BenchmarkTable(b *testing.B) {
	n := open(b, true)
	i := 0
	for b.Loop() {
		i++
		var table strings.Builder
		fmt.Fprintf(&table, "table := [][]float64{\n\t{%d, 1},\n", i)
		for i := range 5000 {
			fmt.Fprintf(&table, "\t{%d, %g},\n", i, float64(i)*0.25)
		}
		n.must(table.String() + "}\n")
	}
}

// BenchmarkComplete measures a completion with a thousand names in scope (aim 1 ms).
func BenchmarkComplete(b *testing.B) {
	n := open(b, true)
	var names strings.Builder
	for i := range 1000 {
		fmt.Fprintf(&names, "name%d := %d.5 * mm\n", i, i)
	}
	n.must(names.String() + "rod := NewRod(\"r\", 1*mm)\n")
	for b.Loop() {
		if len(n.s.Complete("y := rod.", 9).Matches) == 0 || len(n.s.Complete("name99", 6).Matches) == 0 {
			b.Fatal("nothing offered")
		}
	}
}
