package calib

import (
	"fmt"
	"os"
	"testing"

	"rungproof/calib/plan"
)

func TestTry(t *testing.T) {
	for _, name := range []string{"one-amplitude", "string", "arrival", "quadrature"} {
		src, _ := os.ReadFile("testdata/cases/" + name + ".toml")
		p, err := plan.Parse(name, src)
		if err != nil {
			t.Fatal(err)
		}
		for _, what := range []string{"", OfOffset, OfSeries, OfGain} {
			a, err := Advise(p, nil, what, 10)
			if err != nil {
				t.Fatal(err)
			}
			fmt.Println(name, what, a.Candidates, a.Before, a.After, a.Time, a.Stopped)
			for _, s := range a.Steps {
				fmt.Println("   ", s)
			}
		}
	}
}
