// Package spec installs the kernel where front ends look for kernels, lists where it is installed, and removes it.
//
// A kernel entry is a folder kernels/NAME below a data folder of Jupyter, with kernel.json and logos. It needs
// nothing but the binary: no Go, no Python.
//
// Sources: Jupyter documentation, "Making kernels for Jupyter" (kernel specs) and "Common directories and file
// locations" (data files).
package spec

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
)

// Entry describes a kernel to front ends. The zero value of a field means its default.
type Entry struct {
	Name     string // of the folder: "ampturn"
	Display  string // in menus: "ampturn"
	Language string // "go"
	Binary   string // absolute path of the program; needed
}

func (e Entry) withDefaults() Entry {
	or := func(p *string, value string) {
		if *p == "" {
			*p = value
		}
	}
	or(&e.Name, "ampturn")
	or(&e.Display, "ampturn")
	or(&e.Language, "go")
	return e
}

// file is kernel.json. The protocol version is left out: with 5.5 or more a front end might expect the kernel to
// choose its ports itself and to register (Jupyter enhancement proposal 66).
type file struct {
	Argv      []string       `json:"argv"`
	Display   string         `json:"display_name"`
	Language  string         `json:"language"`
	Interrupt string         `json:"interrupt_mode"`
	Metadata  map[string]any `json:"metadata"`
}

// owner marks an entry as one that this package wrote.
const owner = "ampturn"

// validName is what front ends take as a kernel's name; a dot first would hide the folder, or leave it.
var validName = regexp.MustCompile(`^[a-zA-Z0-9_-][a-zA-Z0-9._-]*$`)

// Install writes the entry and gives its folder. An older entry of ours under that name is replaced, another's is
// refused.
func Install(e Entry, p Place) (dir string, err error) {
	e = e.withDefaults()
	files, err := e.files()
	if err != nil {
		return "", err
	}
	kernels, err := p.kernels()
	if err != nil {
		return "", err
	}
	dir = filepath.Join(kernels, e.Name)
	if err := ours(dir); err != nil && !errors.Is(err, fs.ErrNotExist) {
		return "", err
	}
	if err := os.MkdirAll(kernels, 0o755); err != nil {
		return "", err
	}
	fresh, err := os.MkdirTemp(kernels, ".new-"+e.Name+"-")
	if err != nil {
		return "", err
	}
	defer os.RemoveAll(fresh)
	if err := os.Chmod(fresh, 0o755); err != nil {
		return "", err
	}
	for name, content := range files {
		if err := os.WriteFile(filepath.Join(fresh, name), content, 0o644); err != nil {
			return "", err
		}
	}
	if err := os.RemoveAll(dir); err != nil {
		return "", err
	}
	return dir, os.Rename(fresh, dir)
}

// Remove removes the entry of a name and gives its folder. An entry that is not ours stays.
func Remove(name string, p Place) (dir string, err error) {
	name = Entry{Name: name}.withDefaults().Name
	if !validName.MatchString(name) {
		return "", fmt.Errorf("kernel name %q: only letters, digits, dash, underscore and, not first, dot", name)
	}
	kernels, err := p.kernels()
	if err != nil {
		return "", err
	}
	dir = filepath.Join(kernels, name)
	if err := ours(dir); err != nil {
		return "", err
	}
	return dir, os.RemoveAll(dir)
}

// ours tells with an error if a folder is not an entry that this package wrote.
func ours(dir string) error {
	b, err := os.ReadFile(filepath.Join(dir, "kernel.json"))
	if err != nil {
		return err
	}
	var f file
	if err := json.Unmarshal(b, &f); err != nil || f.Metadata["installed_by"] != owner {
		return fmt.Errorf("kernel entry %s is of another program; remove it there, or choose another name", dir)
	}
	return nil
}

// files gives the contents of the entry by file name.
func (e Entry) files() (map[string][]byte, error) {
	if !validName.MatchString(e.Name) {
		return nil, fmt.Errorf("kernel name %q: only letters, digits, dash, underscore and, not first, dot", e.Name)
	}
	if !filepath.IsAbs(e.Binary) {
		return nil, fmt.Errorf("program %q: the path must be absolute, a front end starts it from anywhere", e.Binary)
	}
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(file{
		Argv:      []string{e.Binary, "kernel", "{connection_file}"},
		Display:   e.Display,
		Language:  e.Language,
		Interrupt: "message",
		Metadata:  map[string]any{"installed_by": owner},
	}); err != nil {
		return nil, err
	}
	files := map[string][]byte{"kernel.json": b.Bytes(), "logo-svg.svg": []byte(logoSVG())}
	for _, size := range []int{32, 64} {
		png, err := logoPNG(size)
		if err != nil {
			return nil, err
		}
		files[fmt.Sprintf("logo-%dx%d.png", size, size)] = png
	}
	return files, nil
}
