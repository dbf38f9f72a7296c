package hyst_test

import (
	"bytes"
	"encoding/json"
	"math"
	"math/rand"
	"os"
	"os/exec"
	"testing"

	"ampturn/magcirc/hyst"
	"ampturn/magcirc/phys"
)

// peerCase is the input of testdata/peers/jilesatherton.py.
type peerCase struct {
	name  string
	Ms    float64   `json:"Ms"`
	A     float64   `json:"a"`
	K     float64   `json:"k"`
	Alpha float64   `json:"alpha"`
	C     float64   `json:"c"`
	Form  int       `json:"form"`
	Drive string    `json:"drive"`
	To    []float64 `json:"to"`
}

func forPeer(name string, p hyst.Parameters, drive string, to []float64) peerCase {
	form := 1992
	if p.Form == hyst.Form1986 {
		form = 1986
	}
	return peerCase{name, p.Ms, p.A, p.K, p.Alpha, p.C, form, drive, to}
}

func (c *peerCase) parameters() hyst.Parameters {
	p := hyst.Parameters{Ms: c.Ms, A: c.A, K: c.K, Alpha: c.Alpha, C: c.C}
	if c.Form == 1986 {
		p.Form = hyst.Form1986
	}
	return p
}

// peerCases are minor loops under bias, arbitrary histories, and the same driven by flux density.
func peerCases() []peerCase {
	var list []peerCase
	for _, p := range []hyst.Parameters{steel86, steel92, silicon, sadowski, tape, ferrite, mnznHP} {
		k := 4 * (p.A + p.K)
		minor := []float64{k, -k, k, 0.1 * k}
		for range 5 {
			minor = append(minor, 0.2*k, 0.1*k)
		}
		list = append(list, forPeer("minor loops", p, "H", minor))
		list = append(list, forPeer("decaying", p, "H", []float64{k, -0.8 * k, 0.6 * k, -0.4 * k, 0.2 * k, -0.1 * k, 0.05 * k, 0}))
		if p.Form == hyst.Form1992 {
			b := phys.Mu0 * p.Ms
			list = append(list, forPeer("by flux density", p, "B", []float64{0.7 * b, -0.6 * b, 0.5 * b, 0.3 * b, 0.5 * b, 0.3 * b, 0, 0.2 * b, -0.7 * b}))
		}
	}
	r := rand.New(rand.NewSource(3))
	for n := range 24 {
		p := truth(r)
		if n%3 == 0 {
			p.Form, p.C = hyst.Form1986, 3*p.C
		}
		k := 3 * (p.A + p.K)
		var to []float64
		for range 10 {
			to = append(to, k*(2*r.Float64()-1))
		}
		list = append(list, forPeer("random", p, "H", append([]float64(nil), to...)))
		if p.Form == hyst.Form1992 {
			b := phys.Mu0 * p.Ms
			for i := range to {
				to[i] = b * (1.6*r.Float64() - 0.8)
			}
			list = append(list, forPeer("random, by flux density", p, "B", append([]float64(nil), to...)))
		}
	}
	return list
}

// Against a Runge-Kutta run of order eight in scipy: field, flux density and work at every turning point within 1e-4.
func TestAgainstRungeKutta(t *testing.T) {
	python := os.Getenv("AMPTURN_PYTHON")
	if python == "" {
		t.Skip("AMPTURN_PYTHON is not set: the path of a Python interpreter with scipy")
	}
	if out, err := exec.Command(python, "-c", "import scipy").CombinedOutput(); err != nil {
		t.Skipf("%s has no scipy: %v %s", python, err, out)
	}
	list := peerCases()
	text, err := json.Marshal(list)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "../../testdata/peers/jilesatherton.py")
	cmd.Stdin = bytes.NewReader(text)
	var stderr bytes.Buffer
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v\n%s", err, stderr.String())
	}
	var answer [][][3]float64
	if err := json.Unmarshal(out, &answer); err != nil {
		t.Fatal(err)
	}
	var worst [3]float64
	for n := range list {
		c := &list[n]
		l := law(t, c.parameters())
		s := l.Start()
		work, hTop, bTop, wTop := 0.0, 0.0, 0.0, 0.0
		for _, a := range answer[n] {
			hTop, bTop, wTop = math.Max(hTop, math.Abs(a[0])), math.Max(bTop, math.Abs(a[1])), math.Max(wTop, math.Abs(a[2]))
		}
		for i, to := range c.To {
			var p hyst.Point
			if c.Drive == "H" {
				p = l.ByField(&s, to)
			} else {
				p = l.ByFluxDensity(&s, to)
			}
			work += l.Work(&s, p)
			l.Commit(&s, p)
			want := answer[n][i]
			for k, d := range [3]float64{(p.H - want[0]) / hTop, (p.B - want[1]) / bTop, (work - want[2]) / wTop} {
				worst[k] = math.Max(worst[k], math.Abs(d))
				if math.Abs(d) > 1e-4 {
					t.Errorf("%s (%v): turn %d: %s off by %.1e of its largest: H %v, B %v, work %v, want %v", c.name, c.parameters(), i+1,
						[3]string{"H", "B", "work"}[k], d, p.H, p.B, work, want)
				}
			}
		}
	}
	t.Logf("%d histories; largest difference of H %.1e, B %.1e, work %.1e", len(list), worst[0], worst[1], worst[2])
}
