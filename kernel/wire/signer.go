package wire

import (
	"crypto/hmac"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"hash"
	"sync"
)

// Scheme is the only signature scheme in use.
const Scheme = "hmac-sha256"

// Signer makes and checks signatures: HMAC-SHA256, in hexadecimal, over the four JSON frames. It is safe for use by
// several goroutines.
type Signer struct {
	open bool // no key: nothing is signed
	pool sync.Pool
}

// NewSigner gives a signer for a scheme ("" means [Scheme]) and a key. Without a key nothing is signed.
func NewSigner(scheme, key string) (*Signer, error) {
	if scheme != "" && scheme != Scheme {
		return nil, fmt.Errorf("signature scheme %q is not known; use %s", scheme, Scheme)
	}
	secret := []byte(key)
	return &Signer{
		open: key == "",
		pool: sync.Pool{New: func() any { return hmac.New(sha256.New, secret) }},
	}, nil
}

// Sign gives the signature of parts; empty without a key.
func (s *Signer) Sign(parts ...[]byte) []byte {
	if s.open {
		return []byte{}
	}
	sum := s.sum(parts)
	return hex.AppendEncode(make([]byte, 0, 2*len(sum)), sum)
}

// Check tells whether signature belongs to parts. The time it takes does not depend on where they differ. Without a
// key every signature passes.
func (s *Signer) Check(signature []byte, parts ...[]byte) bool {
	if s.open {
		return true
	}
	got := make([]byte, sha256.Size)
	if len(signature) != hex.EncodedLen(sha256.Size) {
		return false
	}
	if _, err := hex.Decode(got, signature); err != nil {
		return false
	}
	return hmac.Equal(got, s.sum(parts))
}

func (s *Signer) sum(parts [][]byte) []byte {
	h := s.pool.Get().(hash.Hash)
	defer s.pool.Put(h)
	h.Reset()
	for _, p := range parts {
		h.Write(p)
	}
	return h.Sum(nil)
}
