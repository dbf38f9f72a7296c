//go:build !race

package reluct_test

const raceDetector = false
