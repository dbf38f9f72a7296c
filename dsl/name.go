package dsl

import (
	"fmt"
	"slices"
	"strings"

	"ampturn/magcirc"
)

// pathOf finds a path by name: "centre" or "T1.centre".
func (c *MagneticCircuit) pathOf(name string) int {
	c.given()
	short := strings.TrimPrefix(name, c.name+".")
	for i := range c.paths {
		if c.paths[i].name == short {
			return i
		}
	}
	var have []string
	for i := range c.paths {
		have = append(have, c.paths[i].name)
	}
	c.unknown("path", name, have)
	return -1
}

// place is a part: its path and its index there.
type place struct{ path, part int }

// partOf finds a part: "T1.centre.gap", "centre.gap", or "gap" where only one path has such a part. kinds limits what
// is looked for; none means every kind but windings, which are found by their own name.
func (c *MagneticCircuit) partOf(name string, kinds ...partKind) place {
	c.given()
	short := strings.TrimPrefix(name, c.name+".")
	var found []place
	var all, fits []string
	for i := range c.paths {
		p := &c.paths[i]
		for k := range p.parts {
			kind := p.parts[k].part()
			if kind == windingKind || len(kinds) > 0 && !slices.Contains(kinds, kind) {
				continue
			}
			full := p.name + "." + p.names[k]
			all = append(all, full)
			if full == short {
				return place{i, k}
			}
			if p.names[k] == short {
				found, fits = append(found, place{i, k}), append(fits, full)
			}
		}
	}
	switch {
	case len(found) == 1:
		return found[0]
	case len(found) > 1:
		refuse(magcirc.Ambiguous, "", fmt.Sprintf("%s has several parts named %q", c.name, short), "say which: "+strings.Join(fits, ", "))
	}
	c.unknown(kindWords(kinds), name, all)
	return place{}
}

// kindWords names what is looked for: "gap, leg or magnet", "part" for every kind.
func kindWords(kinds []partKind) string {
	words := "part"
	for i, k := range kinds {
		switch {
		case i == 0:
			words = string(k)
		case i == len(kinds)-1:
			words += " or " + string(k)
		default:
			words += ", " + string(k)
		}
	}
	return words
}

// pathOrPart finds a path, or a part of one (part >= 0), for the questions that both can answer.
func (c *MagneticCircuit) pathOrPart(name string) place {
	c.given()
	short := strings.TrimPrefix(name, c.name+".")
	for i := range c.paths {
		if c.paths[i].name == short {
			return place{i, -1}
		}
	}
	if strings.Contains(short, ".") || c.hasPart(short) {
		return c.partOf(name)
	}
	return place{c.pathOf(name), -1}
}

func (c *MagneticCircuit) hasPart(name string) bool {
	for i := range c.paths {
		for k, own := range c.paths[i].names {
			if own == name && c.paths[i].parts[k].part() != windingKind {
				return true
			}
		}
	}
	return false
}

// windings lists the windings in the order of their first mention.
func (c *MagneticCircuit) windings() []string {
	var names []string
	for i := range c.paths {
		for k, part := range c.paths[i].parts {
			if part.part() == windingKind && !slices.Contains(names, c.paths[i].names[k]) {
				names = append(names, c.paths[i].names[k])
			}
		}
	}
	return names
}

// windingOf finds a winding: "main" or "T1.main".
func (c *MagneticCircuit) windingOf(name string) int {
	c.given()
	have := c.windings()
	if i := slices.Index(have, strings.TrimPrefix(name, c.name+".")); i >= 0 {
		return i
	}
	c.unknown("winding", name, have)
	return -1
}

// unknown refuses a name that is not there, with those that are.
func (c *MagneticCircuit) unknown(what, name string, have []string) {
	msg := fmt.Sprintf("has no %s %q", what, name)
	switch near := nearest(name, have); {
	case len(have) == 0:
		refuse(magcirc.UnknownName, "", c.name+" "+msg, "it has none")
	case len(have) > mostNames && near != "":
		refuse(magcirc.UnknownName, "", c.name+" "+msg, fmt.Sprintf("did you mean %q?", near))
	case len(have) > mostNames:
		have = append(have[:mostNames:mostNames], "...")
	}
	refuse(magcirc.UnknownName, "", c.name+" "+msg, "it has "+strings.Join(have, ", "))
}

// mostNames is how many candidates a message lists.
const mostNames = 8

// nearest is the candidate that differs in the fewest letters, "" where none is near.
func nearest(name string, have []string) string {
	best, least := "", len(name)/2+1
	for _, h := range have {
		if d := magcirc.Distance(name, h); d < least {
			best, least = h, d
		}
	}
	return best
}
