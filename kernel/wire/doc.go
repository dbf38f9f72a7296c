// Package wire turns messages of the Jupyter messaging protocol into frames and back. It opens no socket.
//
// A message is a routing prefix, a delimiter, a signature and four JSON objects (header, parent header, metadata,
// content), with raw buffers behind them. [Session] signs what goes out and checks what comes in: a [Signer] holds the
// key, a guard refuses a signature that was seen before.
//
//	s := wire.NewSession(signer, "user")
//	frames, err := s.Encode(msg)
//	msg, err := s.Decode(frames)
//
// Source: Jupyter messaging document, version 5.5, "The Wire Protocol".
package wire
