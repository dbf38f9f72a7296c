package main

import (
	"bytes"
	"flag"
	"fmt"
	"go/parser"
	"go/scanner"
	"go/token"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/txtar"

	"ampturn/kernel/cell"
	"ampturn/kernel/cell/randcell"
)

var update = flag.Bool("update", false, "rewrite the outputs of probes from what compiled Go prints")

// TestLanguageProbes runs the notebooks of testdata/cells/probes. A file holds probes; "-- name --" begins one, its
// parts are cells ("in"), what the last of them shows ("out"), and Go that must print the same ("go").
//
// A line that ends in //! with a regular expression stops its cell there: the message must name the line and match.
// Of every other probe the output comes from compiled Go: of the part "go", a file without its package clause, or
// else of the cells themselves, declarations taken out of main.
func TestLanguageProbes(t *testing.T) {
	files, err := filepath.Glob("testdata/cells/probes/*.txtar")
	if err != nil || len(files) == 0 {
		t.Fatal("no probes", err)
	}
	var all []*languageProbe
	for _, f := range files {
		all = append(all, readProbes(t, f)...)
	}
	compiled := compiledOutputs(t, all)
	for i, p := range all {
		if want, ok := compiled[i]; ok {
			if *update {
				p.setOut(want)
			} else if p.out() != want {
				t.Errorf("%s: compiled Go prints\n%s\nthe probe says\n%s", p.name, want, p.out())
			}
		}
		t.Run(p.name, p.run)
	}
	if len(all) < 150 {
		t.Errorf("%d probes only", len(all))
	}
	t.Logf("%d probes, %d of them compared with compiled Go", len(all), len(compiled))
	if *update {
		writeProbes(t, all)
	}
}

type languageProbe struct {
	name  string
	file  string
	head  string // comment of the file, with its first probe
	parts []txtar.File
}

func readProbes(t *testing.T, file string) (ps []*languageProbe) {
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	a := txtar.Parse(data)
	for _, f := range a.Files {
		switch f.Name {
		case "in", "out", "go":
			ps[len(ps)-1].parts = append(ps[len(ps)-1].parts, f)
		default:
			ps = append(ps, &languageProbe{name: strings.TrimSuffix(filepath.Base(file), ".txtar") + "/" + f.Name, file: file})
		}
	}
	ps[0].head = string(a.Comment)
	return ps
}

func (p *languageProbe) cells() (cells []string) {
	for _, f := range p.parts {
		if f.Name == "in" {
			cells = append(cells, string(f.Data))
		}
	}
	return cells
}

func (p *languageProbe) part(name string) (string, bool) {
	for _, f := range p.parts {
		if f.Name == name {
			return string(f.Data), true
		}
	}
	return "", false
}

func (p *languageProbe) out() string { s, _ := p.part("out"); return s }

func (p *languageProbe) setOut(text string) {
	for i, f := range p.parts {
		if f.Name == "out" {
			p.parts[i].Data = []byte(text)
			return
		}
	}
	p.parts = append(p.parts, txtar.File{Name: "out", Data: []byte(text)})
}

