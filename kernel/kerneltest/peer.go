package kerneltest

import (
	"bufio"
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"net"
	"time"
)

// Peer is the client's side of one ZeroMQ connection (RFC 23: ZMTP 3.0, NULL mechanism), written by the book.
type Peer struct {
	Conn net.Conn
	in   *bufio.Reader
}

// DialPeer connects and shakes hands as a socket of a type: "DEALER", "SUB", "REQ".
func DialPeer(network, address, socketType, identity string) (*Peer, error) {
	c, err := net.DialTimeout(network, address, 5*time.Second)
	if err != nil {
		return nil, err
	}
	p := &Peer{Conn: c, in: bufio.NewReader(c)}
	c.SetDeadline(time.Now().Add(5 * time.Second))
	err = errors.Join(p.greet(), p.ready(socketType, identity))
	if err != nil {
		c.Close()
		return nil, err
	}
	return p, c.SetDeadline(time.Time{})
}

// Greeting is what a client sends first.
func Greeting() []byte {
	b := make([]byte, 64)
	b[0], b[9], b[10] = 0xff, 0x7f, 3
	copy(b[12:], "NULL")
	return b
}

func (p *Peer) greet() error {
	if _, err := p.Conn.Write(Greeting()); err != nil {
		return err
	}
	b := make([]byte, 64)
	if _, err := io.ReadFull(p.in, b); err != nil {
		return err
	}
	if b[0] != 0xff || b[9] != 0x7f || b[10] < 3 || !bytes.HasPrefix(b[12:], []byte("NULL\x00")) {
		return fmt.Errorf("greeting %x", b)
	}
	return nil
}

// Ready gives the command that names socket type and identity, without its frame head.
func Ready(socketType, identity string) []byte {
	b := []byte("\x05READY")
	for _, kv := range [][2]string{{"Socket-Type", socketType}, {"Identity", identity}} {
		b = append(append(b, byte(len(kv[0]))), kv[0]...)
		b = binary.BigEndian.AppendUint32(b, uint32(len(kv[1])))
		b = append(b, kv[1]...)
	}
	return b
}

func (p *Peer) ready(socketType, identity string) error {
	if err := p.Command(Ready(socketType, identity)); err != nil {
		return err
	}
	flags, body, err := p.frame()
	if err == nil && (flags&4 == 0 || !bytes.HasPrefix(body, []byte("\x05READY"))) {
		err = fmt.Errorf("%x in place of READY", body)
	}
	return err
}

// Command sends a command: a byte with the length of its name, the name, and what belongs to it.
func (p *Peer) Command(body []byte) error {
	_, err := p.Conn.Write(appendFrame(nil, 4, body))
	return err
}

// Subscribe asks for everything under a topic, or no longer.
func (p *Peer) Subscribe(topic string, on bool) error {
	first := byte(0)
	if on {
		first = 1
	}
	return p.Send(append([]byte{first}, topic...))
}

// Send sends a message.
func (p *Peer) Send(frames ...[]byte) error {
	var b []byte
	for i, f := range frames {
		var more byte
		if i < len(frames)-1 {
			more = 1
		}
		b = appendFrame(b, more, f)
	}
	_, err := p.Conn.Write(b)
	return err
}

func appendFrame(b []byte, flags byte, body []byte) []byte {
	if len(body) > 255 {
		b = binary.BigEndian.AppendUint64(append(b, flags|2), uint64(len(body)))
	} else {
		b = append(b, flags, byte(len(body)))
	}
	return append(b, body...)
}

// Receive waits for a message, or for a command if command is true.
func (p *Peer) Receive() (frames [][]byte, command bool, err error) {
	for {
		flags, body, err := p.frame()
		if err != nil {
			return nil, false, err
		}
		frames = append(frames, body)
		if flags&1 == 0 {
			return frames, flags&4 != 0, nil
		}
	}
}

func (p *Peer) frame() (flags byte, body []byte, err error) {
	if flags, err = p.in.ReadByte(); err != nil {
		return 0, nil, err
	}
	var size uint64
	if flags&2 != 0 {
		err = binary.Read(p.in, binary.BigEndian, &size)
	} else {
		var n byte
		n, err = p.in.ReadByte()
		size = uint64(n)
	}
	if err != nil {
		return 0, nil, err
	}
	body = make([]byte, size)
	_, err = io.ReadFull(p.in, body)
	return flags, body, err
}
