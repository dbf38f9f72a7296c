package cell_test

import (
	"path/filepath"
	"strings"
	"testing"
	"time"

	"os"

	"github.com/rogpeppe/go-internal/txtar"

	"ampturn/kernel"
	"ampturn/kernel/cell"
)

// seeds adds the cells of all probes.
func seeds(f *testing.F) {
	files, err := filepath.Glob("testdata/cells/*.txtar")
	if err != nil {
		f.Fatal(err)
	}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		for _, p := range probes(txtar.Parse(data)) {
			for _, s := range p.steps {
				if s.Name == "in" {
					f.Add(string(s.Data))
				}
			}
		}
	}
}

// within fails if the work of a text takes longer than texts of this size may.
func within(t *testing.T, src string, do func()) {
	begun := time.Now()
	do()
	if d := time.Since(begun); d > 5*time.Second {
		t.Errorf("%v for %d bytes", d, len(src))
	}
}

func FuzzSplit(f *testing.F) {
	seeds(f)
	f.Fuzz(func(t *testing.T, src string) {
		within(t, src, func() {
			if _, err := cell.Split(src); err != nil {
				t.Error(err)
			}
		})
	})
}

func FuzzCheck(f *testing.F) {
	seeds(f)
	f.Fuzz(func(t *testing.T, src string) {
		s := open(t, true).s
		within(t, src, func() {
			s.Check(src)
			s.Complete(src, len([]rune(src))/2)
			s.Inspect(src, len([]rune(src))/2)
			s.IsComplete(src)
		})
	})
}

// FuzzLower demands that what passes the check is lowered, and that the lowered text is Go.
func FuzzLower(f *testing.F) {
	seeds(f)
	f.Fuzz(func(t *testing.T, src string) {
		s := open(t, true).s
		within(t, src, func() {
			ok, err := s.Lower(src)
			if err != nil {
				t.Fatal(err)
			}
			if !ok {
				return
			}
			if _, fault := open(t, true).s.Export("fuzz", []kernel.Cell{{Number: 1, Source: src}}, cell.Harness{}); fault != nil {
				t.Fatal(strings.Join(fault.Traceback, "\n"))
			}
		})
	})
}
