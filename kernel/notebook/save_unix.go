//go:build unix

package notebook

import (
	"os/signal"
	"path/filepath"
	"syscall"

	"github.com/google/renameio/v2"
)

// replace writes a new file beside the old one and renames it. A write beyond the size limit of files must be an error
// like any other; the signal for it would end the process.
func replace(path string, data []byte) error {
	signal.Ignore(syscall.SIGXFSZ)
	f, err := renameio.NewPendingFile(path, renameio.WithTempDir(filepath.Dir(path)),
		renameio.WithPermissions(0o644), renameio.WithExistingPermissions())
	if err != nil {
		return err
	}
	defer func() { _ = f.Cleanup() }() // after success it does nothing; after a failure that failure is what counts
	if _, err := f.Write(data); err != nil {
		return err
	}
	return f.CloseAtomicallyReplace()
}
