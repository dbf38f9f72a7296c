package draw

import (
	"fmt"
	"math"
	"strings"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Kind is what a part of a path is.
type Kind int

// The kinds of parts.
const (
	Leg Kind = iota
	Gap
	Winding
	Stray
	Magnet
)

var kindNames = [...]string{"leg", "gap", "winding", "permeance", "magnet"}

// Part is one part of a path, in the order along its arrow.
type Part struct {
	Kind     Kind
	Name     string  // "leg", "main"
	Label    string  // what stands below the name: "34 turns", "0.6 mm", "0.21 T"
	Length   float64 // along the path, m; 0: not known. A gap with a length is drawn to scale
	Reversed bool    // a winding wound the other way (its dot at the arrow's head), a magnet against the arrow
}

// Path is a path of the flux between two nodes.
type Path struct {
	Name     string
	From, To int     // indices of nodes: the positive direction. Equal: the path closes in itself
	Parts    []Part  // along the arrow
	Flux     string  // "48.2 uWb", "" where it is not known
	Share    float64 // flux over the largest flux of the network, -1 to 1, positive along the arrow
}

// Network is a magnetic circuit to be drawn. Nodes become horizontal bars, paths vertical columns between them.
type Network struct {
	Title string
	Nodes []string
	Paths []Path
}

// Sizes of the drawing, px.
const (
	halfIron   = 14.0  // half the breadth of a leg
	coilOut    = 7.0   // by which the turns stand out from the iron
	slot       = 44.0  // least height of a part
	stub       = 44.0  // height of the wire at each end of a column
	labelLeft  = 28.0  // from the middle of a column to its labels
	labelMost  = 150.0 // greatest width of a label
	columnLeft = 34.0  // room left of the middle of a column: coil and dot
	loopBack   = 90.0  // from the middle of a column to the way back of a path that closes in itself
	loopLeft   = 104.0 // room left of such a column
	marginTop  = 48.0
	marginLow  = 58.0
	leastRow   = 200.0
	pad        = 10.0
)

// Draw returns the network as a picture.
//
// The arrow of each path is its positive direction. The breadth of the blue line is the share of the flux; dashed
// means against the arrow. The dot of a winding is its start. Gaps are to scale, never thinner than 1 px; legs are not.
// Errors: [magcirc.WrongUse] for a network without paths; [magcirc.BadValue] for a path whose nodes are not there.
func (n Network) Draw() (Picture, error) {
	if len(n.Paths) == 0 {
		return Picture{}, &magcirc.Error{Code: magcirc.WrongUse, Elem: "drawing of " + n.Title, Msg: "there is no path", Hint: "add one with Path"}
	}
	for _, p := range n.Paths {
		for _, node := range []int{p.From, p.To} {
			if node < 0 || node >= len(n.Nodes) {
				return Picture{}, &magcirc.Error{Code: magcirc.BadValue, Elem: "path " + p.Name, Quantity: "node", Got: float64(node),
					Limit: float64(len(n.Nodes)), Msg: fmt.Sprintf("node %d is not one of the %d nodes", node, len(n.Nodes))}
			}
		}
	}
	l := n.layout()
	c := &canvas{}
	n.draw(c, l)
	text := n.Text()
	return Picture{SVG: c.svg(l.width, l.height, n.Title, text), Text: text}, nil
}

// draw puts the network on the canvas: bars of nodes below columns, and words last.
func (n Network) draw(c *canvas, l *layout) {
	c.words(pad, 18, "start", cut(n.Title, l.width-2*pad))
	for k := range n.Nodes {
		l.bar(c, k)
	}
	for k, p := range n.Paths {
		l.column(c, k, p)
	}
	for k, name := range n.Nodes {
		l.name(c, k, name)
	}
	low := l.height - 14
	if l.scale > 0 {
		m := roundLength(90 / l.scale)
		c.scaleBar(pad, low-20, l.scale, m, phys.Format(m, "m")+" (gaps to scale, legs not)")
	}
	legend := "arrow: positive direction; dot: start of a winding"
	if n.solved() {
		legend = "arrow: positive direction; breadth of the line: flux; dashed: against the arrow"
	}
	c.words(pad, low, "start", legend)
}

// solved tells whether fluxes are known.
func (n Network) solved() bool {
	for _, p := range n.Paths {
		if p.Flux != "" {
			return true
		}
	}
	return false
}

// tie is the relative difference below which two fluxes count as equal: of equal ones the first is named.
const tie = 1e-6

// Text says in words what the drawing shows.
func (n Network) Text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: magnetic network of %s and %s.", n.Title, count(len(n.Nodes), "node"), count(len(n.Paths), "path"))
	most, least := -1, -1
	for k, p := range n.Paths {
		fmt.Fprintf(&b, "\n%s (%s -> %s)", p.Name, n.Nodes[p.From], n.Nodes[p.To])
		if p.Flux != "" {
			fmt.Fprintf(&b, ", flux %s", p.Flux)
			if most < 0 || math.Abs(p.Share) > math.Abs(n.Paths[most].Share)*(1+tie) {
				most = k
			}
			if least < 0 || math.Abs(p.Share) < math.Abs(n.Paths[least].Share)*(1-tie) {
				least = k
			}
		}
		b.WriteString(": ")
		for i, q := range p.Parts {
			if i > 0 {
				b.WriteString("; ")
			}
			b.WriteString(q.describe())
		}
		b.WriteByte('.')
	}
	if most >= 0 && most != least {
		fmt.Fprintf(&b, "\nLargest flux in %s, smallest in %s.", n.Paths[most].Name, n.Paths[least].Name)
	}
	return b.String()
}

func count(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// describe is the part in words.
func (q Part) describe() string {
	s := "part"
	if q.Kind >= 0 && int(q.Kind) < len(kindNames) {
		s = kindNames[q.Kind]
	}
	if q.Name != "" && q.Name != s {
		s += " " + q.Name
	}
	if q.Label != "" {
		s += " (" + q.Label + ")"
	}
	if q.Reversed {
		s += ", reversed"
	}
	return s
}
