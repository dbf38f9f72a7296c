package kernel

import (
	"encoding/json"
	"unicode/utf8"

	"ampturn/kernel/wire"
)

// send sends one message on a channel.
func (k *Kernel) send(ch Channel, to [][]byte, typ string, parent json.RawMessage, content, metadata any) (id string, err error) {
	m := &wire.Message{Identities: to, Header: k.session.Header(typ), Parent: parent}
	if m.Content, err = wire.Marshal(content); err != nil {
		return "", err
	}
	if metadata != nil {
		if m.Metadata, err = wire.Marshal(metadata); err != nil {
			return "", err
		}
	}
	frames, err := k.session.Encode(m)
	if err != nil {
		return "", err
	}
	k.link(ch, frames)
	return m.Header.ID, nil
}

// broadcast sends one message to all front ends, under a topic that names kernel and type.
func (k *Kernel) broadcast(typ string, parent json.RawMessage, content any) error {
	topic := []byte("kernel." + k.session.ID + "." + typ)
	_, err := k.send(IOPub, [][]byte{topic}, typ, parent, content, nil)
	return err
}

// status tells all front ends what the kernel is doing: "starting", "busy" or "idle".
func (k *Kernel) status(state string, parent json.RawMessage) {
	k.broadcast("status", parent, struct { // plain strings: it cannot fail
		State string `json:"execution_state"`
	}{state})
}

// welcome gives the message that ends the wait of a new subscriber (Jupyter enhancement proposal 65): nothing sent
// after it is lost.
func (k *Kernel) welcome(topic []byte) [][]byte {
	if !utf8.Valid(topic) {
		return nil
	}
	content, err := wire.Marshal(struct {
		Subscription string `json:"subscription"`
	}{string(topic)})
	if err != nil {
		return nil
	}
	frames, err := k.session.Encode(&wire.Message{
		Identities: [][]byte{topic}, Header: k.session.Header("iopub_welcome"), Content: content,
	})
	if err != nil {
		return nil
	}
	return frames
}
