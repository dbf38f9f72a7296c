package main

import (
	"bytes"
	"encoding/json"
	"go/constant"
	"go/token"
	"go/types"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"golang.org/x/tools/go/gcexportdata"
)

const testdata = "ampturn/dsl/symbols/gen/testdata/"

// TestCommitted demands that the files of package symbols are those that the sources give, byte for byte.
func TestCommitted(t *testing.T) {
	source, err := os.ReadFile("../doc.go")
	if err != nil {
		t.Fatal(err)
	}
	directive := regexp.MustCompile(`(?m)^//go:generate go run ./gen -out \. -open (\S+) (.*)$`).FindSubmatch(source)
	if directive == nil {
		t.Fatal("no go:generate line in doc.go")
	}
	files, err := generate(string(directive[1]), "symbols", strings.Fields(string(directive[2])))
	if err != nil {
		t.Fatal(err)
	}
	for name, want := range files {
		got, err := os.ReadFile(filepath.Join("..", name))
		if err != nil || !bytes.Equal(got, want) {
			t.Errorf("%s is not what the sources give (%v): run go generate ./dsl/symbols", name, err)
		}
	}
	have, err := filepath.Glob("../export/*")
	if err != nil || len(have) != len(strings.Fields(string(directive[2])))+1 {
		t.Errorf("export holds %d files (%v)", len(have), err)
	}
}

// TestRefused demands each refusal with its reason.
func TestRefused(t *testing.T) {
	for _, c := range []struct {
		pkg  string
		want []string
	}{
		{"generic", []string{"Map: a generic function has no symbol", "Pair: a generic type has no symbol", "Ints: an instance of the generic type Pair"}},
		{"variable", []string{"Count: an exported variable"}},
		{"foreign", []string{"Inner: type far.Inner is of a package", "Failure.Code: type far.Code is of a package", "give it an alias in foreign"}},
		{"hidden", []string{"Open: type secret is not exported"}},
		{"undocumented", []string{"without a doc comment: Rod, Rod.Length"}},
		{"clash", []string{"unexported methods of one name and two signatures", "was Part: Beam *Beam Part;"}},
		{"missing", []string{"go list"}},
	} {
		t.Run(c.pkg, func(t *testing.T) {
			_, err := generate(testdata+c.pkg, "symbols", []string{"fmt"})
			if err == nil {
				t.Fatal("accepted")
			}
			for _, want := range c.want {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("%q is not in %q", want, err)
				}
			}
		})
	}
}

// toy generates the small vocabulary.
func toy(t *testing.T) map[string][]byte {
	t.Helper()
	files, err := generate(testdata+"toy", "symbols", []string{"fmt", "strings"})
	if err != nil {
		t.Fatal(err)
	}
	return files
}

// TestSame demands the same bytes from two runs.
func TestSame(t *testing.T) {
	one, two := toy(t), toy(t)
	for name := range one {
		if !bytes.Equal(one[name], two[name]) {
			t.Errorf("%s differs between two runs", name)
		}
	}
}

// TestExportData reads the export data back: aliases and parameter names are there, unexported fields are not.
func TestExportData(t *testing.T) {
	data := toy(t)["export/"+fileName(testdata+"toy")]
	pkg, err := gcexportdata.Read(bytes.NewReader(data), token.NewFileSet(), map[string]*types.Package{}, testdata+"toy")
	if err != nil {
		t.Fatal(err)
	}
	short := func(p *types.Package) string { return p.Name() }
	for name, want := range map[string]string{
		"NewRod": "func toy.NewRod(length toy.Metre, laws ...toy.Law) *toy.Rod",
		"Stop":   "func toy.Stop() *toy.Failure",
		"Rod":    "type toy.Rod struct{Length toy.Metre; _ [0]func()}",
	} {
		if got := types.ObjectString(pkg.Scope().Lookup(name), short); got != want {
			t.Errorf("%s: got %s, want %s", name, got, want)
		}
	}
	if bytes.Contains(data, []byte("Inner")) || bytes.Contains(data, []byte("toy.go")) {
		t.Error("the export data names unexported insides or files")
	}
	part := pkg.Scope().Lookup("Part").Type().Underlying().(*types.Interface)
	if !types.Implements(pkg.Scope().Lookup("Beam").Type(), part) || types.Implements(pkg.Scope().Lookup("Rod").Type(), part) {
		t.Error("the sealed interface is not satisfied by Beam alone")
	}
	for name, want := range map[string]string{"Big": "1267650600228229401496703205376", "Name": `"toy"`} {
		if got := pkg.Scope().Lookup(name).(*types.Const).Val().ExactString(); got != want {
			t.Errorf("%s = %s, want %s", name, got, want)
		}
	}
}

