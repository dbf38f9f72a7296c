package session

import (
	"crypto/sha256"
	"encoding/hex"
	"io"
	"io/fs"
	"os"
	"path"
	"slices"
	"strings"
)

// Source is one thing outside the cells that the numbers of a notebook rest on.
type Source struct {
	Kind  string // "data file", "seed", ...
	Name  string // "bh.csv"
	Value string // what tells whether it is still the same: the SHA-256 of a file, the seed
}

// DataFile is the Kind of a file that a cell has read; its Value is the SHA-256 of its bytes as hex digits.
const DataFile = "data file"

// sources are those of the one notebook, guarded by state.
var sources struct {
	folder string
	list   []Source
}

// SetFolder names the folder of the notebook, from which [ReadFile] reads; "" for none. Call it before [Reset] or after.
func SetFolder(dir string) {
	state.Lock()
	defer state.Unlock()
	sources.folder = dir
}

// ReadFile reads a file beside the notebook, or in a folder below it, and notes it as a source. Names that lead out of
// the folder, by ".." or by a link, are refused.
//
// Errors: [fs.ErrInvalid] for a name that leads out or is absolute; what opening and reading met else.
func ReadFile(name string) ([]byte, error) {
	state.Lock()
	dir := sources.folder
	state.Unlock()
	clean := path.Clean(strings.ReplaceAll(name, `\`, "/"))
	if !fs.ValidPath(clean) {
		return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrInvalid}
	}
	if dir == "" {
		dir = "."
	}
	root, err := os.OpenRoot(dir)
	if err != nil {
		return nil, err
	}
	defer root.Close() //nolint:errcheck // it was only read from
	f, err := root.Open(clean)
	if err != nil {
		return nil, err
	}
	defer f.Close() //nolint:errcheck // it was only read from
	data, err := io.ReadAll(f)
	if err != nil {
		return nil, err
	}
	sum := sha256.Sum256(data)
	Rest(Source{DataFile, clean, hex.EncodeToString(sum[:])})
	return data, nil
}

// Rest notes a source of the numbers that follow. The same source noted again is noted once.
func Rest(s Source) {
	state.Lock()
	defer state.Unlock()
	if !slices.Contains(sources.list, s) {
		sources.list = append(sources.list, s)
	}
}

// Sources gives what was noted since [Reset], in order.
func Sources() []Source {
	state.Lock()
	defer state.Unlock()
	return slices.Clone(sources.list)
}
