package dsl_test

import (
	"testing"

	. "ampturn/dsl"
)

func BenchmarkSolveThreeLegs(b *testing.B) {
	T1 := threeLegs()
	for b.Loop() {
		T1.Solve(Currents{"main": 3.2 * amp})
	}
}

func BenchmarkBiasCurve61(b *testing.B) {
	T1 := threeLegs()
	for b.Loop() {
		T1.BiasCurve("main", 0, 6*amp)
	}
}

func BenchmarkGapFor(b *testing.B) {
	T1 := threeLegs()
	for b.Loop() {
		T1.GapFor("centre.gap", "main", 630*uH)
	}
}

func BenchmarkShowOperatingPoint(b *testing.B) {
	op := threeLegs().Solve(Currents{"main": 3.2 * amp})
	for b.Loop() {
		op.MIMEBundle()
	}
}
