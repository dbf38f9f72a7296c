package tol_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand"
	"runtime"
	"testing"

	"ampturn/magcirc"
	"ampturn/magcirc/tol"
)

var ctx = context.Background()

// gapped is N^2/(lg/(mu0 A) + lc/(mu0 mu A)) of a gapped ring: a smooth function whose derivatives are known.
// x: gap length lg, permeability mu, area A.
func gapped(x []float64) (float64, error) {
	const mu0, n, lc = 1.25663706127e-6, 7.0, 46e-3
	return n * n * mu0 * x[2] / (x[0] + lc/x[1]), nil
}

func inputs() []tol.Input {
	return []tol.Input{
		{Name: "gap", Unit: "m", Nominal: 0.45e-3, Half: 0.02e-3},
		{Name: "permeability", Nominal: 2200, Half: 550},
		{Name: "area", Unit: "m2", Nominal: 62e-6, Half: 1.2e-6, Shape: tol.Normal},
	}
}

func near(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if !(math.Abs(got-want) <= rel*math.Abs(want)) {
		t.Errorf("%s: %.10g, want %.10g within %g", what, got, want, rel)
	}
}

// TestEffects against the derivatives of the formula: dL/dlg = -L/(lg + lc/mu), dL/dmu = L lc/mu^2/(lg + lc/mu), dL/dA = L/A.
func TestEffects(t *testing.T) {
	e, err := tol.Effects(ctx, gapped, inputs())
	if err != nil {
		t.Fatal(err)
	}
	l, _ := gapped([]float64{0.45e-3, 2200, 62e-6})
	whole := 0.45e-3 + 46e-3/2200
	near(t, "slope over the gap", e[0].Slope, -l/whole, 1e-7) // error of a central difference: (d/x)^2, here below 1e-8
	near(t, "slope over the permeability", e[1].Slope, l*46e-3/(2200*2200)/whole, 1e-6)
	near(t, "slope over the area", e[2].Slope, l/62e-6, 1e-9) // linear: rounding only
	low, _ := gapped([]float64{0.47e-3, 2200, 62e-6})
	near(t, "result at the upper limit of the gap", e[0].High, low, 0)
	near(t, "swing", e[0].Swing(l), math.Max(math.Abs(e[0].Low-l), math.Abs(e[0].High-l)), 0)
}

// TestWorstCaseAgainstEveryCorner compares with a plain enumeration, for random functions of 1 to 14 inputs.
func TestWorstCaseAgainstEveryCorner(t *testing.T) {
	rng := rand.New(rand.NewSource(3))
	for n := 1; n <= 14; n++ {
		c := make([]float64, n)
		var in []tol.Input
		for i := range c {
			c[i] = rng.NormFloat64()
			in = append(in, tol.Input{Name: fmt.Sprint(i), Nominal: 1, Half: 0.1 * rng.Float64()})
		}
		f := func(x []float64) (float64, error) { // monotone in each input, not linear
			y := 1.0
			for i := range x {
				y *= math.Exp(c[i] * x[i] / 5)
			}
			return y + c[0]*x[0], nil
		}
		b, err := tol.WorstCase(ctx, f, in)
		if err != nil {
			t.Fatal(err)
		}
		low, high := math.Inf(1), math.Inf(-1)
		x := make([]float64, n)
		for mask := range 1 << n {
			for i := range x {
				x[i] = in[i].Nominal + in[i].Half*float64(2*(mask>>i&1)-1)
			}
			y, _ := f(x)
			low, high = math.Min(low, y), math.Max(high, y)
		}
		near(t, fmt.Sprintf("smallest of %d inputs", n), b.Min, low, 1e-14)
		near(t, fmt.Sprintf("largest of %d inputs", n), b.Max, high, 1e-14)
		if b.Exhaustive != (n <= 12) || b.Inside {
			t.Errorf("%d inputs: every corner %v, inside %v", n, b.Exhaustive, b.Inside)
		}
		y, _ := f(b.AtMin)
		near(t, "result at the values of the minimum", y, b.Min, 0)
	}
}

// TestExtremeInside finds and reports an extreme between the limits: y = -(x-1)^2 is largest at nominal.
func TestExtremeInside(t *testing.T) {
	b, err := tol.WorstCase(ctx, func(x []float64) (float64, error) { return -(x[0] - 1) * (x[0] - 1), nil }, []tol.Input{{Nominal: 1, Half: 0.5}})
	if err != nil || !b.Inside || b.Max != 0 || b.Min != -0.25 {
		t.Errorf("%+v, %v", b, err)
	}
	flat, err := tol.WorstCase(ctx, func(x []float64) (float64, error) { return 3, nil }, []tol.Input{{Nominal: 1, Half: 0.5}})
	if err != nil || flat.Inside || flat.Min != 3 || flat.Max != 3 {
		t.Errorf("constant: %+v, %v", flat, err)
	}
}

