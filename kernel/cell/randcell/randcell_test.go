package randcell_test

import (
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"

	"ampturn/kernel/cell/randcell"
)

// TestReferenceBuilds compiles references and runs them: every cell must end as it is meant to.
func TestReferenceBuilds(t *testing.T) {
	n := 200
	if testing.Short() {
		n = 20
	}
	var books []*randcell.Notebook
	for seed := range n {
		books = append(books, randcell.New(uint64(seed), randcell.Options{}))
	}
	dir := t.TempDir()
	file := filepath.Join(dir, "main.go")
	if err := os.WriteFile(file, []byte(randcell.Program(books, `fmt.Sprintf("%.4g", x)`)), 0o600); err != nil {
		t.Fatal(err)
	}
	binary := filepath.Join(dir, "reference")
	if out, err := exec.Command("go", "build", "-gcflags=-e", "-o", binary, file).CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	out, err := exec.Command(binary).Output()
	if err != nil {
		t.Fatal(err)
	}
	outputs := randcell.Outputs(string(out))
	for _, b := range books {
		cells := outputs[strconv.FormatUint(b.Seed, 10)]
		if len(cells) != len(b.Cells) {
			t.Fatalf("notebook %d has %d cells, its reference %d", b.Seed, len(b.Cells), len(cells))
		}
		for i, c := range b.Cells {
			end := randcell.Ending(c.Outcome)
			if len(cells[i]) < len(end) || cells[i][len(cells[i])-len(end):] != end {
				t.Errorf("notebook %d, cell %d should end with %q:\n%s\n%s", b.Seed, i+1, end, c.Source, cells[i])
			}
		}
	}
}
