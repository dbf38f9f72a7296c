// Package start holds notebooks to start from, one for each kind of part. All figures in them are invented; each opens
// with its question and runs to verdicts.
//
//	buck-inductor         one gap, saturation over current and temperature
//	flyback               coupled inductor: gap, saturation at the current limit, leakage from readings
//	current-transformer   phase error, fault current, direct current
//	common-mode-choke     two windings on a ring with the stray flux of the load
//	line-transformer      flux density and magnetising current at no load
package start

import (
	"embed"
	"strings"
)

//go:embed kinds
var files embed.FS

// Kinds lists the kinds in alphabetical order.
func Kinds() []string {
	entries, err := files.ReadDir("kinds")
	if err != nil {
		panic(err) // embedded
	}
	names := make([]string, len(entries))
	for i, e := range entries {
		names[i] = strings.TrimSuffix(e.Name(), ".ipynb")
	}
	return names
}

// Like gives the notebook of a kind as an .ipynb file. The start of a kind's name is enough where it is the only one
// with it: "buck".
func Like(kind string) (text []byte, ok bool) {
	found := ""
	for _, name := range Kinds() {
		switch {
		case name == kind:
			found = name
		case kind != "" && strings.HasPrefix(name, kind):
			if found != "" {
				return nil, false
			}
			found = name
		}
	}
	if found == "" {
		return nil, false
	}
	text, err := files.ReadFile("kinds/" + found + ".ipynb")
	return text, err == nil
}
