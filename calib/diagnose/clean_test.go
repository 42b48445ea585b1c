package diagnose

import (
	"flag"
	"math/rand/v2"
	"os"
	"testing"

	"rungproof/calib"
	"rungproof/calib/plan"
)

var long = flag.Bool("long", false, "run the simulated campaigns at full length")

func planOf(t testing.TB, name string) *plan.Plan {
	t.Helper()
	source, err := os.ReadFile("../testdata/cases/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	p, err := plan.Parse(name, source)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Nothing is found in clean data: of 2000 simulated campaigns of a detector and a
// bench without fault, inputs drawn from their distributions, at most 5 % report
// any cause at all (-long; 300 in the ordinary run, at most 7 %: 1.6 standard
// deviations more).
func TestCleanReadingsAccuseNobody(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	campaigns, most := 300, 0.07
	if *long {
		campaigns, most = 2000, 0.05
	}
	for _, name := range []string{"arrival", "string", "quadrature"} {
		t.Run(name, func(t *testing.T) {
			p := planOf(t, name)
			s := calib.NewSimulator(p)
			random := rand.New(rand.NewPCG(41, uint64(len(name))))
			accused := 0
			kinds := map[string]int{}
			for range campaigns {
				e, err := calib.Evaluate(p, s.Readings(calib.Truth{Gain: 1}, random))
				if err != nil {
					t.Fatal(err)
				}
				any := false
				for _, f := range Findings(e) {
					if Accuses(f) {
						kinds[f.Kind]++
						any = true
					}
				}
				if any {
					accused++
				}
			}
			t.Logf("%d clean campaigns: %.2f %% report a cause %v", campaigns, 100*float64(accused)/float64(campaigns), kinds)
			if share := float64(accused) / float64(campaigns); share > most {
				t.Errorf("%.1f %% of clean campaigns report a cause", 100*share)
			}
		})
	}
}
