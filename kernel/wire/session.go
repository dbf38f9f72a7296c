package wire

import (
	"crypto/rand"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"strconv"
	"sync/atomic"
	"time"
)

// Delimiter stands between the routing prefix and the signature.
const Delimiter = "<IDS|MSG>"

// Errors of [Session.Decode]. A message that fails is dropped without an answer.
var (
	ErrDelimiter = errors.New("no delimiter")
	ErrShort     = errors.New("fewer than four parts behind the signature")
	ErrSignature = errors.New("wrong signature")
	ErrReplay    = errors.New("signature seen before")
)

// Session writes and reads the messages of one kernel process. It is safe for use by several goroutines.
type Session struct {
	ID     string // new for each process
	user   string
	signer *Signer
	guard  *guard
	count  atomic.Uint64
	now    func() time.Time
}

// NewSession starts a session under a fresh random name.
func NewSession(signer *Signer, user string) *Session {
	return &Session{ID: randomID(), user: user, signer: signer, guard: newGuard(guardSize), now: time.Now}
}

func randomID() string {
	var b [16]byte
	rand.Read(b[:]) // never fails: crypto/rand ends the program instead
	return hex.EncodeToString(b[:])
}

// Header gives the header of a new message of this session.
func (s *Session) Header(typ string) Header {
	return Header{
		ID:      s.ID + "_" + strconv.FormatUint(s.count.Add(1), 10),
		Session: s.ID,
		User:    s.user,
		Date:    s.now().UTC().Format("2006-01-02T15:04:05.000000Z"),
		Type:    typ,
		Version: Version,
	}
}

// Encode gives the frames of m: prefix, delimiter, signature, four objects, buffers. A header without an ID is
// completed by [Session.Header].
func (s *Session) Encode(m *Message) ([][]byte, error) {
	if m.Header.ID == "" {
		m.Header = s.Header(m.Header.Type)
	}
	head, err := Marshal(m.Header)
	if err != nil {
		return nil, err
	}
	parts := [4][]byte{head, orEmpty(m.Parent), orEmpty(m.Metadata), orEmpty(m.Content)}
	frames := make([][]byte, 0, len(m.Identities)+6+len(m.Buffers))
	frames = append(frames, m.Identities...)
	frames = append(frames, []byte(Delimiter), s.signer.Sign(parts[:]...))
	frames = append(frames, parts[:]...)
	return append(frames, m.Buffers...), nil
}

func orEmpty(b []byte) []byte {
	if len(b) == 0 {
		return Empty
	}
	return b
}

// Decode reads the frames of one message and checks the signature before anything else. The frames stay in use.
func (s *Session) Decode(frames [][]byte) (*Message, error) {
	at := -1
	for i, f := range frames {
		if string(f) == Delimiter {
			at = i
			break
		}
	}
	if at < 0 {
		return nil, ErrDelimiter
	}
	rest := frames[at+1:]
	if len(rest) < 5 {
		return nil, ErrShort
	}
	signature, parts := rest[0], rest[1:5]
	if !s.signer.Check(signature, parts...) {
		return nil, ErrSignature
	}
	m := &Message{
		Identities: frames[:at:at],
		Raw:        parts[0], Parent: parts[1], Metadata: parts[2], Content: parts[3],
		Buffers: rest[5:],
	}
	if err := m.check(); err != nil {
		return nil, err
	}
	if !s.signer.open && !s.guard.fresh(signature) {
		return nil, ErrReplay
	}
	return m, nil
}

// check reads the header and makes sure that every part is an object.
func (m *Message) check() error {
	for i, p := range [][]byte{m.Raw, m.Parent, m.Metadata, m.Content} {
		if err := object(p); err != nil {
			return fmt.Errorf("%s: %w", partNames[i], err)
		}
	}
	if err := json.Unmarshal(m.Raw, &m.Header); err != nil {
		return fmt.Errorf("header: %w", err)
	}
	if m.Header.ID == "" || m.Header.Type == "" {
		return errors.New("header: no msg_id or no msg_type")
	}
	return nil
}

var partNames = [...]string{"header", "parent header", "metadata", "content"}
