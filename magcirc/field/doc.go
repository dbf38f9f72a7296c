// Package field solves the magnetic field around the air gap between two equal poles and gives what formulas for
// fringing only estimate: the flux that leaves a pole at its face and at its sides.
//
//	call       poles                                      permeance
//	PlaneGap   long, rectangular in the section drawn     per metre of depth, H/m
//	RoundGap   round or annular, about an axis            of the whole gap, H
//
// The poles are iron of infinite permeability and mirror each other in the plane in the middle of the gap, which
// is therefore an equipotential: one pole against the mid-plane is solved, and the gap is two of them in series.
// Coordinates: x (or the radius r) along the mid-plane from the pole's axis, y away from the mid-plane, both in m.
// The pole has the magnetic scalar potential 1, the mid-plane 0.
//
//	s, err := field.PlaneGap(field.Plane{Width: 10e-3, Length: 1e-3, Wall: 10e-3})
//	if err != nil {
//		return err
//	}
//	fmt.Println(s.Factor, s.Uncertainty)
//
// Method: finite volumes on a tensor grid that is graded towards the pole's edges, five conductances at each node,
// conjugate gradients with modified incomplete Cholesky. The flux is the sum of the reactions at the pole, which
// balances to rounding. Two grids, one with half the steps of the other, give the result and its uncertainty.
//
// Left out: saturation of the pole's edges, windings beside the gap, poles that are not equal or not aligned.
package field
