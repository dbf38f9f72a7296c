package main

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"sort"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/cell"
	"ampturn/kernel/cell/randcell"
)

// The differential test runs random notebooks twice: cell by cell as a kernel does, and as one Go program that the
// compiler built from the stated rule. Both must print the same.
//
// Notebooks of fixed seeds gate. Notebooks of a seed that is new each time run beside them: a difference there is
// printed with the notebook, counted, and does not fail the test; AMPTURN_SEED repeats such a run.
// AMPTURN_NOTEBOOKS=20000 runs more fixed ones.

const (
	fixedNotebooks = 2000
	freshNotebooks = 500
	shortNotebooks = 60
	perBinary      = 250
)

// calls are the expressions of the vocabulary in random notebooks. Units cancel, so that the values go with any other.
var calls = randcell.Options{
	Package: "dsl",
	Units:   []string{"mm", "um", "cm"},
	Snippets: []randcell.Snippet{
		{Name: "Rect", Text: "(@Rect($1*mm, $2*mm).Gross()/mm2)"},
		{Name: "Disc", Text: "(@Disc($1*mm).Metal()/mm2)"},
		{Name: "Annulus", Text: "(@Annulus((10 + $1)*mm, $2*mm).Gross()/mm2)"},
		{Name: "Stacking", Text: "(@Area($1*mm2).Stacking(0.95).Metal()/mm2)"},
		{Name: "LawOf", Text: "(@LawOf(func(h @AmperePerMetre) @Tesla { return (1 + $1) * mu0 * h }).FluxDensity(100*$2)/tesla)"},
		{Name: "Span", Text: "@Span(0, $1, 5)[3]"},
		{Name: "refused section", Text: "@Rect(-$1*mm, $2*mm).Gross()", Fails: true},
		{Name: "refused annulus", Text: "@Annulus($1*mm, 20*mm).Gross()", Fails: true},
	},
}

// referenceUnits gives the reference the units that the calls name.
const referenceUnits = "\nconst mm, um, cm, mm2, tesla, mu0 = 1e-3, 1e-6, 1e-2, 1e-6, 1, 1.256637061435917295385057353311801153678867759750e-6\n\nvar _ = dsl.Rect\n"

func TestDifferential(t *testing.T) {
	fixed, fresh := fixedNotebooks, freshNotebooks
	if testing.Short() {
		fixed, fresh = shortNotebooks, 0
	}
	if s := os.Getenv("AMPTURN_NOTEBOOKS"); s != "" {
		n, err := strconv.Atoi(s)
		if err != nil {
			t.Fatal(err)
		}
		fixed = n
	}
	seed := uint64(time.Now().UnixNano()) % 1e9 * 1e3
	if s := os.Getenv("AMPTURN_SEED"); s != "" {
		n, err := strconv.ParseUint(s, 10, 64)
		if err != nil {
			t.Fatal(err)
		}
		seed = n
	}
	seed = max(seed, 1e9)
	var books []*randcell.Notebook
	for i := range fixed {
		books = append(books, randcell.New(uint64(i), calls))
	}
	for i := range fresh {
		books = append(books, randcell.New(seed+uint64(i), calls))
	}
	differences := make([]string, len(books))
	each(len(books), perBinary, func(from, to int) {
		want, err := referenceOutputs(t, books[from:to], from/perBinary)
		if err != nil && from >= fixed {
			t.Logf("of the fresh seed, a fault of the generator: %v", err)
			return
		}
		if err != nil {
			t.Error(err)
			return
		}
		for i := from; i < to; i++ {
			differences[i] = difference(books[i], want[strconv.FormatUint(books[i].Seed, 10)])
		}
	})
	report(t, books, differences, fixed, seed)
}

// each calls do for pieces of a range, as many at a time as there are processors.
func each(n, piece int, do func(from, to int)) {
	var wait sync.WaitGroup
	turn := make(chan struct{}, runtime.GOMAXPROCS(0))
	for from := 0; from < n; from += piece {
		wait.Add(1)
		turn <- struct{}{}
		go func() {
			defer wait.Done()
			do(from, min(from+piece, n))
			<-turn
		}()
	}
	wait.Wait()
}

// referenceOutputs builds the references of notebooks and runs them. The program stands in no folder: an overlay shows
// it to the go command as part of this module.
func referenceOutputs(t *testing.T, books []*randcell.Notebook, number int) (map[string][]string, error) {
	dir := t.TempDir()
	text := randcell.Program(books, `phys.Format(x, "")`, "ampturn/dsl", "ampturn/magcirc/phys") + referenceUnits
	binary, err := buildOverlay(dir, fmt.Sprintf("zzreference%d", number), map[string]string{"main.go": text})
	if err != nil {
		return nil, err
	}
	out, err := exec.Command(binary).Output()
	if err != nil {
		return nil, fmt.Errorf("reference %d: %w", number, err)
	}
	return randcell.Outputs(string(out)), nil
}

