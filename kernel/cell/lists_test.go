package cell

import (
	"go/importer"
	"go/token"
	"go/types"
	"testing"
)

// TestLists compares the declarations of slices, maps and cmp that cells are checked with against the library's own.
func TestLists(t *testing.T) {
	lib, err := lists()
	if err != nil {
		t.Fatal(err)
	}
	real := importer.ForCompiler(token.NewFileSet(), "source", nil)
	count := 0
	for _, path := range listNames {
		pkg, err := real.Import(path)
		if err != nil {
			t.Fatal(err)
		}
		for _, name := range lib.packages[path].Scope().Names() {
			got, want := lib.packages[path].Scope().Lookup(name), pkg.Scope().Lookup(name)
			count++
			if want == nil {
				t.Errorf("%s.%s is not in the library", path, name)
				continue
			}
			byName := (*types.Package).Name
			if g, w := types.ObjectString(got, byName), types.ObjectString(want, byName); g != w {
				t.Errorf("%s, the library has %s", g, w)
			}
		}
	}
	t.Logf("%d declarations", count)
}
