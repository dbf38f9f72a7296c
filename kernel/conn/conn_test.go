package conn_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"io"
	"net"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"testing"
	"time"

	"ampturn/kernel/conn"
	"ampturn/kernel/kerneltest"
)

// echo opens sockets whose shell, control and stdin send every message back to its peer.
func echo(t *testing.T, set *conn.Settings) (*conn.Sockets, *conn.File) {
	t.Helper()
	f, _ := kerneltest.NewFile(t, "")
	return listen(t, f, set), f
}

func listen(t *testing.T, f *conn.File, set *conn.Settings) *conn.Sockets {
	t.Helper()
	var s *conn.Sockets
	s, err := conn.Listen(f, conn.Handlers{
		Shell:   func(m [][]byte) { s.Shell.Send(m) },
		Control: func(m [][]byte) { s.Control.Send(m) },
		Stdin:   func(m [][]byte) { s.Stdin.Send(m) },
		Welcome: func(topic []byte) [][]byte { return [][]byte{topic, []byte("welcome")} },
	}, set)
	if err != nil {
		t.Fatal(err)
	}
	s.Serve()
	t.Cleanup(func() { s.Close(time.Second) })
	return s
}

func dial(t *testing.T, f *conn.File, port int, kind, identity string) *kerneltest.Peer {
	t.Helper()
	network, address := f.Address(port)
	p, err := kerneltest.DialPeer(network, address, kind, identity)
	if err != nil {
		t.Fatal(err)
	}
	p.Conn.SetDeadline(time.Now().Add(20 * time.Second))
	t.Cleanup(func() { p.Conn.Close() })
	return p
}

// roundTrip sends a message and expects it back.
func roundTrip(t *testing.T, p *kerneltest.Peer, frames ...string) {
	t.Helper()
	var sent [][]byte
	for _, f := range frames {
		sent = append(sent, []byte(f))
	}
	if err := p.Send(sent...); err != nil {
		t.Fatal(err)
	}
	expect(t, p, frames...)
}

func expect(t *testing.T, p *kerneltest.Peer, frames ...string) {
	t.Helper()
	got, command, err := p.Receive()
	if err != nil || command {
		t.Fatalf("command %v, %v", command, err)
	}
	if fmt.Sprintf("%.50q", got) != fmt.Sprintf("%.50q", frames) || len(bytes.Join(got, nil)) != len(strings.Join(frames, "")) {
		t.Fatalf("got %.50q, want %.50q", got, frames)
	}
}

func TestEcho(t *testing.T) {
	_, f := echo(t, nil)
	for _, identity := range []string{"", "me", "\x00\xff binary"} {
		p := dial(t, f, f.Shell, "DEALER", identity)
		for _, n := range []int{0, 1, 255, 256, 1 << 20, 20 << 20} {
			roundTrip(t, p, "a", strings.Repeat("x", n))
		}
		for i := range 1000 {
			p.Send([]byte(fmt.Sprint(i)))
		}
		for i := range 1000 {
			expect(t, p, fmt.Sprint(i))
		}
	}
}

func TestHeartbeat(t *testing.T) {
	_, f := echo(t, nil)
	p := dial(t, f, f.Heartbeat, "REQ", "")
	for _, payload := range []string{"ping", "", strings.Repeat("x", 1_000_000)} {
		roundTrip(t, p, "", payload)
	}
}

// Replies go to who asked, and to nobody once that peer has left.
func TestRouting(t *testing.T) {
	s, f := echo(t, nil)
	a, b := dial(t, f, f.Shell, "DEALER", "a"), dial(t, f, f.Shell, "DEALER", "b")
	anonymous := dial(t, f, f.Shell, "DEALER", "")
	for range 3 {
		roundTrip(t, a, "from a")
		roundTrip(t, b, "from b")
		roundTrip(t, anonymous, "from nobody")
	}
	s.Shell.Send([][]byte{[]byte("gone"), []byte("x")})
	s.Shell.Send([][]byte{[]byte("b"), []byte("to b")})
	expect(t, b, "to b")
}

