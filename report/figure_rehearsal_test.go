package report

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"rungproof/calib/diagnose"
)

// Intervals of the score method without continuity correction: R. G. Newcombe,
// Statistics in Medicine 17 (1998) 857–872, table I; from memory.
func TestWilson(t *testing.T) {
	for _, c := range []struct {
		x, n      int
		low, high float64
	}{{81, 263, 0.2553, 0.3662}, {15, 148, 0.0624, 0.1605}, {0, 20, 0, 0.1611}, {1, 29, 0.0061, 0.1718}} {
		low, high := wilson(c.x, c.n)
		if math.Abs(low-c.low) > 5e-5 || math.Abs(high-c.high) > 5e-5 {
			t.Errorf("%d of %d: %.4f to %.4f, want %.4f to %.4f", c.x, c.n, low, high, c.low, c.high)
		}
		// Failures are successes the other way round.
		if l, h := wilson(c.n-c.x, c.n); math.Abs(1-l-high) > 1e-12 || math.Abs(1-h-low) > 1e-12 {
			t.Errorf("%d of %d: %g to %g", c.n-c.x, c.n, l, h)
		}
	}
}

func someRehearsal() *diagnose.Rehearsal {
	return &diagnose.Rehearsal{Trials: 1000, Seed: 42, Unfitted: 3, Good: 20000, Bad: 4000, FalseAccepts: 12, FalseRejects: 160,
		Verdicts: map[string]int{"pass": 700, "conditional pass": 197, "fail": 100},
		First: map[string]int{"offset": 500, "series resistance": 200, diagnose.Nothing: 100, "gain": 90, "drift during the run": 40, "outlier": 30,
			"capacitance across the top arm": 20, "scatter": 9, "asymmetry between 0° and 180°": 5, "misfit": 2, "resistive pick-up": 1}}
}

func TestRehearsalFigure(t *testing.T) {
	s := rehearsalFigure(someRehearsal())
	if s.title != "What 1 000 rehearsals came to" || !strings.Contains(s.note, "Seed 42") || len(s.panels) != 3 {
		t.Errorf("%q, %q, %d panels", s.title, s.note, len(s.panels))
	}
	a, err := RehearsalFigure(someRehearsal())
	if err != nil {
		t.Fatal(err)
	}
	if b, err := RehearsalFigure(someRehearsal()); err != nil || !bytes.Equal(a, b) {
		t.Error("two pictures of the same counts differ")
	}
	if b := figurePixels(t, a).Bounds(); b.Dx() != 1400 {
		t.Errorf("the picture is %v", b)
	}
}

func TestRehearsalFigureShowsTheEightMostFrequentFindings(t *testing.T) {
	bars := figureFirst(someRehearsal())
	last := bars[len(bars)-1]
	if len(bars) != 9 || bars[0].name != "offset" || last.name != "all others (3 findings)" || last.words != "0.8 % (8 of 1 000)" {
		t.Errorf("%d bars, the first %q, the last %q: %q", len(bars), bars[0].name, last.name, last.words)
	}
	total := 0.0
	for _, b := range bars {
		total += b.share
	}
	if math.Abs(total-99.7) > 1e-9 { // three of a thousand were not fitted
		t.Errorf("%g %% in all", total)
	}
}

// Few trials, and plans that leave something out.
func TestRehearsalFigureOfLittle(t *testing.T) {
	for name, c := range map[string]struct {
		r      *diagnose.Rehearsal
		panels int
	}{
		"one trial":      {&diagnose.Rehearsal{Trials: 1, Good: 3, Verdicts: map[string]int{"pass": 1}, First: map[string]int{diagnose.Nothing: 1}}, 3},
		"nothing judged": {&diagnose.Rehearsal{Trials: 5, Verdicts: map[string]int{"not judged": 5}, First: map[string]int{"offset": 5}, Interrupted: true}, 2},
		"nothing fitted": {&diagnose.Rehearsal{Trials: 5, Unfitted: 5}, 1},
	} {
		if s := rehearsalFigure(c.r); len(s.panels) != c.panels {
			t.Errorf("%s: %d panels, want %d", name, len(s.panels), c.panels)
		}
		if _, err := RehearsalFigure(c.r); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := RehearsalFigure(&diagnose.Rehearsal{}); err == nil {
		t.Error("a picture of no rehearsal")
	}
}
