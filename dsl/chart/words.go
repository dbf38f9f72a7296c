package chart

import (
	"fmt"
	"math"
	"strings"

	"ampturn/magcirc/phys"
)

// describe says in one sentence what the chart shows.
func (c *Chart) describe() string {
	if c.Desc != "" {
		return c.Desc
	}
	names := make([]string, len(c.Series))
	for i, s := range c.Series {
		names[i] = s.Name
	}
	d := fmt.Sprintf("%s over %s", c.Y.Label, c.X.Label)
	if n := strings.Join(names, ", "); n != "" {
		d += ": " + n
	}
	for _, b := range c.Bands {
		d += "; limit: " + b.Text
	}
	return d
}

// Text is the chart in words: what is drawn, ranges, extremes, and where a line crosses a limit.
func (c *Chart) Text() string {
	if c.twin != "" && c.Check() == nil {
		return c.words()
	}
	var b strings.Builder
	if c.Title != "" {
		b.WriteString(c.Title + "\n")
	}
	fmt.Fprintf(&b, "%s over %s\n", c.Y.Label, c.X.Label)
	if err := c.Check(); err != nil {
		return b.String() + "no picture: " + err.Error()
	}
	for _, s := range c.Series {
		first, last, low, high := c.extremes(s)
		if closed(s) {
			first, last = ends(s.X)
		}
		fmt.Fprintf(&b, "  %s: %s from %s to %s; lowest %s at %s, highest %s at %s\n", nameOr(s.Name, c.Y.Label), c.X.Label,
			phys.Format(s.X[first], c.X.Unit), phys.Format(s.X[last], c.X.Unit),
			phys.Format(s.Y[low], c.Y.Unit), phys.Format(s.X[low], c.X.Unit),
			phys.Format(s.Y[high], c.Y.Unit), phys.Format(s.X[high], c.X.Unit))
	}
	for _, l := range c.Bands {
		fmt.Fprintf(&b, "  limit: %s\n", l.Text)
		for _, s := range c.Series {
			for _, x := range crossings(s, l) {
				fmt.Fprintf(&b, "    %s crosses it at %s\n", nameOr(s.Name, c.Y.Label), phys.Format(x, c.X.Unit))
			}
		}
	}
	return strings.TrimRight(b.String(), "\n")
}

// closed tells whether a line ends where it began, as a loop does: its range says more than its ends.
func closed(s Series) bool {
	last := len(s.X) - 1
	return last > 0 && s.X[0] == s.X[last] && s.Y[0] == s.Y[last]
}

// ends gives the indices of the smallest and the largest finite number of a list.
func ends(x []float64) (low, high int) {
	for i := range x {
		if bad(x[low]) || x[i] < x[low] {
			low = i
		}
		if bad(x[high]) || x[i] > x[high] {
			high = i
		}
	}
	return low, high
}

func nameOr(name, other string) string {
	if name == "" {
		return other
	}
	return name
}

// extremes gives the indices of a series' first, last, lowest and highest finite point.
func (c *Chart) extremes(s Series) (first, last, low, high int) {
	first = -1
	for i := range s.X {
		if bad(s.X[i]) || bad(s.Y[i]) {
			continue
		}
		if first < 0 {
			first, low, high = i, i, i
		}
		last = i
		if s.Y[i] < s.Y[low] {
			low = i
		}
		if s.Y[i] > s.Y[high] {
			high = i
		}
	}
	return first, last, low, high
}

// crossings gives the positions at which a line passes a bound on the vertical axis, by straight lines between points.
func crossings(s Series, l Band) []float64 {
	var at []float64
	if l.OnX {
		return nil
	}
	for _, y := range []float64{l.Low, l.High} {
		if bad(y) {
			continue
		}
		for i := 1; i < len(s.X); i++ {
			a, b := s.Y[i-1]-y, s.Y[i]-y
			if bad(a) || bad(b) || a*b > 0 || a == b || a == 0 {
				continue
			}
			at = append(at, s.X[i-1]+(s.X[i]-s.X[i-1])*math.Abs(a)/math.Abs(a-b))
		}
	}
	return at
}
