package reluct_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// two gives two nodes joined by branches with the given elements, all From a To b.
func two(paths ...[]reluct.Element) *reluct.Network {
	n := reluct.New("T1")
	a, b := n.Node("bottom"), n.Node("top")
	for i, p := range paths {
		n.Branch(reluct.Branch{Name: []string{"centre", "left", "right", "window"}[i], From: a, To: b, Elements: p})
	}
	return n
}

func onCentre(n *reluct.Network, more ...reluct.Turn) *reluct.Network {
	m := reluct.New("T1")
	for _, name := range n.Nodes() {
		m.Node(name)
	}
	m.Winding("P")
	m.Winding("S")
	for i, b := range n.Branches() {
		if i == 0 {
			b.Turns = more
		}
		m.Branch(b)
	}
	return m
}

func TestRefusals(t *testing.T) {
	leg, gap := []reluct.Element{iron(2000, 0.1, 1e-4)}, []reluct.Element{airGap("gap", 1e-3, 1e-4)}
	none := reluct.Drive{}
	pair := onCentre(two(leg, gap), reluct.Turn{Winding: 0, Turns: 10}, reluct.Turn{Winding: 1, Turns: 20})
	element := func(e reluct.Element) *reluct.Network { return two([]reluct.Element{e}, gap) }
	cut := reluct.New("T1")
	a, b, c := cut.Node("a"), cut.Node("b"), cut.Node("c")
	for i, way := range [][2]int{{a, b}, {a, b}, {b, c}, {c, a}} { // the two on b-c-a carry the same flux
		br := reluct.Branch{From: way[0], To: way[1], Elements: leg}
		if i >= 2 {
			br.Turns = []reluct.Turn{{Winding: cut.Winding([]string{"P", "S"}[i-2]), Turns: 100}}
		}
		cut.Branch(br)
	}
	star := reluct.New("T1")
	x, y := star.Node("x"), star.Node("y")
	for i := range 3 {
		star.Branch(reluct.Branch{From: x, To: y, Elements: leg, Turns: []reluct.Turn{{Winding: star.Winding([]string{"A", "B", "C"}[i]), Turns: 10}}})
	}
	lone := reluct.New("T1")
	p, q := lone.Node("p"), lone.Node("q")
	lone.Branch(reluct.Branch{From: p, To: p, Elements: leg})
	lone.Branch(reluct.Branch{From: p, To: q, Elements: leg, Turns: []reluct.Turn{{Winding: lone.Winding("P"), Turns: 10}}})
	lone.Branch(reluct.Branch{From: q, To: q, Elements: leg})
	twice := two(leg, gap)
	twice.Branch(reluct.Branch{Name: "left", From: 0, To: 1, Elements: leg})
	for _, r := range []struct {
		name  string
		n     *reluct.Network
		d     reluct.Drive
		code  magcirc.Code
		wants string
	}{
		{"dead end", two(leg), none, magcirc.OpenCircuit, "circuit T1: flux cannot return at node bottom (one path ends there): add the path that closes it, or make it a Ring"},
		{"same path", pair, reluct.Drive{Linkage: map[int]float64{0: 0.48e-3 * 10, 1: 0.31e-3 * 20}}, magcirc.Inconsistent,
			"windings P and S prescribe different fluxes in the same path (480 uWb and 310 uWb): drive one by current"},
		{"paths in series", cut, reluct.Drive{Linkage: map[int]float64{0: 0.1, 1: 0.2}}, magcirc.Inconsistent, "windings P and S prescribe different fluxes in the same path (1 mWb and 2 mWb)"},
		{"all paths at a node", star, reluct.Drive{Linkage: map[int]float64{0: 1e-3, 1: 1e-3, 2: 1e-3}}, magcirc.Inconsistent, "windings A, B and C prescribe fluxes that do not balance"},
		{"no way back", lone, reluct.Drive{Linkage: map[int]float64{0: 1e-3}}, magcirc.Inconsistent, "winding P prescribes 100 uWb where no flux can flow"},
		{"current and linkage", pair, reluct.Drive{Current: map[int]float64{0: 1}, Linkage: map[int]float64{0: 1}}, magcirc.WrongUse, "winding P: is driven by current and by flux linkage"},
		{"no such winding", pair, reluct.Drive{Current: map[int]float64{7: 1}}, magcirc.UnknownName, "winding 7"},
		{"current not a number", pair, reluct.Drive{Current: map[int]float64{1: math.NaN()}}, magcirc.BadValue, "winding S: current is not a finite number"},
		{"name twice", twice, none, magcirc.DuplicateName, "path T1.left"},
		{"part twice", two([]reluct.Element{leg[0], leg[0]}, gap), none, magcirc.DuplicateName, "leg T1.centre"},
		{"no elements", two(nil, gap), none, magcirc.BadValue, "path T1.centre"},
		{"no law", element(reluct.Element{Name: "pole", Length: 1, Area: 1}), none, magcirc.BadValue, "leg T1.centre.pole"},
		{"no length", element(reluct.Element{Law: linear(1), Area: 1}), none, magcirc.BadValue, "length 0 m"},
		{"negative area", element(reluct.Element{Law: linear(1), Length: 1, Area: -1}), none, magcirc.BadValue, "area -1 m2"},
		{"negative air", element(reluct.Element{Law: linear(1), Length: 1, Area: 1, Air: -1}), none, magcirc.BadValue, "enclosed air area"},
		{"gap without permeance", element(reluct.Element{Kind: reluct.Gap}), none, magcirc.BadValue, "gap T1.centre: permeance 0 H"},
		{"remanence", element(reluct.Element{Kind: reluct.Magnet, Br: math.Inf(1), Length: 1, Area: 1, Mur: 1}), none, magcirc.BadValue, "remanence"},
		{"recoil permeability", element(reluct.Element{Kind: reluct.Magnet, Br: 1, Length: 1, Area: 1}), none, magcirc.BadValue, "recoil permeability"},
		{"kind", element(reluct.Element{Kind: 9}), none, magcirc.BadValue, "no known kind"},
	} {
		for _, solver := range []func(context.Context, reluct.Drive, *reluct.Settings) (*reluct.Solution, error){r.n.Solve, r.n.SolveNodal} {
			_, err := solver(context.Background(), r.d, nil)
			var e *magcirc.Error
			if !errors.As(err, &e) || e.Code != r.code || !strings.Contains(e.Error(), r.wants) {
				t.Errorf("%s: %v, want %v with %q", r.name, err, r.code, r.wants)
			}
		}
	}
}

