package num_test

import (
	"math"
	"math/big"
	"testing"

	"pgregory.net/rapid"

	"ampturn/magcirc/internal/num"
)

// fraction evaluates L by its continued fraction z/(3+z^2/(5+z^2/(7+...))), free of cancellation; L' from
// L' = 1 - L^2 - 2L/z in 200 bits.
func fraction(z float64) (l, slope float64) {
	const bits = 200
	f := func(x float64) *big.Float { return new(big.Float).SetPrec(bits).SetFloat64(x) }
	q := f(0).Mul(f(z), f(z))
	d := f(401)
	for k := 399; k >= 3; k -= 2 {
		d = f(0).Add(f(float64(k)), f(0).Quo(q, d))
	}
	L := f(0).Quo(f(z), d)
	s := f(0).Sub(f(1), f(0).Mul(L, L))
	s.Sub(s, f(0).Quo(f(0).Mul(f(2), L), f(z)))
	l, _ = L.Float64()
	slope, _ = s.Float64()
	return l, slope
}

func TestLangevinAgainstContinuedFraction(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		z := math.Pow(10, rapid.Float64Range(-6, 1.6).Draw(t, "lg z"))
		l, slope := num.Langevin(z)
		wantL, wantSlope := fraction(z)
		if math.Abs(l-wantL) > 2e-14*wantL {
			t.Fatalf("L(%v) = %v, want %v (%.1e)", z, l, wantL, l/wantL-1)
		}
		if math.Abs(slope-wantSlope) > 3e-14*wantSlope {
			t.Fatalf("L'(%v) = %v, want %v (%.1e)", z, slope, wantSlope, slope/wantSlope-1)
		}
		if m, _ := num.Langevin(-z); m != -l {
			t.Fatalf("L is odd")
		}
	})
}

func TestLangevinTable(t *testing.T) {
	// Identities, evaluated with 30 digits (mpmath 1.x), printed to 12.
	for z, want := range map[float64]float64{1e-4: 3.33333333111e-5, 1e-3: 3.33333311111e-4, 0.1: 0.0333111322540,
		0.5: 0.163953413739, 1: 0.313035285499, 2: 0.537314720728, 5: 0.800090803982, 10: 0.900000004122} {
		if got, _ := num.Langevin(z); math.Abs(got-want) > 3e-12*want {
			t.Errorf("L(%v) = %.13g, want %v", z, got, want)
		}
	}
	for z, want := range map[float64]float64{0: 1.0 / 3, 0.1: 0.332667723388, 1: 0.275938339034, 3: 0.101146765340} {
		if _, got := num.Langevin(z); math.Abs(got-want) > 5e-12*want {
			t.Errorf("L'(%v) = %.13g, want %v", z, got, want)
		}
	}
}

func TestLangevinIntegral(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		z := math.Pow(10, rapid.Float64Range(-5, 2).Draw(t, "lg z"))
		want := 0.0 // Gauss-Legendre of five points on 400 panels: closed form against numbers
		for i := range 400 {
			want += gauss5(func(x float64) float64 { l, _ := num.Langevin(x); return l }, z*float64(i)/400, z*float64(i+1)/400)
		}
		if got := num.LangevinIntegral(z); math.Abs(got-want) > 2e-13*want {
			t.Fatalf("integral to %v: %v, want %v (%.1e)", z, got, want, got/want-1)
		}
	})
}

func gauss5(f func(float64) float64, a, b float64) float64 {
	x := [3]float64{0, 0.5384693101056831, 0.9061798459386640}
	w := [3]float64{0.5688888888888889, 0.4786286704993665, 0.2369268850561891}
	c, r := (a+b)/2, (b-a)/2
	s := w[0] * f(c)
	for i := 1; i < 3; i++ {
		s += w[i] * (f(c-r*x[i]) + f(c+r*x[i]))
	}
	return s * r
}

// rising draws points from the origin, spaced over decades.
func rising(t *rapid.T) (x, y []float64) {
	n := rapid.IntRange(1, 40).Draw(t, "n")
	x, y = make([]float64, n+1), make([]float64, n+1)
	for i := 1; i <= n; i++ {
		x[i] = x[i-1] + math.Pow(10, rapid.Float64Range(-2, 4).Draw(t, "dx"))
		y[i] = y[i-1] + math.Pow(10, rapid.Float64Range(-4, 0).Draw(t, "dy"))
	}
	return x, y
}

