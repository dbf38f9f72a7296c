//go:build !race

package hyst_test

const raceDetector = false
