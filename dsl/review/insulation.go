package review

import (
	"slices"
	"strings"
)

// Insulate records that the running cell computed a part with windings: its insulation is an open point of the document
// as soon as the document judges anything, unless its author states one.
func Insulate(part string) {
	e := here()
	if !slices.Contains(e.insulated, part) {
		e.insulated = append(e.insulated, part)
	}
}

// insulation are the open points on insulation that nobody stated.
func insulation() []*OpenPoint {
	var parts []string
	for _, e := range ledger.cells {
		for _, item := range e.items {
			if p, ok := item.(*OpenPoint); ok && isInsulation(p.What) {
				return nil
			}
		}
		for _, part := range e.insulated {
			if !slices.Contains(parts, part) {
				parts = append(parts, part)
			}
		}
	}
	if len(parts) == 0 {
		return nil
	}
	return []*OpenPoint{{What: "insulation of " + strings.Join(parts, ", "), Owner: "a qualified person, by the standard that applies"}}
}

// isInsulation tells whether an open point is on insulation, which no calculation and no waiver closes.
func isInsulation(what string) bool {
	low := strings.ToLower(what)
	for _, word := range []string{"insulation", "creepage", "clearance", "withstand", "dielectric"} {
		if strings.Contains(low, word) {
			return true
		}
	}
	return false
}
