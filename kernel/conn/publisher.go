package conn

import (
	"strings"
	"sync"
)

// Publisher is a socket that broadcasts to subscribers.
type Publisher struct {
	*socket
	welcome func(topic []byte) [][]byte

	order sync.Mutex // one broadcast or change of subscriptions at a time
}

func newPublisher(s Settings, welcome func(topic []byte) [][]byte) *Publisher {
	p := &Publisher{socket: newSocket(kindPublisher, s), welcome: welcome}
	p.message = func(from *peer, frames [][]byte) {
		if len(frames) == 1 && len(frames[0]) > 0 && frames[0][0] <= 1 { // RFC 23: a message of 1 or 0 and the topic
			p.subscribe(from, frames[0][1:], frames[0][0] == 1)
		}
	}
	p.command = func(from *peer, name string, body []byte) { // RFC 37: commands
		switch name {
		case "SUBSCRIBE":
			p.subscribe(from, body, true)
		case "CANCEL":
			p.subscribe(from, body, false)
		}
	}
	return p
}

// maxTopics bounds the subscriptions of a peer.
const maxTopics = 1024

// subscribe counts a subscription up or down. A new one is welcomed before anything else that it lets through.
func (p *Publisher) subscribe(from *peer, topic []byte, on bool) {
	p.order.Lock()
	defer p.order.Unlock()
	key := string(topic)
	switch n := from.topics[key]; {
	case !on && n <= 1:
		delete(from.topics, key)
	case !on:
		from.topics[key] = n - 1
	case n == 0 && len(from.topics) >= maxTopics:
		p.limit.Log("iopub: a peer with more than %d subscriptions", maxTopics)
	default:
		if from.topics == nil {
			from.topics = make(map[string]int)
		}
		from.topics[key] = n + 1
		if n > 0 || p.welcome == nil {
			return
		}
		if frames := p.welcome(topic); frames != nil {
			from.send(outgoing{frames: frames}) // a peer that has gone needs no welcome
		}
	}
}

// Send queues a message for every peer that subscribed to a prefix of its first frame. It never waits.
func (p *Publisher) Send(frames [][]byte) {
	if len(frames) == 0 {
		return
	}
	topic := string(frames[0])
	p.order.Lock()
	defer p.order.Unlock()
	p.mu.Lock()
	defer p.mu.Unlock()
	for _, to := range p.peers {
		if !to.wants(topic) {
			continue
		}
		if err := to.send(outgoing{frames: frames}); err != nil {
			p.limit.Log("iopub: %v", err)
		}
	}
}

func (p *peer) wants(topic string) bool {
	for t := range p.topics {
		if strings.HasPrefix(topic, t) {
			return true
		}
	}
	return false
}
