package tol

import (
	"context"
	"math"
	"slices"
	"sync"
	"sync/atomic"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"

	"ampturn/magcirc"
	"ampturn/magcirc/phys"
)

// Draws says how a result is drawn.
type Draws struct {
	Count   int    // number of draws
	Seed    uint64 // the same seed gives the same draws
	Workers int    // goroutines that call the function; 0 and 1: one, and the function need not be safe for several
}

// Distribution is a result over random draws of its inputs.
type Distribution struct {
	Nominal         float64
	Values          []float64 // in the order of the draws
	Min, Max        float64
	Mean, Deviation float64 // deviation: of the sample, with Count - 1
	AtMin, AtMax    []float64
	Effects         []Effect

	sorted []float64
}

// MonteCarlo draws the inputs at random and gives the distribution of the result. Draw k of axis j depends on the seed, k
// and j only, so neither the order of the draws nor the number of workers changes a bit of the outcome.
//
// Inputs: Count from 2 to 10 million. A draw that fails ends the run with the first such draw.
// Errors: [magcirc.BadValue] for a count outside that range; those of f, with the values at which they came up.
// Source: numbers by the mixing function of G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number
// generators, OOPSLA 2014 (from memory), used as a counter; normal ones by the inverse of the distribution.
func MonteCarlo(ctx context.Context, f Function, inputs []Input, d Draws) (*Distribution, error) {
	if d.Count < 2 || d.Count > 1e7 {
		return nil, &magcirc.Error{Code: magcirc.BadValue, Elem: "MonteCarlo", Quantity: "number of draws", Got: float64(d.Count), Limit: 2,
			Msg: phys.Format(float64(d.Count), "") + " draws are outside 2..10000000", Hint: "10000 draws are usual"}
	}
	effects, err := Effects(ctx, f, inputs)
	if err != nil {
		return nil, err
	}
	x := nominal(inputs)
	y, err := value(f, x)
	if err != nil {
		return nil, at(err, inputs, x, "at nominal values")
	}
	r := &Distribution{Nominal: y, Effects: effects, Values: make([]float64, d.Count)}
	if err := r.fill(ctx, f, inputs, d); err != nil {
		return nil, err
	}
	r.sum(inputs, d)
	return r, nil
}

