package reluct

import "ampturn/magcirc"

// Drive says how the windings of a network are driven, by winding index. A winding that is not named carries no
// current.
type Drive struct {
	Current map[int]float64 // instantaneous current in A
	Linkage map[int]float64 // flux linkage in Wb turn; the current follows
}

// Settings of the solvers; the zero value of a field, or nil for all of them, means its default.
type Settings struct {
	Tolerance  float64 // largest residual of a loop (or node) relative to the sum of its terms; default 1e-9
	Iterations int     // largest number of Newton iterations; default 200
}

// ElementState is the state of one element.
type ElementState struct {
	H   float64 // field strength in A/m (gap, stray path: where the element has a length)
	B   float64 // flux density in T (gap, stray path: flux over the element's area, where it has one)
	MMF float64 // drop of magnetic potential along the branch in A
}

// Solution is the state of a network under one drive.
type Solution struct {
	Flux      []float64        // Wb, by branch, positive From -> To
	Potential []float64        // magnetic potential in A by node; zero at the first node of each separate part
	Current   []float64        // A, by winding
	Linkage   []float64        // Wb turn, by winding: sum of N phi over its branches
	State     [][]ElementState // by branch and element

	Residual    float64 // largest loop (or node) residual relative to the sum of the magnitudes of its terms
	NodeBalance float64 // largest sum of fluxes at a node, relative to the largest flux
	MMFBalance  float64 // largest of |sum U - sum N i - u(From) + u(To)| over the branches, relative to the largest mmf
	Floor       float64 // rounding floor of the fluxes, relative to the largest: what the subtraction of large terms leaves unknown
	Iterations  int     // Newton iterations
	Sweeps      int     // evaluations of all the laws
	Notes       []magcirc.Note

	net *Network
}