func writeProbes(t *testing.T, all []*languageProbe) {
	archives := map[string]*txtar.Archive{}
	for _, p := range all {
		a := archives[p.file]
		if a == nil {
			a = &txtar.Archive{Comment: []byte(p.head)}
			archives[p.file] = a
		}
		_, name, _ := strings.Cut(p.name, "/")
		a.Files = append(append(a.Files, txtar.File{Name: name}), p.parts...)
	}
	for file, a := range archives {
		if err := os.WriteFile(file, txtar.Format(a), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

var stopMark = regexp.MustCompile(`(?m)[ \t]*//! (.*)$`)

func (p *languageProbe) run(t *testing.T) {
	s, err := cell.New(sharedVocabulary(), cell.Hooks{})
	if err != nil {
		t.Fatal(err)
	}
	shown := ""
	for i, source := range p.cells() {
		mark := stopMark.FindStringSubmatchIndex(source)
		text, note := runCell(s, i+1, stopMark.ReplaceAllString(source, ""))
		text, ended, _ := strings.Cut(text, "--- ")
		shown += text
		runs := strings.HasPrefix(ended, randcell.Runs.String())
		switch {
		case mark == nil && !runs:
			t.Errorf("cell %d stopped: %s\n%s", i+1, note, s.Lowered(i+1))
		case mark != nil && runs:
			t.Errorf("cell %d ran; it should stop with %s\n%s", i+1, source[mark[2]:mark[3]], text)
		case mark != nil:
			line := 1 + strings.Count(source[:mark[0]], "\n")
			want := fmt.Sprintf(`^cell \d+, line %d: .*(?:%s)`, line, source[mark[2]:mark[3]])
			first, _, _ := strings.Cut(note, "\n")
			if ok, err := regexp.MatchString(want, first); err != nil || !ok {
				t.Errorf("cell %d stopped with\n  %s\nwant line %d and\n  %s %v", i+1, first, line, source[mark[2]:mark[3]], err)
			}
		}
	}
	if shown != p.out() {
		t.Errorf("shows\n%s\nwant\n%s\n%s", shown, p.out(), s.Lowered(1))
	}
}

// compiledOutputs builds one program of all probes that compiled Go can answer, and runs it.
func compiledOutputs(t *testing.T, all []*languageProbe) map[int]string {
	files := map[string]string{}
	var imports, calls strings.Builder
	for i, p := range all {
		text, ok := p.goText()
		if !ok {
			continue
		}
		name := fmt.Sprintf("p%03d", i)
		files[name+"/"+name+".go"] = "package " + name + "\n\n" + withImports(text) + probeSupport
		fmt.Fprintf(&imports, "\t%q\n", "ampturn/zzprobes/"+name)
		fmt.Fprintf(&calls, "\tfmt.Println(\"=== notebook %d\")\n\t%s.Main()\n", i, name)
	}
	files["main.go"] = "package main\n\nimport (\n\t\"fmt\"\n" + imports.String() + ")\n\nfunc main() {\n" + calls.String() + "}\n"
	binary, err := buildOverlay(t.TempDir(), "zzprobes", files)
	if err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(binary).Output()
	if err != nil {
		t.Fatal(err)
	}
	outputs := map[int]string{}
	for number, cells := range randcell.Outputs(string(out)) {
		var i int
		if _, err := fmt.Sscan(number, &i); err != nil {
			t.Fatal(err)
		}
		outputs[i] = strings.Join(cells, "")
	}
	return outputs
}

const probeSupport = `
func show(v any) { fmt.Println("=>", v) }

var _, _ = fmt.Print, show
`

// goText is the Go that prints what the probe should; ok is false for probes that stop.
func (p *languageProbe) goText() (text string, ok bool) {
	if text, ok := p.part("go"); ok {
		return strings.Replace(text, "func main()", "func Main()", 1), true
	}
	decls, body := "", ""
	for _, c := range p.cells() {
		if stopMark.MatchString(c) {
			return "", false
		}
		for _, piece := range pieces(c) {
			d, s := plainGo(piece)
			decls += d
			body += s
		}
	}
	return decls + "func Main() {\n" + body + "}\n", true
}

// pieces cuts a cell into its top-level declarations and statements.
func pieces(source string) (out []string) {
	var s scanner.Scanner
	set := token.NewFileSet()
	file := set.AddFile("", -1, len(source))
	s.Init(file, []byte(source), nil, 0)
	depth, from := 0, 0
	for {
		pos, tok, lit := s.Scan()
		at := file.Offset(pos)
		switch tok {
		case token.LPAREN, token.LBRACE, token.LBRACK:
			depth++
		case token.RPAREN, token.RBRACE, token.RBRACK:
			depth--
		case token.SEMICOLON:
			if depth == 0 && !(lit == ";" && header.MatchString(source[from:at])) {
				out = append(out, strings.TrimSpace(source[from:at]))
				from = min(at+1, len(source))
			}
		case token.EOF:
			return out
		}
	}
}

var (
	declares = regexp.MustCompile(`^(type|const|import|func (\(|\w+[\(\[]))`)
	header   = regexp.MustCompile(`^\s*(if|for|switch)\b`)
	defines  = regexp.MustCompile(`^[\pL_][\pL\d_]*(, *[\pL_][\pL\d_]*)* *:=`)
	sets     = regexp.MustCompile(`^(?:var )?([\pL_][\pL\d_]*(?:, *[\pL_][\pL\d_]*)*)`)
)

// plainGo turns a piece into Go: a declaration or a statement of main.
func plainGo(piece string) (decl, stmt string) {
	switch {
	case strings.HasPrefix(piece, "import"):
		return "", ""
	case declares.MatchString(piece):
		return piece + "\n", ""
	case strings.HasPrefix(piece, "var "), defines.MatchString(piece):
		use := ""
		if m := sets.FindStringSubmatch(piece); m != nil {
			for _, n := range strings.Split(m[1], ",") {
				if n = strings.TrimSpace(n); n != "_" && !token.IsKeyword(n) {
					use += "_ = " + n + "\n"
				}
			}
		}
		return "", piece + "\n" + use
	}
	if _, err := parser.ParseExpr(piece); err == nil && !token.IsKeyword(regexp.MustCompile(`^\w*`).FindString(piece)) && !regexp.MustCompile(`^[\w.]+\(`).MatchString(piece) {
		return "", "show(" + piece + ")\n"
	}
	return "", piece + "\n"
}

// withImports adds the imports that a text needs.
func withImports(text string) string {
	var b bytes.Buffer
	b.WriteString("import \"fmt\"\n")
	for _, p := range packages {
		name := p[strings.LastIndexByte(p, '/')+1:]
		if p != "fmt" && regexp.MustCompile(`\b`+name+`\.[A-Z]`).MatchString(text) {
			fmt.Fprintf(&b, "import %q\n", p)
		}
	}
	return b.String() + text
}
