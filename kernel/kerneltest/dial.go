package kerneltest

import (
	"context"
	"encoding/json"
	"net"
	"os"
	"path/filepath"
	"testing"
	"time"

	"ampturn/kernel"
	"ampturn/kernel/conn"
)

// Dial gives a front end joined by sockets to the kernel of a connection file. It waits until the kernel welcomes its
// subscription, so that no broadcast is lost. The connections end with the test.
func Dial(t testing.TB, f *conn.File, identity string) *Front {
	t.Helper()
	front, closeAll := DialFor(t, f, identity)
	t.Cleanup(closeAll)
	return front
}

// DialFor is [Dial] with the end in the caller's hand.
func DialFor(t testing.TB, f *conn.File, identity string) (front *Front, closeAll func()) {
	t.Helper()
	peers := make(map[kernel.Channel]*Peer)
	closeAll = func() {
		for _, p := range peers {
			p.Conn.Close()
		}
	}
	for ch, to := range map[kernel.Channel]struct {
		port int
		kind string
	}{
		kernel.Shell:   {f.Shell, "DEALER"},
		kernel.Control: {f.Control, "DEALER"},
		kernel.Stdin:   {f.Stdin, "DEALER"},
		kernel.IOPub:   {f.IOPub, "SUB"},
	} {
		p, err := dialPort(f, to.port, to.kind, identity)
		if err != nil {
			closeAll()
			t.Fatalf("channel %d: %v", ch, err)
		}
		peers[ch] = p
	}
	front = newFront(t, f.Key, func(ch kernel.Channel, frames [][]byte) {
		if err := peers[ch].Send(frames...); err != nil {
			t.Errorf("send: %v", err)
		}
	})
	for ch, p := range peers {
		go func() {
			for {
				frames, command, err := p.Receive()
				if err != nil {
					return
				}
				if !command {
					front.take(ch, frames)
				}
			}
		}()
	}
	if err := peers[kernel.IOPub].Subscribe("", true); err != nil {
		t.Fatal(err)
	}
	front.Await("welcome", func(m *Message) bool { return m.Type() == "iopub_welcome" })
	return front, closeAll
}

func dialPort(f *conn.File, port int, kind, identity string) (*Peer, error) {
	network, address := f.Address(port)
	return DialPeer(network, address, kind, identity)
}

// Heartbeat connects to the heartbeat of a kernel.
func Heartbeat(f *conn.File) (*Peer, error) { return dialPort(f, f.Heartbeat, "REQ", "") }

// NewFile gives a connection file with free ports on this machine, and its path.
func NewFile(t testing.TB, key string) (*conn.File, string) {
	t.Helper()
	var ports [5]int
	for i := range ports {
		l, err := net.Listen("tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		defer l.Close() // all stay taken until the last is found
		ports[i] = l.Addr().(*net.TCPAddr).Port
	}
	f := &conn.File{
		Transport: "tcp", IP: "127.0.0.1", Key: key, Scheme: "hmac-sha256",
		Shell: ports[0], IOPub: ports[1], Stdin: ports[2], Control: ports[3], Heartbeat: ports[4],
	}
	return f, WriteFile(t, f)
}

// WriteFile writes a connection file into a folder of the test and gives its path.
func WriteFile(t testing.TB, f *conn.File) string {
	t.Helper()
	b, err := json.Marshal(f)
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "connection.json")
	if err := os.WriteFile(path, b, 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// Served is a kernel that serves sockets within the test's process.
type Served struct {
	File  *conn.File
	Path  string
	Ended chan error // gets the result of [kernel.Serve]
	stop  context.CancelFunc
}

// Serve runs a kernel on free ports. It ends with the test.
func Serve(t testing.TB, e kernel.Engine, o *kernel.Options) *Served {
	t.Helper()
	f, path := NewFile(t, "served in a test")
	return ServeFile(t, e, o, f, path)
}

// ServeFile is [Serve] on the sockets of a given connection file.
func ServeFile(t testing.TB, e kernel.Engine, o *kernel.Options, f *conn.File, path string) *Served {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	s := &Served{File: f, Path: path, Ended: make(chan error, 1), stop: cancel}
	go func() { s.Ended <- kernel.Serve(ctx, path, e, o) }()
	t.Cleanup(func() {
		cancel()
		select {
		case err := <-s.Ended:
			if err != nil {
				t.Errorf("kernel: %v", err)
			}
			s.Ended <- nil
		case <-time.After(10 * time.Second):
			t.Error("the kernel does not end")
		}
	})
	await(t, f)
	return s
}

// await waits until the last of the sockets listens.
func await(t testing.TB, f *conn.File) {
	t.Helper()
	for range 500 {
		p, err := Heartbeat(f)
		if err == nil {
			p.Conn.Close()
			return
		}
		time.Sleep(10 * time.Millisecond)
	}
	t.Fatal("the kernel does not listen")
}
