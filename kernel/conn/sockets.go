package conn

import (
	"fmt"
	"sync"
	"time"
)

// Handlers say what becomes of incoming messages. They are called by several goroutines, for one peer in the order
// in which it sent; frames[0] is the identity of the peer. While a handler runs, its peer is not read further.
type Handlers struct {
	Shell, Control, Stdin func(frames [][]byte)
	// Welcome gives the message for a peer that has subscribed to a topic; nil: none.
	Welcome func(topic []byte) [][]byte
}

// Sockets are the five sockets of a kernel.
type Sockets struct {
	Shell, Control, Stdin *Router
	IOPub                 *Publisher
	heartbeat             *socket
}

// Listen opens the five sockets of a connection file, or none. Nobody is served before [Sockets.Serve]. It fails at
// once when a port is taken, so that a server can start the kernel anew with other ports.
func Listen(f *File, h Handlers, set *Settings) (*Sockets, error) {
	lim := set.withDefaults()
	s := &Sockets{
		Shell:     newRouter(lim, h.Shell),
		Control:   newRouter(lim, h.Control),
		Stdin:     newRouter(lim, h.Stdin),
		IOPub:     newPublisher(lim, h.Welcome),
		heartbeat: newEcho(lim),
	}
	open := []*socket{s.Shell.socket, s.IOPub.socket, s.Stdin.socket, s.Control.socket, s.heartbeat}
	for i, p := range f.ports() {
		network, address := f.Address(p.port)
		if err := open[i].listen(network, address); err != nil {
			for _, o := range open {
				o.refuse()
			}
			return nil, fmt.Errorf("%s socket: %w", p.name, err)
		}
	}
	return s, nil
}

func (s *Sockets) all() []*socket {
	return []*socket{s.Shell.socket, s.Control.socket, s.Stdin.socket, s.IOPub.socket, s.heartbeat}
}

// Serve accepts peers until [Sockets.Close]. It returns at once.
func (s *Sockets) Serve() {
	for _, o := range s.all() {
		go o.serve()
	}
}

// Close takes no further peers, gives the messages in the queues up to patience to leave, and ends all peers. It
// returns when their goroutines have ended, or soon after the patience is over.
func (s *Sockets) Close(patience time.Duration) {
	deadline := time.Now().Add(patience)
	var wait sync.WaitGroup
	for _, o := range s.all() {
		wait.Go(func() {
			o.close(deadline)
			o.all.Wait()
		})
	}
	ended := make(chan struct{})
	go func() {
		wait.Wait()
		close(ended)
	}()
	select {
	case <-ended:
	case <-time.After(patience + 100*time.Millisecond):
	}
}
