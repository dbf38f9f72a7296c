package main

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"ampturn/kernel/kerneltest/browser"
)

// examples reads the exit code that each example must end with.
func examples(t *testing.T) map[string]int {
	t.Helper()
	text, err := os.ReadFile(".ci/examples")
	if err != nil {
		t.Fatal(err)
	}
	codes := map[string]int{}
	for line := range strings.Lines(string(text)) {
		var code int
		var name string
		if n, _ := fmt.Sscan(line, &code, &name); n == 2 {
			codes[name] = code
		}
	}
	return codes
}

// TestExamplesInBrowser runs each example and looks at its page in a browser: it loads nothing and runs nothing, every
// text of a drawing lies inside its picture and over no other, in light and in dark; printed on A4 and letter nothing is
// wider than the sheet.
func TestExamplesInBrowser(t *testing.T) {
	codes := examples(t)
	files, err := filepath.Glob("notebooks-examples/*.ipynb")
	if err != nil || len(files) != len(codes) {
		t.Fatalf("%d examples, %d expected (%v)", len(files), len(codes), err)
	}
	out := t.TempDir()
	for _, file := range files {
		name := filepath.Base(file)
		cmd := exec.Command(ampturn(t), "run", "--out", out, file)
		said, _ := cmd.CombinedOutput() // the exit code is looked at below
		if want, known := codes[name]; !known || cmd.ProcessState.ExitCode() != want {
			t.Fatalf("%s: exit code %d, want %d\n%s", name, cmd.ProcessState.ExitCode(), want, said)
		}
		t.Run(name, func(t *testing.T) { look(t, filepath.Join(out, strings.TrimSuffix(name, ".ipynb")+".html"), 12) })
	}
}

// look opens a page, measures it on the screen and on paper, where it may take so many sheets.
func look(t *testing.T, file string, most int) {
	ctx := browser.Start(t)
	address := "file://" + file
	w := browser.Watch(t, ctx, address)
	browser.Run(t, ctx, chromedp.Navigate(address), chromedp.WaitReady(chromedp.CSS("main")))
	for _, colours := range []string{"light", "dark"} {
		for _, width := range []int64{1200, 800, 390} {
			browser.Run(t, ctx, browser.Media("", colours), chromedp.EmulateViewport(width, 1000))
			browser.Shoot(t, ctx, fmt.Sprintf("%s-%d.png", colours, width))
			for what, js := range map[string]string{"out of the window": browser.Overflows, "texts of drawings": browser.Drawings, "contrast below 4.5": browser.Contrasts} {
				if list := browser.Ask[[]string](t, ctx, js); len(list) > 0 {
					t.Errorf("%s, %d px, %s: %q", colours, width, what, list)
				}
			}
		}
	}
	for _, paper := range browser.Papers {
		browser.Run(t, ctx, browser.Media("", "dark"))
		if sheets := browser.Print(t, ctx, paper); sheets < 1 || sheets > most {
			t.Errorf("%s: %d sheets", paper.Name, sheets)
		}
		if list := browser.OnPaper(t, ctx, paper); len(list) > 0 {
			t.Errorf("%s: wider than the sheet: %q", paper.Name, list)
		}
		if list := browser.Ask[[]string](t, ctx, browser.Drawings); len(list) > 0 {
			t.Errorf("%s: texts of drawings: %q", paper.Name, list)
		}
	}
	if list := w.List(); len(list) > 0 {
		t.Errorf("the page did: %q", list)
	}
}
