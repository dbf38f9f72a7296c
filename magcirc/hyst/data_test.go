package hyst_test

import (
	"bufio"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"ampturn/magcirc/hyst"
)

func median(x []float64) float64 {
	y := slices.Clone(x)
	slices.Sort(y)
	return y[len(y)/2]
}

// measured reads the measured loops of a family from the folder that AMPTURN_DATA names.
func measured(t *testing.T, names ...string) []*hyst.Loop {
	t.Helper()
	folder := os.Getenv("AMPTURN_DATA")
	if folder == "" {
		t.Skip("AMPTURN_DATA names no folder of measured loops")
	}
	var loops []*hyst.Loop
	for _, name := range names {
		f, err := os.Open(filepath.Join(folder, "loops", name+".csv"))
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		var h, b []float64
		for lines := bufio.NewScanner(f); lines.Scan(); {
			var x, y float64
			if n, _ := fmt.Sscanf(strings.TrimSpace(lines.Text()), "%g,%g", &x, &y); n == 2 {
				h, b = append(h, x), append(b, y)
			}
		}
		l, err := hyst.NewLoop(name, h, b)
		if err != nil {
			t.Fatal(err)
		}
		loops = append(loops, l)
	}
	return loops
}

func records(loops []*hyst.Loop) []hyst.Record {
	list := make([]hyst.Record, len(loops))
	for i, l := range loops {
		list[i] = l.Record()
	}
	return list
}

// Values of the measured loops, made from their points by straight lines and the polygon area.
func TestMeasuredLoops(t *testing.T) {
	for _, c := range []struct {
		name               string
		peakH, peakB       float64
		hcDown, hcUp       float64
		brDown, brUp, area float64
	}{
		{"mnzn-a-1", 7.981, 0.0935, 0.853, 0.837, 0.0111, 0.0105, 0.2071},
		{"mnzn-a-2", 15.972, 0.1736, 2.357, 2.340, 0.0350, 0.0352, 1.1161},
		{"mnzn-a-3", 39.926, 0.2718, 4.411, 4.235, 0.0762, 0.0749, 3.4567},
		{"mnzn-a-4", 79.852, 0.3147, 5.150, 4.780, 0.0906, 0.0856, 4.6677},
		{"mnzn-hp-1", 5.984, 0.0716, 0.353, 0.340, 0.0043, 0.0041, 0.0664},
		{"mnzn-hp-3", 20.069, 0.2400, 2.893, 2.888, 0.0464, 0.0465, 2.0247},
		{"mnzn-hp-4", 79.947, 0.3939, 5.670, 5.625, 0.1032, 0.1039, 7.1631},
	} {
		l := measured(t, c.name)[0]
		brDown, brUp, hcDown, hcUp := l.Crossings()
		for _, v := range []struct {
			what            string
			got, want, half float64 // half a digit of the print
		}{
			{"peak field", l.H[0], c.peakH, 5e-4}, {"peak", slices.Max(l.B), c.peakB, 5.1e-5},
			{"Hc falling", -hcDown, c.hcDown, 5.1e-4}, {"Hc rising", hcUp, c.hcUp, 5.1e-4},
			{"Br falling", brDown, c.brDown, 5.1e-5}, {"Br rising", -brUp, c.brUp, 5.1e-5}, {"area", l.Area(), c.area, 5.1e-5},
		} {
			if math.Abs(v.got-v.want) > v.half {
				t.Errorf("%s: %s %v, want %v", c.name, v.what, v.got, v.want)
			}
		}
	}
}

// The law fitted here follows the measured loops no worse than the published parameters of the same form do.
func TestFitsMeasuredLoops(t *testing.T) {
	for _, c := range []struct {
		names     []string
		published hyst.Parameters
	}{
		{[]string{"mnzn-a-1", "mnzn-a-2", "mnzn-a-3", "mnzn-a-4"}, mnznA},
		{[]string{"mnzn-hp-1", "mnzn-hp-2", "mnzn-hp-3", "mnzn-hp-4"}, mnznHP},
	} {
		loops := records(measured(t, c.names...))
		pub := hyst.Follow(law(t, c.published), loops)
		for _, f := range pub {
			t.Logf("published: %s", f.String())
		}
		for _, form := range []hyst.Form{hyst.Form1986, hyst.Form1992} {
			fit, err := hyst.FitJilesAtherton(loops, &hyst.FitSettings{Form: form})
			if err != nil {
				t.Fatal(err)
			}
			t.Logf("%v, %d runs", fit.Law.Parameters(), fit.Evaluations)
			for _, f := range fit.Records {
				t.Logf("  %s", f.String())
			}
			for _, n := range fit.Notes {
				t.Logf("  note: %s", n)
			}
			if form == hyst.Form1992 {
				play, err := hyst.FitPlay(loops, "")
				if err != nil {
					t.Fatal(err)
				}
				t.Logf("%s", play.Law.Describe())
				for _, f := range play.Records {
					t.Logf("  %s", f.String())
				}
				if play.RMS > fit.RMS {
					t.Errorf("play cells follow within %.4g, Jiles-Atherton within %.4g", play.RMS, fit.RMS)
				}
			}
			if form == hyst.Form1986 && fit.RMS > rms(pub) {
				t.Errorf("residual %.4g, the published parameters have %.4g", fit.RMS, rms(pub))
			}
		}
	}
}

func rms(list []hyst.Fitted) float64 {
	sum := 0.0
	for _, f := range list {
		sum += f.RMS * f.RMS
	}
	return math.Sqrt(sum / float64(len(list)))
}
