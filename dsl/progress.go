package dsl

import (
	"fmt"
	"html"
	"math"
	"strconv"
	"sync"
	"time"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/tol"
)

// ProgressBar tells how far a long cell is, in one display that is updated in place.
type ProgressBar struct {
	mu      sync.Mutex
	id      string
	what    string
	total   float64
	done    float64
	begun   time.Time
	shown   time.Time
	written string
}

// The first content of a display that counts comes at once; later ones are at least a tenth of a second apart.
const progressEvery = 100 * time.Millisecond

var bars struct {
	sync.Mutex
	count int
	open  []*ProgressBar // of the running cell
}

func init() {
	session.OnReset(func() { bars.count, bars.open = 0, nil })
	session.OnEnd(func(string, bool) { closeBars() })
}

// Progress shows how far a loop of so many steps is and about how long the rest takes.
//
//	p := Progress(len(gaps))
//	for _, g := range gaps {
//		...
//		p.Step()
//	}
func Progress(total Count) *ProgressBar {
	if total != math.Trunc(total) || total < 1 || total > 1e12 {
		refuseValue(magcirc.BadValue, "Progress", "number of steps", total, 1, "", "is not a whole number from 1", "write Progress(100)")
	}
	p := &ProgressBar{total: total, begun: time.Now()}
	p.open()
	return p
}

// open shows the display.
func (p *ProgressBar) open() {
	bars.Lock()
	bars.count++
	p.id = "progress-" + strconv.Itoa(bars.count) + "-" + strconv.Itoa(session.Serial())
	bars.open = append(bars.open, p)
	bars.Unlock()
	p.shown = time.Now()
	session.PlaceWith(p.id, p.bundle(p.shown), progressMark)
}

// progressMark tells those who compare outputs that the display is no result.
var progressMark = map[string]any{"ampturn": map[string]any{"progress": true}}

// Step tells that one more step is done.
func (p *ProgressBar) Step() {
	p.given()
	p.mu.Lock()
	defer p.mu.Unlock()
	p.to(p.done + 1)
}

// Done tells how many steps are done.
func (p *ProgressBar) Done(count Count) {
	p.given()
	wantRange("Progress", "steps done", count, 0, p.total, "")
	p.mu.Lock()
	defer p.mu.Unlock()
	p.to(count)
}

func (p *ProgressBar) given() {
	if p == nil {
		refuse(magcirc.BadValue, "progress", "there is none", "make it with Progress(100)")
	}
}

// to counts, and shows the count if it is time.
func (p *ProgressBar) to(done float64) {
	p.done = done
	if p.total > 0 {
		p.done = math.Min(done, p.total)
	}
	now := time.Now()
	if p.done != p.total && now.Sub(p.shown) < progressEvery {
		return
	}
	p.shown = now
	p.update(p.bundle(now))
}

func (p *ProgressBar) update(data map[string]any) {
	if text := data["text/plain"].(string); text != p.written {
		p.written = text
		session.UpdateWith(p.id, data, progressMark)
	}
}

// bundle writes the count, with the time that the rest takes at the pace so far.
func (p *ProgressBar) bundle(now time.Time) map[string]any {
	text := p.count()
	switch {
	case p.total == 0:
		text += fmt.Sprintf(" in %.0f s", now.Sub(p.begun).Seconds())
	case p.done == p.total:
		text += " done"
	case p.done > 0:
		rest := now.Sub(p.begun).Seconds() * (p.total - p.done) / p.done
		text += fmt.Sprintf(", %.0f %%, about %s left", math.Floor(100*p.done/p.total), span(rest))
	}
	return p.words(text)
}

func (p *ProgressBar) count() string {
	text := whole(p.done) + " of " + whole(p.total)
	if p.total == 0 {
		text = whole(p.done) + " steps"
	}
	if p.what != "" {
		text = p.what + ": " + text
	}
	return text
}

func (p *ProgressBar) words(text string) map[string]any {
	bar := ""
	if p.total > 0 {
		bar = `<progress max="` + whole(p.total) + `" value="` + whole(p.done) + `"></progress> `
	}
	return doc.Bundle(text, `<p class="progress">`+bar+html.EscapeString(text)+`</p>`, "")
}

func whole(x float64) string { return strconv.FormatFloat(x, 'f', 0, 64) }

// span says a time in s as one would aloud.
func span(s float64) string {
	switch {
	case s < 90:
		return fmt.Sprintf("%.0f s", math.Ceil(s))
	case s < 90*60:
		return fmt.Sprintf("%.0f min", math.Ceil(s/60))
	}
	return fmt.Sprintf("%.1f h", s/3600)
}

// MIMEBundle shows nothing: the display is there.
func (p *ProgressBar) MIMEBundle() map[string]any { return nil }

// closeBars ends the displays of a cell: a count that did not get to its end says so.
func closeBars() {
	bars.Lock()
	open := bars.open
	bars.open = nil
	bars.Unlock()
	for _, p := range open {
		p.mu.Lock()
		switch {
		case p.total == 0:
			p.update(p.words(p.count() + " done"))
		case p.done < p.total:
			p.update(p.words("stopped at " + p.count()))
		}
		p.mu.Unlock()
	}
}

// sweepAfter is how long a compiled sweep takes before it tells how far it is.
const sweepAfter = time.Second

// sweep counts the calls of a long compiled computation. It shows nothing unless somebody looks on and it takes long.
type sweep struct {
	mu    sync.Mutex
	what  string
	total float64
	done  float64
	begun time.Time
	bar   *ProgressBar
}

// watched gives a function that counts its calls; a total of 0 is one that nobody knows.
func watched(what string, total float64, f tol.Function) tol.Function {
	if !session.Live() {
		return f
	}
	s := &sweep{what: what, total: total, begun: time.Now()}
	return func(x []float64) (float64, error) {
		defer s.step()
		return f(x)
	}
}

// step counts a call.
func (s *sweep) step() {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.done++
	if s.bar == nil {
		if time.Since(s.begun) < sweepAfter {
			return
		}
		s.bar = &ProgressBar{what: s.what, total: s.total, begun: s.begun}
		s.bar.done = s.done
		s.bar.open()
		return
	}
	s.bar.mu.Lock()
	defer s.bar.mu.Unlock()
	s.bar.to(s.done)
}