// Of two connections with one identity the newer one gets the replies, and the older one ends.
func TestSameIdentity(t *testing.T) {
	s, f := echo(t, nil)
	old := dial(t, f, f.Shell, "DEALER", "same")
	roundTrip(t, old, "1")
	fresh := dial(t, f, f.Shell, "DEALER", "same")
	roundTrip(t, fresh, "2")
	if _, _, err := old.Receive(); err == nil {
		t.Error("the older connection is still served")
	}
	s.Shell.Send([][]byte{[]byte("same"), []byte("3")})
	expect(t, fresh, "3")
	for range 50 {
		p := dial(t, f, f.Shell, "DEALER", "same")
		roundTrip(t, p, "again")
		p.Conn.Close()
	}
}

func TestSubscriptions(t *testing.T) {
	s, f := echo(t, nil)
	p := dial(t, f, f.IOPub, "SUB", "")
	send := func(topic string) { s.IOPub.Send([][]byte{[]byte(topic), []byte("x")}) }
	p.Subscribe("ab", true)
	expect(t, p, "ab", "welcome")
	p.Subscribe("ab", true) // counted, not welcomed again
	p.Command([]byte("\x09SUBSCRIBEq"))
	expect(t, p, "q", "welcome")
	for _, topic := range []string{"a", "abc", "b", "q", ""} {
		send(topic)
	}
	expect(t, p, "abc", "x")
	expect(t, p, "q", "x")
	p.Subscribe("ab", false)
	p.Command([]byte("\x06CANCELq"))
	p.Subscribe("z", true)
	expect(t, p, "z", "welcome")
	send("q1")
	send("ab1")
	expect(t, p, "ab1", "x") // one of two is left
	p.Subscribe("ab", false)
	p.Subscribe("y", true)
	expect(t, p, "y", "welcome")
	send("ab2")
	send("z")
	expect(t, p, "z", "x")
}

// RFC 37: a PING carries a time to live and a context; the PONG carries the context.
func TestPing(t *testing.T) {
	_, f := echo(t, nil)
	for _, port := range []int{f.Shell, f.IOPub, f.Heartbeat} {
		kind := map[int]string{f.Shell: "DEALER", f.IOPub: "SUB", f.Heartbeat: "REQ"}[port]
		p := dial(t, f, port, kind, "")
		p.Command([]byte("\x04PING\x00\x00context"))
		frames, command, err := p.Receive()
		if err != nil || !command || string(frames[0]) != "\x04PONGcontext" {
			t.Errorf("%s: %q %v %v", kind, frames, command, err)
		}
	}
	p := dial(t, f, f.Shell, "DEALER", "")
	p.Command([]byte("\x04PING\x00\x02")) // to live 0.2 s without a word
	p.Receive()
	if _, _, err := p.Receive(); err == nil {
		t.Error("a peer that is silent past its time to live stays")
	}
}

