package material

import (
	"fmt"
	"math"
	"slices"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Room is the temperature, in degC, to which a law belongs when nobody says another.
const Room = 25.0

// Reach is how far, in K, a law may be taken beyond the temperatures of its data without being asked to.
const Reach = 20.0

// Material is a named material: a law at one temperature or at several. Materials are immutable; the methods that
// seem to change one give a new one.
type Material struct {
	name        string
	states      []state // from cold to hot
	extrapolate bool
	tolerance   float64
	notes       []magcirc.Note
	factor      float64 // of the permeability of this lot, 0 for 1
	known       *known  // laws between and beyond the states, shared by lots
}

// state is the law at one temperature in degC.
type state struct {
	t   float64
	law Law
}

// New gives a material whose law belongs to 25 degC.
func New(name string, law Law) *Material { return NewAt(name, Room, law) }

// NewAt gives a material whose law belongs to temperature t in degC.
func NewAt(name string, t float64, law Law) *Material {
	return &Material{name: name, states: []state{{t, law}}, known: &known{}}
}

// Name gives the material's name.
func (m *Material) Name() string { return m.name }

// Temperatures gives the temperatures in degC at which the material has a law, from cold to hot.
func (m *Material) Temperatures() []float64 {
	t := make([]float64, len(m.states))
	for i, s := range m.states {
		t[i] = s.t
	}
	return t
}

// Also gives the material with one more law, at temperature t in degC.
//
// Errors: [magcirc.BadValue] for no law and a temperature below absolute zero, [magcirc.DuplicateName] for a
// temperature that has one.
func (m *Material) Also(t float64, law Law) (*Material, error) {
	switch {
	case law == nil:
		return nil, m.refuse(magcirc.BadValue, t, 0, "there is no law for "+phys.Format(t, "degC"), "")
	case !(t > -273.15) || t > MostTemperature:
		return nil, m.refuse(magcirc.BadValue, t, -273.15, fmt.Sprintf("no material is at %s", phys.Format(t, "degC")), "temperatures are in degC")
	case slices.ContainsFunc(m.states, func(s state) bool { return s.t == t }):
		return nil, m.refuse(magcirc.DuplicateName, t, t, "it has a law at "+phys.Format(t, "degC")+" already", "")
	}
	c := *m
	c.states, c.known = append(slices.Clone(m.states), state{t, law}), &known{}
	slices.SortFunc(c.states, func(a, b state) int {
		if a.t < b.t {
			return -1
		}
		return 1
	})
	return &c, nil
}

// Extrapolate gives the material with leave to take its law as far beyond the temperatures of its data as asked.
func (m *Material) Extrapolate() *Material {
	c := *m
	c.extrapolate = true
	return &c
}

// Tolerance gives the material with a relative tolerance of its initial permeability, 0.25 for 25 percent.
func (m *Material) Tolerance(rel float64) *Material {
	c := *m
	c.tolerance = rel
	return &c
}

// Spread gives the relative tolerance of the initial permeability; 0 where none is known.
func (m *Material) Spread() float64 { return m.tolerance }

// Noted gives the material with a remark that goes with every use of its law, such as where its figures come from.
func (m *Material) Noted(kind magcirc.NoteKind, text string) *Material {
	c := *m
	c.notes = append(slices.Clone(m.notes), magcirc.Note{Kind: kind, Elem: m.elem(), Text: text})
	return &c
}

// Law gives the law at temperature t in degC, with the notes that belong to it.
//
//	B(H, t) = B1(H) + (t - t1)/(t2 - t1) (B2(H) - B1(H))
//
// with the two data temperatures beside t: flux density is interpolated in a straight line at equal field strength.
// Up to 20 K beyond the data the end pair goes on, with a note; further only after [Material.Extrapolate]. A
// material with one law keeps it within the same distance.
//
// Errors: [magcirc.OutsideData] beyond that, or where the extrapolated law would fall.
func (m *Material) Law(t float64) (Law, []magcirc.Note, error) {
	if len(m.states) == 0 || m.states[0].law == nil {
		return nil, nil, m.refuse(magcirc.WrongUse, t, 0, "it has no law", "")
	}
	if math.IsNaN(t) {
		return nil, nil, m.refuse(magcirc.BadValue, t, 0, "no temperature", "")
	}
	law, err := m.known.at(m, t)
	if err == nil && m.factor != 0 {
		law, err = NewScaled(law, m.factor)
	}
	if err != nil {
		return nil, nil, err
	}
	beyond, data := m.beyond(t)
	if beyond > Reach && !m.extrapolate {
		return nil, nil, m.refuse(magcirc.OutsideData, t, Reach,
			fmt.Sprintf("%s is %s beyond its data (%s)", phys.Format(t, "degC"), phys.Format(beyond, "K"), data),
			fmt.Sprintf("add the law there with Also(%s*degC, ...), or say Extrapolate()", phys.Format(t, "")))
	}
	notes := slices.Concat(m.notes, Notes(law))
	if beyond > 0 {
		how := "the law is extrapolated in a straight line"
		if len(m.states) == 1 {
			how = "the law is taken as it is"
		}
		notes = append(notes, magcirc.Note{Kind: magcirc.Extrapolated, Elem: m.elem(), Text: fmt.Sprintf(
			"%s is %s beyond its data (%s); %s", phys.Format(t, "degC"), phys.Format(beyond, "K"), data, how)})
	}
	return law, notes, nil
}

// at interpolates, or extrapolates as far as the law stays one.
func (m *Material) at(t float64) (Law, error) {
	for _, s := range m.states {
		if s.t == t {
			return s.law, nil
		}
	}
	last := len(m.states) - 1
	if last == 0 {
		return m.states[0].law, nil
	}
	i := 0
	for i < last-1 && t > m.states[i+1].t {
		i++
	}
	cold, hot := m.states[i], m.states[i+1]
	if law, ok, err := joined(cold.law, hot.law, (t-cold.t)/(hot.t-cold.t)); ok {
		return law, err
	}
	l := &blend{cold.law, hot.law, (t - cold.t) / (hot.t - cold.t), cold.t, hot.t, t}
	if l.w < 0 || l.w > 1 {
		if h, ok := l.rises(); !ok {
			return nil, m.refuse(magcirc.OutsideData, t, hot.t, fmt.Sprintf("extrapolated to %s from %s and %s the law no longer rises at %s",
				phys.Format(t, "degC"), phys.Format(cold.t, "degC"), phys.Format(hot.t, "degC"), phys.FormatDigits(h, "A/m", 2)),
				"add data nearer to it")
		}
	}
	return l, nil
}

// beyond gives how far t lies outside the data, in K, and the data's temperatures in words.
func (m *Material) beyond(t float64) (k float64, data string) {
	lo, hi := m.states[0].t, m.states[len(m.states)-1].t
	data = phys.Format(lo, "degC")
	if hi > lo {
		data += " to " + phys.Format(hi, "degC")
	}
	return max(lo-t, t-hi, 0), data
}

// Describe gives the material in words, one line for each temperature.
func (m *Material) Describe() string {
	text := m.name
	for _, s := range m.states {
		text += "\n  " + phys.Format(s.t, "degC") + ": " + s.law.Describe()
	}
	return text
}

func (m *Material) elem() string { return fmt.Sprintf("material %q", m.name) }

func (m *Material) refuse(code magcirc.Code, got, limit float64, msg, hint string) error {
	return &magcirc.Error{Code: code, Elem: m.elem(), Quantity: "temperature", Unit: "degC", Got: got, Limit: limit, Msg: msg, Hint: hint}
}

// Beyond gives the note that a result needs when flux density b in T in part elem ("leg T1.centre") lies beyond the
// data of the law that material m has at temperature t in degC, and whether it does.
func Beyond(elem string, m *Material, t float64, law Law, b float64) (magcirc.Note, bool) {
	_, bmax := law.Range()
	if math.Abs(b) <= bmax {
		return magcirc.Note{}, false
	}
	return magcirc.Note{Kind: magcirc.Extrapolated, Elem: elem, Text: fmt.Sprintf(
		"%s is beyond the data of %q (to %s at %s); above it B rises with mu0 only. Add points",
		phys.Format(math.Abs(b), "T"), m.name, phys.Format(bmax, "T"), phys.Format(t, "degC"))}, true
}
