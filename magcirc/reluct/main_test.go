package reluct_test

import (
	"flag"
	"os"
	"testing"
)

// TestMain fixes the seed of the property tests, so that each run draws the same networks; -rapid.seed=N draws
// others.
func TestMain(m *testing.M) {
	flag.Parse()
	given := false
	flag.Visit(func(f *flag.Flag) { given = given || f.Name == "rapid.seed" })
	if !given {
		flag.Set("rapid.seed", "20")
	}
	os.Exit(m.Run())
}
