package report

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// The studentized maximum modulus for infinitely many degrees of freedom, 5 %: tables
// of Stoline and Ury, Technometrics 21 (1979) 87–93; from memory. One alone: GUM, table G.1.
func TestLargestByChance(t *testing.T) {
	for n, want := range map[int]float64{1: 1.96, 2: 2.24, 3: 2.39, 4: 2.49, 5: 2.57, 10: 2.80, 20: 3.02} {
		if got := largestByChance(n); math.Abs(got-want) > 0.005 {
			t.Errorf("of %d: %.4f, want %.2f", n, got, want)
		}
	}
}

// Each rehearsed fault is shown against what it shows by, and one that has no such quantity is not.
func TestResidualsFigureOfFaults(t *testing.T) {
	for name, axis := range map[string]string{
		"compression": "Share of full scale (%)", "drift": "Time since the first reading (min)", "decimal-slip": "Setting of box",
		"swapped": "Setting of box", "range-gain": "Range", "offset-of-range": "Range", "asymmetry": "Phase of the reference",
		"offset": "", "series-resistance": "", "outlier": "",
	} {
		s := residualsFigure(figureFaulty(t, name))
		if s == nil {
			t.Errorf("%s: no figure", name)
			continue
		}
		got := ""
		if len(s.panels) > 1 {
			got = s.panels[1].x
		}
		if got != axis {
			t.Errorf("%s: shown against %q, want %q", name, got, axis)
		}
	}
}

// The mean of the deviations at the slipped setting stands far from the others'.
func TestResidualsShowASlip(t *testing.T) {
	e := figureFaulty(t, "decimal-slip")
	points, _ := figureResiduals(e)
	for i := range points {
		points[i].z = points[i].plain
	}
	by := figureShowsBy(e, evidenceOf(e)[0])
	beyond := 0
	for _, m := range by.means(points, by.places(points)) {
		if math.Abs(m[0].y) > 100 {
			beyond++
		}
	}
	if beyond != 1 {
		t.Errorf("%d settings stand out, not one", beyond)
	}
}

func TestResidualsOfAlmostTooManySteps(t *testing.T) {
	for times, want := range map[int]bool{12: true, 200: false} {
		if drawn := residualsFigure(figureMany(t, times)) != nil; drawn != want {
			t.Errorf("%d times the steps: drawn is %v", times, drawn)
		}
	}
}

// Readings as they were stand within the limit; one far off is ringed.
func TestResidualsRingOutliers(t *testing.T) {
	e := figureCase(t, "arrival")
	if s := residualsFigure(e); strings.Contains(s.caption, "ringed") {
		t.Errorf("without an outlier: %s", s.caption)
	}
	*(*float64)(&e.Result.Steps[3].Standardised) = 6
	if s := residualsFigure(e); !strings.Contains(s.caption, "1 step is ringed") || !strings.Contains(fmt.Sprint(s.keys), "beyond ±3.3") {
		t.Errorf("with one: %s, %v", s.caption, s.keys)
	}
}
