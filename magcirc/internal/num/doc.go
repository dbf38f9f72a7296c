// Package num holds the small numerical tools that the packages above share: pure mathematics on float64.
//
//	Langevin      coth z - 1/z with its derivative and its integral, accurate for every z
//	Increasing    a strictly increasing piecewise cubic through points: value, slope, inverse, exact integral
//	Root          a bracketed Newton iteration for a monotone function
//	Phi           weights of an exponential average over a step
//	LeastSquares  Levenberg and Marquardt; NonNegative: linear, with x >= 0
//
// A wrong call (unsorted points, no bracket) is a fault of the caller and panics with a text that begins "num: ".
package num
