//go:build !unix

package notebook

import (
	"os"
	"path/filepath"
)

// replace writes a new file beside the old one and renames it, where renameio has nothing to offer.
func replace(path string, data []byte) error {
	f, err := os.CreateTemp(filepath.Dir(path), filepath.Base(path)+".new")
	if err != nil {
		return err
	}
	defer func() { _ = os.Remove(f.Name()) }() // after success it is not there any more
	_, err = f.Write(data)
	if err == nil {
		err = f.Sync()
	}
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	return err
}