// broken is a law that does not rise.
type broken struct{ linear }

func (broken) Inverse(b float64) (h, slope float64) { return math.NaN(), math.NaN() }

func TestNoConvergence(t *testing.T) {
	hard := newGenerator(3).sample()
	_, err := hard.build().Solve(context.Background(), hard.Drive, &reluct.Settings{Iterations: 1, Tolerance: 1e-13})
	var e *magcirc.Error
	var stall *reluct.Stall
	if !errors.As(err, &e) || e.Code != magcirc.NoConvergence || !errors.As(err, &stall) {
		t.Fatalf("%v, want an error of code NoConvergence with the state reached", err)
	}
	if stall.Iterations != 1 || !(stall.Residual > stall.Tolerance) || stall.Tolerance != 1e-13 || stall.Last == nil || len(stall.Last.Flux) != len(hard.Branches) || !strings.Contains(stall.Worst, " T1.p") {
		t.Errorf("state reached: %+v", stall)
	}
	if _, err = ring(100, reluct.Element{Law: broken{2000}, Length: 0.1, Area: 1e-4}).Solve(context.Background(), current(1), nil); !errors.As(err, &stall) {
		t.Errorf("law without numbers: %v, want no convergence", err)
	}
}

func TestContextEnds(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	n := ring(100, reluct.Element{Law: polarised(arctan, 2000, 0.4), Length: 0.1, Area: 1e-4})
	if _, err := n.Solve(ctx, current(1), nil); !errors.Is(err, context.Canceled) {
		t.Errorf("loop form: %v, want the context's error", err)
	}
	if _, err := n.SolveNodal(ctx, current(1), nil); !errors.Is(err, context.Canceled) {
		t.Errorf("nodal form: %v, want the context's error", err)
	}
}

