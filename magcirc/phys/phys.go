// Package phys holds physical constants with their sources and the printing of quantities.
package phys

import "math"

// Mu0 is the magnetic constant, 4 pi 1e-7 H/m: the value of the SI before 2019, which the handbooks use; the
// CODATA 2018 value 1.25663706212e-6 H/m is larger by 5.5e-10 relative.
const Mu0 = 4e-7 * math.Pi
