//go:build unix

package notebook

import (
	"os/signal"
	"syscall"
)

// ignoreSizeSignal makes a write beyond the size limit of files an error; the signal would end the process.
func ignoreSizeSignal() { signal.Ignore(syscall.SIGXFSZ) }