// TestBoundaryCases holds networks at the edge of what a network can be against what is known of them by hand.
func TestBoundaryCases(t *testing.T) {
	leg, gap := []reluct.Element{iron(2000, 0.1, 1e-4)}, []reluct.Element{airGap("gap", 1e-3, 1e-4)}
	both := func(n *reluct.Network, d reluct.Drive) *reluct.Solution {
		t.Helper()
		s := solve(t, n, d)
		x, err := n.SolveNodal(context.Background(), d, nil)
		if err != nil {
			t.Fatal(err)
		}
		if d := largestDifference(s.Flux, x.Flux); d > 1e-9 && d > x.Floor {
			t.Errorf("loop and nodal fluxes differ by %g, floor %g", d, x.Floor)
		}
		for i := range s.Current {
			if math.Abs(s.Current[i]-x.Current[i]) > 1e-9*(1+math.Abs(s.Current[i])) {
				t.Errorf("loop and nodal currents differ: %g, %g", s.Current[i], x.Current[i])
			}
		}
		return s
	}
	turns := func(n ...float64) []reluct.Turn {
		list := make([]reluct.Turn, len(n))
		for i := range n {
			list[i] = reluct.Turn{Winding: i, Turns: n[i]}
		}
		return list
	}
	eq := func(what string, got, want float64) {
		t.Helper()
		if !(math.Abs(got-want) <= 1e-12*math.Abs(want)+1e-30) {
			t.Errorf("%s: %.15g, want %.15g", what, got, want)
		}
	}
	s := both(onCentre(two(leg, gap), turns(10)...), reluct.Drive{})
	eq("flux without mmf", s.Flux[0], 0)
	eq("residual without mmf", s.Residual+s.NodeBalance+s.MMFBalance, 0)

	// A stray path of no permeance carries nothing; the mmf stands across it.
	s = both(onCentre(two(leg, gap, []reluct.Element{{Name: "window", Kind: reluct.Stray}}), turns(10)...), current(2))
	without := both(onCentre(two(leg, gap), turns(10)...), current(2))
	eq("flux beside a path that carries none", s.Flux[0], without.Flux[0])
	eq("flux of the path", s.Flux[2], 0)
	eq("mmf across the path", s.State[2][0].MMF, s.Potential[0]-s.Potential[1])

	// A winding of prescribed linkage over two branches: N1 phi1 + N2 phi2 = lambda, the mmf on both.
	n := onCentre(two(leg, gap, gap), turns(10)...)
	wide := reluct.New("T1")
	wide.Node("bottom")
	wide.Node("top")
	wide.Winding("P")
	for i, b := range n.Branches() {
		b.Turns = [][]reluct.Turn{turns(10), turns(-4), nil}[i]
		wide.Branch(b)
	}
	s = both(wide, linkage(1e-3))
	eq("linkage over two branches", 10*s.Flux[0]-4*s.Flux[1], 1e-3)
	m, err := s.Incremental()
	if err != nil {
		t.Fatal(err)
	}
	eq("current of a linear network", s.Current[0], 1e-3/m.At(0, 0))

	// Two windings that prescribe the same flux: the second carries no current, and a note says so.
	s = both(onCentre(two(leg, gap), turns(10, 20)...), reluct.Drive{Linkage: map[int]float64{0: 1e-3, 1: 2e-3}})
	eq("current of the dependent winding", s.Current[1], 0)
	if len(s.Notes) != 1 || s.Notes[0].Kind != magcirc.Assumed || s.Notes[0].Elem != "winding S" {
		t.Errorf("notes %v, want one on winding S", s.Notes)
	}

	// Separate parts: a ring beside a circuit of two paths, each as if alone.
	r := onCentre(two(leg, gap), turns(10)...)
	c := r.Node("c")
	r.Branch(reluct.Branch{Name: "ring", From: c, To: c, Elements: leg, Turns: []reluct.Turn{{Winding: 1, Turns: -5}}})
	s = both(r, reluct.Drive{Current: map[int]float64{0: 2, 1: 3}})
	eq("flux of the circuit", s.Flux[0], without.Flux[0])
	eq("flux of the ring", s.Flux[2], -15/leg[0].Law.(linear).reluctance(0.1, 1e-4))

	// Enclosed air: phi = B A + mu0 H Air, a linear leg is one of permeability mur + Air/A.
	airy := iron(50, 0.1, 1e-4)
	airy.Air = 3e-4
	s = both(ring(10, airy), current(2))
	eq("flux with enclosed air", s.Flux[0], 20*phys.Mu0*(50*1e-4+3e-4)/0.1)
	eq("flux density in the metal", s.State[0][0].B, phys.Mu0*50*20/0.1)

	// A permeability of 1e9 beside a stray path.
	s = both(onCentre(two([]reluct.Element{iron(1e9, 0.1, 1e-4)}, gap, []reluct.Element{{Kind: reluct.Stray, Permeance: 1e-9}}), turns(10)...), current(2))
	eq("flux of an ideal leg", s.Flux[0], 20/(0.1/(phys.Mu0*1e9*1e-4)+1/(gap[0].Permeance+1e-9)))

	// A magnet closed on iron of no reluctance stays at its remanence; reversed it carries the opposite flux.
	magnet := reluct.Element{Kind: reluct.Magnet, Br: -0.4, Mur: 1.1, Length: 5e-3, Area: 2e-4}
	s = both(ring(0, magnet, airGap("gap", 1e-3, 2e-4)), reluct.Drive{})
	eq("flux of a magnet", s.Flux[0], -0.4*5e-3/(1.1*phys.Mu0)/(5e-3/(1.1*phys.Mu0*2e-4)+1e-3/(phys.Mu0*2e-4)))
	eq("energy + co-energy", s.Energy()+s.Coenergy(), s.Excitation())
}

