package reluct_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"ampturn/magcirc/reluct"
)

func reportFloat(x float64, at int) string { return fmt.Sprintf("%.2g (network %d)", x, at) }

// spread collects what a set of random networks has covered.
type spread struct {
	nodes, branches, gaps, mui, bs, mmf   []float64
	driven, networks, fixed, rings, extra int
}

func (sp *spread) add(s *sample) {
	sp.networks++
	sp.nodes, sp.branches = append(sp.nodes, float64(s.Nodes)), append(sp.branches, float64(len(s.Branches)))
	if len(s.Drive.Linkage) > 0 {
		sp.driven++
		sp.fixed += len(s.Drive.Linkage)
	}
	for _, b := range s.Branches {
		if b.From == b.To {
			sp.rings++
		}
		if len(b.Elements) > 1 {
			sp.extra++
		}
		for _, e := range b.Elements {
			if law, ok := e.Law.(known); ok {
				sp.mui, sp.bs = append(sp.mui, law.mui), append(sp.bs, law.bs)
			}
			if e.Kind == reluct.Gap {
				sp.gaps = append(sp.gaps, e.Length)
			}
		}
		for _, turn := range b.Turns {
			if f := math.Abs(turn.Turns * s.Drive.Current[turn.Winding]); f > 0 {
				sp.mmf = append(sp.mmf, f)
			}
		}
	}
}

func (sp *spread) log(t *testing.T) {
	show := func(what string, v []float64) {
		slices.Sort(v)
		t.Logf("%-24s min %-9.3g median %-9.3g max %.3g", what, v[0], v[len(v)/2], v[len(v)-1])
	}
	show("nodes", sp.nodes)
	show("branches", sp.branches)
	show("gap length, m", sp.gaps)
	show("initial permeability", sp.mui)
	show("saturation, T", sp.bs)
	show("mmf, A", sp.mmf)
	total := 0.0
	for _, b := range sp.branches {
		total += b
	}
	t.Logf("share of gaps %.2f; networks with prescribed linkages %.2f, %.2f windings each; rings %d; branches of several elements %d", float64(len(sp.gaps))/total,
		float64(sp.driven)/float64(sp.networks), float64(sp.fixed)/float64(max(1, sp.driven)), sp.rings, sp.extra)
}
