// Package variable has an exported variable.
package variable

// Count counts.
var Count = 3
