package notebook

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"syscall"
)

// SaveError says why a file could not be written. The file that was there is unharmed.
type SaveError struct {
	Path string
	Text string // the whole line: "out/: no space left; design.ipynb is as it was"
	Err  error
}

// Error gives the line that a reader sees.
func (e *SaveError) Error() string { return e.Text }

// Unwrap gives the cause.
func (e *SaveError) Unwrap() error { return e.Err }

// Save writes a file so that at every moment either the old or the new content is there as a whole: into a new file
// beside it, to the disk, then in one step under its name. A link is followed; the file's permissions are kept.
//
// Errors: [*SaveError] when the folder is not there or cannot be written, the disk is full, the file is too large.
func Save(path string, data []byte) error {
	if real, err := filepath.EvalSymlinks(path); err == nil {
		path = real
	}
	info, err := os.Stat(path)
	old := err == nil
	if old && info.IsDir() {
		return &SaveError{Path: path, Text: path + " is a folder; it cannot be written as a file", Err: syscall.EISDIR}
	}
	if err := replace(path, data); err != nil {
		return saveError(path, old, err)
	}
	return nil
}

// saveError words a failed save: folder, cause, what became of the old file.
func saveError(path string, old bool, err error) error {
	dir, name := filepath.Split(path)
	if dir == "" {
		dir = "." + string(filepath.Separator)
	}
	var text string
	switch {
	case errors.Is(err, syscall.ENOSPC), errors.Is(err, syscall.EDQUOT):
		text = "no space left"
	case errors.Is(err, syscall.EFBIG):
		text = "the file is larger than this system lets a file be"
	case errors.Is(err, syscall.EROFS), errors.Is(err, fs.ErrPermission):
		text = "the folder cannot be written"
	case errors.Is(err, fs.ErrNotExist):
		text = "no such folder"
	case errors.Is(err, syscall.ENOTDIR):
		text = "a part of it is a file, not a folder"
	default:
		text = cause(err).Error()
	}
	state := name + " is not written"
	if old {
		state = name + " is as it was"
	}
	return &SaveError{Path: path, Text: fmt.Sprintf("%s: %s; %s", dir, text, state), Err: err}
}

// cause strips operation and path from an error of the operating system.
func cause(err error) error {
	var path *fs.PathError
	var link *os.LinkError
	switch {
	case errors.As(err, &path):
		return path.Err
	case errors.As(err, &link):
		return link.Err
	}
	return err
}

// Create writes the notebook to a file that must not be there yet.
//
// Errors: [fs.ErrExist] if there is a file of that name; what [Notebook.Write] meets.
func (nb *Notebook) Create(path string) error {
	f, err := os.OpenFile(path, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o644)
	if err != nil {
		if errors.Is(err, fs.ErrExist) {
			return fmt.Errorf("%s is there already; choose another name, nothing was written: %w", path, fs.ErrExist)
		}
		return saveError(path, false, err)
	}
	if err := f.Close(); err != nil {
		return saveError(path, false, err)
	}
	if err := nb.Write(path); err != nil {
		return errors.Join(err, os.Remove(path))
	}
	return nil
}
