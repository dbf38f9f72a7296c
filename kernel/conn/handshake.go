package conn

import (
	"bufio"
	"encoding/binary"
	"fmt"
	"net"
	"time"

	"github.com/go-zeromq/zmq4"
	"github.com/go-zeromq/zmq4/security/null"
)

// kind is a socket type of ours.
type kind = zmq4.SocketType

// The socket types of a kernel. An XPUB sees the subscriptions that a PUB would swallow.
const (
	kindRouter    kind = zmq4.Router
	kindPublisher kind = zmq4.XPub
	kindEcho      kind = zmq4.Rep
)

const (
	bufferSize = 16 << 10
	greeting   = 64      // bytes of a greeting (RFC 23)
	maxReady   = 8 << 10 // bytes of the READY command: socket type and identity
)

// shake greets a peer and learns its identity. Whatever the peer sends, it ends within the deadline with an error or
// a peer that is known.
func shake(c net.Conn, k kind, s *Settings) (buf *bufio.Reader, identity string, err error) {
	defer func() {
		if p := recover(); p != nil { // the metadata of a peer is decoded without bounds checks
			err = fmt.Errorf("handshake: %v", p)
		}
	}()
	if err := c.SetDeadline(time.Now().Add(s.Handshake)); err != nil {
		return nil, "", err
	}
	g := &guardedConn{Conn: c, buf: bufio.NewReaderSize(c, bufferSize), left: greeting}
	z, err := zmq4.Open(g, null.Security(), k, nil, true, nil)
	if err != nil {
		return nil, "", err
	}
	return g.buf, z.Peer.Meta["Identity"], c.SetDeadline(time.Time{})
}

// guardedConn lets a greeting and short commands through and refuses a frame that announces more, before anybody
// allocates memory for it.
type guardedConn struct {
	net.Conn
	buf  *bufio.Reader
	left int // bytes up to the next frame
}

// Read reads at most to the end of the greeting or of the frame.
func (g *guardedConn) Read(p []byte) (int, error) {
	if g.left == 0 {
		if err := g.frame(); err != nil {
			return 0, err
		}
	}
	n, err := g.buf.Read(p[:min(len(p), g.left)])
	g.left -= n
	return n, err
}

// frame looks at the head of the next frame without taking it.
func (g *guardedConn) frame() error {
	h, err := g.buf.Peek(2)
	if err != nil {
		return err
	}
	if h[0]&^(flagLong|flagCommand) != 0 || h[0]&flagCommand == 0 {
		return errFlags
	}
	if h[0]&flagLong == 0 {
		g.left = 2 + int(h[1])
		return nil
	}
	if h, err = g.buf.Peek(9); err != nil {
		return err
	}
	size := binary.BigEndian.Uint64(h[1:])
	if size > maxReady {
		return errLength
	}
	g.left = 9 + int(size)
	return nil
}
