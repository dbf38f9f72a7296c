// Package reluct solves static nonlinear reluctance networks: branches of legs, gaps, stray paths and magnets with
// windings on them, joined at nodes in any topology.
//
//	element   what it is                            relation of flux phi to mmf drop U
//	Leg       magnetisable path of length l         phi = B(H) A + mu0 H Air, U = H l, B(H) a material.Law
//	Gap       air gap of permeance P                phi = P U
//	Stray     stray path of permeance P             phi = P U (P = 0: carries no flux)
//	Magnet    remanence Br, recoil permeability     phi = A (Br + mu0 mur H), U = H l
//
// Use:
//
//	n := reluct.New("T1")
//	top, bottom, main := n.Node("top"), n.Node("bottom"), n.Winding("main")
//	n.Branch(reluct.Branch{Name: "centre", From: bottom, To: top, Turns: []reluct.Turn{{Winding: main, Turns: 34}},
//		Elements: []reluct.Element{{Name: "leg", Law: ferrite, Length: 36e-3, Area: 183e-6}, {Name: "gap", Kind: reluct.Gap, Permeance: 400e-9}}})
//	n.Branch(reluct.Branch{Name: "yoke", From: top, To: bottom, Elements: yoke})
//	s, err := n.Solve(ctx, reluct.Drive{Current: map[int]float64{main: 3.2}}, nil)
//
// Signs: the flux of a branch is positive From -> To. Positive current in positive turns drives flux From -> To. The
// drop of an element is positive in the direction of H. A potential is a magnetic potential in A: along a branch it
// changes by the winding's mmf minus the drops,
//
//	u(To) - u(From) = sum N i - sum U
//
// A branch with From == To is a ring: it closes on itself.
//
// Method. The unknowns are the fluxes of the loops that the branches outside a spanning tree close; branches whose
// flux a winding prescribes are kept out of the tree as far as possible, so that they leave the unknowns. The magnetic
// energy minus the work of the sources is a convex function of the loop fluxes for every law that rises, and Newton's
// method with a line search on its directional derivative finds its only minimum, after a few linear steps that bring
// it near. The value of the energy is never used: one wide gap may hold 1e12 times the energy of the leg that is being
// solved, which leaves no digits of it. [Network.SolveNodal] minimises the co-energy over node potentials instead, each
// element on its own: a second formulation that must give the same fluxes.
//
// Left out: eddy currents, hysteresis (a law here has no memory) and the electric circuit around the windings.
package reluct
