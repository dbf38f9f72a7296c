package stream

import (
	"sync"
	"time"
)

// Pace lets a burst through at once and then a steady rate. It is safe for use by several goroutines.
type Pace struct {
	burst, rate float64 // units; units per second

	mu    sync.Mutex
	level float64 // units free now
	last  time.Time
	now   func() time.Time
	sleep func(d time.Duration, done <-chan struct{})
}

// NewPace gives a pace of burst units at once and rate units a second.
func NewPace(burst, rate float64) *Pace {
	return &Pace{burst: burst, rate: rate, level: burst, now: time.Now, sleep: sleep}
}

// Take waits until n units may pass, or until done is closed. More than the burst passes once the debt of what went
// before is paid. A nil Pace never waits.
func (p *Pace) Take(n float64, done <-chan struct{}) {
	if p == nil {
		return
	}
	if wait := p.book(n); wait > 0 {
		p.sleep(wait, done)
	}
}

// book takes n units and tells how long to wait for them.
func (p *Pace) book(n float64) time.Duration {
	p.mu.Lock()
	defer p.mu.Unlock()
	t := p.now()
	if !p.last.IsZero() {
		p.level = min(p.burst, p.level+p.rate*t.Sub(p.last).Seconds())
	}
	p.last = t
	p.level -= n
	if p.level >= 0 {
		return 0
	}
	return time.Duration(-p.level / p.rate * float64(time.Second))
}

func sleep(d time.Duration, done <-chan struct{}) {
	t := time.NewTimer(d)
	defer t.Stop()
	select {
	case <-t.C:
	case <-done:
	}
}
