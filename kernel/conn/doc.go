// Package conn is the socket layer of the kernel: it reads the connection file and opens the five sockets.
//
//	shell, control, stdin   [Router]: requests in, replies out by identity
//	iopub                   [Publisher]: broadcasts to whoever subscribed, tells of new subscriptions
//	heartbeat               echo
//
// It speaks the ZeroMQ transport protocol (ZMTP 3): greeting, socket types and handshake come from zmq4, the framing
// behind them is its own. Each peer has one goroutine that reads and one that writes, with a queue limited in bytes
// between them and the kernel, so a peer that does not read its messages harms nobody but itself: it is dropped once
// its queue is full. Peers that stay silent in the handshake are dropped after [Settings].Handshake; lengths are
// checked before anything is allocated for them.
//
// Sources: ZeroMQ RFC 23 (ZMTP 3.0) and RFC 37 (ZMTP 3.1); Jupyter messaging document 5.5; Jupyter enhancement
// proposal 65 for the welcome message.
package conn
