package stream

import (
	"fmt"
	"strings"
	"sync"
	"time"
	"unicode/utf8"
)

// Limits bounds the text of a cell. The zero value of a field means its default.
type Limits struct {
	First time.Duration // how long the first text waits for more: 10 ms
	Every time.Duration // how long later text waits for more: 40 ms
	Chunk int           // most bytes of a message: 128 KiB
	Lines int           // most lines shown as they come: 50 000
	Bytes int           // most bytes shown as they come: 32 MiB
	Tail  int           // most bytes of the end, shown when the cell ends: 16 KiB
	Pace  *Pace         // shared by all cells; nil: none
}

func (l *Limits) withDefaults() Limits {
	var v Limits
	if l != nil {
		v = *l
	}
	or := func(p *int, value int) {
		if *p == 0 {
			*p = value
		}
	}
	or(&v.Chunk, 128<<10)
	or(&v.Lines, 50_000)
	or(&v.Bytes, 32<<20)
	or(&v.Tail, 16<<10)
	if v.First == 0 {
		v.First = 10 * time.Millisecond
	}
	if v.Every == 0 {
		v.Every = 40 * time.Millisecond
	}
	return v
}

// Emit takes the text of one message.
type Emit func(name, text string)

// segment is text of one stream that waits to be sent.
type segment struct {
	name string
	text strings.Builder
}

// Writer takes what one cell prints. It is safe for use by several goroutines; text goes out in the order of the
// calls.
type Writer struct {
	limit Limits
	emit  Emit
	done  <-chan struct{} // closed: no more waiting for front ends

	mu      sync.Mutex
	pending []*segment
	waiting int
	timer   *time.Timer
	sent    bool              // something was sent
	carry   map[string]string // by stream: the first bytes of a character whose rest has yet to come
	lines   int
	bytes   int
	cut     *cut
}

// NewWriter gives a writer that sends its messages to emit. Once done is closed it no longer slows the cell down.
func NewWriter(emit Emit, done <-chan struct{}, l *Limits) *Writer {
	return &Writer{limit: l.withDefaults(), emit: emit, done: done, carry: make(map[string]string)}
}

// Write takes text of a stream, "stdout" or "stderr". What is not UTF-8 in it is shown as U+FFFD.
func (w *Writer) Write(name, text string) {
	w.mu.Lock()
	defer w.mu.Unlock()
	text = w.whole(name, text)
	if text == "" {
		return
	}
	w.add(name, w.count(name, text))
	switch {
	case w.waiting >= w.limit.Chunk:
		w.flush()
	case w.waiting > 0 && w.timer == nil:
		d := w.limit.First
		if w.sent {
			d = w.limit.Every
		}
		w.timer = time.AfterFunc(d, w.Flush)
	}
}

// Flush sends what is waiting.
func (w *Writer) Flush() {
	w.mu.Lock()
	defer w.mu.Unlock()
	w.flush()
}

// End sends what is waiting and, if text was left out, its end and its count. Text may still be written afterwards;
// it waits for front ends until done is closed.
func (w *Writer) End(done <-chan struct{}) {
	w.mu.Lock()
	defer w.mu.Unlock()
	defer func() { w.done = done }()
	for _, name := range []string{"stdout", "stderr"} {
		if w.carry[name] != "" {
			w.carry[name] = ""
			w.add(name, "\uFFFD")
		}
	}
	if w.cut != nil {
		w.add(w.cut.name, w.cut.end())
		w.cut = &cut{name: w.cut.name, size: w.limit.Tail}
	}
	w.flush()
}

// whole gives the complete characters of text and keeps a last incomplete one for later.
func (w *Writer) whole(name, text string) string {
	text = w.carry[name] + text
	w.carry[name] = ""
	for n := 1; n < utf8.UTFMax && n <= len(text); n++ {
		if c := text[len(text)-n]; utf8.RuneStart(c) {
			if !utf8.FullRuneInString(text[len(text)-n:]) {
				w.carry[name] = text[len(text)-n:]
				text = text[:len(text)-n]
			}
			break
		}
	}
	return strings.ToValidUTF8(text, "\uFFFD")
}

// count gives the part of text that is shown now; the rest is kept as the end.
func (w *Writer) count(name, text string) string {
	if w.cut != nil {
		w.cut.write(text)
		return ""
	}
	n := w.fits(text)
	w.bytes += n
	w.lines += strings.Count(text[:n], "\n")
	if n == len(text) {
		return text
	}
	w.cut = &cut{name: name, size: w.limit.Tail}
	w.cut.write(text[n:])
	return text[:n] + fmt.Sprintf("\n... output is cut here, after %d lines and %d bytes; "+
		"its end is shown when the cell ends\n", w.lines, w.bytes)
}

// fits gives how many bytes of text are within the limits, up to a whole line or character.
func (w *Writer) fits(text string) int {
	n := len(text)
	if room := w.limit.Bytes - w.bytes; n > room {
		n = boundary(text, room)
	}
	room := w.limit.Lines - w.lines
	if strings.Count(text[:n], "\n") <= room {
		return n
	}
	at := 0
	for ; room > 0; room-- {
		at += strings.IndexByte(text[at:], '\n') + 1
	}
	return at
}

// boundary gives the last place up to n where a character begins.
func boundary(text string, n int) int {
	for n > 0 && n < len(text) && !utf8.RuneStart(text[n]) {
		n--
	}
	return n
}

func (w *Writer) add(name, text string) {
	if text == "" {
		return
	}
	k := len(w.pending)
	if k == 0 || w.pending[k-1].name != name {
		w.pending = append(w.pending, &segment{name: name})
		k++
	}
	w.pending[k-1].text.WriteString(text)
	w.waiting += len(text)
}

func (w *Writer) flush() {
	if w.timer != nil {
		w.timer.Stop()
		w.timer = nil
	}
	for _, s := range w.pending {
		w.send(s.name, Fold(s.text.String()))
	}
	w.pending, w.waiting = nil, 0
}

// send cuts text into messages, after a line end where there is one.
func (w *Writer) send(name, text string) {
	for text != "" {
		n := len(text)
		if n > w.limit.Chunk {
			n = boundary(text, w.limit.Chunk)
			if at := strings.LastIndexByte(text[:n], '\n'); at >= 0 {
				n = at + 1
			}
		}
		w.limit.Pace.Take(float64(n), w.done)
		w.emit(name, text[:n])
		w.sent = true
		text = text[n:]
	}
}

// cut keeps the end of the text that is not shown.
type cut struct {
	name  string
	size  int
	tail  []byte
	lines int
	bytes int
}

func (c *cut) write(text string) {
	c.bytes += len(text)
	c.lines += strings.Count(text, "\n")
	if len(text) > c.size {
		text = text[len(text)-c.size:]
	}
	c.tail = append(c.tail, text...)
	if len(c.tail) > 2*c.size {
		c.tail = append([]byte(nil), c.tail[len(c.tail)-c.size:]...)
	}
}

// end gives the count of what was left out and the end that was kept, from a line's beginning.
func (c *cut) end() string {
	if c.bytes == 0 {
		return ""
	}
	tail := string(c.tail)
	if len(tail) > c.size {
		tail = tail[len(tail)-c.size:]
	}
	if c.bytes > len(tail) {
		if at := strings.IndexByte(tail, '\n'); at >= 0 && at < len(tail)-1 {
			tail = tail[at+1:]
		}
	}
	tail = strings.ToValidUTF8(tail, "")
	return fmt.Sprintf("... %d lines (%d bytes) are left out here\n%s",
		c.lines-strings.Count(tail, "\n"), c.bytes-len(tail), tail)
}
