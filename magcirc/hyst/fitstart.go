package hyst

import (
	"math"
	"slices"

	"ampturn/magcirc/internal/num"
	"ampturn/magcirc/phys"
)

// A search from one start ends in a local minimum more often than not: the sum of squares over five parameters has
// many. The starts are the best of a grid over the scales of the records; the searches from them end where one leaves
// nothing but noise.
const (
	mostStarts = 8
	thinned    = 30   // points, about, of all records on which the grid is judged
	whitest    = 1.5  // of von Neumann's ratio; 2 is noise without memory
	exact      = 1e-7 // relative deviation below which nothing better is looked for
)

// scales are what the records say without a law, in A/m.
type scales struct {
	field      float64 // the largest
	coercivity float64 // the largest, where the records have one
	crosses    bool
}

func (f *jaSearch) scales() scales {
	var s scales
	for i := range f.records {
		r := &f.records[i]
		for k := range r.H {
			s.field = math.Max(s.field, math.Abs(r.H[k]))
		}
		for k := 1; k < len(r.H); k++ { // between points: a sample beside the crossing may have H = 0
			if a, c := r.B[k-1], r.B[k]; a*c < 0 || c == 0 && a != 0 {
				s.coercivity = math.Max(s.coercivity, math.Abs(r.H[k-1]+(r.H[k]-r.H[k-1])*a/(a-c)))
			}
		}
	}
	s.crosses = s.coercivity > s.field/1000
	s.coercivity = math.Max(s.coercivity, s.field/200)
	return s
}

// starts gives the coordinates from which to search, the most promising first: of each pair of a reversible share and a
// coupling the best a and k of a grid. In reduced units M over H does not depend on Ms where a, k, c and alpha Ms/(3a)
// are given, so that the best Ms of a place is known at once. Form1986 is judged by Form1992, to which it is near.
func (f *jaSearch) starts() [][]float64 {
	s := f.scales()
	least, most := 0.7*s.coercivity, math.Min(12*s.coercivity, s.field)
	if !s.crosses {
		least, most = 0.01*s.field, s.field
	}
	ks := ladder(least, math.Max(most, 2*least), 4)
	as := ladder(0.5*s.coercivity, math.Max(2*s.field, 4*s.coercivity), 7)
	thin := f.thin()
	type place struct {
		x   []float64
		sum float64
	}
	ratios := [...]float64{0.1, 0.5, 0.8, 0.95}
	var best []place
	for _, c := range [...]float64{0.1, 0.4, 0.75} {
		var at [len(ratios)]place
		for _, k := range ks {
			for _, a := range as {
				law := newJilesAtherton(Parameters{Ms: unit, A: a, K: k, C: c})
				for i, ratio := range ratios {
					law.alpha = 3 * ratio // its tables do not depend on it
					if ms, sum := thin.project(law); at[i].x == nil || sum < at[i].sum {
						at[i] = place{[]float64{math.Log(ms), math.Log(a), math.Log(k), logit(c), logit(ratio)}, sum}
					}
				}
			}
		}
		best = append(best, at[:]...)
	}
	if f.form == Form1986 {
		for _, b := range best {
			b.x[2] += math.Log1p(-logistic(b.x[3])) // k (1+c) of this form is the other's k
		}
	}
	slices.SortStableFunc(best, func(a, b place) int {
		switch {
		case a.sum < b.sum:
			return -1
		case a.sum > b.sum:
			return 1
		}
		return 0
	})
	list := make([][]float64, 0, mostStarts)
	for _, b := range best[:mostStarts] {
		list = append(list, b.x)
	}
	return list
}

// ladder gives n values from lo to hi in equal ratios.
func ladder(lo, hi float64, n int) []float64 {
	list := make([]float64, n)
	for i := range list {
		list[i] = lo * math.Pow(hi/lo, float64(i)/float64(n-1))
	}
	return list
}

// thin gives the search on some of the points, among them those of largest and smallest field strength.
func (f *jaSearch) thin() *jaSearch {
	t := &jaSearch{b: f.b}
	every := max(1, f.count/thinned)
	for i := range f.records {
		r := f.records[i]
		low, high := 0, 0
		for k, h := range r.H {
			if h < r.H[low] {
				low = k
			}
			if h > r.H[high] {
				high = k
			}
		}
		few := Record{Cyclic: r.Cyclic}
		for k := range r.H {
			if k%every == 0 || k == low || k == high {
				few.H, few.B = append(few.H, r.H[k]), append(few.B, r.B[k])
			}
		}
		t.records = append(t.records, few)
		t.scale = append(t.scale, f.scale[i]*math.Sqrt(float64(len(r.H))/float64(len(few.H))))
	}
	return t
}

const unit = 1e6 // A/m, Ms of the laws on trial

// project gives the best Ms in A/m for the rest of the law's parameters, and the sum of squares that it leaves.
func (f *jaSearch) project(law Law) (ms, sum float64) {
	var mm, mj, jj float64
	for i := range f.records {
		r := &f.records[i]
		r.simulate(law, f.b)
		for p, h := range r.H {
			m, j := (f.b[p]-phys.Mu0*h)*f.scale[i], (r.B[p]-phys.Mu0*h)*f.scale[i]
			mm, mj, jj = mm+m*m, mj+m*j, jj+j*j
		}
	}
	share := clamp(mj/mm, 1e-4, mostMs/unit)
	return share * unit, jj - 2*share*mj + share*share*mm
}

// settled says whether what a search leaves is noise: nothing, or residuals that do not depend on their neighbours.
//
// Source: J. von Neumann, Ann. Math. Stat. 12 (1941) 367-395 (from memory).
func (f *jaSearch) settled(l *num.Least) bool {
	if l.Sum <= exact*exact*f.weight {
		return true
	}
	steps, squares, at := 0.0, 0.0, 0
	for i := range f.records {
		n := len(f.records[i].H)
		for k := 1; k < n; k++ {
			d := l.R[at+k] - l.R[at+k-1]
			steps += d * d
			squares += l.R[at+k] * l.R[at+k]
		}
		at += n
	}
	return l.Sum < 0.05*0.05*f.weight && steps > whitest*squares
}
