package main

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"strings"
	"testing"

	"ampturn/kernel"
	"ampturn/kernel/cell"
)

// closed are packages that give files, processes, the network, memory or what circumvents types.
var closed = []string{
	"os", "os/exec", "os/signal", "net", "net/http", "net/url", "syscall", "unsafe", "reflect", "runtime", "runtime/debug",
	"plugin", "io/fs", "io/ioutil", "path/filepath", "embed", "go/build", "debug/elf", "database/sql", "log", "testing", "C",
}

// TestConfined demands that cells get none of the closed packages: not by import, not by name, not by a path.
func TestConfined(t *testing.T) {
	s, err := cell.New(sharedVocabulary(), cell.Hooks{})
	if err != nil {
		t.Fatal(err)
	}
	refused := func(src string) {
		t.Helper()
		ran := false
		o := s.Run(context.Background(), kernel.Cell{Number: 1, Source: src}, func(kernel.Output) { ran = true })
		if o.Fault == nil || o.Fault.Name == "InternalError" || ran {
			t.Errorf("%q: %+v, shown: %v", src, o.Fault, ran)
		}
	}
	for _, p := range append(closed, "ampturn/dsl/session", "ampturn/kernel/cell", "ampturn/magcirc/datafile", "github.com/traefik/yaegi/interp") {
		for _, form := range []string{"import %q\n1", "import x %q\n1", "import . %q\n1", "import _ %q\n1"} {
			refused(fmt.Sprintf(form, p))
		}
		refused(p[strings.LastIndexByte(p, '/')+1:] + ".Exit(1)")
	}
	for _, p := range []string{"./evil", "../evil", "/etc/passwd", "file:///etc", "..", "nb", "p_nb"} {
		refused(fmt.Sprintf("import %q\n1", p))
	}
	for _, src := range []string{
		"p_nb.Println(1)", "p_fmt.Println(1)", "nb__stop", "nb__at = 3", "package os\nfunc Exit(int) {}", "//go:linkname x os.Exit\nfunc x(int)",
		"math.Pi = 3", "fmt.Scanln()", "fmt.Fprintln(os.Stdout, 1)",
	} {
		refused(src)
	}
}

// TestNoWayOut demands that no value which cells can get leads to a type of a closed package.
func TestNoWayOut(t *testing.T) {
	seen := map[reflect.Type]bool{}
	var walk func(from string, typ reflect.Type)
	walk = func(from string, typ reflect.Type) {
		if typ == nil || seen[typ] {
			return
		}
		seen[typ] = true
		if p := typ.PkgPath(); slices.Contains(closed, p) {
			t.Errorf("%s leads to %s", from, typ)
			return
		}
		from += " " + typ.String()
		switch typ.Kind() {
		case reflect.Pointer, reflect.Slice, reflect.Array, reflect.Chan:
			walk(from, typ.Elem())
		case reflect.Map:
			walk(from, typ.Key())
			walk(from, typ.Elem())
		case reflect.Func:
			for i := range typ.NumIn() {
				walk(from, typ.In(i))
			}
			for i := range typ.NumOut() {
				walk(from, typ.Out(i))
			}
		case reflect.Struct:
			for i := range typ.NumField() {
				if f := typ.Field(i); f.IsExported() {
					walk(from, f.Type)
				}
			}
		}
		for i := range typ.NumMethod() {
			walk(from+"."+typ.Method(i).Name, typ.Method(i).Type)
		}
		if typ.Kind() != reflect.Pointer && typ.Kind() != reflect.Interface {
			walk(from, reflect.PointerTo(typ))
		}
	}
	count := 0
	for pkg, symbols := range sharedVocabulary().Symbols {
		for name, v := range symbols {
			if v.IsValid() && !strings.HasPrefix(name, "_") {
				count++
				walk(pkg+"."+name, v.Type())
			}
		}
	}
	if count < 500 {
		t.Errorf("%d names only", count)
	}
	t.Logf("%d names, %d types", count, len(seen))
}

// TestVocabularyOpensNothing demands that the packages behind the vocabulary start no process, open no connection, and that
// one of them alone opens files, which are those beside the notebook.
func TestVocabularyOpensNothing(t *testing.T) {
	out, err := exec.Command("go", "list", "-f", `{{.ImportPath}}{{range .Imports}} {{.}}{{end}}`, "./dsl/...", "./magcirc/...", "./stdlib/...").Output()
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range strings.Split(strings.TrimSpace(string(out)), "\n") {
		imports := strings.Fields(line)
		if strings.HasSuffix(imports[0], "/gen") {
			continue // commands for who works on the vocabulary
		}
		for _, p := range imports[1:] {
			first, _, _ := strings.Cut(p, "/")
			if p == "os" && imports[0] == "ampturn/dsl/session" {
				continue
			}
			if p == "syscall" && onlyErrors(t, strings.TrimPrefix(imports[0], "ampturn/")) {
				continue
			}
			if first == "os" || first == "net" || p == "syscall" || p == "unsafe" || p == "plugin" {
				t.Errorf("%s imports %s", imports[0], p)
			}
		}
	}
}

var ofSyscall = regexp.MustCompile(`\bsyscall\.(\w+)`)

// onlyErrors tells whether a package takes nothing of package syscall but the numbers of errors.
func onlyErrors(t *testing.T, dir string) bool {
	files, err := filepath.Glob(filepath.Join(dir, "*.go"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		text, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		for _, m := range ofSyscall.FindAllStringSubmatch(string(text), -1) {
			if !regexp.MustCompile(`^E[A-Z0-9]+$`).MatchString(m[1]) {
				return false
			}
		}
	}
	return true
}