// TestStandardPackages demands that what cells may not call is neither symbol nor export data.
func TestStandardPackages(t *testing.T) {
	files := toy(t)
	pkg, err := gcexportdata.Read(bytes.NewReader(files["export/"+fileName("fmt")]), token.NewFileSet(), map[string]*types.Package{}, "fmt")
	if err != nil {
		t.Fatal(err)
	}
	source := string(files[fileName("fmt")+".go"])
	for name, want := range map[string]bool{"Sprintf": true, "Println": true, "Sscan": true, "Stringer": true,
		"Scanln": false, "Fprintf": false, "Fscan": false} {
		if got := pkg.Scope().Lookup(name) != nil; got != want {
			t.Errorf("fmt.%s in the export data: %v", name, got)
		}
		if got := strings.Contains(source, `"`+name+`":`); got != want {
			t.Errorf("fmt.%s in the table: %v", name, got)
		}
	}
	if strings.Contains(string(files[fileName("strings")+".go"]), `"SplitSeq"`) {
		t.Error("strings.SplitSeq returns a type outside the table and is in it")
	}
}

// TestDocs demands comments of functions, methods, fields and grouped types.
func TestDocs(t *testing.T) {
	var docs map[string]string
	if err := json.Unmarshal(toy(t)["docs.json"], &docs); err != nil {
		t.Fatal(err)
	}
	for key, want := range map[string]string{
		"": "Package toy is a small vocabulary.", ".Metre": "Metre is a length.", ".Second": "Second is a time.",
		".Rod.Length": "from end to end", ".Rod.At": "At gives the length.", ".Third": "Exact constants.",
	} {
		if got := docs[testdata+"toy"+key]; got != want {
			t.Errorf("%q: got %q, want %q", key, got, want)
		}
	}
	if got, ok := docs["fmt.Sprintf"]; ok {
		t.Errorf("the comment of Go's library is copied: fmt.Sprintf: %q", got)
	}
}

// TestCompiles builds the symbol file of the small vocabulary beside package symbols and runs a test in it: exact
// constants, and an interface satisfied through its wrapper.
func TestCompiles(t *testing.T) {
	dir := t.TempDir()
	overlay := map[string]map[string]string{"Replace": {}}
	at, err := filepath.Abs("testdata/built")
	if err != nil {
		t.Fatal(err)
	}
	put := func(name string, text []byte) {
		file := filepath.Join(dir, strings.ReplaceAll(name, "/", "_"))
		if err := os.WriteFile(file, text, 0o666); err != nil {
			t.Fatal(err)
		}
		overlay["Replace"][filepath.Join(at, name)] = file
	}
	for name, text := range toy(t) {
		if strings.HasSuffix(name, ".go") {
			put(name, text)
		}
	}
	base, err := os.ReadFile("../doc.go")
	if err != nil {
		t.Fatal(err)
	}
	base = regexp.MustCompile(`(?m)^//go:(generate|embed).*$`).ReplaceAll(base, nil)
	put("doc.go", base)
	probe, err := os.ReadFile("testdata/probe.txt")
	if err != nil {
		t.Fatal(err)
	}
	put("probe_test.go", probe)
	text, err := json.Marshal(overlay)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(dir, "overlay.json")
	if err := os.WriteFile(file, text, 0o666); err != nil {
		t.Fatal(err)
	}
	program := filepath.Join(dir, "built.test")
	for _, cmd := range [][]string{{"go", "test", "-c", "-o", program, "-vet=off", "-overlay", file, "./testdata/built"}, {program}} {
		if out, err := exec.Command(cmd[0], cmd[1:]...).CombinedOutput(); err != nil {
			t.Fatalf("%v: %v\n%s", cmd, err, out)
		}
	}
}

// TestConstantText demands that the written form of a constant is its exact value.
func TestConstantText(t *testing.T) {
	huge := constant.MakeFromLiteral("1e5000", token.FLOAT, 0)
	c := types.NewConst(token.NoPos, nil, "Huge", types.Typ[types.UntypedFloat], huge)
	text, err := constantText("toy.Huge", c)
	if err != nil {
		t.Fatal(err)
	}
	lit := regexp.MustCompile(`untypedNumber\("(.*)"\)`).FindStringSubmatch(text)
	if lit == nil {
		t.Fatalf("written as %s", text)
	}
	if got := constant.MakeFromLiteral(lit[1], token.FLOAT, 0); !constant.Compare(got, token.EQL, huge) {
		t.Errorf("%s is not 1e5000", text)
	}
}
