package reluct_test

import (
	"math"
	"math/rand/v2"
	"strconv"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// sample is a random network as data, so that its making and its solution can be told apart.
type sample struct {
	Nodes    int
	Windings int
	Branches []reluct.Branch
	Drive    reluct.Drive
}

// generator makes random networks. Their ranges: 3 to 30 nodes, parallel branches and rings among up to about 90
// branches, 30 % air gaps of 50 um to 20 mm, legs by three laws with initial permeability 1e2 to 1e5 and saturation
// 0.3 to 2 T, mmf of 1 to 1e5 A; half of the networks have up to four windings that prescribe up to twice the
// saturation flux of their leg. With Plain every branch is one leg or one gap with at most one winding; otherwise one
// branch in five has more: a gap in series with its leg, enclosed air, a magnet, a winding over two branches.
type generator struct {
	rng   *rand.Rand
	Plain bool
}

func newGenerator(seed uint64) *generator {
	return &generator{rng: rand.New(rand.NewPCG(seed, 20))}
}

func (g *generator) logUniform(lo, hi float64) float64 {
	return lo * math.Exp(g.rng.Float64()*math.Log(hi/lo))
}

// known is a law of package material with the parameters it was made from.
type known struct {
	material.Law
	shape   int
	mui, bs float64
}

func newLaw(shape int, mui, bs float64) known {
	var law material.Law
	var err error
	switch shape {
	case langevin:
		ms := bs / phys.Mu0
		law, err = material.NewLangevin(ms, ms/(3*(mui-1)), 0)
	case arctan:
		law, err = material.NewArctan(mui, bs)
	default:
		law, err = material.NewFroehlich(mui, bs)
	}
	if err != nil {
		panic(err)
	}
	return known{law, shape, mui, bs}
}

func (g *generator) leg() reluct.Element {
	return reluct.Element{Name: "leg", Law: newLaw(g.rng.IntN(3), g.logUniform(1e2, 1e5), 0.3+1.7*g.rng.Float64()),
		Length: g.logUniform(5e-3, 0.2), Area: g.logUniform(1e-5, 1e-3)}
}

// gap is an air gap; its length and area tell the spread that was reached.
func (g *generator) gap(lo, hi float64) reluct.Element {
	length, area := g.logUniform(lo, hi), g.logUniform(1e-5, 1e-3)
	return reluct.Element{Name: "gap", Kind: reluct.Gap, Permeance: phys.Mu0 * area / length, Length: length, Area: area}
}

func (g *generator) sample() sample {
	nodes := 3 + g.rng.IntN(28)
	s := sample{Nodes: nodes, Drive: reluct.Drive{Current: map[int]float64{}, Linkage: map[int]float64{}}}
	ends := make([]int, nodes)
	join := func(a, b int) {
		ends[a]++
		ends[b]++
		s.Branches = append(s.Branches, g.branch(a, b))
	}
	for i := 1; i < nodes; i++ {
		join(g.rng.IntN(i), i)
	}
	tree := len(s.Branches)
	for range 1 + g.rng.IntN(2*nodes) {
		a := g.rng.IntN(nodes)
		b := g.rng.IntN(nodes)
		if a != b || !g.Plain {
			join(a, b)
		}
	}
	for i := range ends {
		if ends[i] == 1 {
			join(i, (i+1+g.rng.IntN(nodes-1))%nodes)
		}
	}
	g.wind(&s)
	if g.rng.IntN(2) == 0 {
		g.prescribe(&s, tree)
	}
	return s
}

func (g *generator) branch(from, to int) reluct.Branch {
	b := reluct.Branch{From: from, To: to}
	if g.rng.Float64() < 0.3 {
		b.Elements = []reluct.Element{g.gap(50e-6, 20e-3)}
	} else {
		b.Elements = []reluct.Element{g.leg()}
	}
	if g.Plain || g.rng.Float64() > 0.2 {
		return b
	}
	switch g.rng.IntN(4) {
	case 0:
		gap := g.gap(50e-6, 5e-3)
		gap.Name = "gap2"
		b.Elements = append(b.Elements, gap)
	case 1:
		leg := g.leg()
		leg.Air = leg.Area * g.logUniform(0.1, 10)
		b.Elements[0] = leg
	case 2:
		magnet := reluct.Element{Name: "magnet", Kind: reluct.Magnet, Length: g.logUniform(1e-3, 2e-2), Area: g.logUniform(1e-5, 1e-3),
			Br: 1.3 * (2*g.rng.Float64() - 1), Mur: 1 + 0.3*g.rng.Float64()}
		b.Elements = append(b.Elements, magnet)
	case 3:
		b.Elements[0] = reluct.Element{Name: "window", Kind: reluct.Stray, Permeance: g.logUniform(1e-9, 1e-7)}
	}
	return b
}

// wind drives two branches in five, at least one, by windings of prescribed current.
func (g *generator) wind(s *sample) {
	for i := range s.Branches {
		if g.rng.Float64() > 0.4 && !(i == len(s.Branches)-1 && s.Windings == 0) {
			continue
		}
		turns := float64(1 + g.rng.IntN(100))
		if g.rng.IntN(2) == 0 {
			turns = -turns
		}
		w := s.Windings
		s.Windings++
		s.Drive.Current[w] = g.logUniform(1, 1e5) / turns
		s.Branches[i].Turns = append(s.Branches[i].Turns, reluct.Turn{Winding: w, Turns: turns})
		if !g.Plain && g.rng.IntN(5) == 0 {
			j := g.rng.IntN(len(s.Branches))
			s.Branches[j].Turns = append(s.Branches[j].Turns, reluct.Turn{Winding: w, Turns: turns})
		}
	}
}

// prescribe puts up to four windings of prescribed linkage on legs outside the tree, whose fluxes are free of each
// other.
func (g *generator) prescribe(s *sample, tree int) {
	want := 1 + g.rng.IntN(4)
	for i := tree; i < len(s.Branches) && want > 0; i++ {
		e := &s.Branches[i].Elements[0]
		law, ok := e.Law.(known)
		if !ok {
			continue
		}
		turns := float64(1 + g.rng.IntN(100))
		flux := 2 * (2*g.rng.Float64() - 1) * law.bs * e.Area
		w := s.Windings
		s.Windings++
		want--
		s.Branches[i].Turns = append(s.Branches[i].Turns, reluct.Turn{Winding: w, Turns: turns})
		s.Drive.Linkage[w] = turns * flux
		if !g.Plain && g.rng.IntN(3) == 0 { // the same winding over a second branch
			j := g.rng.IntN(tree)
			s.Branches[j].Turns = append(s.Branches[j].Turns, reluct.Turn{Winding: w, Turns: turns + float64(1+g.rng.IntN(10))})
		}
	}
}

var nodeNames, windingNames, branchNames = names("n"), names("w"), names("p")

func names(prefix string) []string {
	list := make([]string, 200)
	for i := range list {
		list[i] = prefix + strconv.Itoa(i)
	}
	return list
}

// build makes the network that a sample describes.
func (s *sample) build() *reluct.Network {
	n := reluct.New("T1")
	for i := range s.Nodes {
		n.Node(nodeNames[i])
	}
	for i := range s.Windings {
		n.Winding(windingNames[i])
	}
	for i, b := range s.Branches {
		b.Name = branchNames[i]
		n.Branch(b)
	}
	return n
}
