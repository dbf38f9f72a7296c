package num

import "math"

// locator finds the interval of a sorted table that holds a value, in a few nanoseconds whatever the spacing: the
// leading bits of a float64 divide the positive numbers into buckets that widen with the number, and a guide gives
// the first interval of each.
type locator struct {
	x     []float64 // 0 = x[0] < x[1] < ...
	shift uint
	base  uint64
	guide []int32
}

func newLocator(x []float64) locator {
	last := len(x) - 1
	for shift := uint(52); ; shift-- {
		base := math.Float64bits(x[1]) >> shift
		n := int(math.Float64bits(x[last])>>shift-base) + 2
		l := locator{x: x, shift: shift, base: base, guide: make([]int32, n)}
		worst, i := 0, 0
		for j := 1; j < n; j++ {
			edge := math.Float64frombits((base + uint64(j) - 1) << shift)
			from := i
			for i < last-1 && x[i+1] <= edge {
				i++
			}
			worst = max(worst, i-from)
			l.guide[j] = int32(i)
		}
		if worst <= 2 || n > 8*len(x)+64 {
			return l
		}
	}
}

// find gives i with x[i] <= v < x[i+1] for 0 <= v, at most the last interval.
func (l *locator) find(v float64) int {
	i := 0
	if k := math.Float64bits(v) >> l.shift; k >= l.base {
		j := int(k-l.base) + 1
		if j >= len(l.guide) {
			return len(l.x) - 2
		}
		i = int(l.guide[j])
	}
	for last := len(l.x) - 2; i < last && l.x[i+1] <= v; {
		i++
	}
	return i
}