// Peers that are silent, half through the handshake or talk nonsense block nobody and are closed.
func TestBadPeers(t *testing.T) {
	_, f := echo(t, &conn.Settings{Handshake: 300 * time.Millisecond})
	ready := func(body []byte) []byte { return append([]byte{4, byte(len(body))}, body...) }
	full := func(kind string) []byte {
		return append(kerneltest.Greeting(), ready(kerneltest.Ready(kind, "bad"))...)
	}
	length := func(n uint64) []byte { return binary.BigEndian.AppendUint64([]byte{2}, n) }
	cases := map[string][]byte{
		"silent":               nil,
		"half a greeting":      kerneltest.Greeting()[:20],
		"greeting only":        kerneltest.Greeting(),
		"HTTP":                 []byte("GET / HTTP/1.1\r\nHost: x\r\n\r\n"),
		"noise":                bytes.Repeat([]byte{0xa5, 0x17, 0xff}, 200),
		"older protocol":       append([]byte{0xff, 0, 0, 0, 0, 0, 0, 0, 1, 0x7f, 1}, make([]byte, 53)...),
		"cut READY":            append(kerneltest.Greeting(), ready([]byte("\x05READY\x03abc"))...),
		"READY without value":  append(kerneltest.Greeting(), ready([]byte("\x05READY\x0bSocket-Type\xff\xff\xff\xff"))...),
		"READY of 2^40 bytes":  append(kerneltest.Greeting(), binary.BigEndian.AppendUint64([]byte{6}, 1<<40)...),
		"message in place":     append(kerneltest.Greeting(), 0, 1, 'x'),
		"unknown type":         full("NOPE"),
		"wrong type":           full("PULL"),
		"frame of 2^62 bytes":  append(full("DEALER"), length(1<<62)...),
		"frame of 2^40 bytes":  append(full("DEALER"), length(1<<40)...),
		"reserved flags":       append(full("DEALER"), 0xf0, 1, 'x'),
		"short PING":           append(full("DEALER"), 4, 6, 4, 'P', 'I', 'N', 'G', 0),
		"command without name": append(full("DEALER"), 4, 0),
	}
	for name, data := range cases {
		var bad []net.Conn
		for _, port := range []int{f.Shell, f.IOPub, f.Heartbeat} {
			network, address := f.Address(port)
			c, err := net.Dial(network, address)
			if err != nil {
				t.Fatal(err)
			}
			defer c.Close()
			c.Write(data)
			bad = append(bad, c)
		}
		roundTrip(t, dial(t, f, f.Shell, "DEALER", "good"), name)
		roundTrip(t, dial(t, f, f.Heartbeat, "REQ", ""), "", name)
		c := bad[0]
		c.SetReadDeadline(time.Now().Add(5 * time.Second))
		buf := make([]byte, 4096)
		for {
			if _, err := c.Read(buf); err != nil {
				if e, ok := err.(net.Error); ok && e.Timeout() {
					t.Errorf("%s: still connected", name)
				}
				break
			}
		}
	}
}

// Connections beyond the number that may be in the handshake are closed at once.
func TestManySilentPeers(t *testing.T) {
	_, f := echo(t, &conn.Settings{Greeting: 3, Handshake: 20 * time.Second})
	closed := 0
	for range 5 {
		network, address := f.Address(f.Shell)
		c, err := net.Dial(network, address)
		if err != nil {
			t.Fatal(err)
		}
		defer c.Close()
		c.SetReadDeadline(time.Now().Add(500 * time.Millisecond))
		if n, err := io.ReadFull(c, make([]byte, 64)); err != nil && n == 0 { // the others are greeted
			closed++
		}
	}
	if closed != 2 {
		t.Errorf("%d of 5 are closed, want 2", closed)
	}
}

// A peer that stops in the middle of a message is closed; one that is silent between messages is not.
func TestStall(t *testing.T) {
	_, f := echo(t, &conn.Settings{Stall: 200 * time.Millisecond})
	quiet := dial(t, f, f.Shell, "DEALER", "quiet")
	for _, part := range [][]byte{{1, 1, 'x'}, {0, 200, 'x'}, {1, 1, 'x', 0, 9, 'y'}} {
		p := dial(t, f, f.Shell, "DEALER", "stalled")
		p.Conn.Write(part)
		p.Conn.SetReadDeadline(time.Now().Add(5 * time.Second))
		_, _, err := p.Receive()
		if e, ok := err.(net.Error); err == nil || ok && e.Timeout() {
			t.Errorf("%v: %v", part, err)
		}
	}
	roundTrip(t, quiet, "still here")
}

// A subscriber or requester that does not read costs its queue and is dropped then; the others get everything.
func TestSlowPeers(t *testing.T) {
	s, f := echo(t, &conn.Settings{Queue: 8 << 20})
	slow := dial(t, f, f.IOPub, "SUB", "")
	slow.Subscribe("", true)
	expect(t, slow, "", "welcome")
	fast := dial(t, f, f.IOPub, "SUB", "")
	fast.Subscribe("", true)
	expect(t, fast, "", "welcome")
	big := strings.Repeat("z", 1<<20)
	for range 60 {
		s.IOPub.Send([][]byte{[]byte("t"), []byte(big)})
		expect(t, fast, "t", big)
	}
	got := 0 // what was under way arrives, then the connection ends
	for got < 60 {
		if _, _, err := slow.Receive(); err != nil {
			break
		}
		got++
	}
	if got == 60 {
		t.Error("the slow subscriber got everything: its queue has no limit")
	}
	asker, other := dial(t, f, f.Shell, "DEALER", "slow"), dial(t, f, f.Shell, "DEALER", "other")
	go func() {
		for range 60 {
			if asker.Send([]byte(big)) != nil {
				return
			}
		}
	}()
	for range 100 {
		roundTrip(t, other, "served")
	}
}

