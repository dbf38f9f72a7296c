package spec

import (
	"errors"
	"os"
	"path/filepath"
	"runtime"
)

// Place says below which data folder of Jupyter an entry lies: the user's, or PREFIX/share/jupyter. The zero value is
// the user's.
type Place struct {
	Prefix string // a Python environment, or /usr/local
	Data   string // a data folder itself; wins over Prefix
}

// kernels gives the folder of the kernel entries.
func (p Place) kernels() (string, error) {
	data := p.Data
	switch {
	case data != "":
	case p.Prefix != "":
		data = filepath.Join(p.Prefix, "share", "jupyter")
	default:
		var err error
		if data, err = userData(runtime.GOOS, os.Getenv, os.UserHomeDir); err != nil {
			return "", err
		}
	}
	data, err := filepath.Abs(data)
	return filepath.Join(data, "kernels"), err
}

// userData gives the data folder of the user: JUPYTER_DATA_DIR if it is set, else the place of the system. With
// JUPYTER_PLATFORM_DIRS set, macOS uses its Application Support folder.
func userData(system string, env func(string) string, home func() (string, error)) (string, error) {
	if d := env("JUPYTER_DATA_DIR"); d != "" {
		return d, nil
	}
	if system == "windows" {
		if d := env("APPDATA"); d != "" {
			return filepath.Join(d, "jupyter"), nil
		}
	}
	if d := env("XDG_DATA_HOME"); d != "" && system != "darwin" && system != "windows" {
		return filepath.Join(d, "jupyter"), nil
	}
	h, err := home()
	if err != nil || h == "" {
		return "", errors.New("the user has no home folder; give a prefix, or set JUPYTER_DATA_DIR")
	}
	switch {
	case system == "windows":
		return filepath.Join(h, ".jupyter", "data"), nil
	case system == "darwin" && platformDirs(env):
		return filepath.Join(h, "Library", "Application Support", "Jupyter"), nil
	case system == "darwin":
		return filepath.Join(h, "Library", "Jupyter"), nil
	}
	return filepath.Join(h, ".local", "share", "jupyter"), nil
}

func platformDirs(env func(string) string) bool {
	switch env("JUPYTER_PLATFORM_DIRS") {
	case "", "0", "false", "no", "n", "off":
		return false
	}
	return true
}

// Places lists the data folders that front ends search, in their order: JUPYTER_PATH, the user's, those of the
// machine. Environments of Python are known to their own front ends only.
func Places() []Place {
	var all []Place
	for _, d := range filepath.SplitList(os.Getenv("JUPYTER_PATH")) {
		if d != "" {
			all = append(all, Place{Data: d})
		}
	}
	all = append(all, Place{})
	if runtime.GOOS == "windows" {
		return append(all, Place{Data: filepath.Join(os.Getenv("PROGRAMDATA"), "jupyter")})
	}
	return append(all, Place{Prefix: "/usr/local"}, Place{Prefix: "/usr"})
}

// Installed gives the folders of our entries of a name among the given places.
func Installed(name string, places []Place) []string {
	name = Entry{Name: name}.withDefaults().Name
	var found []string
	for _, p := range places {
		kernels, err := p.kernels()
		if err != nil {
			continue
		}
		if dir := filepath.Join(kernels, name); ours(dir) == nil {
			found = append(found, dir)
		}
	}
	return found
}
