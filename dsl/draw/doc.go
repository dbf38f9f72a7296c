// Package draw makes drawings in the house look: magnetic networks with their windings, gaps and fluxes, and the field
// around a gap to scale. It takes plain descriptions and solved fields and computes nothing of magnetics.
//
//	p, err := draw.Network{Title: "choke", Nodes: []string{"bottom", "top"}, Paths: paths}.Draw()
//	q := draw.FieldMap("gap of the choke", solution)
//
// A drawing is a self-contained SVG without a background of its own, readable on light and dark ground and in grey
// print, and a twin in words. The same description gives the same bytes.
package draw

// Picture is a drawing and its twin in words.
type Picture struct {
	SVG  string // with title and description, coordinates rounded to 0.01 px
	Text string // what is drawn, ranges and extremes
}

// MIMEBundle shows the picture, and its words where pictures cannot be shown.
func (p Picture) MIMEBundle() map[string]any {
	return map[string]any{"image/svg+xml": p.SVG, "text/plain": p.Text}
}
