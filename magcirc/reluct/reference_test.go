package reluct_test

import (
	"context"
	"math"
	"testing"

	"ampturn/magcirc/material"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// reference is one published value beside what the network gives. exact is the value recomputed from the inputs of
// the example, which the network must meet within 1e-6 (or within); printed is what the source prints, to the digits
// it prints; 0 where the print itself is faulty or where there is none.
type reference struct {
	id, source, what string
	got              float64
	exact, within    float64
	printed, digits  float64
}

func (r reference) check(t *testing.T) {
	t.Helper()
	if r.within == 0 {
		r.within = 1e-6
	}
	if r.exact != 0 && !(math.Abs(r.got-r.exact) <= r.within*math.Abs(r.exact)) {
		t.Errorf("%s %s (%s): %.9g, recomputed %.9g", r.id, r.what, r.source, r.got, r.exact)
	}
	if r.printed != 0 && !(math.Abs(r.got-r.printed) <= 0.6*math.Pow(10, math.Floor(math.Log10(math.Abs(r.printed)))+1-r.digits)) {
		t.Errorf("%s %s (%s): %.9g, printed %.9g", r.id, r.what, r.source, r.got, r.printed)
	}
}

func iron(mur, length, area float64) reluct.Element {
	return reluct.Element{Name: "leg", Law: linear(mur), Length: length, Area: area}
}

// steel is a leg whose magnetisation curve is known at one point, which the example reads from its chart.
func steel(name string, h, b, length, area float64) reluct.Element {
	return reluct.Element{Name: name, Law: polygon{[]float64{0, h}, []float64{0, b}}, Length: length, Area: area}
}

func airGap(name string, length, area float64) reluct.Element {
	return reluct.Element{Name: name, Kind: reluct.Gap, Permeance: phys.Mu0 * area / length, Length: length, Area: area}
}

func reluctance(name string, r float64) reluct.Element {
	return reluct.Element{Name: name, Kind: reluct.Stray, Permeance: 1 / r}
}

// ring is a network of one closed path with one winding.
func ring(turns float64, parts ...reluct.Element) *reluct.Network {
	n := reluct.New("R1")
	node := n.Node("a")
	n.Branch(reluct.Branch{Name: "core", From: node, To: node, Elements: parts, Turns: []reluct.Turn{{Winding: n.Winding("N"), Turns: turns}}})
	return n
}

// three is a network of three paths between two nodes with a winding on the first.
func three(turns float64, centre, left, right []reluct.Element) *reluct.Network {
	n := reluct.New("T1")
	a, b := n.Node("bottom"), n.Node("top")
	n.Branch(reluct.Branch{Name: "centre", From: a, To: b, Elements: centre, Turns: []reluct.Turn{{Winding: n.Winding("N"), Turns: turns}}})
	n.Branch(reluct.Branch{Name: "left", From: b, To: a, Elements: left})
	n.Branch(reluct.Branch{Name: "right", From: b, To: a, Elements: right})
	return n
}

func current(i float64) reluct.Drive { return reluct.Drive{Current: map[int]float64{0: i}} }
func linkage(l float64) reluct.Drive { return reluct.Drive{Linkage: map[int]float64{0: l}} }

func solve(t *testing.T, n *reluct.Network, d reluct.Drive) *reluct.Solution {
	t.Helper()
	s, err := n.Solve(context.Background(), d, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func inductance(t *testing.T, s *reluct.Solution, i, j int) float64 {
	t.Helper()
	m, err := s.Incremental()
	if err != nil {
		t.Fatal(err)
	}
	return m.At(i, j)
}

const cm2, mm2, mm, cm = 1e-4, 1e-6, 1e-3, 1e-2

// TestReferenceLinear holds the linear examples of Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed.,
// McGraw-Hill 2003, and of Chapman, Electric Machinery Fundamentals, 5th ed., McGraw-Hill.
func TestReferenceLinear(t *testing.T) {
	fku := "Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., "
	core := ring(500, iron(70000, 0.3, 9*cm2), airGap("gap", 0.5*mm, 9*cm2))
	s := solve(t, core, linkage(500*9e-4))
	leg, gap, flux := s.State[0][0], s.State[0][1], s.Flux[0]
	machine := solve(t, ring(1000, iron(1e9, 0.1, 0.2), airGap("gap", 1*cm, 0.2), airGap("gap2", 1*cm, 0.2)), current(10))
	twoParts := solve(t, ring(500, reluctance("core", 3791.33), reluctance("gap", 442321.3)), current(0.8))
	induct := func(mur float64) float64 {
		return inductance(t, solve(t, ring(500, iron(mur, 0.3, 9*cm2), reluctance("gap", 4.42e5)), current(1)), 0, 0)
	}
	cha := solve(t, ring(200, reluct.Element{Name: "wide", Law: linear(2500), Length: 1.3, Area: 0.015}, iron(2500, 0.45, 0.01)), current(1))
	for _, r := range []reference{
		{"1.01", fku + "ex 1.1 p 9", "Rc, A/Wb", leg.MMF / flux, 3789.403, 0, 3.79e3, 3},
		{"1.01", fku + "ex 1.1 p 9", "Rg, A/Wb", gap.MMF / flux, 442097.06, 0, 4.42e5, 3},
		{"1.02", fku + "ex 1.1 p 9", "flux at 1 T, Wb", leg.B * 9 * cm2, 9e-4, 0, 9e-4, 2},
		{"1.02", fku + "ex 1.1 p 9", "current, A", s.Current[0], 0.802596, 0, 0.80, 2},
		{"1.03", fku + "ex 1.2 p 10, infinite iron", "flux, Wb", machine.Flux[0], 0.125664, 4e-6, 0.13, 2},
		{"1.03", fku + "ex 1.2 p 10 (prints 0.65 from the rounded flux)", "gap flux density, T", machine.State[0][1].B, 0.628319, 4e-6, 0, 0},
		{"1.04", fku + "ex 1.4 p 13", "L at mu_r 72300, H", induct(72300), 0.560955, 0, 0.56, 2},
		{"1.04", fku + "ex 1.4 p 13", "L at mu_r 2900, H", induct(2900), 0.468631, 0, 0.47, 2},
		{"1.05", fku + "ex 1.6 p 19", "L, H", inductance(t, twoParts, 0, 0), 0.560397, 0, 0.56, 2},
		{"1.05", fku + "ex 1.6 p 19", "energy, J", twoParts.Energy(), 0.179327, 2e-6, 0.18, 2},
		{"1.05", fku + "ex 1.6 p 19", "peak emf at 377 rad/s, V", 377 * s.Linkage[0], 169.65, 0, 170, 2},
		{"1.06", "Chapman, Electric Machinery Fundamentals, 5th ed., ex 1-1", "R1, A/Wb", cha.State[0][1].MMF / cha.Flux[0], 14323.945, 0, 14300, 3},
		{"1.06", "Chapman, 5th ed., ex 1-1", "R2, A/Wb", cha.State[0][0].MMF / cha.Flux[0], 27586.857, 0, 27600, 3},
		{"1.06", "Chapman, 5th ed., ex 1-1", "flux, Wb", cha.Flux[0], 4.772039e-3, 0, 0.0048, 2},
	} {
		r.check(t)
	}
}

// TestReferenceKothari holds the examples of Kothari, Nagrath, Electric Machines, 4th ed., Tata McGraw-Hill 2010.
func TestReferenceKothari(t *testing.T) {
	src := "Kothari, Nagrath, Electric Machines, 4th ed., "
	gapped := ring(600, iron(6000, 0.4, 16*cm2), airGap("gap", 0.6*mm, 16*cm2))
	s := solve(t, gapped, linkage(600*1.2*16*cm2))
	wider := solve(t, ring(600, iron(6000, 0.4, 16*cm2), airGap("gap", 0.6*mm, 40.6*mm*40.6*mm)), linkage(600*1.2*16*cm2))
	gaps := func(iron1, iron2 []reluct.Element) float64 {
		n := three(1, append(iron1, airGap("gap", 0.2*mm, 2*cm2)), append(iron2, airGap("gap", 0.25*mm, 1*cm2)), append(iron2, airGap("gap", 0.2*mm, 1*cm2)))
		return solve(t, n, linkage(0.75e-3)).Current[0]
	}
	disc := math.Pi * cm2
	plain := solve(t, ring(600, iron(4000, 0.3, disc)), linkage(600*0.5e-3))
	curve := solve(t, ring(600, steel("leg", 3000, 0.5e-3/disc, 0.3, disc), airGap("gap", 1*mm, disc)), linkage(600*0.5e-3))
	outer := []reluct.Element{steel("leg", 375, 0.4/0.6, 0.4, 600*mm2)}
	e := solve(t, three(500, []reluct.Element{steel("leg", 1000, 1, 0.16, 800*mm2), airGap("gap", 1*mm, 800*mm2)}, outer, outer), linkage(500*0.8e-3))
	for _, r := range []reference{
		{"1.09", src + "ex 2.1", "current, A", s.Current[0], 1.061033, 0, 1.06, 3},
		{"1.09", src + "ex 2.1", "flux, Wb", s.Flux[0], 0.00192, 0, 1.92e-3, 3},
		{"1.09", src + "ex 2.1", "linkage, Wb turn", s.Linkage[0], 1.152, 0, 1.152, 4},
		{"1.10", src + "ex 2.1, gap added to each side", "gap flux density, T", wider.State[0][1].B, 1.164794, 0, 1.16, 3},
		{"1.11", src + "ex 2.8", "Rc, A/Wb", s.State[0][0].MMF / s.Flux[0], 33157.28, 0, 33157, 5},
		{"1.11", src + "ex 2.8", "Rg, A/Wb", s.State[0][1].MMF / s.Flux[0], 298415.52, 0, 298416, 6},
		{"1.11", src + "ex 2.8", "L, H", inductance(t, s, 0, 0), 1.085734, 0, 1.0857, 5},
		{"1.11", src + "ex 2.8", "energy, J", s.Energy(), 0.611155, 0, 0.6112, 4},
		{"1.12", src + "ex 2.3, infinite iron", "mmf, A", gaps(nil, nil), 1259.977, 0, 1260, 4},
		{"1.13", src + "ex 2.3, mu_r 5000", "mmf, A", gaps([]reluct.Element{iron(5000, 0.2, 2*cm2)}, []reluct.Element{iron(5000, 0.5, 1*cm2)}), 1680.309, 0, 1680, 4},
		{"2.03", src + "ex 2.2", "current without gap, A", plain.Current[0], 0.158314, 3e-6, 0.158, 3},
		{"2.05", src + "ex 2.2", "mmf of the gap, A", curve.State[0][1].MMF, 1266.51, 4e-6, 1266.5, 5},
		{"2.05", src + "ex 2.2", "mmf of the core, A", curve.State[0][0].MMF, 900, 0, 900, 3},
		{"2.05", src + "ex 2.2", "current, A", curve.Current[0], 3.610858, 0, 3.61, 3},
		{"2.06", src + "ex 2.4", "mmf of the gap, A", e.State[0][1].MMF, 795.7747, 0, 795.8, 4},
		{"2.06", src + "ex 2.4", "mmf of the centre leg, A", e.State[0][0].MMF, 160, 0, 160, 3},
		{"2.06", src + "ex 2.4", "mmf of an outer leg, A", e.State[1][0].MMF, 150, 0, 150, 3},
		{"2.06", src + "ex 2.4", "current, A", e.Current[0], 2.211549, 0, 2.21, 3},
	} {
		r.check(t)
	}
}

// TestReferenceCircuits holds single examples of several books.
func TestReferenceCircuits(t *testing.T) {
	hub := solve(t, three(140, []reluct.Element{reluctance("R1", 10500)}, []reluct.Element{reluctance("R2", 40000)}, []reluct.Element{reluctance("R3", 30000)}), linkage(140*0.250))
	ham := solve(t, ring(500, iron(6000, 0.235, 6*cm2), airGap("gap", 5*mm, 2.5*cm*3.5*cm)), linkage(500*0.25*8.75*cm2))
	two := reluct.New("T1")
	a := two.Node("a")
	two.Branch(reluct.Branch{Name: "core", From: a, To: a, Elements: []reluct.Element{reluctance("R", 1e7)},
		Turns: []reluct.Turn{{Winding: two.Winding("1"), Turns: 100}, {Winding: two.Winding("2"), Turns: 200}}})
	pair := solve(t, two, reluct.Drive{})
	sad := solve(t, ring(200, iron(1000, 2*math.Pi*0.1, math.Pi*cm2)), linkage(200*0.5e-3))
	relayCore := steel("leg", 510, 0.8, 0.36, 1*cm2)
	relay := solve(t, ring(500, relayCore), linkage(500*0.8*cm2))
	open := solve(t, ring(500, relayCore, airGap("gap", 1.5*mm, 1*cm2), airGap("gap2", 1.5*mm, 1*cm2)), linkage(500*0.8*cm2))
	hAxis := solve(t, ring(500, iron(2000, 0.36, 1*cm2)), current(4))
	bAxis := solve(t, ring(500, iron(1e9, 0.36, 1*cm2), airGap("gap", 2*mm, 1*cm2)), current(4))
	hayt := solve(t, ring(500, iron(1, 2*math.Pi*0.15, 6*cm2)), current(4))
	doe := solve(t, ring(1, reluctance("R", 3e6)), current(600))
	full := solve(t, ring(1, iron(100, 1, 4e-4)), linkage(8e-4))
	kul := solve(t, ring(200, iron(380, 0.4, 500*mm2)), linkage(200*800e-6))
	for _, r := range []reference{
		{"1.14", "Hubert, Electric Machines, ex 1.2 p 13", "current, A", hub.Current[0], 49.3622, 0, 49.4, 3},
		{"1.14", "Hubert, ex 1.2 p 13", "mmf across R3, A", hub.State[2][0].MMF, 4285.714, 0, 4286, 4},
		{"1.14", "Hubert, ex 1.2 p 13", "flux in R2, Wb", hub.Flux[1], 0.107143, 4e-6, 0.107, 3},
		{"1.15", "Hambley, Electrical Engineering, 5th ed., ex 15.5 p 670", "Rcore, A/Wb", ham.State[0][0].MMF / ham.Flux[0], 51946.4, 1e-6, 5.195e4, 4},
		{"1.15", "Hambley, 5th ed., ex 15.5 p 670", "Rgap, A/Wb", ham.State[0][1].MMF / ham.Flux[0], 4547284, 0, 4.547e6, 4},
		{"1.15", "Hambley, 5th ed., ex 15.5 p 670", "current, A", ham.Current[0], 2.012163, 0, 2.01, 3},
		{"1.16", "Hambley, 5th ed., ex 15.7", "L at R 4.6e6, H", inductance(t, solve(t, ring(500, reluctance("R", 4.6e6)), current(1)), 0, 0), 250000 / 4.6e6, 0, 54.35e-3, 4},
		{"1.16", "Hambley, 5th ed., ex 15.7, unrounded R", "L, H", inductance(t, ham, 0, 0), 54.3569e-3, 2e-6, 0, 0},
		{"1.17", "Hambley, 5th ed., ex 15.8", "L1, H", inductance(t, pair, 0, 0), 1e-3, 0, 1e-3, 4},
		{"1.17", "Hambley, 5th ed., ex 15.8", "L2, H", inductance(t, pair, 1, 1), 4e-3, 0, 4e-3, 4},
		{"1.17", "Hambley, 5th ed., ex 15.8", "M, H", inductance(t, pair, 0, 1), 2e-3, 0, 2e-3, 4},
		{"1.18", "Sadiku, Elements of Electromagnetics, 3rd ed., ex 8.14 p 350", "current, A", sad.Current[0], 3.978874, 0, 3.979, 4},
		{"1.19", "Sen, Principles of Electric Machines, ex 1.1 p 8", "mu_r", relay.State[0][0].B / (phys.Mu0 * relay.State[0][0].H), 1248.274, 0, 1248, 4},
		{"1.19", "Sen, ex 1.1 p 8", "current, gaps closed, A", relay.Current[0], 0.3672, 0, 0.367, 3},
		{"1.19", "Sen, ex 1.1 p 8 (print from memory)", "current, gaps open, A", open.Current[0], 4.186919, 0, 4.19, 3},
		{"1.20", "Sen, ex 1.2 p 9", "H intercept of the air line, A/m", hAxis.State[0][0].H, 5555.556, 0, 5556, 4},
		{"1.20", "Sen, ex 1.2 p 9 (print from memory)", "B intercept, T", bAxis.State[0][0].B, 1.256637, 0, 1.257, 4},
		{"1.23", "Hayt, Buck, Engineering Electromagnetics, 8th ed., sec 8.8 p 258", "H, A/m", hayt.State[0][0].H, 2122.07, 2e-6, 2120, 3},
		{"1.23", "Hayt, Buck, 8th ed., sec 8.8 p 258 (print from memory)", "flux, Wb", hayt.Flux[0], 1.6e-6, 0, 1.6e-6, 3},
		{"1.25", "US DOE Fundamentals Handbook, Electrical Science, magnetic circuits", "flux, Wb", doe.Flux[0], 200e-6, 0, 200e-6, 4},
		{"1.25", "US DOE Fundamentals Handbook, Electrical Science", "flux density, T", full.State[0][0].B, 2, 0, 2, 4},
		{"1.26", "Kulshreshtha, Basic Electrical Engineering, ex 6.3 p 168", "R, A/Wb", kul.State[0][0].MMF / kul.Flux[0], 1.675315e6, 0, 1.675e6, 4},
		{"1.26", "Kulshreshtha, ex 6.3 p 168", "current, A", kul.Current[0], 6.7013, 8e-6, 6.70, 3},
	} {
		r.check(t)
	}
}

// TestReferenceMagnets builds the magnets that two books size for a gap and looks for the gap field they are meant
// for. The recoil line runs through the working point of the example with a recoil permeability of 1.05, which the
// result does not depend on.
func TestReferenceMagnets(t *testing.T) {
	bias := func(bm, hm, lm, am, lg, ag float64) *reluct.Solution {
		m := reluct.Element{Name: "magnet", Kind: reluct.Magnet, Length: lm, Area: am, Mur: 1.05, Br: bm + phys.Mu0*1.05*hm}
		return solve(t, ring(0, m, airGap("gap", lg, ag)), reluct.Drive{})
	}
	sen := bias(0.95, 42e3, 6.06305*cm, 2.105263*cm2, 0.4*cm, 2.5*cm2)
	lm := 0.8 * 0.2 * cm / (phys.Mu0 * 40e3) // the example's equation H lm = -Hg g
	fku := bias(1, 40e3, lm, 0.8*2*cm2, 0.2*cm, 2*cm2)
	gap := fku.State[0][1]
	magnet := fku.State[0][0]
	for _, r := range []reference{
		{"1.21", "Sen, ex 1.8 p 31: lm 6.06 cm, Am 2.105 cm2", "gap flux density, T", sen.State[0][1].B, 0.8, 1e-6, 0.8, 3},
		{"1.21", "Sen, ex 1.8 p 31", "field strength of the magnet, A/m", sen.State[0][0].H, -42e3, 1e-6, -42e3, 3},
		{"1.22", "Fitzgerald, Kingsley, Umans, 6th ed., ex 1.10 p 34", "gap flux density, T", gap.B, 0.8, 0, 0.8, 3},
		{"1.22", "Fitzgerald, Kingsley, Umans, 6th ed., ex 1.10 p 34", "volume of the magnet, m3", gap.MMF * fku.Flux[0] / (-magnet.H * magnet.B), 5.092958e-6, 0, 5.09e-6, 3},
	} {
		r.check(t)
	}
}

// TestReferenceCurves holds examples with points read from magnetisation curves.
func TestReferenceCurves(t *testing.T) {
	const inch = 25.4e-3
	boy := "Boylestad, Introductory Circuit Analysis, 10th ed., "
	kul := "Kulshreshtha, Basic Electrical Engineering, "
	cast := solve(t, ring(400, steel("leg", 170, 0.2, 0.16, 2e-3)), linkage(400*4e-4))
	a := inch * inch
	mixed := solve(t, ring(50, steel("steel", 70, 3.5e-4/a, 12*inch, a), steel("iron", 1600, 3.5e-4/a, 5*inch, a)), linkage(50*3.5e-4))
	opposing := reluct.New("T1")
	node := opposing.Node("a")
	opposing.Branch(reluct.Branch{Name: "core", From: node, To: node, Elements: []reluct.Element{steel("leg", 20, 0.5, 0.16, 1e-3)},
		Turns: []reluct.Turn{{Winding: opposing.Winding("1"), Turns: 60}, {Winding: opposing.Winding("2"), Turns: -30}}})
	second := solve(t, opposing, reluct.Drive{Current: map[int]float64{0: 2}, Linkage: map[int]float64{1: -30 * 0.5e-3}})
	small := solve(t, ring(200, steel("leg", 280, 0.5, 0.1, 1e-4), airGap("gap", 2*mm, 1e-4)), linkage(200*0.5e-4))
	field := solve(t, ring(60, steel("leg", 1000, 0.39, 0.3, 2e-4)), current(5))
	leaky := three(800, []reluct.Element{steel("leg", 4000, 3e-3/(0.92*2e-3), 0.6, 0.92*2e-3)}, []reluct.Element{airGap("gap", 2*mm, 2500*mm2)},
		[]reluct.Element{{Name: "leakage", Kind: reluct.Stray, Permeance: 0.2 * phys.Mu0 * 2500 * mm2 / (2 * mm)}})
	leak := solve(t, leaky, linkage(800*1.2*2.5e-3))
	three := solve(t, ring(1, steel("silicon", 20, 0.6, 0.3, 1e-3), steel("mild", 700, 0.6, 0.2, 1e-3), steel("cast", 2500, 0.6, 0.1, 1e-3)), linkage(0.6e-3))
	mur := func(k int) float64 { return three.State[0][k].B / (phys.Mu0 * three.State[0][k].H) }
	hayt := solve(t, ring(500, steel("leg", 200, 1, 2*math.Pi*0.15, 6*cm2), airGap("gap", 2*mm, 6*cm2)), linkage(500*6e-4))
	for _, r := range []reference{
		{"2.07", boy + "ex 11.3", "current, A", cast.Current[0], 0.068, 0, 68e-3, 2},
		{"2.07", boy + "ex 11.3 (with mu0 12.56e-7: 936.8)", "mu_r", cast.State[0][0].B / (phys.Mu0 * cast.State[0][0].H), 0.2 / 170 / phys.Mu0, 0, 936, 3},
		{"2.08", boy + "ex 11.4", "NI, A", 50 * mixed.Current[0], 224.536, 0, 224.5, 4},
		{"2.08", boy + "ex 11.4", "current, A", mixed.Current[0], 4.4907, 5e-6, 4.49, 3},
		{"2.09", boy + "ex 11.5", "current of the second coil, A", second.Current[1], 3.893333, 0, 3.89, 3},
		{"2.10", boy + "ex 11.6", "current, A", small.Current[0], 0, 0, 4.12, 3},
		{"2.11", boy + "ex 11.8", "H, A/m", field.State[0][0].H, 1000, 0, 1000, 2},
		{"2.11", boy + "ex 11.8", "flux, Wb", field.Flux[0], 0.78e-4, 0, 0.78e-4, 2},
		{"2.12", kul + "ex 6.5 p 173", "current, A", leak.Current[0], 4.989437, 0, 4.99, 3},
		{"2.12", kul + "ex 6.5 p 173", "core flux density, T", leak.State[0][0].B, 1.630435, 0, 1.63, 3},
		{"2.12", kul + "ex 6.5 p 173", "gap flux, Wb", leak.Flux[1], 2.5e-3, 0, 2.5e-3, 3},
		{"2.13", kul + "ex 6.6 p 174", "mmf, A", three.Current[0], 396, 0, 396, 3},
		{"2.13", kul + "ex 6.6 p 174", "mu_r, silicon steel", mur(0), 23873.2, 3e-6, 23873, 5},
		{"2.13", kul + "ex 6.6 p 174", "mu_r, mild steel", mur(1), 682.09, 5e-6, 682, 3},
		{"2.13", kul + "ex 6.6 p 174", "mu_r, cast iron", mur(2), 190.99, 3e-5, 191, 3},
		{"2.17", "Hayt, Buck, Engineering Electromagnetics, ex in sec 8.8 (print from memory)", "mmf of the gap, A", hayt.State[0][1].MMF, 1591.55, 2e-6, 1592, 4},
		{"2.17", "Hayt, Buck, sec 8.8", "mmf of the steel, A", hayt.State[0][0].MMF, 188.50, 3e-5, 188, 3},
		{"2.17", "Hayt, Buck, sec 8.8", "current, A", hayt.Current[0], 3.560090, 0, 3.56, 3},
	} {
		r.check(t)
	}
}

// TestReferenceTransformer takes a transformer's magnetising current from its magnetisation curve, mmf in A against
// flux in mWb, by steps of time.
//
// Source: Chapman, Electric Machinery Fundamentals, 5th ed., ex 2-10 with its data file of the magnetisation curve
// (every third point of it here, and the last): N = 850, 325 V peak at 60 Hz. Published rms value 0.485 A with the
// whole file; 0.485110 A and peak 0.807405 A recomputed with it as the continuous value over a whole period. The
// bound 0.3 % is what linear interpolation between every third point of a curve of this curvature loses:
// |F”| (108 A)^2/8 at the knee is below 2 A of 686 A.
func TestReferenceTransformer(t *testing.T) {
	mmf := []float64{0, 108, 216, 324, 432, 540, 648, 756, 864, 972, 1080, 1188, 1296, 1404, 1512, 1620, 1728, 1800}
	flux := []float64{0, .27857143, .52, .69178572, .83124734, .92857143, .99481623, 1.0482517, 1.1000219, 1.1479152, 1.1885715,
		1.2195532, 1.2421139, 1.2584300, 1.2706777, 1.2810336, 1.2916738, 1.3}
	const area = 1e-3 // m2, assumed, with a path of 1 m: flux density in T is flux in mWb, field strength is mmf
	law, err := material.NewCurve(mmf, flux)
	if err != nil {
		t.Fatal(err)
	}
	const turns, volts, steps = 850., 325., 400
	omega := 2 * math.Pi * 60
	n := ring(turns, reluct.Element{Name: "core", Law: law, Length: 1, Area: area})
	squares, peak := 0.0, 0.0
	for k := range steps {
		i := solve(t, n, linkage(-volts/omega*math.Cos(2*math.Pi*(float64(k)+0.5)/steps))).Current[0]
		squares += i * i
		peak = max(peak, math.Abs(i))
	}
	rms := math.Sqrt(squares / steps)
	t.Logf("magnetising current %.6f A rms, %.6f A peak", rms, peak)
	for _, r := range []reference{
		{"2.14", "Chapman, 5th ed., ex 2-10", "magnetising current, A rms", rms, 0.485110, 1e-3, 0.485, 3},
		{"2.14", "Chapman, 5th ed., ex 2-10", "magnetising current, A peak", peak, 0.807405, 2e-3, 0, 0},
	} {
		r.check(t)
	}
}
