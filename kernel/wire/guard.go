package wire

import (
	"encoding/hex"
	"sync"
)

// guardSize is how many signatures are remembered.
const guardSize = 1 << 16

// guard remembers the last signatures, so that a recorded message cannot be sent again. Half a signature tells them
// apart: 128 bits of a keyed hash.
type guard struct {
	mu   sync.Mutex
	seen map[[16]byte]struct{}
	ring [][16]byte
	next int
	size int
}

func newGuard(size int) *guard {
	return &guard{seen: make(map[[16]byte]struct{}), size: size}
}

// fresh records a signature in hexadecimal and tells whether it is new.
func (g *guard) fresh(signature []byte) bool {
	var k [16]byte
	if _, err := hex.Decode(k[:], signature[:min(len(signature), 2*len(k))]); err != nil {
		return false
	}
	g.mu.Lock()
	defer g.mu.Unlock()
	if _, old := g.seen[k]; old {
		return false
	}
	g.seen[k] = struct{}{}
	if len(g.ring) < g.size {
		g.ring = append(g.ring, k)
		return true
	}
	delete(g.seen, g.ring[g.next])
	g.ring[g.next] = k
	g.next = (g.next + 1) % g.size
	return true
}
