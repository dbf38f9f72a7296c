package kerneltest

import (
	"context"
	"encoding/json"
	"fmt"
	"strings"
	"sync"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/wire"
)

// Message is a message as a front end reads it. What belongs to the type is in Content.
type Message struct {
	Channel  kernel.Channel
	Topic    string // of a broadcast
	Header   wire.Header
	Parent   map[string]any
	Metadata map[string]any
	Content  map[string]any
}

// Type gives the type, or the state of a status message: "busy", "idle", "starting".
func (m *Message) Type() string {
	if s, ok := m.Content["execution_state"].(string); ok && m.Header.Type == "status" {
		return s
	}
	return m.Header.Type
}

// parentID gives the id of the request that the message belongs to.
func (m *Message) parentID() string {
	id, _ := m.Parent["msg_id"].(string)
	return id
}

// String gives type and content, for test failures.
func (m *Message) String() string { return fmt.Sprintf("%s%.200v", m.Type(), m.Content) }

// Front is a front end. It keeps every message that it has received and checks each: signature, four JSON objects,
// a header with all fields, an id that is new.
type Front struct {
	t       testing.TB
	session *wire.Session
	send    func(ch kernel.Channel, frames [][]byte)

	mu       sync.Mutex
	news     *sync.Cond
	messages []*Message
	ids      map[string]bool

	// Wait bounds how long a message is waited for.
	Wait time.Duration
}

func newFront(t testing.TB, key string, send func(ch kernel.Channel, frames [][]byte)) *Front {
	t.Helper()
	signer, err := wire.NewSigner("", key)
	if err != nil {
		t.Fatal(err)
	}
	f := &Front{
		t: t, session: wire.NewSession(signer, "front"), send: send,
		ids: make(map[string]bool), Wait: 10 * time.Second,
	}
	f.news = sync.NewCond(&f.mu)
	return f
}

// Memory gives a front end of a new kernel that runs an engine, joined without sockets. The kernel ends with the test.
func Memory(t testing.TB, e kernel.Engine) *Front {
	t.Helper()
	f, _ := MemoryKernel(t, e, nil)
	return f
}

// MemoryKernel is [Memory] with options, and gives the kernel too.
func MemoryKernel(t testing.TB, e kernel.Engine, o *kernel.Options) (*Front, *kernel.Kernel) {
	t.Helper()
	const key = "in memory"
	signer, err := wire.NewSigner("", key)
	if err != nil {
		t.Fatal(err)
	}
	var f *Front
	k := kernel.New(e, func(ch kernel.Channel, frames [][]byte) { f.take(ch, frames) },
		wire.NewSession(signer, "kernel"), o)
	f = newFront(t, key, func(ch kernel.Channel, frames [][]byte) {
		k.Receive(ch, append([][]byte{[]byte("front")}, frames...))
	})
	ctx, cancel := context.WithCancel(context.Background())
	ended := make(chan struct{})
	go func() {
		defer close(ended)
		k.Run(ctx)
	}()
	t.Cleanup(func() {
		cancel()
		select {
		case <-ended:
		case <-time.After(5 * time.Second):
			t.Error("the kernel does not end")
		}
	})
	return f, k
}

// take reads one message of the kernel.
func (f *Front) take(ch kernel.Channel, frames [][]byte) {
	m, err := f.session.Decode(frames)
	if err != nil {
		f.t.Errorf("message on channel %d: %v", ch, err)
		return
	}
	got := &Message{Channel: ch, Header: m.Header}
	for _, p := range []struct {
		from json.RawMessage
		to   *map[string]any
	}{{m.Parent, &got.Parent}, {m.Metadata, &got.Metadata}, {m.Content, &got.Content}} {
		if err := json.Unmarshal(p.from, p.to); err != nil {
			f.t.Errorf("%s: %v", m.Header.Type, err)
		}
	}
	if ch == kernel.IOPub {
		if len(m.Identities) != 1 {
			f.t.Errorf("%s: %d topic frames", m.Header.Type, len(m.Identities))
		} else {
			got.Topic = string(m.Identities[0])
		}
	}
	f.check(got)
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.ids[m.Header.ID] {
		f.t.Errorf("message id %s used twice", m.Header.ID)
	}
	f.ids[m.Header.ID] = true
	f.messages = append(f.messages, got)
	f.news.Broadcast()
}

