package symbols_test

import (
	"bytes"
	"go/constant"
	"go/token"
	"go/types"
	"path"
	"reflect"
	"strings"
	"testing"

	"golang.org/x/tools/go/gcexportdata"

	"ampturn/dsl/si"
	"ampturn/dsl/symbols"
)

// offered reads the export data of all packages.
func offered(t testing.TB) map[string]*types.Package {
	t.Helper()
	all := map[string]*types.Package{}
	for p, data := range symbols.Export() {
		if pkg := all[p]; pkg != nil && pkg.Complete() {
			continue
		}
		if _, err := gcexportdata.Read(bytes.NewReader(data), token.NewFileSet(), all, p); err != nil {
			t.Fatal(err)
		}
	}
	return all
}

// TestTableFitsExportData demands that table and export data hold the same names, and values of the same type.
func TestTableFitsExportData(t *testing.T) {
	all := offered(t)
	for key, table := range symbols.Symbols {
		pkg := all[path.Dir(key)]
		for _, name := range pkg.Scope().Names() {
			obj := pkg.Scope().Lookup(name)
			if !obj.Exported() {
				continue // of an embedded field
			}
			v, ok := table[name]
			if !ok {
				t.Errorf("%s.%s is in the export data only", key, name)
				continue
			}
			if fn, isFunc := obj.(*types.Func); isFunc && v.Type().NumIn() != fn.Signature().Params().Len() {
				t.Errorf("%s.%s has %d parameters, %s in the export data", key, name, v.Type().NumIn(), fn.Signature())
			}
			if c, isConst := obj.(*types.Const); isConst {
				sameConstant(t, c, v)
			}
		}
		for name := range table {
			if pkg.Scope().Lookup(strings.TrimPrefix(name, "_")) == nil {
				t.Errorf("%s.%s is in the table only", key, name)
			}
		}
	}
}

// sameConstant demands the value of an untyped constant to the precision of export data, 512 bits.
func sameConstant(t *testing.T, c *types.Const, v reflect.Value) {
	t.Helper()
	got, ok := v.Interface().(constant.Value)
	if !ok {
		return
	}
	if got.Kind() != constant.Float {
		if !constant.Compare(got, token.EQL, c.Val()) {
			t.Errorf("%s is %s, want %s", c.Name(), got.ExactString(), c.Val().ExactString())
		}
		return
	}
	a, _ := constant.Float64Val(got)
	b, _ := constant.Float64Val(c.Val())
	if a != b {
		t.Errorf("%s is %v, want %v", c.Name(), a, b)
	}
}

// TestDocumented demands a comment for each exported name and method of the vocabulary.
func TestDocumented(t *testing.T) {
	const open = "ampturn/dsl"
	pkg, docs := offered(t)[open], symbols.Docs()
	for _, name := range pkg.Scope().Names() {
		obj := pkg.Scope().Lookup(name)
		if !obj.Exported() {
			continue // of an embedded field
		}
		if docs[open+"."+name] == "" {
			t.Errorf("%s has no comment", name)
		}
		n, ok := obj.Type().(*types.Named)
		if _, isType := obj.(*types.TypeName); !ok || !isType || n.Obj().Pkg() != pkg {
			continue
		}
		for i := range n.NumMethods() {
			if m := n.Method(i); m.Exported() && docs[open+"."+name+"."+m.Name()] == "" {
				t.Errorf("%s.%s has no comment", name, m.Name())
			}
		}
	}
}

// TestAliasesListed demands that each unit alias of the vocabulary is listed with its unit, and the reverse.
func TestAliasesListed(t *testing.T) {
	pkg := offered(t)["ampturn/dsl"]
	for _, name := range pkg.Scope().Names() {
		obj, ok := pkg.Scope().Lookup(name).(*types.TypeName)
		if !ok || !obj.IsAlias() || !types.Identical(types.Unalias(obj.Type()), types.Typ[types.Float64]) {
			continue
		}
		if _, ok := si.Aliases[name]; !ok && name != si.Value {
			t.Errorf("alias %s has no unit", name)
		}
	}
	for name := range si.Aliases {
		if pkg.Scope().Lookup(name) == nil {
			t.Errorf("alias %s is listed and not in the vocabulary", name)
		}
	}
}

// TestFunctionsThere demands that what stands behind the lower-case names exists.
func TestFunctionsThere(t *testing.T) {
	all := offered(t)
	for name, target := range si.Functions {
		pkg, fn, _ := strings.Cut(target, ".")
		p := all[pkg]
		if pkg == "dsl" {
			p = all["ampturn/dsl"]
		}
		if p == nil || p.Scope().Lookup(fn) == nil {
			t.Errorf("%s: no %s", name, target)
		}
	}
}

// BenchmarkExport reads the export data of all packages.
func BenchmarkExport(b *testing.B) {
	for b.Loop() {
		offered(b)
	}
}
