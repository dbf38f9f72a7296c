package reluct

import (
	"strconv"

	"ampturn/magcirc/material"
)

// Kind is the kind of an element.
type Kind int

// The kinds of element.
const (
	Leg    Kind = iota // magnetisable path with a law B(H)
	Gap                // air gap of given permeance
	Stray              // stray path of given permeance
	Magnet             // permanent magnet on its recoil line
)

// String gives the word for the kind: "leg".
func (k Kind) String() string {
	switch k {
	case Leg:
		return "leg"
	case Gap:
		return "gap"
	case Stray:
		return "stray path"
	case Magnet:
		return "magnet"
	}
	return "element " + strconv.Itoa(int(k))
}

// Element is one part of a branch; the parts of a branch carry the same flux.
type Element struct {
	Name      string       // "leg", "gap", "window": unique within the branch; "" stands for the word of its kind
	Kind      Kind         // Leg, Gap, Stray or Magnet
	Law       material.Law // Leg: magnetisation law B(H)
	Length    float64      // Leg, Magnet: path length l in m, > 0. Gap, Stray: optional, for the field strength shown
	Area      float64      // Leg: metal area A in m2, > 0. Magnet: section in m2, > 0. Gap, Stray: optional, for the flux density shown
	Air       float64      // Leg: air area in m2, >= 0, that the winding encloses beside the metal over the leg's length
	Permeance float64      // Gap: P in H, > 0. Stray: P in H, >= 0; 0 is a path that carries no flux
	Br        float64      // Magnet: remanence in T along the branch From -> To; negative: reversed
	Mur       float64      // Magnet: relative recoil permeability, > 0
}

// Turn says that a winding lies on a branch.
type Turn struct {
	Winding int     // index that [Network.Winding] gave
	Turns   float64 // number of turns N; negative: wound the other way
}

// Branch is a flux path from one node to another: its elements in series, and the windings around it.
type Branch struct {
	Name     string // "centre": unique in the network; "" is shown as "path 3"
	From, To int    // indices that [Network.Node] gave; From == To is a ring
	Elements []Element
	Turns    []Turn
}

// Network is a reluctance network: nodes, windings and branches, each with an index in the order of first mention.
// Faults of a branch are kept and reported by [Network.Validate] and by the solvers. A network that is no longer
// added to may be solved by many goroutines at once.
type Network struct {
	name     string
	nodes    []string
	windings []string
	branches []Branch
	nodeOf   map[string]int
	windOf   map[string]int
	branchOf map[string]int
	err      error // first fault
}

// New gives an empty network. The name stands in messages: "circuit T1".
func New(name string) *Network {
	return &Network{name: name, branches: make([]Branch, 0, 8), nodeOf: map[string]int{}, windOf: map[string]int{}, branchOf: map[string]int{}}
}

// Name gives the name of the network.
func (n *Network) Name() string { return n.name }

// Node gives the index of the node of that name, which is made at its first mention.
func (n *Network) Node(name string) int { return mention(&n.nodes, n.nodeOf, name) }

// Winding gives the index of the winding of that name, which is made at its first mention.
func (n *Network) Winding(name string) int { return mention(&n.windings, n.windOf, name) }

func mention(names *[]string, index map[string]int, name string) int {
	if i, ok := index[name]; ok {
		return i
	}
	i := len(*names)
	*names = append(*names, name)
	index[name] = i
	return i
}

// Branch adds a branch and gives its index. A faulty branch is added too; the first fault is what
// [Network.Validate] and the solvers report.
func (n *Network) Branch(b Branch) int {
	i := len(n.branches)
	n.branches = append(n.branches, b)
	if n.err == nil {
		n.err = n.checkBranch(i)
	}
	if b.Name != "" {
		n.branchOf[b.Name] = i
	}
	return i
}

// Varied gives a network that differs from n in its elements only: elements[i] stands for those of branch i, as many and of
// the same names. It is quick to make, for draws by the thousand; n stays as it is.
//
// Errors of the elements are reported by the solvers, as those of any network.
func (n *Network) Varied(elements [][]Element) *Network {
	next := *n
	next.branches = append([]Branch(nil), n.branches...)
	for i := range next.branches {
		next.branches[i].Elements = elements[i]
		for k := range elements[i] {
			if next.err == nil {
				next.err = next.checkElement(i, k)
			}
		}
	}
	return &next
}

// Find gives the index of the branch of that name.
func (n *Network) Find(name string) (branch int, ok bool) {
	branch, ok = n.branchOf[name]
	return branch, ok
}

// Nodes gives the names of the nodes by index.
func (n *Network) Nodes() []string { return append([]string(nil), n.nodes...) }

// Windings gives the names of the windings by index.
func (n *Network) Windings() []string { return append([]string(nil), n.windings...) }

// Branches gives the branches by index. The elements and turns are shared: they are for reading.
func (n *Network) Branches() []Branch { return append([]Branch(nil), n.branches...) }

// path gives the name of branch i as messages show it: "T1.centre".
func (n *Network) path(i int) string {
	name := n.branches[i].Name
	if name == "" {
		name = "path " + strconv.Itoa(i+1)
	}
	if n.name == "" {
		return name
	}
	return n.name + "." + name
}

// part gives the name of an element with its kind as messages show it: "gap T1.centre.gap2", "leg T1.centre".
func (n *Network) part(i, k int) string {
	e := &n.branches[i].Elements[k]
	if e.Name == "" || e.Name == e.Kind.String() {
		return e.Kind.String() + " " + n.path(i)
	}
	return e.Kind.String() + " " + n.path(i) + "." + e.Name
}

// circuit gives the network as messages show it: "circuit T1".
func (n *Network) circuit() string {
	if n.name == "" {
		return "circuit"
	}
	return "circuit " + n.name
}
