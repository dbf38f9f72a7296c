package batch

import (
	"crypto/sha256"
	"encoding/hex"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// page makes the page and leaves the record of the run in the notebook: the pictures beside the notebook that its texts
// show are known only when the texts have been read.
func (s Settings) page(d document) ([]byte, error) {
	pictures := &hashing{}
	if root, err := os.OpenRoot(d.dir); err == nil {
		defer root.Close() //nolint:errcheck // it was only read from
		pictures.FS = root.FS()
	}
	opt := page.Options{Provenance: append([]page.Row{
		{Name: "notebook", Value: filepath.Base(d.path)},
		{Name: "hash of the cells (SHA-256)", Value: d.nb.Hash()},
	}, s.Provenance...)}
	if pictures.FS != nil {
		opt.Files = pictures
	}
	var sources []Source
	opt.Rests = func() []page.Row {
		sources = s.sources(pictures.list)
		var rows []page.Row
		for _, x := range sources {
			value := x.Value
			if x.Kind == dataFile {
				value = "SHA-256 " + value
			}
			rows = append(rows, page.Row{Name: x.Kind + " " + x.Name, Value: value})
		}
		return rows
	}
	html, err := page.Render(d.nb, opt)
	if err == nil {
		d.nb.SetRecord(s.record(sources))
	}
	return html, err
}

// sources lists what the run has used, files once each and in the order of their names.
func (s Settings) sources(pictures []Source) []Source {
	var files, others []Source
	all := pictures
	if s.Sources != nil {
		all = append(s.Sources(), pictures...)
	}
	for _, x := range all {
		switch {
		case x.Kind != dataFile:
			others = append(others, x)
		case !slices.Contains(files, x):
			files = append(files, x)
		}
	}
	slices.SortFunc(files, func(a, b Source) int { return strings.Compare(a.Name+a.Value, b.Name+b.Value) })
	return append(files, others...)
}

// record is what the run leaves for programs.
func (s Settings) record(sources []Source) notebook.Record {
	var r notebook.Record
	for _, p := range s.Provenance {
		r.Provenance = append(r.Provenance, notebook.Named(p))
	}
	for _, x := range sources {
		if x.Kind == dataFile {
			r.Files = append(r.Files, notebook.Named{Name: x.Name, Value: x.Value})
			continue
		}
		r.Provenance = append(r.Provenance, notebook.Named{Name: x.Kind + " " + x.Name, Value: x.Value})
	}
	if s.Verdicts != nil {
		r.Verdicts = s.Verdicts()
	}
	return r
}

// hashing is a folder that notes what is read from it.
type hashing struct {
	fs.FS
	list []Source
}

// ReadFile reads a file and notes its hash.
func (h *hashing) ReadFile(name string) ([]byte, error) {
	data, err := fs.ReadFile(h.FS, name)
	if err == nil {
		sum := sha256.Sum256(data)
		h.list = append(h.list, Source{dataFile, name, hex.EncodeToString(sum[:])})
	}
	return data, err
}
