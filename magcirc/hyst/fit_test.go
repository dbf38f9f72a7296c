package hyst_test

import (
	"math"
	"math/rand"
	"testing"

	"ampturn/magcirc/hyst"
)

// truth draws the parameters of a synthetic core.
func truth(r *rand.Rand) hyst.Parameters {
	p := hyst.Parameters{Ms: 2.5e5 * math.Pow(6, r.Float64()), K: 5 * math.Pow(100, r.Float64())}
	p.A = p.K * math.Pow(9, r.Float64()-0.5)
	p.C = 0.05 + 0.55*r.Float64()
	p.Alpha = (0.05 + 0.85*r.Float64()) * 3 * p.A / p.Ms
	return p
}

// sweep runs a law from the demagnetised state through its initial curve and a major loop, n points, cosine-spaced.
func sweep(l hyst.Law, peak float64, n int) (h, b []float64) {
	s := l.Start()
	rise := n / 5
	for i := range n {
		x := peak * float64(i) / float64(rise)
		if i > rise {
			x = peak * math.Cos(2*math.Pi*float64(i-rise)/float64(n-1-rise))
		}
		p := l.ByField(&s, x)
		l.Commit(&s, p)
		h, b = append(h, p.H), append(b, p.B)
	}
	return h, b
}

// noisy adds Gaussian noise of 0.5 percent of the largest value.
func noisy(r *rand.Rand, b []float64) []float64 {
	most := 0.0
	for _, v := range b {
		most = math.Max(most, math.Abs(v))
	}
	c := make([]float64, len(b))
	for i, v := range b {
		c[i] = v + 0.005*most*r.NormFloat64()
	}
	return c
}

func synthetic(t testing.TB, seed int64) (p hyst.Parameters, rec hyst.Record) {
	r := rand.New(rand.NewSource(seed))
	p = truth(r)
	h, b := sweep(law(t, p), 4*(p.A+p.K), 200)
	return p, hyst.Record{Name: "synthetic", H: h, B: noisy(r, b)}
}

// Fifty cores of known parameters with noise: each fit must reach the residual of the truth.
func TestFitsSyntheticCores(t *testing.T) {
	found := 0
	var off [5][]float64
	for seed := range int64(50) {
		p, rec := synthetic(t, seed)
		fit, err := hyst.FitJilesAtherton([]hyst.Record{rec}, nil)
		if err != nil {
			t.Fatal(err)
		}
		own := hyst.Follow(law(t, p), []hyst.Record{rec})[0].RMS
		if fit.RMS <= 1.001*own {
			found++
		} else {
			t.Logf("seed %d: residual %.4g, truth %.4g: %v", seed, fit.RMS, own, p)
		}
		q := fit.Law.Parameters()
		for i, x := range [5]float64{q.Ms / p.Ms, q.A / p.A, q.K / p.K, q.Alpha / p.Alpha, q.C / p.C} {
			off[i] = append(off[i], math.Abs(x-1))
		}
	}
	if found != 50 {
		t.Errorf("%d of 50 found", found)
	}
	t.Logf("median error of Ms %.2g, a %.2g, k %.2g, alpha %.2g, c %.2g", median(off[0]), median(off[1]), median(off[2]), median(off[3]), median(off[4]))
}
