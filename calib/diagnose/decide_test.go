package diagnose

import (
	"math/rand/v2"
	"os"
	"testing"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// A gain and a capacitance across the top arm look the same at one frequency. The
// program says that nothing there parts them, and finds a second frequency where
// the bench has one.
func TestDecideFindsTheSecondFrequency(t *testing.T) {
	source, err := os.ReadFile("../testdata/cases/arrival.toml")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		bench string
		found bool
	}{{"", false}, {"\n[bench]\nfrequencies = [\"137 Hz\", \"5 kHz\"]\n", true}} {
		p, err := plan.Parse("arrival", append(append([]byte(nil), source...), c.bench...))
		if err != nil {
			t.Fatal(err)
		}
		set := calib.NewSimulator(p).Readings(calib.Truth{Gain: 1.003}, rand.New(rand.NewPCG(3, 0)))
		e, err := calib.Evaluate(p, set)
		if err != nil {
			t.Fatal(err)
		}
		d, err := Decide(e)
		if err != nil {
			t.Fatal(err)
		}
		if d.First != Gain || d.Rival != TopCapacity {
			t.Fatalf("between %s and %s", d.First, d.Rival)
		}
		if got := len(d.Steps) > 0; got != c.found {
			t.Errorf("bench %q: %d steps proposed", c.bench, len(d.Steps))
		}
		for _, s := range d.Steps {
			if s.Step.Frequency != 5000 || s.Apart < telling {
				t.Errorf("proposed at %g Hz, %g standard deviations apart", s.Step.Frequency, s.Apart)
			}
		}
	}
}
