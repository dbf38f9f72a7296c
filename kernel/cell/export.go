package cell

import (
	"fmt"
	"go/format"
	"go/types"
	"regexp"
	"sort"
	"strconv"
	"strings"

	"ampturn/kernel"
)

// Harness is what an exported program needs beside its cells: the link to the vocabulary.
type Harness struct {
	Imports map[string]string // by the name that the program knows them by, which begins with "p_": import paths
	Setup   []string          // statements before the first cell
	Program []string          // fields of the nb.Program: "Format: p_phys.Format"
}

// Export gives the cells of a notebook, in their order, as one Go program: the checked, lowered text with the source of
// each cell above it. The program prints as text what the cells show. The session must be fresh; nothing is run. The
// fault is that of the first cell which is refused.
//
// On processors that join a product and a sum into one rounding (arm64, ppc64le, s390x) compiled Go may differ from
// the notebook in the last digit of a number.
func (s *Session) Export(title string, cells []kernel.Cell, h Harness) (string, *kernel.Fault) {
	s.plain = true
	var decls, list strings.Builder
	for _, c := range cells {
		s.now = c
		u, bad := s.prepare(c)
		if len(bad) > 0 {
			return "", s.refusal(bad)
		}
		if !strings.Contains(list.String(), "Run: "+u.low.run+"}") {
			fmt.Fprintf(&decls, "// Cell %d\n%s\n%s\n", c.Number, commented(c.Source), u.low.decls)
		}
		fmt.Fprintf(&list, "{Key: %q, Number: %d, Run: %s},\n", cellKey(c), c.Number, u.low.run)
	}
	text, err := s.filled(decls.String())
	if err != nil {
		text := "the notebook cannot be written as a Go program: " + err.Error()
		return "", &kernel.Fault{Name: "InternalError", Text: text, Traceback: []string{text}}
	}
	random := strings.Contains(text, "p_math_rand.")
	var b strings.Builder
	fmt.Fprintf(&b, "// Command main is the notebook %s as a Go program. It prints as text what the cells show.\n", title)
	if random {
		b.WriteString("//\n//go:debug randseednop=0\n")
	}
	b.WriteString("package main\n\nimport (\n")
	all := s.importsOf(text)
	for name, path := range h.Imports {
		all[name] = path
	}
	for _, name := range sortedKeys(all) {
		fmt.Fprintf(&b, "\t%s %q\n", name, all[name])
	}
	b.WriteString(")\n\n" + text + "\nfunc main() {\n")
	if random {
		b.WriteString("\tp_math_rand.Seed(1) // as a notebook begins\n")
	}
	for _, line := range h.Setup {
		b.WriteString("\t" + line + "\n")
	}
	b.WriteString("\tp_nb.Main(p_nb.Program{\n" + s.shownTable())
	for _, f := range h.Program {
		b.WriteString("\t\t" + f + ",\n")
	}
	b.WriteString("\t\tCells: []p_nb.Cell{\n" + list.String() + "},\n})\n}\n")
	out, err := format.Source([]byte(b.String()))
	if err != nil {
		text := "the notebook cannot be written as a Go program: " + err.Error()
		return "", &kernel.Fault{Name: "InternalError", Text: text, Traceback: []string{text}}
	}
	return string(out), nil
}

// cellKey gives a cell's identity, or a stable substitute.
func cellKey(c kernel.Cell) string {
	if c.ID != "" {
		return c.ID
	}
	return fmt.Sprintf("cell-%d", c.Number)
}

// commented writes a source as comment lines.
func commented(source string) string {
	lines := strings.Split(strings.TrimRight(source, "\n"), "\n")
	for i, l := range lines {
		lines[i] = strings.TrimRight("//\t"+l, "\t\r ")
	}
	return strings.Join(lines, "\n") + "\n"
}

// shownTable writes how the values of the program are shown.
func (s *Session) shownTable() string {
	var b strings.Builder
	b.WriteString("\t\tShown: []p_nb.Shown{\n")
	for _, how := range s.shows {
		typ := ""
		if _, basic := how.typ.(*types.Basic); !basic {
			typ = shortType(how.typ)
		}
		var fields []string
		for _, f := range [][2]string{{"Unit", how.unit}, {"Type", typ}} {
			if f[1] != "" {
				fields = append(fields, f[0]+": "+strconv.Quote(f[1]))
			}
		}
		b.WriteString("\t\t\t{" + strings.Join(fields, ", ") + "},\n")
	}
	return b.String() + "\t\t},\n"
}

var packageName = regexp.MustCompile(`\b(p_\w+)\.`)

// importsOf lists the packages that a program names.
func (s *Session) importsOf(text string) map[string]string {
	byName := map[string]string{"p_nb": nbPath}
	for path := range s.base.packages {
		byName[importName(path)] = path
	}
	used := map[string]string{"p_nb": nbPath}
	for _, m := range packageName.FindAllStringSubmatch(text, -1) {
		if path := byName[m[1]]; path != "" {
			used[m[1]] = path
		}
	}
	return used
}

// importName is the name under which lowered text knows a package.
func importName(path string) string {
	return "p_" + strings.NewReplacer("/", "_", ".", "_", "-", "_").Replace(path)
}

// insertion is a text that goes into a program at a place.
type insertion struct {
	off  int
	text string
}

func inserted(text string, list []insertion) string {
	sort.SliceStable(list, func(i, j int) bool { return list[i].off > list[j].off })
	for _, in := range list {
		text = text[:in.off] + in.text + text[in.off:]
	}
	return text
}
