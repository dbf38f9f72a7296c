// Package magcirc computes magnetic circuits: reluctance networks of legs, gaps, windings, stray paths and
// magnets. It holds what all its packages share: the error and the note.
//
//	package    what it answers
//	phys       constants with their source, printing of quantities
//	geom       sections: rectangle, disc, annulus, plain area; stacking
//	material   magnetisation laws over field strength and temperature
//	gap        permeance of an air gap with fringing, method by method, each with its validity
//	field      plane and axisymmetric field solution of a gap (finite volumes)
//	induct     inductance matrices: coupling, leakage, equivalent circuits, readings
//	hyst       laws with a memory: loops, remanence, losses, fits to measured loops
//	reluct     networks of any topology: solution, energies, incremental inductances, histories
//	datafile   measured points from files whose header names columns and units
//
// Every quantity is a float64 in coherent SI; temperatures are in degrees Celsius. Computing functions return
// *[Error] for what they refuse and []*[Note] for what a reader must know about a result that they do deliver.
package magcirc
