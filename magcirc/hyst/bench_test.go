package hyst_test

import (
	"testing"

	"ampturn/magcirc/hyst"
)

var ferrite = hyst.Parameters{Ms: 3.8e5, A: 30, K: 20, Alpha: 5e-5, C: 0.2}

var sink float64

// BenchmarkTrial is one trial of Form1992 from a committed state.
func BenchmarkTrial(b *testing.B) {
	for _, form := range []hyst.Form{hyst.Form1992, hyst.Form1986} {
		p := ferrite
		p.Form = form
		law, _ := hyst.NewJilesAtherton(p)
		up := law.Start()
		law.Commit(&up, law.ByField(&up, 200))
		law.Commit(&up, law.ByField(&up, -200))
		turned := up.Clone()
		law.Commit(&up, law.ByField(&up, 12))
		x := law.Now(&up)
		tx := law.Now(&turned)
		for _, c := range []struct {
			name string
			call func(k float64) hyst.Point
		}{
			{"small step by effective field", func(k float64) hyst.Point { return law.ByEffective(&up, x.X+0.3+k) }},
			{"small step by field", func(k float64) hyst.Point { return law.ByField(&up, x.H+0.3+k) }},
			{"small step by flux density", func(k float64) hyst.Point { return law.ByFluxDensity(&up, x.B+0.005+k) }},
			{"reversible step", func(k float64) hyst.Point { return law.ByEffective(&turned, tx.X+1+k) }},
			{"swing of 400 A per m by effective field", func(k float64) hyst.Point { return law.ByEffective(&turned, 200+k) }},
			{"swing of 400 A per m by flux density", func(k float64) hyst.Point { return law.ByFluxDensity(&turned, 0.35+k) }},
		} {
			b.Run(form.String()+"/"+c.name, func(b *testing.B) {
				for n := range b.N {
					sink += c.call(1e-12 * float64(n&15)).B
				}
			})
		}
	}
}

func BenchmarkNewJilesAtherton(b *testing.B) {
	for range b.N {
		law, _ := hyst.NewJilesAtherton(ferrite)
		sink += law.Knee()
	}
}

// BenchmarkPlay is a trial of ten play cells.
func BenchmarkPlay(b *testing.B) {
	l := play10(b)
	s := l.Start()
	l.Commit(&s, l.ByField(&s, 200))
	l.Commit(&s, l.ByField(&s, -200))
	turned := s.Clone()
	l.Commit(&s, l.ByField(&s, 150)) // all cells move
	now, first := l.Now(&s), l.Now(&turned)
	for _, c := range []struct {
		name string
		call func(k float64) hyst.Point
	}{
		{"all cells move", func(k float64) hyst.Point { return l.ByField(&s, 151+k) }},
		{"a turn, two cells move", func(k float64) hyst.Point { return l.ByField(&turned, -190+k) }},
		{"by flux density", func(k float64) hyst.Point { return l.ByFluxDensity(&s, now.B+1e-4+k) }},
		{"swing by flux density", func(k float64) hyst.Point { return l.ByFluxDensity(&turned, -first.B+k) }},
	} {
		b.Run(c.name, func(b *testing.B) {
			for n := range b.N {
				sink += c.call(1e-12 * float64(n&15)).B
			}
		})
	}
}

// BenchmarkFit fits 200 points with noise.
func BenchmarkFit(b *testing.B) {
	for n := range b.N {
		b.StopTimer()
		_, rec := synthetic(b, int64(n%50))
		b.StartTimer()
		fit, err := hyst.FitJilesAtherton([]hyst.Record{rec}, nil)
		if err != nil {
			b.Fatal(err)
		}
		sink += fit.RMS
	}
}
