package hyst

import "testing"

func TestQuick(t *testing.T) {
	for _, f := range []Form{Form1986, Form1992} {
		law, err := NewJilesAtherton(Parameters{Ms: 1.6e6, A: 1100, K: 400, Alpha: 1.6e-3, C: 0.2, Form: f})
		if err != nil {
			t.Fatal(err)
		}
		s := law.Start()
		for _, h := range []float64{500, 1000, 2000, 4000, 6000} {
			p := law.ByField(&s, h)
			t.Log(f, h, p.H, p.m*1.6e6, p.X)
		}
		law.Commit(&s, law.ByField(&s, 6000))
		area := 0.0
		for range 10 {
			p := law.ByField(&s, -6000)
			w1 := law.Work(&s, p)
			law.Commit(&s, p)
			q := law.ByFluxDensity(&s, 0)
			r := law.ByField(&s, 0)
			p = law.ByField(&s, 6000)
			area = w1 + law.Work(&s, p)
			law.Commit(&s, p)
			t.Log(f, p.B, r.B, q.H, area)
		}
	}
}