// TestGroupsMoveTogether: the difference of two inputs of one group does not spread, their sum spreads twice.
func TestGroupsMoveTogether(t *testing.T) {
	in := []tol.Input{{Name: "a", Nominal: 1, Half: 0.1, Group: "one pass"}, {Name: "b", Nominal: 1, Half: 0.1, Group: "one pass"}}
	difference := func(x []float64) (float64, error) { return x[0] - x[1], nil }
	sum := func(x []float64) (float64, error) { return x[0] + x[1], nil }
	b, err := tol.WorstCase(ctx, difference, in)
	if err != nil || b.Min != 0 || b.Max != 0 {
		t.Errorf("difference: %+v, %v", b, err)
	}
	d, err := tol.MonteCarlo(ctx, sum, in, tol.Draws{Count: 20000, Seed: 5})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "deviation of the sum in a group", d.Deviation, 0.2/math.Sqrt(3), 0.02) // uniform: half/sqrt(3); 20000 draws: 0.5 %
	in[0].Group, in[1].Group = "", ""
	if d, err = tol.MonteCarlo(ctx, sum, in, tol.Draws{Count: 20000, Seed: 5}); err != nil {
		t.Fatal(err)
	}
	near(t, "deviation of the independent sum", d.Deviation, 0.1*math.Sqrt2/math.Sqrt(3), 0.02)
	u, err := tol.Propagate(ctx, sum, in)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "independent uncertainties add by squares", u, 0.1*math.Sqrt2, 1e-12)
	in[0].Group, in[1].Group = "m", "m"
	if u, err = tol.Propagate(ctx, sum, in); err != nil {
		t.Fatal(err)
	}
	near(t, "those of one method add", u, 0.2, 1e-12)
}

// normalQuantiles are from M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, 1964, table 26.5 (z for p).
var normalQuantiles = map[float64]float64{0.5: 0, 0.75: 0.67449, 0.9: 1.28155, 0.95: 1.64485, 0.975: 1.95996, 0.99: 2.32635}

