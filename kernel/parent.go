package kernel

import (
	"context"
	"os"
	"strconv"
	"time"
)

// parentEvery is how often the parent is looked for.
const parentEvery = 500 * time.Millisecond

// watchParent gives a channel that is closed when the process that started the kernel is gone. Front ends name it in
// JPY_PARENT_PID; without that name nobody is watched. A launcher may stand between the two, so the sign is that the
// parent changes, not that it differs from the name; a named process that was there at the start must also stay.
func watchParent(ctx context.Context) <-chan struct{} {
	gone := make(chan struct{})
	named, err := strconv.Atoi(os.Getenv("JPY_PARENT_PID"))
	if err != nil || named <= 0 {
		return gone
	}
	first := os.Getppid()
	watchNamed := named != first && running(named)
	go func() {
		tick := time.NewTicker(parentEvery)
		defer tick.Stop()
		for {
			select {
			case <-ctx.Done():
				return
			case <-tick.C:
			}
			if os.Getppid() != first || watchNamed && !running(named) {
				close(gone)
				return
			}
		}
	}()
	return gone
}
