//go:build race

package cell

// racing tells whether marks and stop checks go through compiled calls, which the race detector understands.
const racing = true
