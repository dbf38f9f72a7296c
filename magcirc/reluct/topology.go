package reluct

import (
	"cmp"
	"slices"
)

// topology is a network cut into a spanning tree and the loops that the other branches close.
type topology struct {
	net    *Network
	carry  []bool    // by branch: it can carry flux
	chord  []int     // branches outside the tree, each closes a loop
	loop   []float64 // len(chord) rows by branches: +1, -1 or 0, the branch as the loop of the chord runs through it
	parent []int     // by node: branch to the node nearer to the root; -1 at a root
	part   []int     // by node: the root of its part of the network
	order  []int     // nodes, each after the one before it in the tree
}

// newTopology finds tree and loops. Branches enter the tree in the order of their reluctance at zero flux, so that
// the large reluctances, which carry little flux, have a flux of their own among the unknowns; branches with a winding
// of prescribed linkage enter last.
func newTopology(n *Network, parts []series, initial []float64, prescribed []bool) *topology {
	nb, nn := len(n.branches), len(n.nodes)
	t := &topology{net: n, carry: make([]bool, nb)}
	ints := make([]int, nb+5*nn)
	cut := func(size int) []int {
		s := ints[:size:size]
		ints = ints[size:]
		return s
	}
	rank := cut(nb)[:0]
	for i := range nb {
		t.carry[i] = !parts[i].blocks
		if t.carry[i] {
			rank = append(rank, i)
		}
	}
	slices.SortStableFunc(rank, func(a, b int) int {
		if prescribed[a] != prescribed[b] {
			if prescribed[b] {
				return -1
			}
			return 1
		}
		return cmp.Compare(initial[a], initial[b])
	})
	inTree := t.span(rank, cut(nn))
	t.parent, t.part, t.order = cut(nn), cut(nn), cut(nn)[:0]
	t.hang(inTree, cut(nn))
	for i := range nb {
		if t.carry[i] && !inTree[i] {
			t.chord = append(t.chord, i)
		}
	}
	t.loops(nb)
	return t
}

// span chooses the branches of the tree, first come first served (Kruskal).
func (t *topology) span(rank, group []int) []bool {
	inTree := make([]bool, len(t.carry))
	for i := range group {
		group[i] = i
	}
	find := func(i int) int {
		for group[i] != i {
			group[i] = group[group[i]]
			i = group[i]
		}
		return i
	}
	for _, i := range rank {
		a, b := find(t.net.branches[i].From), find(t.net.branches[i].To)
		if a != b {
			group[b] = a
			inTree[i] = true
		}
	}
	return inTree
}

// hang walks the tree from the first node of each part and sets parent, part and order.
func (t *topology) hang(inTree []bool, head []int) {
	branches := t.net.branches
	next := make([]int, 2*len(branches)) // list of the tree branches at each node; 2i: at From, 2i+1: at To
	for i := range head {
		head[i], t.part[i] = -1, -1
	}
	for i := len(branches) - 1; i >= 0; i-- {
		if inTree[i] {
			from, to := branches[i].From, branches[i].To
			next[2*i], head[from] = head[from], 2*i
			next[2*i+1], head[to] = head[to], 2*i+1
		}
	}
	for root := range head {
		if t.part[root] >= 0 {
			continue
		}
		t.part[root], t.parent[root] = root, -1
		t.order = append(t.order, root)
		for at := len(t.order) - 1; at < len(t.order); at++ {
			for p := head[t.order[at]]; p >= 0; p = next[p] {
				other := branches[p/2].To
				if p%2 == 1 {
					other = branches[p/2].From
				}
				if t.part[other] < 0 {
					t.part[other], t.parent[other] = root, p/2
					t.order = append(t.order, other)
				}
			}
		}
	}
}

// loops sets the rows of the loop matrix: a chord From -> To, and back through the tree.
func (t *topology) loops(nb int) {
	t.loop = make([]float64, len(t.chord)*nb)
	for j, c := range t.chord {
		row := t.loop[j*nb : j*nb+nb]
		t.climb(row, t.net.branches[c].To, 1)
		t.climb(row, t.net.branches[c].From, -1)
		row[c] = 1
	}
}

// climb adds the way from a node to the root, times sign; what two ways share cancels.
func (t *topology) climb(row []float64, node int, sign float64) {
	for t.parent[node] >= 0 {
		i := t.parent[node]
		b := &t.net.branches[i]
		if b.From == node {
			row[i] += sign
			node = b.To
		} else {
			row[i] -= sign
			node = b.From
		}
	}
}
