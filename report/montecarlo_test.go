package report

import (
	"context"
	"math"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/uncertainty"
)

// withTrials confirms an evaluation by few trials.
func withTrials(t testing.TB, e *calib.Evaluation) *calib.Evaluation {
	t.Helper()
	mc, err := e.MonteCarlo(context.Background(), calib.MonteCarloOptions{Trials: 10000, Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	e.Result.MonteCarlo = mc
	return e
}

func TestHTMLHasTheMonteCarlo(t *testing.T) {
	e := withTrials(t, htmlCase(t, "arrival"))
	page := htmlOf(t, e, nil)
	skeleton(t, page)
	part := section(page, "monte-carlo", "standards")
	for _, want := range []string{"10 000 trials of the full estimate (seed 1", ">gain, from 1</th>", ">offset</th>", ">series resistance</th>",
		">(0.276\u00a0±\u00a00.076)\u00a0%</td>", "95 %, symmetric in probability", "95 %, shortest", "digits validated",
		"Correlation of offset and series resistance by the trials: ", "(linear: ", "of the trials lie in the linear joint region of 95\u00a0%"} {
		if !strings.Contains(part, want) {
			t.Errorf("the section lacks %q in %s", want, part)
		}
	}
	method := section(page, "method", "cautions")
	for _, want := range []string{"JCGM 101:2008", "JCGM 102:2011", "propagation of distributions (JCGM 101)"} {
		if !strings.Contains(method, want) {
			t.Errorf("the method lacks %q", want)
		}
	}
	if plain := htmlPage(t, "arrival"); strings.Contains(plain, `id="monte-carlo"`) || strings.Contains(plain, "JCGM 101") {
		t.Error("a page without trials speaks of them")
	}
}

// Where each range has its own gain instead of the one asked for, the linear
// correlation at hand is another fit's, and is not set beside the trials'.
func TestCorrelationOfTheDecidingFitOnly(t *testing.T) {
	e := withTrials(t, htmlCase(t, "string"))
	e.Result.ByRange.Used = true
	if says := togetherSays(e); strings.Contains(says, "linear:") || !strings.Contains(says, "by the trials") {
		t.Errorf("it says %q", says)
	}
	e.Result.MonteCarlo.InRegion = calib.MonteCarlo{}.InRegion
	*(*float64)(&e.Result.MonteCarlo.Correlation) = math.NaN()
	if says := togetherSays(e); says != "" {
		t.Errorf("it says %q of nothing", says)
	}
}

func TestMonteCarloSaysWhatWentWrong(t *testing.T) {
	mc := &calib.MonteCarlo{Trials: 1234567, Seed: 3, Interrupted: true, Unsettled: 12, Outputs: []calib.MonteCarloOutput{{Name: "offset", Validated: 2}, {Name: "series resistance"}}}
	want := "1 234 567 trials of the full estimate (seed 3, interrupted before the end). 12 did not settle and are left out. " +
		"The linear interval is not validated (JCGM 101, clause 8) for series resistance; take the ones below."
	if got := monteCarloSays(mc); got != want {
		t.Errorf("it says\n%s\nnot\n%s", got, want)
	}
	mc.Interrupted, mc.Adaptive, mc.Validated = false, true, 1
	if got := monteCarloSays(mc); !strings.Contains(got, "as many as two steady digits take") || !strings.Contains(got, "validated to 1 digit of u") {
		t.Errorf("it says %s", got)
	}
}

// Long names and numbers, and many of them, fit a terminal.
func TestMonteCarloFitsTheTerminal(t *testing.T) {
	mc := &calib.MonteCarlo{Trials: 20_000_000}
	for range 30 {
		mc.Outputs = append(mc.Outputs, calib.MonteCarloOutput{Name: "gain at 123456.789012 Hz, and more", Unit: "1", Mean: 0.0012, U: 1.2e-5,
			Symmetric: uncertainty.Interval{Low: 0.00118, High: 0.00122}})
		mc.Outputs = append(mc.Outputs, calib.MonteCarloOutput{Name: "offset, quadrature", Unit: "V", Mean: -1.2345e-7, U: 1.2e-10, Symmetric: uncertainty.Interval{Low: -1.23e-7, High: -1.25e-7}})
	}
	var b strings.Builder
	confirmed(&b, mc)
	narrow(t, b.String())
	if n := strings.Count(b.String(), "\n"); n > 25 || !strings.Contains(b.String(), "and 51 more results") {
		t.Errorf("%d lines:\n%s", n, b.String())
	}
}
