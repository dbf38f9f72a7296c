package chart_test

import (
	"encoding/xml"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ampturn/dsl/chart"
)

// samples are charts as notebooks draw them: curves of invented cores.
func samples() map[string]interface{ SVG() string } {
	curve := func(top, knee float64) chart.Series {
		s := chart.Series{}
		for i := 0; i <= 80; i++ {
			x := 16 * float64(i) / 80
			s.X = append(s.X, x)
			s.Y = append(s.Y, top/(1+math.Pow(x/knee, 6)))
		}
		return s
	}
	cold, warm, hot := curve(9.9e-6, 17), curve(9.8e-6, 15), curve(9.75e-6, 14.2)
	cold.Name, warm.Name, hot.Name = "-40 degC", "25 degC", "110 degC"
	wave := chart.Series{Name: "current"}
	for i := 0; i <= 200; i++ {
		x := float64(i) / 200 * 20e-6
		wave.X = append(wave.X, x)
		wave.Y = append(wave.Y, 8+3*math.Abs(math.Mod(x/5e-6, 2)-1))
	}
	return map[string]interface{ SVG() string }{
		"bias": &chart.Chart{Title: "Inductance over current, limit at the peak current", X: chart.Axis{Label: "current", Unit: "A"}, Y: chart.Axis{Label: "inductance", Unit: "H"},
			Series: []chart.Series{cold, warm, hot}, Bands: []chart.Band{{Low: math.Inf(-1), High: 8e-6, Text: "at least 8 uH"}}, Zero: true},
		"band": &chart.Chart{Title: "Within", X: chart.Axis{Label: "current", Unit: "A"}, Y: chart.Axis{Label: "inductance", Unit: "H"},
			Series: []chart.Series{warm}, Bands: []chart.Band{{Low: math.Inf(-1), High: 4e-6, Text: "at least 4 uH"}, {Low: 11e-6, High: math.Inf(1), Text: "at most 11 uH"}, {Low: 13, High: math.Inf(1), Text: "overload", OnX: true}}},
		"wave": &chart.Chart{Title: "Winding current", X: chart.Axis{Label: "time", Unit: "s"}, Y: chart.Axis{Label: "current", Unit: "A"}, Series: []chart.Series{wave}, Wide: true},
		"bars": &chart.Bars{Title: "Reluctance of one gap by five methods", Axis: chart.Axis{Label: "reluctance", Unit: "1/H"},
			Names: []string{"no fringing", "add the gap", "logarithmic rule", "conformal map", "field solution"}, Values: []float64{5.77e6, 5.2e6, 4.7e6, 4.62e6, 4.6e6},
			Bands: []chart.Band{{Low: math.Inf(-1), High: 4.4e6, Text: "at least 4.4e6"}}},
		"tornado": &chart.Bars{Title: "Each tolerance alone", Axis: chart.Axis{Label: "inductance", Unit: "H"}, Middle: 8.2e-6, Names: []string{"length of gap L1.core.gap", "permeability"},
			From: []float64{7.8e-6, 8.0e-6}, Values: []float64{8.5e-6, 8.3e-6}},
		"histogram": histogram(),
	}
}

// histogram is one of seven draws in three bins.
func histogram() *chart.Chart {
	h := chart.Histogram("Seven draws", chart.Axis{Label: "inductance", Unit: "H"}, []float64{7e-6, 8e-6, 9e-6, 10e-6}, []int{1, 4, 2})
	h.Bands = []chart.Band{{Low: math.Inf(-1), High: 7.5e-6, Text: "at least 7.5 uH", OnX: true}}
	return h
}

func TestHistogramSaysItsBins(t *testing.T) {
	h := histogram()
	for _, want := range []string{"7 draws from 7 uH to 10 uH in 3 bins", "most of them (4) between 8 uH and 9 uH", "limit: at least 7.5 uH"} {
		if !strings.Contains(h.Text(), want) {
			t.Errorf("%q is missing in %s", want, h.Text())
		}
	}
	if chart.Histogram("wrong", chart.Axis{}, []float64{1, 2}, []int{1, 2}).Check() == nil {
		t.Error("edges and counts that do not fit pass")
	}
}

func TestTornadoSaysBothEnds(t *testing.T) {
	b := samples()["tornado"].(*chart.Bars)
	if !strings.Contains(b.Text(), "length of gap L1.core.gap: 7.8 uH .. 8.5 uH") {
		t.Error(b.Text())
	}
	b.From = b.From[:1]
	if b.Check() == nil {
		t.Error("a missing beginning passes")
	}
}

