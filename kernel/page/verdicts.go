package page

import (
	"html"
	"regexp"
	"strings"

	"ampturn/kernel/notebook"
)

// statusCell finds tables that carry status words.
var statusCell = regexp.MustCompile(`<td[^>]* class="(?:pass|fail|open|waived)"`)

// verdicts writes the table of verdicts that the notebook itself does not show.
func (d *document) verdicts(b *strings.Builder) {
	r := d.nb.Record()
	if r == nil || len(r.Verdicts) == 0 || d.showsVerdicts() {
		return
	}
	rows := make([]string, len(r.Verdicts))
	for i, v := range r.Verdicts {
		rows[i] = verdictRow(v)
	}
	b.WriteString(d.safe(`<table class="at"><caption>verdicts</caption><thead><tr><th scope="col">what</th><th scope="col">limit</th>`+
		`<th scope="col">corner and conditions</th><th scope="col">verdict</th></tr></thead><tbody>`+strings.Join(rows, "")+"</tbody></table>", "", nil) + "\n")
}

// showsVerdicts tells whether an output holds a table with status words.
func (d *document) showsVerdicts() bool {
	for _, c := range d.nb.Cells {
		for _, o := range c.Outputs {
			if page, _ := o.Data["text/html"].(string); statusCell.MatchString(page) {
				return true
			}
		}
	}
	return false
}

func verdictRow(v notebook.Verdict) string {
	var b strings.Builder
	b.WriteString("<tr>")
	for _, text := range []string{v.What, v.Limit, v.Where} {
		b.WriteString("<td>" + html.EscapeString(text) + "</td>")
	}
	class := ""
	if word, _, _ := strings.Cut(v.Status, " "); strings.Contains(" PASS FAIL OPEN WAIVED ", " "+word+" ") {
		class = ` class="` + strings.ToLower(word) + `"`
	}
	b.WriteString("<td" + class + ">" + html.EscapeString(v.Status) + "</td></tr>")
	return b.String()
}
