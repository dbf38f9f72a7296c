package conn

import (
	"bufio"
	"bytes"
	"net"
	"runtime"
	"testing"
	"time"
)

// fed is a connection that gives the bytes of a test and no more.
type fed struct {
	net.Conn
	from *bytes.Reader
}

func (f fed) Read(p []byte) (int, error)    { return f.from.Read(p) }
func (fed) SetReadDeadline(time.Time) error { return nil }
func feed(b []byte, s Settings) *reader {
	c := fed{from: bytes.NewReader(b)}
	return &reader{conn: c, buf: bufio.NewReaderSize(c, 64), limit: &s}
}

func TestFrames(t *testing.T) {
	long := bytes.Repeat([]byte("x"), 3*step+17)
	var b bytes.Buffer
	w := bufio.NewWriter(&b)
	sent := [][]byte{{}, []byte("a"), bytes.Repeat([]byte("y"), 255), bytes.Repeat([]byte("z"), 256), long}
	if err := writeMessage(w, sent); err != nil {
		t.Fatal(err)
	}
	if err := writeCommand(w, "PING", []byte{0, 1}); err != nil {
		t.Fatal(err)
	}
	w.Flush()
	r := feed(b.Bytes(), (*Settings)(nil).withDefaults())
	p, err := r.next()
	if err != nil || p.command || len(p.frames) != len(sent) {
		t.Fatalf("%d frames, %v", len(p.frames), err)
	}
	for i := range sent {
		if !bytes.Equal(p.frames[i], sent[i]) {
			t.Errorf("frame %d has %d bytes, want %d", i, len(p.frames[i]), len(sent[i]))
		}
	}
	p, err = r.next()
	if err != nil || !p.command {
		t.Fatalf("command: %+v, %v", p, err)
	}
	if name, body, ok := splitCommand(p.frames[0]); name != "PING" || !ok || !bytes.Equal(body, []byte{0, 1}) {
		t.Errorf("command %q %v %v", name, body, ok)
	}
}

func TestFramesRefused(t *testing.T) {
	s := (&Settings{Message: 1000, Frames: 4}).withDefaults()
	for name, b := range map[string][]byte{
		"reserved flags":       {8, 0},
		"length beyond 2^63":   {2, 0x80, 0, 0, 0, 0, 0, 0, 0},
		"length of 2^62":       {2, 0x40, 0, 0, 0, 0, 0, 0, 0},
		"longer than allowed":  {2, 0, 0, 0, 0, 0, 0, 3, 0xe9},
		"longer in sum":        append(append([]byte{3, 0, 0, 0, 0, 0, 0, 2, 0x58}, make([]byte, 600)...), 3, 0, 0, 0, 0, 0, 0, 2, 0x58),
		"too many frames":      {1, 0, 1, 0, 1, 0, 1, 0, 0, 0},
		"command in a message": {1, 0, 4, 0},
		"command with more":    {5, 0},
		"long command":         {6, 0, 0, 0, 0, 0, 2, 0, 0},
		"cut":                  {0, 5, 1, 2},
		"head cut":             {2, 0, 0},
	} {
		if _, err := feed(b, s).next(); err == nil {
			t.Errorf("%s is taken", name)
		}
	}
	for _, b := range [][]byte{nil, {5}, {3, 'a', 'b'}} {
		if _, _, ok := splitCommand(b); ok {
			t.Errorf("command %v is taken", b)
		}
	}
}

// Memory follows what arrives: a frame that announces a gigabyte and brings nothing costs about one step.
func TestAnnouncedLength(t *testing.T) {
	head := []byte{2, 0, 0, 0, 0, 0x3f, 0, 0, 0}
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	if _, err := feed(head, (*Settings)(nil).withDefaults()).next(); err == nil {
		t.Error("a frame without its bytes is taken")
	}
	runtime.ReadMemStats(&after)
	if n := after.TotalAlloc - before.TotalAlloc; n > 2*step {
		t.Errorf("%d bytes allocated", n)
	}
}

func FuzzFrames(f *testing.F) {
	f.Add([]byte{1, 1, 'a', 0, 1, 'b'})
	f.Add([]byte{4, 5, 4, 'P', 'I', 'N', 'G'})
	f.Add([]byte{2, 0, 0, 0, 0, 0, 0, 0, 1, 'x'})
	f.Fuzz(func(t *testing.T, b []byte) {
		r := feed(b, (&Settings{Message: 1 << 16}).withDefaults())
		for {
			p, err := r.next()
			if err != nil {
				return
			}
			total := 0
			for _, x := range p.frames {
				total += len(x)
			}
			if total > len(b) {
				t.Fatalf("%d bytes out of %d", total, len(b))
			}
		}
	})
}
