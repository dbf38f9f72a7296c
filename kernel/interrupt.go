package kernel

import "context"

// interrupt answers interrupt_request. It belongs on control; one front end sends it on shell, where it is taken too.
func (k *Kernel) interrupt(_ context.Context, r *request) {
	r.around(&struct{}{}, func() any {
		k.Interrupt()
		return struct {
			Status string `json:"status"`
		}{"ok"}
	})
}

// Interrupt interrupts the running cell; if there is none, the work that earlier cells left behind.
func (k *Kernel) Interrupt() {
	k.mu.Lock()
	defer k.mu.Unlock()
	if k.running != nil {
		k.running()
		return
	}
	if b, ok := k.engine.(Background); ok {
		b.Interrupt()
	}
}

// started and ended mark the time in which Interrupt finds a cell.
func (k *Kernel) started(cancel context.CancelFunc) {
	k.mu.Lock()
	defer k.mu.Unlock()
	k.running = cancel
}

func (k *Kernel) ended() {
	k.mu.Lock()
	defer k.mu.Unlock()
	k.running = nil
}
