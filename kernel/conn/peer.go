package conn

import (
	"bufio"
	"encoding/binary"
	"errors"
	"net"
	"sync"
	"time"
)

// errFull ends a peer that does not read what it asked for.
var errFull = errors.New("the peer does not read its messages")

// outgoing is a message, or a command if it has a name.
type outgoing struct {
	frames  [][]byte
	command string
}

func (o outgoing) size() int64 {
	n := int64(64) // for the slices and heads themselves
	for _, f := range o.frames {
		n += int64(len(f))
	}
	return n
}

// peer is one connection with its queue. Its frames may be shared with other peers: nobody changes them.
type peer struct {
	identity string
	conn     net.Conn
	in       reader
	limit    *Settings

	mu      sync.Mutex
	wake    *sync.Cond
	queue   []outgoing
	waiting int64 // bytes in queue
	writing bool
	closed  bool

	topics map[string]int // subscriptions with their counts; under the publisher's lock
}

func newPeer(c net.Conn, buf *bufio.Reader, identity string, s *Settings) *peer {
	p := &peer{identity: identity, conn: c, in: reader{conn: c, buf: buf, limit: s}, limit: s}
	p.wake = sync.NewCond(&p.mu)
	return p
}

// send queues a message. A peer whose queue is full is closed; one message always fits.
func (p *peer) send(o outgoing) error {
	n := o.size()
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.closed {
		return net.ErrClosed
	}
	if p.waiting > 0 && p.waiting+n > p.limit.Queue {
		p.shut()
		return errFull
	}
	p.queue = append(p.queue, o)
	p.waiting += n
	p.wake.Broadcast()
	return nil
}

// write sends the queue until the peer is closed or fails.
func (p *peer) write() error {
	w := bufio.NewWriterSize(p.conn, bufferSize)
	for {
		batch, ok := p.take()
		if !ok {
			return nil
		}
		err := writeAll(w, batch)
		p.done(batch)
		if err != nil {
			return err
		}
	}
}

func writeAll(w *bufio.Writer, batch []outgoing) error {
	for _, o := range batch {
		var err error
		if o.command != "" {
			err = writeCommand(w, o.command, o.frames[0])
		} else {
			err = writeMessage(w, o.frames)
		}
		if err != nil {
			return err
		}
	}
	return w.Flush()
}

// take waits for messages and takes them all.
func (p *peer) take() ([]outgoing, bool) {
	p.mu.Lock()
	defer p.mu.Unlock()
	for len(p.queue) == 0 && !p.closed {
		p.wake.Wait()
	}
	if p.closed {
		return nil, false
	}
	batch := p.queue
	p.queue = nil
	p.writing = true
	return batch, true
}

// done takes a written batch off the account.
func (p *peer) done(batch []outgoing) {
	p.mu.Lock()
	defer p.mu.Unlock()
	for _, o := range batch {
		p.waiting -= o.size()
	}
	p.writing = false
	p.wake.Broadcast()
}

// drain waits until everything queued is handed to the system, or the deadline.
func (p *peer) drain(deadline time.Time) {
	p.conn.SetWriteDeadline(deadline) // ends a write that hangs; an error shows there
	p.mu.Lock()
	defer p.mu.Unlock()
	for (len(p.queue) > 0 || p.writing) && !p.closed {
		p.wake.Wait()
	}
}

// close ends the peer: reader and writer return.
func (p *peer) close() {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.shut()
}

func (p *peer) shut() {
	if p.closed {
		return
	}
	p.closed = true
	p.queue = nil
	p.conn.Close()
	p.wake.Broadcast()
}

// read hands every message of the peer to take and answers its pings, until the peer fails or is closed.
func (p *peer) read(take func([][]byte), command func(name string, body []byte)) error {
	for {
		got, err := p.in.next()
		if err != nil {
			return err
		}
		if !got.command {
			take(got.frames)
			continue
		}
		name, body, ok := splitCommand(got.frames[0])
		switch {
		case !ok:
			return errFlags
		case name == "PING":
			if err := p.pong(body); err != nil {
				return err
			}
		default:
			command(name, body)
		}
	}
}

// pong answers a heartbeat of the transport: two bytes with the time after which the peer wants a silent connection
// ended, in tenths of a second, and a context that goes back (RFC 37, "connection heartbeating").
func (p *peer) pong(body []byte) error {
	if len(body) < 2 {
		return errFlags
	}
	p.in.idle = time.Duration(binary.BigEndian.Uint16(body)) * 100 * time.Millisecond
	return p.send(outgoing{command: "PONG", frames: [][]byte{body[2:]}})
}
