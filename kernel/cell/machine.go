package cell

import (
	"fmt"
	"io"
	"io/fs"
	"math/rand"
	"path"
	"reflect"
	"sync/atomic"

	"github.com/traefik/yaegi/interp"
)

// machine evaluates lowered text. It never sees text that a user typed.
type machine struct {
	i        *interp.Interpreter
	packages map[string]map[string]reflect.Value // by import path
	imported map[string]bool                     // names of imports that are in place

	mark, top, depth *int
	stop             *bool       // read in every loop, as fast as can be
	poll             atomic.Bool // the same where races are looked for
}

// newMachine starts an interpreter with the packages of a vocabulary and the helpers of a session.
func newMachine(v *Vocabulary, helpers map[string]reflect.Value) (*machine, error) {
	m := &machine{packages: map[string]map[string]reflect.Value{}, imported: map[string]bool{}}
	m.i = interp.New(interp.Options{
		Stdin: eof{}, Stdout: io.Discard, Stderr: io.Discard, SourcecodeFilesystem: noFiles{}, Args: []string{"cell"},
	})
	use := interp.Exports{"nb/nb": helpers}
	for key, symbols := range v.Symbols {
		p := path.Dir(key)
		m.packages[p] = symbols
		switch p {
		case "fmt":
			key = "fmt/fmt_" // under its own name the interpreter adds packages of its own to it
		case "math/rand":
			symbols = seeded(symbols)
		}
		use[key] = symbols
	}
	if err := m.i.Use(use); err != nil {
		return nil, err
	}
	if err := m.eval(`import p_nb "nb"`); err != nil {
		return nil, err
	}
	m.imported["p_nb"] = true
	if err := m.eval("var nb__at, nb__top, nb__depth int\nvar nb__stop bool\n"); err != nil {
		return nil, err
	}
	for _, p := range []struct {
		name string
		to   **int
	}{{"nb__at", &m.mark}, {"nb__top", &m.top}, {"nb__depth", &m.depth}} {
		x, err := m.value("&" + p.name)
		if err != nil {
			return nil, err
		}
		*p.to = x.Interface().(*int)
	}
	x, err := m.value("&nb__stop")
	if err != nil {
		return nil, err
	}
	m.stop = x.Interface().(*bool)
	return m, nil
}

// noFiles is a file system without files: lowered text cannot load source from anywhere.
type noFiles struct{}

func (noFiles) Open(name string) (fs.File, error) {
	return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrNotExist}
}

// eof is an empty input.
type eof struct{}

func (eof) Read([]byte) (int, error) { return 0, io.EOF }

// seeded gives math/rand with a source of its own in place of the global one, so that a notebook gives the same numbers
// each time.
func seeded(symbols map[string]reflect.Value) map[string]reflect.Value {
	r := reflect.ValueOf(rand.New(rand.NewSource(1)))
	out := map[string]reflect.Value{}
	for name, v := range symbols {
		if m := r.MethodByName(name); m.IsValid() && v.IsValid() && v.Kind() == reflect.Func && m.Type() == v.Type() {
			v = m
		}
		out[name] = v
	}
	return out
}

// has tells whether a package offers a name.
func (m *machine) has(path, name string) bool {
	_, ok := m.packages[path][name]
	return ok
}

// eval compiles declarations.
func (m *machine) eval(text string) error {
	_, err := m.value(text)
	return err
}

// value evaluates an expression of the notebook's own making.
func (m *machine) value(text string) (v reflect.Value, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("%v", r)
		}
	}()
	return m.i.Eval(text)
}

// function gives a function of lowered text by name.
func (m *machine) function(name string) (func(), error) {
	v, err := m.value(name)
	if err != nil {
		return nil, err
	}
	f, ok := v.Interface().(func())
	if !ok {
		return nil, fmt.Errorf("%s is %s", name, v.Type())
	}
	return f, nil
}

// clear makes the machine ready for a cell.
func (m *machine) clear() {
	m.setStop(false)
	*m.mark, *m.top, *m.depth = 0, 0, 0
}

// interrupt has the running cell stop at its next loop or function.
func (m *machine) interrupt() { m.setStop(true) }

// setStop writes a byte that another goroutine reads: it sees the old or the new value, and a little later the new one.
func (m *machine) setStop(stop bool) {
	m.poll.Store(stop)
	if !racing {
		*m.stop = stop
	}
}