func TestIncreasing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, y := rising(t)
		s := num.NewIncreasing(x, y, num.MonotoneSlopes(x, y))
		if rapid.Bool().Draw(t, "straight") {
			s = num.NewPolyline(x, y)
		}
		last := len(x) - 1
		for i := range x {
			if got, _ := s.At(x[i]); math.Abs(got-y[i]) > 1e-13*y[last] {
				t.Fatalf("point %d: %v, want %v", i, got, y[i])
			}
		}
		u := rapid.Float64Range(0, 1).Draw(t, "u") * x[last]
		v, slope := s.At(u)
		if slope < -1e-13*y[1]/x[1]-1e-13*y[last] { // rounding where the slope is zero
			t.Fatalf("falls at %v", u)
		}
		back, _ := s.Inverse(v)
		if again, _ := s.At(back); math.Abs(again-v) > 1e-12*v {
			t.Fatalf("At(Inverse(%v)) = %v", v, again)
		}
		i := rapid.IntRange(0, last-1).Draw(t, "i")
		a, b := x[i], x[i+1]
		want := gauss5(func(x float64) float64 { y, _ := s.At(x); return y }, a, b)
		if got := s.Integral(b) - s.Integral(a); math.Abs(got-want) > 1e-12*s.Integral(b)+1e-15*b*y[i+1] { // the second: rounding of x within a narrow interval
			t.Fatalf("integral %v, want %v", got, want)
		}
	})
}

// Many evenly spaced points and points over twenty decades: the guide finds every interval.
func TestLocatesEveryInterval(t *testing.T) {
	for _, make := range []func(i int) float64{
		func(i int) float64 { return float64(i) },
		func(i int) float64 { return math.Expm1(float64(i) / 40) },
		func(i int) float64 { return 1e5 + float64(i) },
	} {
		x, y := []float64{0}, []float64{0}
		for i := 1; i < 2000; i++ {
			x, y = append(x, make(i)), append(y, float64(i))
		}
		s := num.NewPolyline(x, y)
		for i := 1; i < len(x)-1; i++ {
			mid := x[i] + 0.25*(x[i+1]-x[i])
			if got, _ := s.At(mid); math.Abs(got-float64(i)-0.25) > 1e-9 {
				t.Fatalf("between points %d and %d: %v", i, i+1, got)
			}
		}
	}
}

func TestRoot(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := rapid.Float64Range(-50, 50).Draw(t, "x")
		f := func(x float64) (float64, float64) { // a knee of three decades
			return math.Atan(30*(x-want)) + 1e-3*(x-want), 30/(1+900*(x-want)*(x-want)) + 1e-3
		}
		start := rapid.Float64Range(-100, 100).Draw(t, "start")
		if got := num.Root(f, -100, 100, start, 1e-12); math.Abs(got-want) > 1e-10*math.Max(1, math.Abs(want)) {
			t.Fatalf("%v, want %v", got, want)
		}
	})
}

// Newton's steps leap across this root and back, 0.4 percent nearer each time, where |f| is a third of what it is on the
// other side: every other step halves |f|, and none leads anywhere.
func TestRootBetweenTwoSteps(t *testing.T) {
	for _, want := range []float64{1, -7.3, 250} {
		for _, ratio := range []float64{3, 1, 1.0 / 3, 100} {
			calls := 0
			f := func(x float64) (float64, float64) {
				calls++
				const p = 0.501
				d := x - want
				if d < 0 {
					return -math.Pow(-d, p), p * math.Pow(-d, p-1)
				}
				return ratio * math.Pow(d, p), ratio * p * math.Pow(d, p-1)
			}
			if got := num.Root(f, want-1000, want+1100, want-1, 1e-12); math.Abs(got-want) > 1e-11*math.Abs(want) || calls > 170 {
				t.Errorf("root %v, ratio %v: %v after %d steps", want, ratio, got, calls)
			}
		}
	}
}

func BenchmarkLangevin(b *testing.B) {
	s := 0.0
	for i := range b.N {
		l, d := num.Langevin(0.6 + float64(i&1023)*0.01)
		s += l + d
	}
	_ = s
}

func BenchmarkIncreasing(b *testing.B) {
	var x, y []float64
	for i := range 60 {
		x, y = append(x, 1000*math.Pow(float64(i)/60, 3)), append(y, math.Atan(float64(i)/10))
	}
	s := num.NewIncreasing(x, y, num.MonotoneSlopes(x, y))
	b.Run("At", func(b *testing.B) {
		for i := range b.N {
			s.At(float64(i&1023) * 0.9)
		}
	})
	b.Run("Inverse", func(b *testing.B) {
		for i := range b.N {
			s.Inverse(float64(i&1023) * 1.39 / 1024)
		}
	})
}