// buildOverlay builds a program of files that the go command sees in a folder of the module.
func buildOverlay(dir, folder string, files map[string]string) (binary string, err error) {
	root, err := os.Getwd()
	if err != nil {
		return "", err
	}
	replace := map[string]string{}
	for name, text := range files {
		real := filepath.Join(dir, strings.ReplaceAll(name, "/", "_"))
		if err := os.WriteFile(real, []byte(text), 0o600); err != nil {
			return "", err
		}
		replace[filepath.Join(root, folder, filepath.FromSlash(name))] = real
	}
	overlay, err := json.Marshal(map[string]any{"Replace": replace})
	if err != nil {
		return "", err
	}
	list := filepath.Join(dir, "overlay.json")
	if err := os.WriteFile(list, overlay, 0o600); err != nil {
		return "", err
	}
	binary = filepath.Join(dir, "program")
	cmd := exec.Command("go", "build", "-gcflags=-N -l -e", "-ldflags=-s -w", "-overlay", list, "-o", binary, "./"+folder)
	if out, err := cmd.CombinedOutput(); err != nil {
		return "", fmt.Errorf("%s does not build: %w\n%.9000s", folder, err, out)
	}
	return binary, nil
}

// difference runs a notebook and tells where it departs from what it should print; "" if nowhere.
func difference(b *randcell.Notebook, want []string) string {
	if len(want) != len(b.Cells) {
		return fmt.Sprintf("the reference has %d cells, the notebook %d", len(want), len(b.Cells))
	}
	s, err := cell.New(sharedVocabulary(), cell.Hooks{})
	if err != nil {
		return err.Error()
	}
	for i, c := range b.Cells {
		got, note := runCell(s, i+1, c.Source)
		if got == want[i] {
			continue
		}
		return fmt.Sprintf("notebook %d, cell %d (%s): got\n%s%s\nwant\n%s\n%s", b.Seed, i+1, c.Outcome, got, note, want[i], asProbe(b, i))
	}
	return ""
}

var sharedVocabulary = sync.OnceValue(vocabulary)

// runCell runs a cell and writes what it prints and shows, and how it ended, as a reference does.
func runCell(s *cell.Session, number int, source string) (text, note string) {
	ctx, cancel := context.WithTimeout(context.Background(), time.Minute)
	defer cancel()
	var mu sync.Mutex
	var b strings.Builder
	o := s.Run(ctx, kernel.Cell{Number: number, Source: source}, func(o kernel.Output) {
		mu.Lock()
		defer mu.Unlock()
		switch {
		case o.Kind == kernel.Stream && o.Name == "stdout":
			b.WriteString(o.Text)
			if o.Text == randcell.Spinning+"\n" {
				cancel()
			}
		case o.Kind == kernel.Result:
			text, _ := o.Data["text/plain"].(string)
			b.WriteString("=> " + strings.TrimSuffix(text, "  (unit not traced)") + "\n")
		}
	})
	mu.Lock()
	defer mu.Unlock()
	outcome := randcell.Runs
	switch {
	case o.Interrupted:
		outcome = randcell.Interrupted
	case o.Fault == nil:
	case o.Fault.Name == "CheckError", o.Fault.Name == "SyntaxError", o.Fault.Name == "UnitError":
		outcome = randcell.Refused
	case o.Fault.Name == "InternalError":
		outcome, note = randcell.Refused, "internal: "
	default:
		outcome = randcell.Fails
	}
	if o.Fault != nil {
		note += strings.Join(o.Fault.Traceback, "\n")
	}
	return b.String() + randcell.Ending(outcome), note
}

// asProbe writes the cells of a notebook up to one of them in the form of testdata/cells/probes.
func asProbe(b *randcell.Notebook, last int) string {
	var s strings.Builder
	fmt.Fprintf(&s, "-- notebook %d --\n", b.Seed)
	for i := range last + 1 {
		s.WriteString("-- in --\n" + b.Cells[i].Source)
	}
	return s.String()
}

func report(t *testing.T, books []*randcell.Notebook, differences []string, fixed int, seed uint64) {
	uses := map[string]int{}
	cells, fresh := 0, 0
	for i, b := range books {
		if i < fixed {
			for c, n := range b.Uses {
				uses[c] += n
			}
		}
		cells += len(b.Cells)
		switch {
		case differences[i] == "":
		case i < fixed:
			t.Errorf("%s", differences[i])
		default:
			fresh++
			t.Logf("a difference in a notebook of the fresh seed:\n%s", differences[i])
		}
	}
	var names []string
	for c := range uses {
		names = append(names, c)
	}
	for _, c := range randcell.Constructs() {
		if uses[c] == 0 {
			names = append(names, c)
		}
	}
	sort.Strings(names)
	var lines []string
	for _, c := range names {
		lines = append(lines, fmt.Sprintf("%6d %s", uses[c], c))
		if uses[c] < 50 && fixed >= fixedNotebooks {
			t.Errorf("%q occurs %d times only", c, uses[c])
		}
	}
	t.Logf("%d notebooks of fixed seeds, %d from seed %d on (%d differences), %d cells; constructs in the fixed ones:\n%s",
		fixed, len(books)-fixed, seed, fresh, cells, strings.Join(lines, "\n"))
}
