package report

import (
	"os"
	"strings"
	"testing"

	"rungproof/calib"
)

// figureFaulty is the arrival case with the readings of a recorded rehearsal of package diagnose.
func figureFaulty(t testing.TB, name string) *calib.Evaluation {
	t.Helper()
	rows, err := os.ReadFile("../calib/diagnose/testdata/rehearsals/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	return figureEvaluation(t, figureSource(t, "arrival"), string(rows))
}

func TestEvidenceFigure(t *testing.T) {
	t.Run("a panel a cause", func(t *testing.T) {
		e := figureCase(t, "quadrature")
		s := evidenceFigure(e)
		if n := len(evidenceOf(e)); s == nil || len(s.panels) != n || n < 2 {
			t.Fatalf("not a panel for each of %d causes", n)
		}
		if heads := s.panels[0].head + "|" + s.panels[1].head; !strings.HasPrefix(heads, "Offset: ") || !strings.Contains(heads, "|Series resistance: ") {
			t.Errorf("heads %q", heads)
		}
		if len(s.keys) != 2 || s.keys[0].words != "the detector's" || s.keys[1].words != "the bench's" {
			t.Errorf("keys %v", s.keys)
		}
		if foot := s.panels[1].foot; foot != "rivals: resistive pick-up (weight 1)" {
			t.Errorf("beneath the series resistance stands %q", foot)
		}
	})
	t.Run("none without evidence", func(t *testing.T) {
		e := figureCase(t, "arrival")
		for i := range e.Result.Findings {
			e.Result.Findings[i].Evidence = nil
		}
		if evidenceFigure(e) != nil {
			t.Error("a figure of no evidence")
		}
	})
	t.Run("linear where alike, logarithmic where not", func(t *testing.T) {
		for want, falls := range map[bool][2]float64{false: {20, 199}, true: {20, 201}} {
			span := newFigureSpan()
			span.add(falls[0], falls[1])
			if figureFallScale(span).log != want {
				t.Errorf("falls of %v: logarithmic is %v", falls, !want)
			}
		}
	})
}

func TestEvidenceAgainst(t *testing.T) {
	for want, contradict := range map[string][]string{
		"rivals: gain (weight 0.13), outlier step 4 (weight 0.1)":            {"gain explains as much (weight 0.13)", "outlier step 4 explains as much (weight 0.1)"},
		"rivals: gain (weight 1); but the readings still do not fit (p = 0)": {"gain explains as much (weight 1)", "the readings still do not fit (p = 0)"},
		"": nil,
	} {
		if got := evidenceAgainst(&calib.Evidence{Contradict: contradict}); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}

// A gain's evidence is of the gain itself, and what is shown its deviation from 1.
func TestEvidenceSizeOfAGain(t *testing.T) {
	for want, ev := range map[string]*calib.Evidence{
		"(2.000 ± 0.010) %": {Cause: "gain", Size: 1.02, Expanded: 1e-4, Unit: "1"},
		"(102.0 ± 1.0) %":   {Cause: "one setting off", Size: 1.02, Expanded: 0.01, Unit: "1"},
		"(10.0 ± 1.0) mΩ":   {Cause: "series resistance in the return", Size: 0.01, Expanded: 0.001, Unit: "Ω"},
		"(60.00 ± 0.57)°":   {Cause: "reference phase not at maximum", Size: 1.0471976, Expanded: 0.01, Unit: "rad"},
		"(12.0 ± 3.0) nV":   {Cause: "offset", Size: 12e-9, Expanded: 3e-9, Unit: "V"},
	} {
		if got := evidenceSize(ev); got != want {
			t.Errorf("%s: %q, want %q", ev.Cause, got, want)
		}
	}
}
