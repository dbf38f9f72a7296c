package conn

import (
	"bufio"
	"errors"
	"net"
	"os"
	"strconv"
	"sync"
	"time"
)

// socket listens on one address and keeps its peers.
type socket struct {
	kind     kind
	limit    Settings
	listener net.Listener

	// What the kinds of socket differ in: what becomes of a message, of a command, of a peer that comes or goes.
	message func(*peer, [][]byte)
	command func(p *peer, name string, body []byte)

	mu      sync.Mutex
	peers   map[string]*peer // by identity
	count   int              // names peers that have no identity
	greeted int              // peers within the handshake
	closed  bool
	all     sync.WaitGroup
}

func newSocket(k kind, s Settings) *socket {
	return &socket{
		kind: k, limit: s, peers: make(map[string]*peer),
		message: func(*peer, [][]byte) {},
		command: func(*peer, string, []byte) {},
	}
}

// listen opens the address. The peers are served once serve is called.
func (s *socket) listen(network, address string) error {
	if network == "unix" {
		removeStale(address)
	}
	l, err := net.Listen(network, address)
	if err != nil {
		return err
	}
	s.listener = l
	return nil
}

// removeStale removes a socket file that nobody listens on any more, as a killed process leaves it.
func removeStale(path string) {
	info, err := os.Lstat(path)
	if err != nil || info.Mode()&os.ModeSocket == 0 {
		return
	}
	c, err := net.DialTimeout("unix", path, time.Second)
	if err != nil {
		os.Remove(path)
		return
	}
	c.Close()
}

// serve accepts peers until the socket is closed.
func (s *socket) serve() {
	for {
		c, err := s.listener.Accept()
		switch {
		case err == nil:
			s.admit(c)
		case errors.Is(err, net.ErrClosed):
			return
		default: // out of descriptors, or the peer has left already
			s.limit.Log("accept: %v", err)
			time.Sleep(10 * time.Millisecond)
		}
	}
}

// admit starts a peer unless too many are in the handshake.
func (s *socket) admit(c net.Conn) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.closed || s.greeted >= s.limit.Greeting {
		c.Close()
		return
	}
	s.greeted++
	s.all.Add(1)
	go s.attend(c)
}

// attend serves one connection from greeting to end.
func (s *socket) attend(c net.Conn) {
	defer s.all.Done()
	defer c.Close()
	buf, identity, err := shake(c, s.kind, &s.limit)
	p, ok := s.join(c, buf, identity, err == nil)
	if !ok {
		if err != nil {
			s.limit.Log("%s: %v", s.kind, err)
		}
		return
	}
	defer s.leave(p)
	s.all.Add(1)
	go func() {
		defer s.all.Done()
		if err := p.write(); err != nil {
			s.limit.Log("%s: write: %v", s.kind, err)
		}
		p.close()
	}()
	err = p.read(func(f [][]byte) { s.message(p, f) }, func(name string, body []byte) { s.command(p, name, body) })
	s.limit.Log("%s: peer left: %v", s.kind, err)
}

// join enters a peer after its handshake. Of two peers with one identity the newer wins: the older is a connection
// that its owner has given up.
func (s *socket) join(c net.Conn, buf *bufio.Reader, identity string, known bool) (*peer, bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.greeted--
	if s.closed || !known {
		return nil, false
	}
	if identity == "" {
		s.count++
		identity = "\x00" + strconv.Itoa(s.count) // a leading zero is reserved for such names (RFC 28)
	}
	if old := s.peers[identity]; old != nil {
		old.close()
	}
	p := newPeer(c, buf, identity, &s.limit)
	s.peers[identity] = p
	return p, true
}

func (s *socket) leave(p *peer) {
	p.close()
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.peers[p.identity] == p {
		delete(s.peers, p.identity)
	}
}

// find gives the peer of an identity, or nil.
func (s *socket) find(identity string) *peer {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.peers[identity]
}

// refuse closes the door: no new peers.
func (s *socket) refuse() {
	s.mu.Lock()
	s.closed = true
	s.mu.Unlock()
	if s.listener != nil {
		s.listener.Close()
	}
}

// close ends every peer once its queue is empty, at the deadline at the latest.
func (s *socket) close(deadline time.Time) {
	s.refuse()
	s.mu.Lock()
	peers := make([]*peer, 0, len(s.peers))
	for _, p := range s.peers {
		peers = append(peers, p)
	}
	s.mu.Unlock()
	for _, p := range peers {
		p.drain(deadline)
		p.close()
	}
}
