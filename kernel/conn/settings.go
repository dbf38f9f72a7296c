package conn

import "time"

// Settings bounds what peers may cost. The zero value of a field means its default.
type Settings struct {
	Handshake time.Duration // a peer must be greeted and known within this time: 5 s
	Stall     time.Duration // inside a message, no byte for this long ends the peer: 60 s
	Message   int64         // largest message taken, bytes: 1 GiB
	Frames    int           // most frames of a message: 8192
	Queue     int64         // most bytes that wait for one peer: 256 MiB
	Greeting  int           // most peers of a socket within the handshake: 128
	Log       func(format string, args ...any)
}

func (s *Settings) withDefaults() Settings {
	var v Settings
	if s != nil {
		v = *s
	}
	setDefault(&v.Handshake, 5*time.Second)
	setDefault(&v.Stall, 60*time.Second)
	setDefault(&v.Message, 1<<30)
	setDefault(&v.Frames, 8192)
	setDefault(&v.Queue, 256<<20)
	setDefault(&v.Greeting, 128)
	if v.Log == nil {
		v.Log = func(string, ...any) {}
	}
	return v
}

func setDefault[T comparable](p *T, value T) {
	var zero T
	if *p == zero {
		*p = value
	}
}
