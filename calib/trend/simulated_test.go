package trend

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"
)

// detector is invented, in ppm and years: what its error does, and how it is measured.
type detector struct {
	name     string
	start    float64
	drift    float64
	visits   int     // yearly
	own      float64 // independent standard uncertainty of a result
	common   float64 // common to results of one standard, which is changed after four visits
	wander   float64 // of the detector about its line, not in the stated uncertainty
	adjusted int     // at every visit of this number: to 0 ± 50; 0: never
	unstated bool
}

const limit = 1000

var detectors = []detector{
	{name: "three visits", start: 100, drift: 60, visits: 3, own: 40},
	{name: "eight visits", start: -200, drift: 60, visits: 8, own: 40},
	{name: "shared standards", start: 0, drift: -60, visits: 8, own: 30, common: 60},
	{name: "adjusted every third visit", start: 400, drift: 120, visits: 8, own: 30, common: 40, adjusted: 3},
	{name: "adjusted at the last visit", start: 400, drift: 120, visits: 6, own: 30, adjusted: 6},
	{name: "uncertainty not stated", start: 0, drift: 60, visits: 6, own: 40, unstated: true},
	{name: "wanders by four times u", start: 0, drift: 60, visits: 10, own: 20, wander: 80},
}

// history is one detector's, and crossing the date when its true error, the line, meets the
// limit.
func (d detector) history(rng *rand.Rand) (h History, crossing time.Time) {
	level := d.start // of the line at 0 years, as adjusted
	errors := map[string]float64{"R1": d.common * rng.NormFloat64(), "R2": d.common * rng.NormFloat64()}
	for v := range d.visits {
		x, standards := float64(v), "R1"
		if v >= 4 {
			standards = "R2"
		}
		result := func(left bool) {
			u := math.Hypot(d.own, d.common)
			if d.unstated {
				u = 0
			}
			h = append(h, Point{Time: at(x), U: u, UCommon: d.common, Standards: standards, AsLeft: left,
				Value: level + d.drift*x + errors[standards] + math.Hypot(d.own, d.wander)*rng.NormFloat64()})
		}
		result(false)
		if d.adjusted > 0 && (v+1)%d.adjusted == 0 {
			level = 50*rng.NormFloat64() - d.drift*x
			result(true)
		}
	}
	return h, at((math.Copysign(limit, d.drift) - level) / d.drift)
}

const trials = 2000

// The tests below count, in 2000 histories with a fixed seed, what has a chance of 95 %:
// of the count 1 standard deviation is 9.7, and 3 of them are allowed, 1871 to 1929.
const fewest, most = 1871, 1929

// The detector's true error, its line without the wander, meets the limit not before
// Safe: one-sided, so exact where the model and the stated uncertainties are. And the drift's
// interval holds the drift.
func TestSafeDateIsEarlyEnough(t *testing.T) {
	for i, d := range detectors {
		t.Run(d.name, func(t *testing.T) {
			t.Parallel()
			rng := rand.New(rand.NewPCG(1, uint64(i)))
			early, holds := 0, 0
			for range trials {
				h, crossing := d.history(rng)
				tr := must(Of(h, Options{}))(t)
				if !crossing.After(tr.lines.last) {
					t.Fatal("the limit is crossed before the last visit: the figures are ill chosen")
				}
				if r := tr.Reaches(limit, 0.95); !r.Safe.IsZero() && !r.Safe.After(crossing) {
					early++
				}
				if tr.Drift.Low <= d.drift && d.drift <= tr.Drift.High {
					holds++
				}
			}
			t.Logf("%s: early enough in %.2f %%, drift held in %.2f %%", d.name, 100*float64(early)/trials, 100*float64(holds)/trials)
			// With a spread of its own the detector is given more room than its line needs.
			if early < fewest || early > most && d.wander == 0 {
				t.Errorf("early enough in %d of %d; want %d to %d", early, trials, fewest, most)
			}
			if holds < fewest || holds > most {
				t.Errorf("the interval holds the drift in %d of %d; want %d to %d", holds, trials, fewest, most)
			}
		})
	}
}

// A detector that does not drift is seldom said to: 5 % of 2000, 3 standard deviations.
func TestNoDriftIsSeldomFound(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 0))
	found := 0
	for range trials {
		h, _ := detector{visits: 6, own: 30, common: 60}.history(rng)
		if must(Of(h, Options{}))(t).Drift.Significant() {
			found++
		}
	}
	if found < trials-most || found > trials-fewest {
		t.Errorf("drift found in %d of %d; want %d to %d", found, trials, trials-most, trials-fewest)
	}
}

// The advised interval as it is used, in 95 % of 2000 detectors, each with a drift of its own,
// some just adjusted. Early enough is: the true error meets the limit not before the
// advised date.
func TestAdvisedDateIsEarlyEnough(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 0))
	early, byDrift := 0, 0
	for i := range trials {
		d := detector{start: 200 * rng.NormFloat64(), drift: 150 * rng.NormFloat64(), visits: 2 + i%6, own: 40, common: 30}
		if i%3 == 0 {
			d.adjusted = d.visits
		}
		h, crossing := d.history(rng)
		a := must(Interval(h, Options{}, limit, 0.95, 5*Year))(t)
		switch last := a.Trend.lines.last; {
		case !crossing.After(last):
			// Beyond already: early enough is at once.
			if a.Interval == 0 {
				early++
			}
		case !a.Due.After(crossing):
			early++
		}
		if a.Decides == ByDrift {
			byDrift++
		}
	}
	t.Logf("early enough in %.2f %%; the drift decides in %.0f %%", 100*float64(early)/trials, 100*float64(byDrift)/trials)
	if early < trials*95/100 {
		t.Errorf("early enough in %d of %d", early, trials)
	}
	if byDrift < trials/4 {
		t.Errorf("the drift decides in %d of %d only: the test says nothing of it", byDrift, trials)
	}
}

// Scores of sound histories are standard normal: the chart warns in 4.55 % and calls for
// action in 0.27 % of results.
func TestSoundHistoriesAreInControl(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 0))
	var n, warn, action float64
	for range trials {
		h, _ := detectors[3].history(rng)
		for _, c := range must(Control(h, Options{}))(t) {
			n++
			switch c.Signal {
			case Warning:
				warn++
			case Action:
				action++
			}
		}
	}
	for _, c := range []struct {
		name     string
		count, p float64
	}{{"beyond 2", warn + action, 0.0455}, {"beyond 3", action, 0.0027}} {
		near(t, fmt.Sprintf("share of %g scores %s", n, c.name), c.count/n, c.p, 3*math.Sqrt(c.p*(1-c.p)/n))
	}
}
