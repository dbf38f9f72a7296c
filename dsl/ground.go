package dsl

import (
	"fmt"
	"strings"

	"ampturn/dsl/review"
	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// keepAssumptions enters what a result of the circuit rests on into the notebook's list.
func (c *MagneticCircuit) keepAssumptions(notes []magcirc.Note) {
	if c.drawn {
		return
	}
	if !c.asked {
		review.Assume(c.name+" is computed at 25 degC", review.Assumed, c.name+".At(100*degC)")
	}
	c.assumeMethods()
	for _, n := range notes {
		if g, ok := grounds[n.Kind]; ok {
			review.Assume(n.String(), g, wayOut(n))
		}
	}
	c.keepCautions()
}

var grounds = map[magcirc.NoteKind]review.Ground{magcirc.Assumed: review.Assumed, magcirc.Extrapolated: review.Extrapolated,
	magcirc.OutOfRange: review.OutOfRange, magcirc.Override: review.Override}

// assumeMethods enters the defaults of the vocabulary that the author of the circuit did not choose.
func (c *MagneticCircuit) assumeMethods() {
	stray := false
	for i := range c.paths {
		p := &c.paths[i]
		for k, part := range p.parts {
			if g, ok := part.(GapPart); ok && g.rule == nil {
				elem := p.full(c.name, k)
				review.Assume(fmt.Sprintf("%s: the flux around it by %s", elem, g.spec(elem, p.beside(elem, k), 0).Method), review.Assumed,
					"Gap("+typed(g.length)+").Fringe(FieldSolve.Window(height))")
			}
			stray = stray || part.part() == strayKind
		}
	}
	if len(c.windings()) > 1 && !stray {
		review.Assume(c.name+": no flux outside the paths that are given", review.Assumed, c.name+`.Path("window", "bottom -> top", Permeance(12*nH))`)
	}
}

// Override records that the author replaced a computed or stated value, why, and who answers for it: the list of overrides
// in [Assumptions] shows it.
//
//	Override("gap of T1: 0.62 mm as measured on sample 3, in place of 0.6 mm", "first bench reading", "A. Smith")
func Override(what, reason, who string) {
	if strings.TrimSpace(what) == "" || strings.TrimSpace(reason) == "" || strings.TrimSpace(who) == "" {
		refuse(magcirc.BadValue, "Override", "wants what was replaced, a reason and who answers for it", `write Override("gap: 0.62 mm as measured", "bench reading", "A. Smith")`)
	}
	text := what + "; " + reason + " (" + who + ")"
	review.Assume(text, review.Override, "this line")
	say("note", "override: ", text)
}

// typed is a length as one would type it: "0.45*mm".
func typed(length float64) string { return phys.Format(length*1e3, "") + "*mm" }

// wayOut is the line of a notebook that would change what a note says.
func wayOut(n magcirc.Note) string {
	has := func(words string) bool { return strings.Contains(n.Text, words) }
	switch {
	case has("sides not given"):
		return ".Fringe(ConformalMap.Window(height)) at the gap"
	case has("breadth of the window"):
		return ".Fringe(FieldSolve.Window(height).Breadth(breadth)) at the gap"
	case has("shape of the faces"):
		return ".Faces(Rect(w, d)) at the gap"
	case has("degC is") && n.Kind == magcirc.Extrapolated:
		return ".Also(temperature, law) at the material"
	case has("beyond the data") && n.Kind == magcirc.Extrapolated:
		return "Curve(H, B) with points beyond it"
	case has("FieldSolve"):
		return ".Fringe(FieldSolve) at the gap"
	case has("readings without an uncertainty"):
		return "Reading{..., Uncertainty: 0.5*percent}"
	case has("sign of M"):
		return "a Reading with Aiding or Opposing"
	}
	return ""
}

// The cautions that a document on magnetic parts carries, as far as the objects in it call for them.
const (
	cautionAid      = "Calculations are engineering aids and certify no part. Data are typical unless they are marked as maximum; verify with a prototype, measured under real conditions, before production."
	cautionWindings = "Insulation, spacing, dielectric strength and temperature class stay open until a qualified person has checked the edition of the standard and the local code that apply. The class depends on the whole system and on its hot spot. Withstand tests belong to trained people behind an interlock."
	cautionMagnet   = "Strong magnets pinch, erase cards and disturb pacemakers; ferrites and magnets chip. Follow the safety data of the material."
	cautionHot      = "Surfaces above 60 degC burn; varnish and potting fumes burn and harm. The hot spot counts, not the surface."
	cautionEnergy   = "The part stores energy: opening its circuit under current raises the voltage until something breaks. Work on live circuits is for trained and authorised people; discharge and lock out first."
)

// The marks from which cautions apply, of our own choosing: a temperature that hurts on touch, an energy that is felt.
const (
	hotSurface = 60.0  // degC
	feltEnergy = 10e-3 // J
)

// keepCautions enters the cautions that the parts of the circuit and its temperature call for.
func (c *MagneticCircuit) keepCautions() {
	review.Caution(cautionAid)
	if len(c.windings()) > 0 {
		review.Caution(cautionWindings)
		review.Insulate(fmt.Sprintf("%s (%s, core)", c.name, strings.Join(c.windings(), ", ")))
	}
	for i := range c.paths {
		for _, part := range c.paths[i].parts {
			if part.part() == magnetKind {
				review.Caution(cautionMagnet)
			}
		}
	}
	if c.temperature >= hotSurface {
		review.Caution(cautionHot)
	}
}

// keepEnergy enters the caution that the energy of an operating point calls for.
func (op *OperatingPoint) keepEnergy() {
	if op.solution.Energy() >= feltEnergy {
		review.Caution(cautionEnergy)
	}
}