func (l linear) reluctance(length, area float64) float64 {
	return length / (phys.Mu0 * float64(l) * area)
}

func TestNoteBeyondData(t *testing.T) {
	n := ring(100, reluct.Element{Name: "leg", Law: polygon{[]float64{0, 100, 1000}, []float64{0, 0.3, 0.49}}, Length: 0.1, Area: 1e-4})
	if s := solve(t, n, current(0.5)); len(s.Notes) != 0 {
		t.Errorf("within the data: notes %v", s.Notes)
	}
	s := solve(t, n, current(2))
	if len(s.Notes) != 1 || s.Notes[0].Kind != magcirc.Extrapolated || !strings.HasPrefix(s.Notes[0].String(), "leg R1.core: 0.4913 T is beyond the data of curve of 3 points (to 0.49 T)") {
		t.Errorf("beyond the data: notes %v", s.Notes)
	}
}

// TestIdealTransformer has windings on one path only: all couple without leakage and the matrix is singular.
func TestIdealTransformer(t *testing.T) {
	n := onCentre(two([]reluct.Element{iron(2000, 0.1, 1e-4)}, []reluct.Element{airGap("gap", 1e-3, 1e-4)}), reluct.Turn{Winding: 0, Turns: 30}, reluct.Turn{Winding: 1, Turns: -10})
	s := solve(t, n, reluct.Drive{Current: map[int]float64{0: 1}, Linkage: map[int]float64{1: 0}})
	m, err := s.Incremental()
	if err != nil {
		t.Fatal(err)
	}
	if d := m.At(0, 0)*m.At(1, 1) - m.At(0, 1)*m.At(0, 1); math.Abs(d) > 1e-14*m.At(0, 0)*m.At(1, 1) || m.At(0, 1) >= 0 {
		t.Errorf("determinant %g, mutual %g: want 0 and a negative mutual", d, m.At(0, 1))
	}
	if math.Abs(s.Current[1]-3) > 1e-12 { // a shorted ideal secondary: N1 i1 + N2 i2 = 0
		t.Errorf("current of the shorted winding %g A, want 3", s.Current[1])
	}
}
