package draw

import (
	"context"
	"math/rand"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// measure is a page's script that lists texts that leave their picture or cover each other, as the browser sets them.
const measure = `<script>addEventListener("load",()=>{let bad=[];for(const svg of document.querySelectorAll("svg")){
const v=svg.viewBox.baseVal,t=[...svg.querySelectorAll("text")].filter(e=>e.textContent).map(e=>[e.getBBox(),e.textContent]);
t.forEach(([b,s],i)=>{if(b.x<0||b.y<0||b.x+b.width>v.width||b.y+b.height>v.height)bad.push("outside: "+s);
for(const [c,r] of t.slice(0,i))if(b.x<c.x+c.width&&c.x<b.x+b.width&&b.y<c.y+c.height&&c.y<b.y+b.height)bad.push("overlap: "+r+" | "+s)})}
document.body.setAttribute("data-bad",bad.join("; "));document.body.setAttribute("data-pictures",document.querySelectorAll("svg").length)})</script>`

// TestTextsInBrowser measures the boxes of all texts in a real browser: the one that AMPTURN_CHROMIUM names, or one in PATH.
func TestTextsInBrowser(t *testing.T) {
	browser := os.Getenv("AMPTURN_CHROMIUM")
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if browser == "" {
			browser, _ = exec.LookPath(name) // not found: the next name
		}
	}
	if browser == "" {
		t.Skip("no Chromium: AMPTURN_CHROMIUM is not set and PATH has none")
	}
	page := "<!doctype html><meta charset=utf-8><body>" + measure
	add := func(p Picture, err error) {
		if err != nil {
			t.Fatal(err)
		}
		page += p.SVG
	}
	add(threeLimb().Draw())
	rnd := rand.New(rand.NewSource(3))
	for range 30 {
		add(randomNetwork(rnd).Draw())
	}
	for name, s := range maps(t) {
		add(FieldMap(name, s), nil)
	}
	dir := t.TempDir()
	file := filepath.Join(dir, "page.html")
	if err := os.WriteFile(file, []byte(page), 0o644); err != nil {
		t.Fatal(err)
	}
	ctx, stop := context.WithTimeout(context.Background(), time.Minute)
	defer stop()
	out, err := exec.CommandContext(ctx, browser, "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
		"--disable-background-networking", "--disable-component-update", "--disable-sync", "--user-data-dir="+filepath.Join(dir, "profile"),
		"--dump-dom", "file://"+file).Output()
	if err != nil {
		t.Fatal(err)
	}
	_, rest, ok := strings.Cut(string(out), `data-bad="`)
	if !ok || !strings.Contains(string(out), `data-pictures="37"`) {
		t.Fatalf("the page did not measure its pictures: %.300s", out)
	}
	if bad, _, _ := strings.Cut(rest, `"`); bad != "" {
		t.Errorf("%s", bad)
	}
}
