package conn

import (
	"bufio"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"net"
	"time"
)

// Flags of a ZMTP frame (RFC 23, "framing").
const (
	flagMore    = 1
	flagLong    = 2
	flagCommand = 4
)

// Errors of a peer that does not keep to the protocol.
var (
	errFlags  = errors.New("reserved flags in a frame")
	errLength = errors.New("a message longer than allowed")
	errFrames = errors.New("more frames in a message than allowed")
)

// step is how much of a frame is read at a time, and so the most that a false length makes us allocate.
const step = 1 << 20

// packet is one message or one command as it came off the wire.
type packet struct {
	frames  [][]byte
	command bool
}

// reader takes messages and commands off a connection.
type reader struct {
	conn  net.Conn
	buf   *bufio.Reader
	limit *Settings
	idle  time.Duration // longest silence between messages; 0: any
	armed bool          // a read deadline is set
}

// within sets the time that the next bytes may take; 0: any.
func (r *reader) within(d time.Duration) error {
	if d > 0 {
		r.armed = true
		return r.conn.SetReadDeadline(time.Now().Add(d))
	}
	if !r.armed {
		return nil
	}
	r.armed = false
	return r.conn.SetReadDeadline(time.Time{})
}

// next reads one message or command. The frames belong to the caller.
func (r *reader) next() (packet, error) {
	var p packet
	left := r.limit.Message
	for {
		flags, size, err := r.head(len(p.frames) == 0)
		if err != nil {
			return p, err
		}
		if flags&flagCommand != 0 {
			return r.command(p, flags, size)
		}
		left -= size
		switch {
		case left < 0 || size < 0:
			return p, errLength
		case len(p.frames) == r.limit.Frames:
			return p, errFrames
		}
		body, err := r.body(size)
		if err != nil {
			return p, err
		}
		p.frames = append(p.frames, body)
		if flags&flagMore == 0 {
			return p, nil
		}
	}
}

// command reads the body of a command. Between the frames of a message there must be none (RFC 23), and it is short.
func (r *reader) command(p packet, flags byte, size int64) (packet, error) {
	if len(p.frames) > 0 || flags&flagMore != 0 {
		return p, errFlags
	}
	if size < 0 || size > maxCommand {
		return p, errLength
	}
	body, err := r.body(size)
	return packet{frames: [][]byte{body}, command: true}, err
}

// maxCommand bounds a command: subscriptions are the longest ones.
const maxCommand = 1 << 16

// head reads flags and length. A peer may be silent before a message (first) but not inside one.
func (r *reader) head(first bool) (flags byte, size int64, err error) {
	patience := r.limit.Stall
	if first {
		patience = r.idle
	}
	if err = r.within(patience); err != nil {
		return 0, 0, err
	}
	if flags, err = r.buf.ReadByte(); err != nil {
		return 0, 0, err
	}
	if flags&^(flagMore|flagLong|flagCommand) != 0 {
		return 0, 0, errFlags
	}
	if flags&flagLong == 0 {
		n, err := r.buf.ReadByte()
		return flags, int64(n), err
	}
	var b [8]byte
	if _, err = io.ReadFull(r.buf, b[:]); err != nil {
		return 0, 0, err
	}
	n := binary.BigEndian.Uint64(b[:])
	if n > 1<<62 {
		return 0, 0, errLength
	}
	return flags, int64(n), nil
}

// body reads size bytes step by step: memory grows with what arrives, not with what is announced.
func (r *reader) body(size int64) ([]byte, error) {
	if size <= int64(r.buf.Buffered()) {
		b := make([]byte, size)
		_, err := io.ReadFull(r.buf, b)
		return b, err
	}
	b := make([]byte, 0, min(size, step))
	for int64(len(b)) < size {
		if err := r.within(r.limit.Stall); err != nil {
			return nil, err
		}
		n := int(min(size-int64(len(b)), step))
		if cap(b)-len(b) < n {
			grown := make([]byte, len(b), min(size, 2*int64(cap(b))+step))
			copy(grown, b)
			b = grown
		}
		if _, err := io.ReadFull(r.buf, b[len(b):len(b)+n]); err != nil {
			return nil, fmt.Errorf("frame of %d bytes cut after %d: %w", size, len(b), err)
		}
		b = b[:len(b)+n]
	}
	return b, nil
}

// appendHead appends flags and length of a frame.
func appendHead(b []byte, flags byte, size int) []byte {
	if size > 255 {
		return binary.BigEndian.AppendUint64(append(b, flags|flagLong), uint64(size))
	}
	return append(b, flags, byte(size))
}

// writeMessage writes the frames of a message.
func writeMessage(w *bufio.Writer, frames [][]byte) error {
	var head [9]byte
	for i, f := range frames {
		var flags byte
		if i < len(frames)-1 {
			flags = flagMore
		}
		if _, err := w.Write(appendHead(head[:0], flags, len(f))); err != nil {
			return err
		}
		if _, err := w.Write(f); err != nil {
			return err
		}
	}
	return nil
}

// writeCommand writes a command.
func writeCommand(w *bufio.Writer, name string, body []byte) error {
	b := appendHead(nil, flagCommand, 1+len(name)+len(body))
	b = append(append(b, byte(len(name))), name...)
	_, err := w.Write(append(b, body...))
	return err
}

// splitCommand gives name and body of a command.
func splitCommand(b []byte) (name string, body []byte, ok bool) {
	if len(b) == 0 || len(b) < 1+int(b[0]) {
		return "", nil, false
	}
	n := 1 + int(b[0])
	return string(b[1:n]), b[n:], true
}
