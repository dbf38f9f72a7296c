package wire

import (
	"bytes"
	"encoding/json"
	"errors"
	"unicode/utf8"
)

// Version is the version of the messaging protocol that [Session] writes.
const Version = "5.5"

// Header says which message it is and who sent it.
type Header struct {
	ID      string `json:"msg_id"`
	Session string `json:"session"`
	User    string `json:"username"`
	Date    string `json:"date"` // ISO 8601 with time zone
	Type    string `json:"msg_type"`
	Version string `json:"version"`
}

// Message is one message of any channel. Parent, Metadata and Content are JSON objects; nil stands for {}.
type Message struct {
	Identities [][]byte // routing prefix: identities of a requester, or the topic of a broadcast
	Header     Header
	Raw        json.RawMessage // the header as received: what replies carry as their parent
	Parent     json.RawMessage
	Metadata   json.RawMessage
	Content    json.RawMessage
	Buffers    [][]byte
}

// Marshal gives the JSON of v without escapes for HTML, which pictures and formulas are full of.
func Marshal(v any) (json.RawMessage, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		return nil, err
	}
	return bytes.TrimSuffix(b.Bytes(), []byte("\n")), nil
}

// Empty is the JSON object without fields.
var Empty = json.RawMessage("{}")

// object checks that b is one JSON object in UTF-8.
func object(b []byte) error {
	t := bytes.TrimLeft(b, " \t\r\n")
	switch {
	case !utf8.Valid(b):
		return errors.New("not UTF-8")
	case len(t) == 0 || t[0] != '{':
		return errors.New("not a JSON object")
	case !json.Valid(b):
		return errors.New("not JSON")
	}
	return nil
}
