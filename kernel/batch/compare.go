package batch

import (
	"fmt"
	"html"
	"os"
	"path/filepath"
	"strings"

	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
	"ampturn/kernel/page"
)

// Compare tells what moved between two run notebooks: verdicts first, then the values that cells show, then inputs
// (cells, data files, versions). With Settings.Out it leaves the same as a page, OLD-NEW.html, there. The exit code is
// [Fine] where nothing moved, [Differ] where something did, [Failed] where a file cannot be read or written, [Use] for a
// notebook that was not run.
func Compare(older, newer string, s Settings) int {
	code, err := s.compare(older, newer)
	if err != nil {
		fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
	}
	return code
}

func (s Settings) compare(older, newer string) (int, error) {
	old, err := s.open(older)
	if err != nil {
		return Failed, err
	}
	now, err := s.open(newer)
	if err != nil {
		return Failed, err
	}
	for _, d := range []document{old, now} {
		if d.nb.Record() == nil {
			return Use, fmt.Errorf("%s carries no verdicts of a run; run it first: ampturn run %s", d.path, d.path)
		}
	}
	moved := s.Tolerance.Revisions(old.nb, now.nb, s.Format)
	fmt.Fprintf(s.Report, "%s -> %s\n%s", older, newer, list(moved))
	if s.Out != "" {
		if err := s.writeMoved(older, newer, moved); err != nil {
			return Failed, err
		}
	}
	if moved.None() {
		return Fine, nil
	}
	return Differ, nil
}

// list is what moved as text.
func list(r diff.Revisions) string {
	if r.None() {
		return "nothing moved\n"
	}
	var b strings.Builder
	part := func(head string, moved []diff.Moved) {
		if len(moved) == 0 {
			fmt.Fprintf(&b, "%s: none moved\n", head)
			return
		}
		fmt.Fprintf(&b, "%s:\n", head)
		for _, m := range moved {
			fmt.Fprintf(&b, "  %s\n", line(m))
			for _, l := range m.Lines {
				fmt.Fprintf(&b, "    %s\n", l)
			}
		}
	}
	part("verdicts", r.Verdicts)
	part("values", r.Values)
	part("inputs", r.Inputs)
	return b.String()
}

// line is one moved thing on a line.
func line(m diff.Moved) string {
	note := ""
	if m.Note != "" {
		note = " (" + m.Note + ")"
	}
	if len(m.Lines) > 0 {
		return m.Name + note
	}
	return arrow(m) + note
}

// writeMoved leaves the page.
func (s Settings) writeMoved(older, newer string, r diff.Revisions) error {
	if err := os.MkdirAll(s.Out, 0o755); err != nil {
		return fmt.Errorf("%s: the folder cannot be made: %w", s.Out, err)
	}
	nb := notebook.New()
	nb.Add(notebook.Markdown, fmt.Sprintf("# What moved from %s to %s\n\n%s", older, newer, summary(r)))
	table(nb, "Verdicts", "verdict", r.Verdicts)
	table(nb, "Values", "value", r.Values)
	nb.Add(notebook.Markdown, "## Inputs")
	for _, m := range r.Inputs {
		if len(m.Lines) == 0 {
			nb.Add(notebook.Markdown, "- "+plain(line(m)))
			continue
		}
		nb.Add(notebook.Markdown, fmt.Sprintf("**%s** %s\n\n```diff\n%s\n```", plain(m.Name), plain(m.Note), strings.ReplaceAll(strings.Join(m.Lines, "\n"), "```", "` ` `")))
	}
	if len(r.Inputs) == 0 {
		nb.Add(notebook.Markdown, "None moved.")
	}
	out, err := page.Render(nb, page.Options{Provenance: append([]page.Row{{Name: "old", Value: older}, {Name: "new", Value: newer}}, s.Provenance...)})
	if err != nil {
		return err
	}
	path := filepath.Join(s.Out, stem(older)+"-"+stem(newer)+".html")
	if stem(older) == stem(newer) {
		path = filepath.Join(s.Out, stem(older)+"-moved.html")
	}
	if err := notebook.Save(path, out); err != nil {
		return err
	}
	fmt.Fprintf(s.Report, "written: %s\n", path)
	return nil
}

func summary(r diff.Revisions) string {
	if r.None() {
		return "Nothing moved."
	}
	return fmt.Sprintf("Moved: %s, %s, %s. What is not listed is the same within the tolerance of the comparison.",
		count(len(r.Verdicts), "verdict"), count(len(r.Values), "value"), count(len(r.Inputs), "input"))
}

func count(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// plain makes a text safe in Markdown.
func plain(s string) string {
	return strings.NewReplacer(`\`, `\\`, "`", "\\`", "*", `\*`, "_", `\_`, "[", `\[`, "]", `\]`, "<", "&lt;", "$", `\$`, "|", `\|`).Replace(s)
}

// table adds a list of moved things as a table.
func table(nb *notebook.Notebook, head, what string, moved []diff.Moved) {
	var b strings.Builder
	fmt.Fprintf(&b, "## %s\n\n", head)
	if len(moved) == 0 {
		nb.Add(notebook.Markdown, b.String()+"None moved.")
		return
	}
	fmt.Fprintf(&b, "<table class=\"at\"><caption>%ss that moved</caption><thead><tr><th scope=\"col\">%s</th><th scope=\"col\">old</th><th scope=\"col\">new</th><th scope=\"col\">with it</th></tr></thead><tbody>", what, what)
	for _, m := range moved {
		fmt.Fprintf(&b, "<tr><td>%s</td><td%s>%s</td><td%s>%s</td><td>%s</td></tr>", html.EscapeString(m.Name),
			status(m.Old), html.EscapeString(m.Old), status(m.New), html.EscapeString(m.New), html.EscapeString(m.Note))
	}
	nb.Add(notebook.Markdown, b.String()+"</tbody></table>")
}

// status is the class of a table's cell that carries a status word.
func status(text string) string {
	for _, word := range []string{"PASS", "FAIL", "OPEN", "WAIVED"} {
		if strings.HasSuffix(text, word) || strings.HasPrefix(text, word) || strings.Contains(text, " "+word+" ") {
			return ` class="` + strings.ToLower(word) + `"`
		}
	}
	return ""
}
