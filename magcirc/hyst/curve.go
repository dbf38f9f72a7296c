package hyst

import (
	"math"

	"ampturn/magcirc"
)

// InitialNote is the note of every result for which a law's memory was left out.
const InitialNote = "single states follow its initial curve, from the demagnetised state; a history keeps its memory"

// Curve is the single-valued curve of a law with memory, for all that asks for one: it is a material.Law.
type Curve struct {
	law   Law
	start State
}

// Initial gives the initial magnetisation curve of a law: from the demagnetised state in one move. It is what a part
// follows when it is magnetised for the first time; [Curve.Memory] leads to the law itself.
func Initial(law Law) *Curve { return &Curve{law, law.Start()} }

// Memory gives the law with memory that the curve belongs to.
func (c *Curve) Memory() Law { return c.law }

// At gives flux density in T and dB/dH in H/m at field strength h in A/m.
func (c *Curve) At(h float64) (b, slope float64) {
	p := c.law.ByField(&c.start, h)
	return p.B, p.Slope()
}

// Inverse gives field strength in A/m and dH/dB in m/H at flux density b in T.
func (c *Curve) Inverse(b float64) (h, slope float64) {
	p := c.law.ByFluxDensity(&c.start, b)
	return p.H, p.DH / p.DB
}

// Coenergy is the integral of B dH in J/m3 from 0 to h.
func (c *Curve) Coenergy(h float64) float64 {
	p := c.law.ByField(&c.start, h)
	return p.H*p.B - c.law.Work(&c.start, p)
}

// Range gives no limit: the law is a formula.
func (c *Curve) Range() (hmax, bmax float64) { return math.Inf(1), math.Inf(1) }

// Describe gives the law in words.
func (c *Curve) Describe() string { return c.law.Describe() }

// Notes gives those of the law, and that its memory was left out.
func (c *Curve) Notes() []magcirc.Note {
	var notes []magcirc.Note
	if n, ok := c.law.(interface{ Notes() []magcirc.Note }); ok {
		notes = append(notes, n.Notes()...)
	}
	return append(notes, magcirc.Note{Kind: magcirc.Remark, Elem: c.Describe(),
		Text: InitialNote})
}