// What is in the queues at the end still arrives.
func TestDrain(t *testing.T) {
	s, f := echo(t, nil)
	p := dial(t, f, f.IOPub, "SUB", "")
	p.Subscribe("", true)
	expect(t, p, "", "welcome")
	big := strings.Repeat("z", 100_000)
	for range 200 {
		s.IOPub.Send([][]byte{[]byte("t"), []byte(big)})
	}
	closed := make(chan struct{})
	go func() {
		s.Close(5 * time.Second)
		close(closed)
	}()
	for range 200 {
		expect(t, p, "t", big)
	}
	if _, _, err := p.Receive(); err == nil {
		t.Error("the connection stays")
	}
	<-closed
}

func TestCloseDoesNotHang(t *testing.T) {
	s, f := echo(t, nil)
	p := dial(t, f, f.IOPub, "SUB", "")
	p.Subscribe("", true)
	expect(t, p, "", "welcome")
	for range 50 { // more than the system's buffers take; nobody reads
		s.IOPub.Send([][]byte{[]byte("t"), make([]byte, 1<<20)})
	}
	begun := time.Now()
	s.Close(300 * time.Millisecond)
	if d := time.Since(begun); d > 3*time.Second {
		t.Errorf("took %v", d)
	}
}

func TestPortTaken(t *testing.T) {
	f, _ := kerneltest.NewFile(t, "")
	network, address := f.Address(f.Stdin)
	l, err := net.Listen(network, address)
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	if _, err := conn.Listen(f, conn.Handlers{}, nil); err == nil || !strings.Contains(err.Error(), "stdin socket") {
		t.Fatal(err)
	}
	l.Close() // the other four are free again
	listen(t, f, nil)
}

func TestUnixSockets(t *testing.T) {
	dir, err := os.MkdirTemp("", "s") // paths of sockets are short
	if err != nil {
		t.Fatal(err)
	}
	defer os.RemoveAll(dir)
	f := &conn.File{Transport: "ipc", IP: filepath.Join(dir, "s"), Shell: 1, IOPub: 2, Stdin: 3, Control: 4, Heartbeat: 5}
	if l, err := net.Listen("unix", f.IP+"-1"); err == nil { // as a killed process leaves it
		l.(*net.UnixListener).SetUnlinkOnClose(false)
		l.Close()
	}
	s := listen(t, f, nil)
	roundTrip(t, dial(t, f, f.Shell, "DEALER", "x"), "hello")
	if _, err := conn.Listen(f, conn.Handlers{}, nil); err == nil {
		t.Error("sockets in use are taken over")
	}
	roundTrip(t, dial(t, f, f.Shell, "DEALER", "y"), "still there")
	s.Close(time.Second)
	if left, _ := filepath.Glob(f.IP + "-*"); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
}

// Peers that come and go leave neither goroutines nor descriptors.
func TestNothingLeaks(t *testing.T) {
	s, f := echo(t, nil)
	cycle := func() {
		var wait sync.WaitGroup
		for i := range 20 {
			wait.Go(func() {
				network, address := f.Address(f.Shell)
				p, err := kerneltest.DialPeer(network, address, "DEALER", fmt.Sprint(i%5))
				if err != nil {
					return // another one with its identity came first
				}
				p.Send([]byte("x"))
				p.Conn.Close()
			})
		}
		wait.Wait()
	}
	cycle()
	settle := func(limit int) int {
		n := 0
		for range 200 {
			if n = runtime.NumGoroutine(); n <= limit {
				break
			}
			time.Sleep(10 * time.Millisecond)
		}
		return n
	}
	before := settle(12)
	for range 10 {
		cycle()
	}
	if after := settle(before); after > before {
		t.Errorf("goroutines: %d, then %d", before, after)
	}
	s.Close(time.Second)
}
