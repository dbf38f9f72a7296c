package reluct_test

import (
	"context"
	"fmt"
	"testing"

	"gonum.org/v1/gonum/mat"

	"ampturn/magcirc/reluct"
)

// BenchmarkSolve times random networks of one leg or gap a branch: making and solving, solving alone, the nodal form,
// and as a floor one dense factorisation and solution of as many unknowns as the network has loops for each Newton
// iteration that it takes.
func BenchmarkSolve(b *testing.B) {
	g := newGenerator(200)
	g.Plain = true
	samples, networks, branches := make([]sample, 200), make([]*reluct.Network, 200), 0
	for k := range samples {
		samples[k] = g.sample()
		networks[k] = samples[k].build()
		branches += len(samples[k].Branches)
	}
	label := fmt.Sprintf("%d-branches", branches/len(samples))
	ctx := context.Background()
	run := func(name string, solve func(k int) error) {
		b.Run(name+"/"+label, func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if err := solve(i % len(samples)); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	run("build-and-loop", func(k int) error {
		_, err := samples[k].build().Solve(ctx, samples[k].Drive, nil)
		return err
	})
	run("build", func(k int) error { return samples[k].build().Validate() })
	run("loop", func(k int) error {
		_, err := networks[k].Solve(ctx, samples[k].Drive, nil)
		return err
	})
	run("nodal", func(k int) error {
		_, err := networks[k].SolveNodal(ctx, samples[k].Drive, nil)
		return err
	})
	run("floor-gonum", gonumFloor(b, samples, networks))
}

// gonumFloor factorises and solves a dense system per Newton iteration.
func gonumFloor(b *testing.B, samples []sample, networks []*reluct.Network) func(k int) error {
	iterations, matrices := make([]int, len(samples)), make([]*mat.SymDense, len(samples))
	for k := range samples {
		s, err := networks[k].Solve(context.Background(), samples[k].Drive, nil)
		if err != nil {
			b.Fatal(err)
		}
		iterations[k] = s.Iterations
		n := len(samples[k].Branches) - samples[k].Nodes + 1 - len(samples[k].Drive.Linkage)
		m := mat.NewSymDense(max(n, 1), nil)
		for i := range m.SymmetricDim() {
			m.SetSym(i, i, 4)
			if i > 0 {
				m.SetSym(i-1, i, -1)
			}
		}
		matrices[k] = m
	}
	return func(k int) error {
		n := matrices[k].SymmetricDim()
		x, y := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
		y.SetVec(0, 1)
		var c mat.Cholesky
		for range iterations[k] {
			if !c.Factorize(matrices[k]) {
				return fmt.Errorf("not positive definite")
			}
			if err := c.SolveVecTo(x, y); err != nil {
				return err
			}
		}
		return nil
	}
}