// TestPictures checks that each picture is well-formed, says what it shows, and is the same every time. With
// AMPTURN_PICTURES naming a folder it leaves the pictures there to be looked at.
func TestPictures(t *testing.T) {
	for name, c := range samples() {
		svg := c.SVG()
		if again := c.SVG(); again != svg {
			t.Errorf("%s: two drawings differ", name)
		}
		dec := xml.NewDecoder(strings.NewReader(svg))
		for {
			_, err := dec.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatalf("%s: not well-formed: %v", name, err)
			}
		}
		for _, want := range []string{"<title>", "<desc>", "viewBox", "#767676"} {
			if !strings.Contains(svg, want) {
				t.Errorf("%s: no %s", name, want)
			}
		}
		if dir := os.Getenv("AMPTURN_PICTURES"); dir != "" {
			if err := os.WriteFile(filepath.Join(dir, "chart-"+name+".svg"), []byte(svg), 0o644); err != nil {
				t.Fatal(err)
			}
		}
	}
}

// TestWords checks the text twin: extremes and the crossing of a limit, on a line whose crossing is known.
func TestWords(t *testing.T) {
	c := &chart.Chart{Title: "L", X: chart.Axis{Label: "current", Unit: "A"}, Y: chart.Axis{Label: "inductance", Unit: "H"},
		Series: []chart.Series{{Name: "hot", X: []float64{0, 10, 20}, Y: []float64{10e-6, 9e-6, 4e-6}}},
		Bands:  []chart.Band{{Low: math.Inf(-1), High: 8e-6, Text: "at least 8 uH"}}}
	text := c.Text()
	for _, want := range []string{"lowest 4 uH at 20 A", "highest 10 uH at 0 A", "at least 8 uH", "hot crosses it at 12 A"} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is not in\n%s", want, text)
		}
	}
}

// TestRefusals: data that cannot be drawn are named, in the picture and in the words.
func TestRefusals(t *testing.T) {
	six := make([]chart.Series, 6)
	for name, c := range map[string]chart.Chart{
		"a chart needs at least one series":     {},
		"6 series are too many for one picture": {Series: six},
		"2 values over 1 positions":             {Series: []chart.Series{{Name: "s", X: []float64{1}, Y: []float64{1, 2}}}},
		"no finite point to draw":               {Series: []chart.Series{{Name: "s", X: []float64{1}, Y: []float64{math.NaN()}}}},
	} {
		if err := c.Check(); err == nil || !strings.Contains(err.Error(), name) {
			t.Errorf("%v, want %q", err, name)
		}
		if !strings.Contains(c.SVG(), "no picture: ") || !strings.Contains(c.Text(), name) {
			t.Errorf("%q is not said in place of the picture", name)
		}
	}
}

// TestLimitsAboveBars: the hatching of a limit is drawn after the bars, which would hide it.
func TestLimitsAboveBars(t *testing.T) {
	b := &chart.Bars{Axis: chart.Axis{Label: "inductance", Unit: "H"}, Names: []string{"a", "b"}, Values: []float64{8e-6, 9e-6},
		Bands: []chart.Band{{Low: math.Inf(-1), High: 5e-6, Text: "at least 5 uH"}}}
	h := chart.Histogram("draws", chart.Axis{Label: "inductance", Unit: "H"}, []float64{8e-6, 9e-6, 10e-6}, []int{3, 5})
	h.Bands = []chart.Band{{Low: math.Inf(-1), High: 9e-6, Text: "at least 9 uH", OnX: true}}
	ink := "#8a6a6a"
	if s := b.SVG(); strings.LastIndex(s, "<rect") > strings.Index(s, ink) {
		t.Error("a bar lies over the hatching")
	}
	s := h.SVG()
	for _, picture := range []string{s, b.SVG()} {
		if !strings.Contains(picture, `fill-opacity="0.45"`) {
			t.Error("the bars cover in full what lies below")
		}
	}
	if first, fill := strings.Index(s, ink), strings.LastIndex(s, `Z" fill="#`); first < 0 || fill < 0 || first < fill {
		t.Errorf("the hatching begins at %d, the area of the bars stands at %d", first, fill)
	}
}

// TestTwinOfLoop: a line that ends where it began is described by its range.
func TestTwinOfLoop(t *testing.T) {
	c := &chart.Chart{X: chart.Axis{Label: "field strength", Unit: "A/m"}, Y: chart.Axis{Label: "flux density", Unit: "T"},
		Series: []chart.Series{{Name: "loop", X: []float64{600, 0, -600, 0, 600}, Y: []float64{0.3, 0.1, -0.3, -0.1, 0.3}}}}
	if s := c.Text(); !strings.Contains(s, "field strength from -600 A/m to 600 A/m") {
		t.Error(s)
	}
}
