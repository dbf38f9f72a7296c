package main

import (
	"encoding/json"
	"errors"
	"io"
	"os/exec"
	"sort"
	"strings"
	"testing"
)

// layers is the architecture: what each package may import of this module. A level imports only lower levels. A new
// edge is a reviewed change of this table. "dsl/*" stands for every package below dsl.
var layers = map[string][]string{
	".": {"kernel", "kernel/*", "dsl", "dsl/*", "stdlib", "magcirc/phys"},

	"magcirc":              {},
	"magcirc/phys":         {"magcirc"},
	"magcirc/internal/num": {},
	"magcirc/geom":         {"magcirc", "magcirc/phys", "magcirc/internal/num"},
	"magcirc/material":     {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom"},
	"magcirc/field":        {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom"},
	"magcirc/gap":          {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom", "magcirc/field"},
	"magcirc/induct":       {"magcirc", "magcirc/phys", "magcirc/internal/num"},
	"magcirc/hyst":         {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/material"},
	"magcirc/datafile":     {"magcirc", "magcirc/phys"},
	"magcirc/reluct":       {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom", "magcirc/material", "magcirc/gap", "magcirc/induct", "magcirc/hyst"},
	"magcirc/design":       {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom", "magcirc/material", "magcirc/gap", "magcirc/induct", "magcirc/reluct"},
	"magcirc/working":      {"magcirc", "magcirc/phys", "magcirc/geom", "magcirc/material", "magcirc/gap", "magcirc/induct", "magcirc/reluct"},
	"magcirc/tol":          {"magcirc", "magcirc/phys", "magcirc/internal/num", "magcirc/geom", "magcirc/material", "magcirc/gap", "magcirc/induct", "magcirc/reluct", "magcirc/design"},

	"stdlib": {"magcirc", "magcirc/*"},

	"dsl/si":          {},
	"dsl/start":       {},
	"dsl/manual":      {},
	"dsl/manual/gen":  {"dsl/symbols"},
	"dsl/session":     {},
	"dsl/doc":         {"magcirc/phys"},
	"dsl/chart":       {"magcirc/phys"},
	"dsl/draw":        {"magcirc", "magcirc/*"},
	"dsl/review":      {"magcirc", "magcirc/*", "dsl/doc", "dsl/chart", "dsl/session"},
	"dsl":             {"magcirc", "magcirc/*", "stdlib", "dsl/si", "dsl/session", "dsl/doc", "dsl/chart", "dsl/draw", "dsl/review"},
	"dsl/symbols":     {"dsl", "dsl/si"},
	"dsl/symbols/gen": {"dsl/si"},

	"kernel/wire":              {},
	"kernel/stream":            {},
	"kernel/spec":              {},
	"kernel/conn":              {"kernel/wire"},
	"kernel":                   {"kernel/wire", "kernel/conn", "kernel/stream"},
	"kernel/kerneltest":        {"kernel", "kernel/wire", "kernel/conn", "kernel/stream"},
	"kernel/cell/unit":         {},
	"kernel/cell/nb":           {},
	"kernel/cell":              {"kernel", "kernel/cell/unit", "kernel/cell/nb"},
	"kernel/cell/randcell":     {},
	"kernel/cell/internal/toy": {},
	"kernel/notebook":          {"kernel"},
	"kernel/page/mathml":       {},
	"kernel/page/clean":        {},
	"kernel/page":              {"kernel", "kernel/notebook", "kernel/page/mathml", "kernel/page/clean"},
	"kernel/diff":              {"kernel/notebook"},
	"kernel/batch":             {"kernel", "kernel/notebook", "kernel/diff", "kernel/page"},
}

// owners says which one package imports a third-party module, so that it can be replaced. gonum is free in magcirc.
var owners = map[string]string{
	"github.com/go-zeromq/zmq4":                    "kernel/conn",
	"github.com/traefik/yaegi":                     "kernel/cell",
	"gonum.org/v1/plot":                            "dsl/chart",
	"github.com/yuin/goldmark":                     "kernel/page",
	"github.com/gohugoio/hugo-goldmark-extensions": "kernel/page",
	"github.com/google/renameio":                   "kernel/notebook",
	"github.com/alecthomas/kong":                   ".",
}

type listed struct {
	ImportPath string
	Imports    []string
}

// TestImportDirections checks the table against what the sources import.
func TestImportDirections(t *testing.T) {
	out, err := exec.Command("go", "list", "-json=ImportPath,Imports", "./...").Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	dec := json.NewDecoder(strings.NewReader(string(out)))
	for {
		var p listed
		if err := dec.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		name := short(p.ImportPath)
		allowed, known := layers[name]
		if !known && !strings.Contains(name, "kerneltest/") {
			t.Errorf("package %s is not in the table of layers", name)
			continue
		}
		for _, imp := range p.Imports {
			switch {
			case imp == "ampturn" || strings.HasPrefix(imp, "ampturn/"):
				if known && !fits(allowed, short(imp)) {
					t.Errorf("%s imports %s, which the table of layers does not allow", name, short(imp))
				}
			default:
				checkOwner(t, name, imp)
			}
		}
	}
}

func checkOwner(t *testing.T, name, imp string) {
	t.Helper()
	if strings.HasPrefix(imp, "gonum.org/v1/gonum") && !strings.HasPrefix(name, "magcirc") {
		t.Errorf("%s imports %s; gonum belongs below magcirc", name, imp)
	}
	modules := make([]string, 0, len(owners))
	for m := range owners {
		modules = append(modules, m)
	}
	sort.Slice(modules, func(i, j int) bool { return len(modules[i]) > len(modules[j]) })
	for _, m := range modules {
		if strings.HasPrefix(imp, m) {
			if owners[m] != name {
				t.Errorf("%s imports %s; only %s may", name, imp, owners[m])
			}
			return
		}
	}
}

func short(path string) string {
	if path == "ampturn" {
		return "."
	}
	return strings.TrimPrefix(path, "ampturn/")
}

func fits(allowed []string, name string) bool {
	for _, a := range allowed {
		if a == name || strings.HasSuffix(a, "/*") && strings.HasPrefix(name, strings.TrimSuffix(a, "*")) {
			return true
		}
	}
	return false
}
