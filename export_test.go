package main

import (
	"bytes"
	"context"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"ampturn/dsl/session"
	"ampturn/kernel"
	"ampturn/kernel/notebook"
)

const exported = `// %%
type Case struct {
	Name string
	I    Ampere
}
fer := NewMaterial("ferrite", Froehlich(2200, 0.49*tesla))
choke := func(gap Metre) *MagneticCircuit {
	c := Magnetic("L1")
	c.Ring("core", Leg(fer, 46*mm, Disc(8.9*mm)), Gap(gap), Winding("N", 7*turn))
	return c
}

// %%
n := 3
for i := range n {
	op := choke((i + 1) * 0.1 * mm).Solve(Currents{"N": 2 * amp})
	Show(op.Inductance("N"))
	fmt.Println(i, op.FluxDensity("core"))
}

// %%
cases := []Case{{"low", 1 * amp}, {"high", 13 * amp}}
cases
total := 0.0
for _, k := range cases {
	Corner(k.Name)
	op := choke(0.45 * mm).Solve(Currents{"N": k.I})
	Limit("flux density", op.FluxDensity("core"), AtMost(0.32*tesla), op)
	total += op.Energy()
}
total
Verdicts()
rand.Float64()
choke
`

// TestExport writes a notebook as a Go program; go run prints what the cells show, number by number.
func TestExport(t *testing.T) {
	path := filepath.Join(t.TempDir(), "choke.go")
	if err := os.WriteFile(path, []byte(exported), 0o600); err != nil {
		t.Fatal(err)
	}
	checkExport(t, path)
}

// TestExportedExamples does so with every example.
func TestExportedExamples(t *testing.T) {
	if testing.Short() {
		t.Skip("programs of all examples take longer")
	}
	examples, err := filepath.Glob("notebooks-examples/*.ipynb")
	if err != nil || len(examples) == 0 {
		t.Fatal("no examples", err)
	}
	for _, e := range examples {
		t.Run(filepath.Base(e), func(t *testing.T) { checkExport(t, e) })
	}
}

func checkExport(t *testing.T, path string) {
	text, err := export(path)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "main.go")
	if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("go", "run", file)
	var trouble bytes.Buffer
	cmd.Stderr = &trouble
	got, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v\n%s", err, trouble.String())
	}
	want := shownBy(t, path)
	if string(got) != want {
		t.Errorf("%s: the program prints\n%s\nthe cells show\n%s", path, got, want)
	}
	if strings.Count(want, "\n") < 5 {
		t.Errorf("%s shows little:\n%s", path, want)
	}
}

// shownBy runs a notebook and gives as text what its cells show, in the order in which they show it.
func shownBy(t *testing.T, path string) string {
	nb, err := notebook.Read(path)
	if err != nil {
		t.Fatal(err)
	}
	session.SetFolder(filepath.Dir(path))
	engine, err := newEngine()
	if err != nil {
		t.Fatal(err)
	}
	var mu sync.Mutex
	var b strings.Builder
	sink := func(o kernel.Output) {
		mu.Lock()
		defer mu.Unlock()
		switch {
		case o.Kind == kernel.Stream && o.Name == "stdout":
			b.WriteString(o.Text)
		case o.Kind == kernel.Display, o.Kind == kernel.Update, o.Kind == kernel.Result:
			text, _ := o.Data["text/plain"].(string)
			b.WriteString(text + "\n")
		}
	}
	for _, c := range codeCells(nb) {
		if o := engine.Run(context.Background(), c, sink); o.Fault != nil {
			t.Fatal(strings.Join(o.Fault.Traceback, "\n"))
		}
	}
	session.Attach(pass(sink))
	session.Finish()
	mu.Lock()
	defer mu.Unlock()
	return b.String()
}
