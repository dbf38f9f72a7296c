package main

import (
	"bufio"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// BenchmarkStart measures from the start of the built binary's process to the line of the first cell, and to the end of
// the notebook. The aim is 0.3 s to the first line.
func BenchmarkStart(b *testing.B) {
	dir := b.TempDir()
	bin := filepath.Join(dir, "ampturn")
	if out, err := exec.Command("go", "build", "-o", bin, ".").CombinedOutput(); err != nil {
		b.Fatalf("go build: %v\n%s", err, out)
	}
	text := "// %%\nNewMaterial(\"ferrite\", Linear(2000))\n\n// %%\n1 + 1\n"
	file := filepath.Join(dir, "first.go")
	if err := os.WriteFile(file, []byte(text), 0o644); err != nil {
		b.Fatal(err)
	}
	var first time.Duration
	for b.Loop() {
		cmd := exec.Command(bin, "run", "--out", filepath.Join(dir, "out"), file)
		lines, err := cmd.StdoutPipe()
		if err != nil {
			b.Fatal(err)
		}
		start := time.Now()
		if err := cmd.Start(); err != nil {
			b.Fatal(err)
		}
		seen := false
		for in := bufio.NewScanner(lines); in.Scan(); {
			if !seen && strings.Contains(in.Text(), "1/2 ") {
				first, seen = first+time.Since(start), true
			}
		}
		if err := cmd.Wait(); err != nil || !seen {
			b.Fatalf("the run: %v, first cell seen: %v", err, seen)
		}
	}
	b.ReportMetric(first.Seconds()*1e3/float64(b.N), "ms/first-cell")
}
