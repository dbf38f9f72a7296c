//go:build unix

package kernel

import (
	"errors"
	"syscall"
)

// running tells whether a process exists.
func running(pid int) bool {
	err := syscall.Kill(pid, 0)
	return err == nil || errors.Is(err, syscall.EPERM)
}
