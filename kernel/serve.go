package kernel

import (
	"context"
	"os"
	"os/signal"
	"syscall"
	"time"

	"ampturn/kernel/conn"
	"ampturn/kernel/wire"
)

// Times of the end of a kernel.
const (
	cellPatience  = 400 * time.Millisecond // for the interrupted cell to end
	drainPatience = time.Second            // for the last messages to leave
)

// Serve runs a kernel on the sockets of a connection file until a front end shuts it down, ctx ends, the process gets
// SIGTERM or its parent dies. SIGINT interrupts the running cell. It returns nil after an orderly end; a cell that
// cannot be interrupted is left behind. Errors: the connection file cannot be read, or a port is taken.
func Serve(ctx context.Context, connectionFile string, engine Engine, o *Options) error {
	f, err := conn.ReadFile(connectionFile)
	if err != nil {
		return err
	}
	signer, err := wire.NewSigner(f.Scheme, f.Key)
	if err != nil {
		return err
	}
	var k *Kernel
	var set conn.Settings
	if o != nil {
		set.Log = o.Log
	}
	sockets, err := conn.Listen(f, conn.Handlers{
		Shell:   func(m [][]byte) { k.Receive(Shell, m) },
		Control: func(m [][]byte) { k.Receive(Control, m) },
		Stdin:   func(m [][]byte) { k.Receive(Stdin, m) },
		Welcome: func(topic []byte) [][]byte { return k.Welcome(topic) },
	}, &set)
	if err != nil {
		return err
	}
	k = New(engine, linkTo(sockets), wire.NewSession(signer, userName()), o)
	box := openRecord(connectionFile)
	defer box.close()
	k.record = box
	if why := box.why(); why != "" {
		k.Note(why)
	}
	sockets.Serve()
	k.live(ctx)
	sockets.Close(drainPatience)
	return nil
}

func linkTo(s *conn.Sockets) Link {
	return func(ch Channel, frames [][]byte) {
		switch ch {
		case Shell:
			s.Shell.Send(frames)
		case Control:
			s.Control.Send(frames)
		case Stdin:
			s.Stdin.Send(frames)
		case IOPub:
			s.IOPub.Send(frames)
		}
	}
}

// live runs the kernel to its end, whatever ends it.
func (k *Kernel) live(ctx context.Context) {
	signals := make(chan os.Signal, 4)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	defer signal.Stop(signals)
	ended := make(chan struct{})
	go func() {
		defer close(ended)
		k.Run(ctx)
	}()
	orphan := watchParent(ctx)
	for alive := true; alive; {
		select {
		case s := <-signals:
			if s == os.Interrupt {
				k.Interrupt()
				continue
			}
			alive = false
		case <-orphan:
			alive = false
		case <-ctx.Done():
			alive = false
		case <-k.Stopped():
			alive = false
		}
	}
	k.Stop()
	select {
	case <-ended:
	case <-time.After(cellPatience):
	}
	if c, ok := k.engine.(Closer); ok {
		guard("end of the kernel", func() {
			if err := c.Close(); err != nil {
				k.opt.Log("engine: %v", err)
			}
		})
	}
}

func userName() string {
	for _, name := range []string{"USER", "LOGNAME", "USERNAME"} {
		if u := os.Getenv(name); u != "" {
			return u
		}
	}
	return "kernel"
}