// TestDistributions compares quantiles of a million draws with the normal and the uniform distribution.
func TestDistributions(t *testing.T) {
	one := func(x []float64) (float64, error) { return x[0], nil }
	const n = 1000000
	d, err := tol.MonteCarlo(ctx, one, []tol.Input{{Nominal: 10, Half: 3, Shape: tol.Normal}}, tol.Draws{Count: n, Seed: 1, Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	for p, z := range normalQuantiles {
		density := math.Exp(-z*z/2) / math.Sqrt(2*math.Pi)
		bound := 4.5 * math.Sqrt(p*(1-p)/n) / density // four and a half standard errors of the quantile
		if got := d.Quantile(p); math.Abs(got-10-z) > bound {
			t.Errorf("quantile %g: %.5f, want %.5f within %.5f", p, got-10, z, bound)
		}
	}
	near(t, "mean", d.Mean, 10, 4.5e-4)
	near(t, "deviation", d.Deviation, 1, 4.5/math.Sqrt(2*n))
	near(t, "share within three deviations", d.Yield(7, 13), 0.9973002, 4.5*math.Sqrt(0.0027/n)) // 26.2: P(|z| < 3)
	near(t, "Cpk", d.Capability(7, 13), 1, 0.01)
	u, err := tol.MonteCarlo(ctx, one, []tol.Input{{Nominal: 10, Half: 3}}, tol.Draws{Count: n, Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range []float64{0.05, 0.5, 0.95} {
		near(t, "quantile of the uniform distribution", u.Quantile(p), 7+6*p, 4.5*6*math.Sqrt(p*(1-p)/n)/7)
	}
	if u.Min < 7 || u.Max > 13 {
		t.Errorf("uniform draws leave the limits: %g..%g", u.Min, u.Max)
	}
}

// TestSameBytes: workers and processors do not change a bit.
func TestSameBytes(t *testing.T) {
	run := func(workers, procs int) *tol.Distribution {
		defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(procs))
		d, err := tol.MonteCarlo(ctx, gapped, inputs(), tol.Draws{Count: 5000, Seed: 7, Workers: workers})
		if err != nil {
			t.Fatal(err)
		}
		return d
	}
	want := run(1, 1)
	for _, c := range [][2]int{{1, 2}, {2, 1}, {2, 2}, {7, 2}} {
		got := run(c[0], c[1])
		for k := range want.Values {
			if got.Values[k] != want.Values[k] {
				t.Fatalf("%d workers, %d processors: draw %d is %v, want %v", c[0], c[1], k, got.Values[k], want.Values[k])
			}
		}
		if got.Mean != want.Mean || got.Deviation != want.Deviation || got.Quantile(0.01) != want.Quantile(0.01) {
			t.Errorf("%d workers, %d processors: another summary", c[0], c[1])
		}
	}
	other, _ := tol.MonteCarlo(ctx, gapped, inputs(), tol.Draws{Count: 5000, Seed: 8})
	if other.Values[0] == want.Values[0] {
		t.Error("another seed gives the same draws")
	}
	y, _ := gapped(want.AtMin)
	near(t, "result at the values of the smallest draw", y, want.Min, 0)
}

// TestFlip finds the gap at which the inductance of the formula meets a bound: lg = N^2 mu0 A/L - lc/mu.
func TestFlip(t *testing.T) {
	const bound = 8.0e-6
	margin := func(l float64) float64 { return l - bound }
	m, ok, err := tol.Flip(ctx, gapped, inputs(), margin)
	if err != nil || !ok {
		t.Fatal(ok, err)
	}
	if m.Input != 1 && m.Input != 0 && m.Input != 2 {
		t.Fatal(m)
	}
	for i := range inputs() {
		one := []tol.Input{inputs()[i]}
		f := func(x []float64) (float64, error) {
			v := []float64{0.45e-3, 2200, 62e-6}
			v[i] = x[0]
			return gapped(v)
		}
		alone, ok, err := tol.Flip(ctx, f, one, margin)
		if err != nil {
			t.Fatal(err)
		}
		if ok && math.Abs(alone.Length) < math.Abs(m.Length)*(1-1e-9) {
			t.Errorf("input %d turns it with %g of its scale, nearer than %g", i, alone.Length, m.Length)
		}
		if i == 0 {
			near(t, "gap at the bound", alone.To, 49*1.25663706127e-6*62e-6/bound-46e-3/2200, 1e-7)
			near(t, "result there", alone.Value, bound, 1e-7)
		}
	}
	if _, ok, err := tol.Flip(ctx, gapped, inputs(), func(l float64) float64 { return l + 1 }); ok || err != nil {
		t.Errorf("a margin that nothing uses up: %v, %v", ok, err)
	}
}

func TestRefusals(t *testing.T) {
	refuse := errors.New("no solution here")
	broken := func(x []float64) (float64, error) {
		if x[0] > 1.09 {
			return 0, refuse
		}
		return x[0], nil
	}
	in := []tol.Input{{Name: "gap", Unit: "m", Nominal: 1, Half: 0.1}}
	if _, err := tol.WorstCase(ctx, broken, in); !errors.Is(err, refuse) {
		t.Errorf("a corner that fails: %v", err)
	}
	late := func(x []float64) (float64, error) { // only a draw gets there
		if x[0] > 1.0905 && x[0] < 1.0995 {
			return 0, refuse
		}
		return x[0], nil
	}
	var first error
	for _, workers := range []int{1, 2} {
		_, err := tol.MonteCarlo(ctx, late, in, tol.Draws{Count: 4000, Seed: 1, Workers: workers})
		if !errors.Is(err, refuse) {
			t.Fatalf("a draw that fails: %v", err)
		}
		if first != nil && first.Error() != err.Error() {
			t.Errorf("%d workers report another draw: %v, %v", workers, first, err)
		}
		first = err
	}
	for _, c := range []struct {
		in    tol.Input
		count int
	}{{tol.Input{Nominal: 1, Half: -1}, 10}, {tol.Input{Nominal: math.NaN(), Half: 1}, 10}, {tol.Input{Nominal: 1, Half: 1}, 1}} {
		_, err := tol.MonteCarlo(ctx, broken, []tol.Input{c.in}, tol.Draws{Count: c.count})
		var e *magcirc.Error
		if !errors.As(err, &e) || e.Code != magcirc.BadValue {
			t.Errorf("%+v, %d draws: %v", c.in, c.count, err)
		}
	}
	notANumber := func(x []float64) (float64, error) { return math.Sqrt(-1), nil }
	if _, err := tol.WorstCase(ctx, notANumber, in); err == nil {
		t.Error("a result that is no number passes")
	}
	stopped, stop := context.WithCancel(ctx)
	stop()
	if _, err := tol.MonteCarlo(stopped, gapped, inputs(), tol.Draws{Count: 100}); !errors.Is(err, context.Canceled) {
		t.Errorf("stopped: %v", err)
	}
}

// TestHistogram: every draw is in a bin, and edges enclose all.
func TestHistogram(t *testing.T) {
	d, err := tol.MonteCarlo(ctx, gapped, inputs(), tol.Draws{Count: 3000, Seed: 2})
	if err != nil {
		t.Fatal(err)
	}
	edges, counts := d.Histogram()
	sum := 0
	for _, c := range counts {
		sum += c
	}
	if sum != 3000 || edges[0] != d.Min || math.Abs(edges[len(edges)-1]-d.Max) > 1e-15 || len(edges) != len(counts)+1 || len(counts) < 8 || len(counts) > 40 {
		t.Errorf("%d draws in %d bins from %g to %g", sum, len(counts), edges[0], edges[len(edges)-1])
	}
}

// TestExplain: every input alone leads to the wanted result, the shortest move first.
func TestExplain(t *testing.T) {
	const want = 7.9e-6
	moves, err := tol.Explain(ctx, gapped, inputs(), want)
	if err != nil || len(moves) < 2 {
		t.Fatal(moves, err)
	}
	for n, m := range moves {
		x := []float64{0.45e-3, 2200, 62e-6}
		x[m.Input] = m.To
		y, _ := gapped(x)
		near(t, inputs()[m.Input].Name, y, want, 1e-7)
		if n > 0 && math.Abs(m.Length) < math.Abs(moves[n-1].Length) {
			t.Errorf("move %d is shorter than the one before", n)
		}
	}
}
