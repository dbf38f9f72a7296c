package diff

import (
	"fmt"
	"regexp"

	"ampturn/kernel/notebook"
)

var undefined = regexp.MustCompile(`undefined: ([\pL_][\pL\pN_]*)`)

// Hidden explains why a cell that ran when the notebook was saved stops in a run from the top: it used a name that only
// a later cell sets. "" where that is not so.
func Hidden(nb *notebook.Notebook, number int, fault string) string {
	m := undefined.FindStringSubmatch(fault)
	if m == nil {
		return ""
	}
	name := regexp.QuoteMeta(m[1])
	sets := regexp.MustCompile(`(?m)(?:^|[;{]|,)[ \t]*(?:(?:var|const|type|func)[ \t]+)?` + name + `\b[^=\n]*(?::=|=[^=])|(?m)^[ \t]*(?:var|const|type|func)[ \t]+` + name + `\b`)
	for _, c := range Runnable(nb) {
		if c.Number > number && sets.MatchString(c.Source) {
			return fmt.Sprintf("%s is set in cell %d, but used in cell %d", m[1], c.Number, number)
		}
	}
	return fmt.Sprintf("%s is set in no cell of the notebook; the cell that set it was changed or deleted", m[1])
}