// fill computes all draws.
func (r *Distribution) fill(ctx context.Context, f Function, inputs []Input, d Draws) error {
	directions := axes(inputs)
	workers := max(1, d.Workers)
	errs := make([]error, workers)
	first := make([]int, workers)
	var next, failed atomic.Int64
	failed.Store(int64(d.Count))
	const batch = 64
	var group sync.WaitGroup
	work := func(w int) {
		first[w] = d.Count
		x := make([]float64, len(inputs))
		for {
			from := int(next.Add(batch)) - batch
			if from >= d.Count || int64(from) > failed.Load() || ctx.Err() != nil {
				return
			}
			for k := from; k < min(from+batch, d.Count); k++ {
				draw(x, inputs, directions, d.Seed, k)
				y, err := value(f, x)
				if err != nil {
					if k < first[w] {
						first[w], errs[w] = k, at(err, inputs, x, "at a draw")
					}
					for old := failed.Load(); int64(k) < old && !failed.CompareAndSwap(old, int64(k)); old = failed.Load() {
					}
					break
				}
				r.Values[k] = y
			}
		}
	}
	if workers == 1 {
		work(0)
	} else {
		stopped := make([]any, workers)
		for w := range workers {
			group.Go(func() {
				defer func() { stopped[w] = recover() }()
				work(w)
			})
		}
		group.Wait()
		for _, cause := range stopped {
			if cause != nil {
				panic(cause) // in the goroutine of the caller, who knows what to do with it
			}
		}
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	best := 0
	for w := range first {
		if first[w] < first[best] {
			best = w
		}
	}
	return errs[best]
}

// draw sets x to draw k.
func draw(x []float64, inputs []Input, directions [][]int, seed uint64, k int) {
	for i, in := range inputs {
		x[i] = in.Nominal
	}
	for j, axis := range directions {
		u := unit(seed, uint64(k), uint64(j))
		for _, i := range axis {
			share := 2*u - 1
			if inputs[i].Shape == Normal {
				share = distuv.UnitNormal.Quantile(u) / 3
			}
			x[i] = inputs[i].Nominal + share*inputs[i].Half
		}
	}
}

// unit gives a number between 0 and 1, both excluded, for a counter.
func unit(seed, k, j uint64) float64 {
	z := mix(mix(mix(seed)+k) + j)
	return (float64(z>>11) + 0.5) * 0x1p-53
}

// mix is a bijection of 64 bits that leaves no pattern: the output function of SplitMix64.
func mix(z uint64) uint64 {
	z += 0x9e3779b97f4a7c15
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

// sum computes what is said of all draws, in their order.
func (r *Distribution) sum(inputs []Input, d Draws) {
	r.Mean, r.Deviation = stat.MeanStdDev(r.Values, nil)
	low, high := 0, 0
	for k, y := range r.Values {
		if y < r.Values[low] {
			low = k
		}
		if y > r.Values[high] {
			high = k
		}
	}
	r.Min, r.Max = r.Values[low], r.Values[high]
	directions := axes(inputs)
	r.AtMin, r.AtMax = make([]float64, len(inputs)), make([]float64, len(inputs))
	draw(r.AtMin, inputs, directions, d.Seed, low)
	draw(r.AtMax, inputs, directions, d.Seed, high)
	r.sorted = slices.Clone(r.Values)
	slices.Sort(r.sorted)
}

// Quantile gives the value below which a share p of the draws lies, in a straight line between draws.
//
// Inputs: 0 <= p <= 1, clamped. Source: definition 7 of R. J. Hyndman, Y. Fan, Am. Stat. 50 (1996) 361-365 (from memory).
func (r *Distribution) Quantile(p float64) float64 {
	at := math.Min(math.Max(p, 0), 1) * float64(len(r.sorted)-1)
	k := int(at)
	if k+1 >= len(r.sorted) {
		return r.sorted[len(r.sorted)-1]
	}
	return r.sorted[k] + (at-float64(k))*(r.sorted[k+1]-r.sorted[k])
}

// Yield gives the share of the draws within low..high.
func (r *Distribution) Yield(low, high float64) float64 {
	n := 0
	for _, y := range r.Values {
		if y >= low && y <= high {
			n++
		}
	}
	return float64(n) / float64(len(r.Values))
}

// Capability gives the process capability index Cpk against low..high, either of which may be infinite:
//
//	Cpk = min(high - mean, mean - low) / (3 deviation)
//
// Valid: as a forecast of rejects for a normal distribution. Source: ISO 22514-2 (from memory). Infinite without deviation.
func (r *Distribution) Capability(low, high float64) float64 {
	return math.Min(high-r.Mean, r.Mean-low) / (3 * r.Deviation)
}

// Histogram gives counts of the draws in bins of equal width between the smallest and the largest.
//
// The number of bins is the Freedman-Diaconis rule, width 2 IQR/n^(1/3), between 8 and 40.
// Source: D. Freedman, P. Diaconis, Z. Wahrscheinlichkeitstheorie 57 (1981) 453-476 (from memory).
func (r *Distribution) Histogram() (edges []float64, counts []int) {
	low, high := r.Min, r.Max
	if high == low {
		pad := math.Max(math.Abs(low), 1) * 1e-9
		low, high = low-pad, high+pad
	}
	bins := 8
	if width := 2 * (r.Quantile(0.75) - r.Quantile(0.25)) / math.Cbrt(float64(len(r.Values))); width > 0 {
		bins = int(math.Min(40, math.Max(8, math.Ceil((high-low)/width))))
	}
	edges, counts = make([]float64, bins+1), make([]int, bins)
	for i := range edges {
		edges[i] = low + (high-low)*float64(i)/float64(bins)
	}
	for _, y := range r.Values {
		k := int(float64(bins) * (y - low) / (high - low))
		counts[min(max(k, 0), bins-1)]++
	}
	return edges, counts
}