func (f *Front) check(m *Message) {
	h := m.Header
	if h.Session == "" || h.User == "" || h.Version == "" {
		f.t.Errorf("%s: header not complete: %+v", h.Type, h)
	}
	if _, err := time.Parse(time.RFC3339Nano, h.Date); err != nil {
		f.t.Errorf("%s: date %q is not ISO 8601 with a zone", h.Type, h.Date)
	}
	if strings.HasSuffix(h.Type, "_reply") && m.parentID() == "" {
		f.t.Errorf("%s without parent header", h.Type)
	}
}

// Send sends a request and gives its id.
func (f *Front) Send(ch kernel.Channel, typ string, content any) string {
	f.t.Helper()
	return f.SendMessage(ch, typ, content, nil, nil)
}

// SendMessage sends a message with a parent header and metadata and gives its id.
func (f *Front) SendMessage(ch kernel.Channel, typ string, content, parent, metadata any) string {
	f.t.Helper()
	m := &wire.Message{Header: f.session.Header(typ)}
	for _, p := range []struct {
		from any
		to   *json.RawMessage
	}{{content, &m.Content}, {parent, &m.Parent}, {metadata, &m.Metadata}} {
		if p.from == nil {
			continue
		}
		b, err := wire.Marshal(p.from)
		if err != nil {
			f.t.Fatal(err)
		}
		*p.to = b
	}
	frames, err := f.session.Encode(m)
	if err != nil {
		f.t.Fatal(err)
	}
	f.send(ch, frames)
	return m.Header.ID
}

// SendFrames sends frames as they are.
func (f *Front) SendFrames(ch kernel.Channel, frames ...[]byte) { f.send(ch, frames) }

// Frames gives the signed frames of a message without sending them.
func (f *Front) Frames(typ string, content any) [][]byte {
	f.t.Helper()
	b, err := wire.Marshal(content)
	if err != nil {
		f.t.Fatal(err)
	}
	frames, err := f.session.Encode(&wire.Message{Header: f.session.Header(typ), Content: b})
	if err != nil {
		f.t.Fatal(err)
	}
	return frames
}

// All gives the messages received so far that fit.
func (f *Front) All(fits func(*Message) bool) []*Message {
	f.mu.Lock()
	defer f.mu.Unlock()
	var list []*Message
	for _, m := range f.messages {
		if fits(m) {
			list = append(list, m)
		}
	}
	return list
}

// Await waits for the first message that fits, also among those received before.
func (f *Front) Await(what string, fits func(*Message) bool) *Message {
	f.t.Helper()
	m := f.await(fits)
	if m == nil {
		f.t.Fatalf("no %s within %v; the last messages: %v", what, f.Wait, f.last(8))
	}
	return m
}

func (f *Front) await(fits func(*Message) bool) *Message {
	f.mu.Lock()
	defer f.mu.Unlock()
	over := false
	t := time.AfterFunc(f.Wait, func() {
		f.mu.Lock()
		over = true
		f.mu.Unlock()
		f.news.Broadcast()
	})
	defer t.Stop()
	for seen := 0; ; f.news.Wait() {
		for ; seen < len(f.messages); seen++ {
			if fits(f.messages[seen]) {
				return f.messages[seen]
			}
		}
		if over {
			return nil
		}
	}
}

func (f *Front) last(n int) []*Message {
	f.mu.Lock()
	defer f.mu.Unlock()
	return append([]*Message(nil), f.messages[max(0, len(f.messages)-n):]...)
}

// Reply waits for the reply to a request.
func (f *Front) Reply(id string) *Message {
	f.t.Helper()
	return f.Await("reply to "+id, func(m *Message) bool {
		return m.Channel != kernel.IOPub && m.parentID() == id && strings.HasSuffix(m.Header.Type, "_reply")
	})
}

// Published waits until a request is idle and gives all broadcasts that belong to it.
func (f *Front) Published(id string) []*Message {
	f.t.Helper()
	f.Await("idle of "+id, func(m *Message) bool { return m.parentID() == id && m.Type() == "idle" })
	return f.All(func(m *Message) bool { return m.Channel == kernel.IOPub && m.parentID() == id })
}

// Forget drops the messages received so far.
func (f *Front) Forget() {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.messages = nil
}
