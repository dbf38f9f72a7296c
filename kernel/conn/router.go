package conn

// Router is a socket that takes requests and sends replies by identity.
type Router struct{ *socket }

func newRouter(s Settings, receive func(frames [][]byte)) *Router {
	r := &Router{newSocket(kindRouter, s)}
	r.message = func(p *peer, frames [][]byte) {
		receive(append([][]byte{[]byte(p.identity)}, frames...))
	}
	return r
}

// Send queues a message for the peer that its first frame names. It never waits. A message for a peer that has left
// is dropped.
func (r *Router) Send(frames [][]byte) {
	if len(frames) == 0 {
		return
	}
	p := r.find(string(frames[0]))
	if p == nil {
		return
	}
	if err := p.send(outgoing{frames: frames[1:]}); err != nil {
		r.limit.Log("reply: %v", err)
	}
}

// newEcho gives the heartbeat: it sends every message back.
func newEcho(s Settings) *socket {
	e := newSocket(kindEcho, s)
	e.message = func(p *peer, frames [][]byte) {
		if err := p.send(outgoing{frames: frames}); err != nil {
			e.limit.Log("heartbeat: %v", err)
		}
	}
	return e
}
