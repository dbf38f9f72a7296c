package main

import (
	"strings"
	"testing"
)

// TestHelpByTopic: a word that is no name lists the names whose comments speak of it, those that have it in their name first.
func TestHelpByTopic(t *testing.T) {
	for topic, wants := range map[string][]string{
		"gap":        {"GapPart", "MagneticCircuit.GapFor", "FringeRule"},
		"inductance": {"OperatingPoint.Inductance", "BiasCurve", "OperatingPoint.Matrix"},
		"Saturation": {"BiasCurve.SaturationCurrent", "Froehlich"},
	} {
		table, ok := about(topic)
		if !ok {
			t.Errorf("nothing on %s", topic)
			continue
		}
		text := table.Text()
		for _, want := range wants {
			if !strings.Contains(text, "\n"+want+" ") {
				t.Errorf("%s: %s is missing in\n%s", topic, want, text)
			}
		}
		if strings.Contains(text, "WithUnits") || len(table.Rows) > mostTopics {
			t.Errorf("%s: %d rows\n%s", topic, len(table.Rows), text)
		}
	}
	for _, none := range []string{"gazebo", "", "  x "} {
		if _, ok := about(none); ok {
			t.Errorf("something is said on %q", none)
		}
	}
}
